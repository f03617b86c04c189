//! The memory protection unit (Armv7-M, B3.5): regions over the default map.
//!
//! Each board states its own: no access below the stack, so that an overflow faults; code that
//! cannot be written; no execution from RAM.

use cortex_m::peripheral::{MPU, SCB};

const EXECUTE_NEVER: u32 = 1 << 28;
/// Normal memory, write-through.
const NORMAL: u32 = 1 << 17;
const ENABLE: u32 = 1;
/// The address register takes the region's number along.
const VALID: u32 = 1 << 4;

/// What a region allows.
#[derive(Clone, Copy, Debug)]
pub enum Access {
    /// Code and constants: reading and executing.
    Program,
    /// Data: reading and writing.
    Data,
    /// Nothing.
    Nothing,
}

impl Access {
    /// Bits of the attribute and size register (Armv7-M, B3.5.9).
    const fn bits(self) -> u32 {
        match self {
            Self::Program => (0b110 << 24) | NORMAL,
            Self::Data => (0b011 << 24) | EXECUTE_NEVER | NORMAL,
            Self::Nothing => EXECUTE_NEVER,
        }
    }
}

/// One region; where two overlap, the later one holds.
#[derive(Clone, Copy, Debug)]
pub struct Region {
    /// First address, a multiple of the size.
    pub base: u32,
    /// The size is two to the power of this, 5 to 32.
    pub size_log2: u32,
    /// What it allows.
    pub access: Access,
}

/// Puts the regions into force, at most eight, and lets a violation fault as such.
///
/// # Safety
/// The regions leave everything accessible that the program uses, and executable what it executes.
#[expect(unsafe_code, reason = "the regions decide which accesses fault")]
pub unsafe fn protect(mpu: &mut MPU, scb: &mut SCB, regions: &[Region]) {
    for (number, region) in (0_u32..).zip(regions) {
        // SAFETY: the caller promises that the regions allow what the program does.
        unsafe {
            mpu.rbar.write(region.base | VALID | number);
            mpu.rasr.write(region.access.bits() | (region.size_log2.wrapping_sub(1) << 1) | ENABLE);
        }
    }
    // SAFETY: on with the default map behind the regions, off in the hard fault handler.
    unsafe { mpu.ctrl.write(0b101) };
    scb.enable(cortex_m::peripheral::scb::Exception::MemoryManagement);
    cortex_m::asm::dsb();
    cortex_m::asm::isb();
}
