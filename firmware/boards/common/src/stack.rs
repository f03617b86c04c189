//! The stack's depth: the start-up code paints the whole stack, the paint left shows the peak.

use crate::register::Register;

#[expect(unsafe_code, reason = "symbols of the linker script, and memory below the stack pointer")]
mod painted {
    use super::Register;

    unsafe extern "C" {
        static _stack_start: u8;
        static _stack_end: u8;
    }

    /// Lowest address of the stack, and the one above its highest.
    pub(super) fn bounds() -> (usize, usize) {
        ((&raw const _stack_end).expose_provenance(), (&raw const _stack_start).expose_provenance())
    }

    pub(super) fn word(address: usize) -> u32 {
        // SAFETY: called with aligned addresses within `bounds`, which are RAM; a read alone.
        unsafe { Register::at(address) }.read()
    }
}

/// Bytes of stack that were in use at the deepest moment since the start.
#[must_use]
pub fn peak_bytes() -> usize {
    let (lowest, end) = painted::bounds();
    (lowest..end)
        .step_by(size_of::<u32>())
        .find(|&address| painted::word(address) != cortex_m_rt::STACK_PAINT_VALUE)
        .map_or(0, |address| end - address)
}

/// Bytes that the stack has.
#[must_use]
pub fn size_bytes() -> usize {
    let (lowest, end) = painted::bounds();
    end - lowest
}
