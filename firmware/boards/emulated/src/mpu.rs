//! The memory protection unit (Armv7-M, B3.5): three regions over the default map.
//!
//! The emulator's memory is wider than the device's and its code memory can be written, so an
//! overflowing stack or a wild store would pass unseen. The regions give back what the purchasable
//! board does by itself: no memory below the stack, code that cannot be written, and no execution
//! from RAM.

use cortex_m::peripheral::{MPU, SCB};

const READ_ONLY: u32 = 0b110 << 24;
const NO_ACCESS: u32 = 0b000 << 24;
const FULL_ACCESS: u32 = 0b011 << 24;
const EXECUTE_NEVER: u32 = 1 << 28;
/// Normal memory, write-through.
const NORMAL: u32 = 1 << 17;
const ENABLE: u32 = 1;
/// The address register takes the region's number along.
const VALID: u32 = 1 << 4;

/// One region: its base, aligned to its size; two to the power of `size_log2` bytes; attributes.
struct Region {
    base: u32,
    size_log2: u32,
    attributes: u32,
}

/// First address of the guard, which ends where the stack's memory begins.
pub const GUARD_BASE: u32 = 0x1FF0_0000;

const REGIONS: [Region; 3] = [
    Region { base: 0x0000_0000, size_log2: 22, attributes: READ_ONLY | NORMAL },
    Region { base: GUARD_BASE, size_log2: 20, attributes: NO_ACCESS | EXECUTE_NEVER },
    Region { base: 0x2000_0000, size_log2: 22, attributes: FULL_ACCESS | EXECUTE_NEVER | NORMAL },
];

#[expect(unsafe_code, reason = "the regions decide which accesses fault")]
pub(crate) fn protect(mpu: &mut MPU, scb: &mut SCB) {
    for (number, region) in (0u32..).zip(&REGIONS) {
        // SAFETY: the regions leave code readable and executable, the whole RAM accessible.
        unsafe {
            mpu.rbar.write(region.base | VALID | number);
            mpu.rasr.write(region.attributes | ((region.size_log2 - 1) << 1) | ENABLE);
        }
    }
    // SAFETY: on with the default map behind the regions, off in the hard fault handler.
    unsafe { mpu.ctrl.write(0b101) };
    scb.enable(cortex_m::peripheral::scb::Exception::MemoryManagement);
    cortex_m::asm::dsb();
    cortex_m::asm::isb();
}
