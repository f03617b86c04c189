//! Memory that survives a warm restart, and the marks left in it.
//!
//! The block lies in `.uninit`, which the start-up code does not touch. Two words that are each
//! other's complement say whether it was ever set up since power came; a cold start finds other
//! content there. A mark says why the program ended its last run; whoever ends it on purpose, or
//! the watchdog's first half, leaves one.

use core::mem::MaybeUninit;

use strake_firmware::board::{ResetCause, RetainedMemory};
use strake_firmware::device::RETAINED_BYTES;

use crate::register::Register;

/// Bytes for the application, in whole words.
pub const CAPACITY: usize = RETAINED_BYTES.next_multiple_of(4);

const SET_UP: u32 = 0x5354_524B;

/// Why a run ended, in retained memory.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[repr(u32)]
pub enum Mark {
    /// The watchdog is about to bite.
    Watchdog = 1,
    /// A panic.
    Panic = 2,
    /// A fault of the processor.
    Fault = 3,
    /// On purpose.
    Software = 4,
}

/// What the program said before it gave up its last run.
#[derive(Clone, Copy, Debug, PartialEq, Eq, defmt::Format)]
pub enum Failure {
    /// A panic, with the line of the source it stood in. The log names the file.
    Panic {
        /// Line number.
        line: u32,
    },
    /// A fault of the processor.
    Fault {
        /// Configurable fault status register (Armv7-M, B3.2.15).
        status: u32,
        /// The address whose access failed, where the status says that it is known.
        address: u32,
    },
}

/// Words ahead of the application's content: the two of set-up, the mark, its two details.
const HEAD_WORDS: usize = 5;
const WORDS: usize = HEAD_WORDS + CAPACITY / 4;

#[expect(unsafe_code, reason = "a section and an address for memory that outlives a run")]
mod block {
    use super::{MaybeUninit, Register, WORDS};

    #[unsafe(link_section = ".uninit.retained")]
    static mut BLOCK: MaybeUninit<[u32; WORDS]> = MaybeUninit::uninit();

    /// The word of this number; beyond the end the last one.
    pub(super) fn word(number: usize) -> Register {
        let number = if number < WORDS { number } else { WORDS - 1 };
        let first = (&raw mut BLOCK).expose_provenance();
        // SAFETY: a word of a static that is reached in no other way than through registers, whose
        // volatile accesses take whatever bits the last run or the power left.
        unsafe { Register::at(first + number * size_of::<u32>()) }
    }
}
use block::word;

fn is_set_up() -> bool {
    word(0).read() == SET_UP && word(1).read() == !SET_UP
}

/// Leaves a mark for the next start.
pub fn leave_mark(mark: Mark) {
    word(2).write(mark as u32);
}

/// Leaves a failure, with its mark.
pub fn leave_failure(failure: Failure) {
    let (mark, first, second) = match failure {
        Failure::Panic { line } => (Mark::Panic, line, 0),
        Failure::Fault { status, address } => (Mark::Fault, status, address),
    };
    word(3).write(first);
    word(4).write(second);
    leave_mark(mark);
}

/// Takes the mark back.
pub fn clear_mark() {
    word(2).write(0);
}

/// What the mark of the last run says; a board whose controller knows the cause of a reset puts
/// that first. Called once, at the start.
#[must_use]
pub fn take_cause() -> (ResetCause, Option<Failure>) {
    if !is_set_up() {
        word(0).write(SET_UP);
        word(1).write(!SET_UP);
        clear_mark();
        return (ResetCause::PowerOn, None);
    }
    let (mark, first, second) = (word(2).read(), word(3).read(), word(4).read());
    clear_mark();
    if mark == Mark::Watchdog as u32 {
        (ResetCause::Watchdog, None)
    } else if mark == Mark::Panic as u32 {
        (ResetCause::Panic, Some(Failure::Panic { line: first }))
    } else if mark == Mark::Fault as u32 {
        (ResetCause::Panic, Some(Failure::Fault { status: first, address: second }))
    } else if mark == Mark::Software as u32 {
        (ResetCause::Software, None)
    } else {
        (ResetCause::Other, None)
    }
}

/// The application's share of the retained memory.
#[derive(Debug)]
pub struct Retained(());

impl Retained {
    /// The application's share; make one only.
    #[must_use]
    #[expect(clippy::new_without_default, reason = "there is one")]
    pub const fn new() -> Self {
        Self(())
    }
}

/// The word that holds the byte at `offset`, and the byte's place in it.
fn place(offset: usize) -> (Register, usize) {
    (word(HEAD_WORDS + offset / 4), offset % 4)
}

impl RetainedMemory for Retained {
    fn capacity(&self) -> usize {
        CAPACITY
    }

    fn read(&self, offset: usize, out: &mut [u8]) {
        for (offset, byte) in (offset..).zip(out) {
            let (word, lane) = place(offset);
            let stored = word.read().to_le_bytes().get(lane).copied().unwrap_or(0);
            *byte = if offset < CAPACITY { stored } else { 0 };
        }
    }

    fn write(&mut self, offset: usize, bytes: &[u8]) {
        // Whole words at once, as far as they lie on words.
        let (words, rest) = match offset % 4 {
            0 => bytes.as_chunks::<4>(),
            _ => (&[][..], bytes),
        };
        for (number, content) in (offset / 4..CAPACITY / 4).zip(words) {
            word(HEAD_WORDS + number).write(u32::from_le_bytes(*content));
        }
        let (offset, bytes) = (offset + 4 * words.len(), rest);
        for (offset, byte) in (offset..CAPACITY).zip(bytes) {
            let (word, lane) = place(offset);
            let mut stored = word.read().to_le_bytes();
            if let Some(slot) = stored.get_mut(lane) {
                *slot = *byte;
            }
            word.write(u32::from_le_bytes(stored));
        }
    }
}
