//! The end of a run that cannot go on: a panic or a processor fault.
//!
//! In this order, so that each step needs less than the one before could break: open the alarm
//! contact, record the cause in retained memory, log it, reset.
//!
//! Two functions come from the board, by name: a board without them does not link.

use core::arch::naked_asm;
use core::panic::PanicInfo;
use core::sync::atomic::{AtomicBool, Ordering};

use cortex_m::peripheral::SCB;

use crate::register::Register;
use crate::retained::{self, Failure};

#[expect(unsafe_code, reason = "functions of the board, found by the linker")]
mod hooks {
    unsafe extern "Rust" {
        /// Opens the alarm contact, from wherever the program is and whatever is started.
        pub(super) safe fn _strake_open_contact();
        /// Ends a frame of the log that the failure interrupted.
        pub(super) safe fn _strake_abandon_frame();
    }
}

static ENDING: AtomicBool = AtomicBool::new(false);

/// Ends the run: contact open, cause recorded, `report` made, reset.
pub fn end(failure: Failure, report: impl FnOnce()) -> ! {
    cortex_m::interrupt::disable();
    hooks::_strake_open_contact();
    // A second failure on the way out keeps the first one's record.
    if !ENDING.swap(true, Ordering::Relaxed) {
        retained::leave_failure(failure);
        hooks::_strake_abandon_frame();
        report();
    }
    SCB::sys_reset()
}

#[panic_handler]
fn panic(info: &PanicInfo<'_>) -> ! {
    let (file, line) = info.location().map_or(("?", 0), |place| (place.file(), place.line()));
    end(Failure::Panic { line }, || defmt::error!("panic in {=str}, line {=u32}", file, line))
}

#[expect(unsafe_code, reason = "names the fault registers and enters a handler without a stack")]
mod entry {
    use super::{Register, naked_asm};

    // SAFETY: configurable fault status (Armv7-M, B3.2.15).
    pub(super) const STATUS: Register = unsafe { Register::at(0xE000_ED28) };
    // SAFETY: address of a memory management fault (Armv7-M, B3.2.17).
    pub(super) const MEMORY_ADDRESS: Register = unsafe { Register::at(0xE000_ED34) };
    // SAFETY: address of a bus fault (Armv7-M, B3.2.18).
    pub(super) const BUS_ADDRESS: Register = unsafe { Register::at(0xE000_ED38) };

    /// Every fault ends here. The stack pointer may stand in the guard, so the stack is begun anew
    /// before anything is stored.
    #[unsafe(naked)]
    #[unsafe(no_mangle)]
    extern "C" fn HardFault() -> ! {
        naked_asm!("ldr r0, =_stack_start", "msr msp, r0", "b {fault}", fault = sym super::fault)
    }

    #[unsafe(naked)]
    #[unsafe(no_mangle)]
    extern "C" fn MemoryManagement() -> ! {
        naked_asm!("ldr r0, =_stack_start", "msr msp, r0", "b {fault}", fault = sym super::fault)
    }
}

/// Bus fault address valid, in the status.
const BUS_ADDRESS_VALID: u32 = 1 << 15;

extern "C" fn fault() -> ! {
    let status = entry::STATUS.read();
    let address = if status & BUS_ADDRESS_VALID != 0 {
        entry::BUS_ADDRESS.read()
    } else {
        entry::MEMORY_ADDRESS.read()
    };
    end(Failure::Fault { status, address }, || {
        defmt::error!("fault, status {=u32:#010x}, address {=u32:#010x}", status, address);
    })
}
