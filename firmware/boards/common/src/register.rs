//! One memory-mapped register: the only place that turns an address into an access.

use core::ptr;

/// A 32-bit register at a fixed address.
#[derive(Clone, Copy, Debug)]
pub struct Register {
    address: usize,
}

#[expect(unsafe_code, reason = "registers are reached by their address")]
impl Register {
    /// Names the register at `address`.
    ///
    /// # Safety
    /// `address` must be that of a 32-bit register of this machine, which stays mapped, and whose
    /// reading or writing has no effect on memory that Rust knows of.
    #[must_use]
    pub const unsafe fn at(address: usize) -> Self {
        Self { address }
    }

    /// Present value.
    #[must_use]
    pub fn read(self) -> u32 {
        // SAFETY: `at` promised a mapped, aligned 32-bit register here.
        unsafe { ptr::read_volatile(ptr::with_exposed_provenance(self.address)) }
    }

    /// Stores `value`.
    pub fn write(self, value: u32) {
        // SAFETY: as in `read`; no Rust object lives at this address.
        unsafe { ptr::write_volatile(ptr::with_exposed_provenance_mut(self.address), value) }
    }
}
