//! What the memory protection unit allows here.
//!
//! The stack begins at the end of RAM and ends, by limits.x, 16 KiB below. There the guard begins,
//! so that an overflow faults long before it meets the static data. The plan slots lie in the same
//! flash as the program, whose controller takes stores; only there are they let through.

use cortex_m::peripheral::{MPU, SCB};
use strake_board_common::mpu::{self, Access, Region};

use crate::nvmc::SLOTS_BASE;

/// 32 KiB below the end of RAM.
const GUARD_BASE: u32 = 0x2003_8000;

const REGIONS: [Region; 4] = [
    Region { base: 0x0000_0000, size_log2: 20, access: Access::Program },
    // Eight pages: the plan slots and the keys.
    Region { base: SLOTS_BASE, size_log2: 15, access: Access::Data },
    Region { base: 0x2000_0000, size_log2: 18, access: Access::Data },
    // It ends where the stack's memory begins.
    Region { base: GUARD_BASE, size_log2: 14, access: Access::Nothing },
];

#[expect(unsafe_code, reason = "the regions decide which accesses fault")]
pub(crate) fn protect(mpu: &mut MPU, scb: &mut SCB) {
    // SAFETY: the whole flash stays readable, the program executable, the whole RAM accessible.
    unsafe { mpu::protect(mpu, scb, &REGIONS) };
}
