//! What the memory protection unit allows here.
//!
//! The emulator's memory is wider than the device's and its code memory can be written, so an
//! overflowing stack or a wild store would pass unseen. The regions give back what the purchasable
//! board does by itself: no memory below the stack, code that cannot be written, and no execution
//! from RAM.

use cortex_m::peripheral::{MPU, SCB};
use strake_board_common::mpu::{self, Access, Region};

/// First address of the guard, which ends where the stack's memory begins.
pub const GUARD_BASE: u32 = 0x1FF0_0000;

const REGIONS: [Region; 3] = [
    Region { base: 0x0000_0000, size_log2: 22, access: Access::Program },
    Region { base: GUARD_BASE, size_log2: 20, access: Access::Nothing },
    Region { base: 0x2000_0000, size_log2: 22, access: Access::Data },
];

#[expect(unsafe_code, reason = "the regions decide which accesses fault")]
pub(crate) fn protect(mpu: &mut MPU, scb: &mut SCB) {
    // SAFETY: code stays readable and executable, the whole RAM accessible.
    unsafe { mpu::protect(mpu, scb, &REGIONS) };
}
