//! Controls that must fail: without the check, and with the check written first, the very runs that
//! pass elsewhere lose or invent. So those runs can see what they are there for.

use crate::bench::Around;
use crate::cuts::{Seen, every_cut};
use embedded_storage::nor_flash::{ErrorType, NorFlash, ReadNorFlash};
use strake::sim::nor::{Nor, NorError};
use strake_core::journal::check::block_check;

#[derive(Clone, Copy, PartialEq, Eq)]
enum Check {
    /// Every block with a plausible length passes.
    Off,
    /// Every block whose check was touched passes: the check is a mere commit mark.
    Mark,
}

/// A flash that mends the checks of the blocks it shows, and may write a block's check first.
#[derive(Clone)]
struct Lax {
    flash: Nor<4>,
    check: Check,
    check_first: bool,
    held: Option<(u32, Vec<u8>)>,
}

impl Lax {
    fn new(check: Check, check_first: bool) -> Self {
        Self { flash: Nor::new(4), check, check_first, held: None }
    }

    fn mend(&self, sector: &mut [u8]) {
        let sequence = u32::from_le_bytes(sector[4..8].try_into().unwrap());
        for page in 0..16 {
            let mut at = if page == 0 { 104 } else { page * 256 };
            let end = (page + 1) * 256;
            while at < end {
                let len = usize::from(sector[at]) * 4;
                if len < 8 || at + len > end {
                    break;
                }
                let check = at + len - 4;
                if self.check == Check::Off || sector[check..at + len] != [0xFF; 4] {
                    let offset = u16::try_from(at).unwrap();
                    let right = block_check(sequence, offset, &sector[at..check]);
                    sector[check..at + len].copy_from_slice(&right.to_le_bytes());
                }
                at += len;
            }
        }
    }
}

impl ErrorType for Lax {
    type Error = NorError;
}

impl ReadNorFlash for Lax {
    const READ_SIZE: usize = 4;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorError> {
        let mut sector = [0; 4096];
        self.flash.read(offset & !4095, &mut sector)?;
        self.mend(&mut sector);
        let at = offset as usize % 4096;
        bytes.copy_from_slice(&sector[at..at + bytes.len()]);
        Ok(())
    }

    fn capacity(&self) -> usize {
        self.flash.capacity()
    }
}

impl NorFlash for Lax {
    const WRITE_SIZE: usize = 4;
    const ERASE_SIZE: usize = 4096;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorError> {
        self.flash.erase(from, to)
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorError> {
        let header = offset.is_multiple_of(4096);
        match self.held.take() {
            _ if header || !self.check_first => self.flash.write(offset, bytes),
            None => {
                self.held = Some((offset, bytes.to_vec()));
                Ok(())
            }
            Some((body_offset, body)) => {
                self.flash.write(offset, bytes)?;
                self.flash.write(body_offset, &body)
            }
        }
    }
}

impl Around for Lax {
    fn inner(&self) -> &Nor<4> {
        &self.flash
    }
    fn inner_mut(&mut self) -> &mut Nor<4> {
        &mut self.flash
    }
    fn forget(&mut self) {
        self.held = None;
    }
}

/// Cuts in the first sector only, so that no erase plays a part.
fn run(check: Check, check_first: bool) -> Seen {
    every_cut(Lax::new(check, check_first), 0..150, 100, |_, _| Ok(()))
}

#[test]
fn without_a_check_entries_are_invented() {
    let seen = run(Check::Off, false);
    println!("check off: {} of {} cuts fail", seen.failures.len(), seen.cuts);
    assert!(seen.failures.iter().any(|failure| failure.contains("invented")), "{seen:?}");
}

#[test]
fn a_mark_written_first_invents() {
    let seen = run(Check::Mark, true);
    println!("mark first: {} of {} cuts fail", seen.failures.len(), seen.cuts);
    assert!(seen.failures.iter().any(|failure| failure.contains("invented")), "{seen:?}");
}

/// The same mark written last holds, so it is the order that the control above sees.
#[test]
fn a_mark_written_last_holds() {
    let seen = run(Check::Mark, false);
    assert!(seen.failures.is_empty(), "{:?}", seen.failures.first());
}
