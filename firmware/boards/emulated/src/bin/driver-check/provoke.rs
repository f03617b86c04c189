//! Ways to fail on purpose, and a loop of a known number of instructions.

use core::arch::naked_asm;
use core::hint::black_box;

use crate::commands::Refused;

/// Runs the failure of this name, if there is one; those that are known never return.
pub(crate) fn run(word: &str) -> Result<(), Refused> {
    match word {
        "hang" => loop {
            core::hint::spin_loop();
        },
        "panic" => panic!("provoked"),
        "overflow" => {
            overflow(0);
            Ok(())
        }
        "wild" => wild(),
        "jump" => jump(),
        _ => Err(Refused("unknown command")),
    }
}

/// Needs more stack than there is.
#[expect(unconditional_recursion, reason = "an overflow is the purpose")]
#[inline(never)]
fn overflow(depth: u32) -> u32 {
    let frame = black_box([depth; 16]);
    let [first, ..] = frame;
    overflow(first.wrapping_add(1)).wrapping_add(black_box(frame)[1])
}

/// Stores into the program.
#[expect(unsafe_code, reason = "a wild store is the purpose")]
fn wild() -> Result<(), Refused> {
    // SAFETY: none is claimed; the protection must end the run before the store takes effect.
    unsafe { core::ptr::write_volatile(core::ptr::with_exposed_provenance_mut(0x400), 0_u32) };
    Err(Refused("the store was taken"))
}

/// Executes data.
#[expect(unsafe_code, reason = "a wild jump is the purpose")]
fn jump() -> Result<(), Refused> {
    // `bx lr` in RAM.
    let code = black_box([0x4770_4770_u32]);
    let entry = code.as_ptr().addr() | 1;
    // SAFETY: none is claimed; the protection must end the run at the first instruction.
    let go: extern "C" fn() = unsafe { core::mem::transmute(entry) };
    go();
    Err(Refused("data was executed"))
}

#[expect(unsafe_code, reason = "a loop of known instructions")]
mod counted {
    use super::naked_asm;

    /// Executes 2 n + 1 instructions, for n of at least 1.
    #[unsafe(naked)]
    #[unsafe(no_mangle)]
    pub(super) extern "C" fn counted_loop(n: u32) {
        naked_asm!("0:", "subs r0, r0, #1", "bne 0b", "bx lr")
    }
}

/// Runs the loop of known length; at least once.
pub(crate) fn counted_loop(n: u32) {
    counted::counted_loop(if n == 0 { 1 } else { n });
    // Keeps the call from becoming a jump.
    black_box(n);
}
