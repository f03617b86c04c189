//! A simulated chip that keeps its data sheet's rules and counts who breaks them.

use core::cell::RefCell;
use std::rc::Rc;

use embedded_hal::delay::DelayNs;
use embedded_hal::spi::{ErrorKind, ErrorType, Operation, SpiDevice};

const PROGRAM_US: u64 = 700;
const ERASE_US: u64 = 45_000;
const RELEASE_US: u64 = 35;

/// What is wrong with the chip.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Fault {
    None,
    /// Nobody answers; the line stays at this.
    Absent(u8),
    /// Operations never end.
    Stuck,
    /// The permission to write is not taken.
    Refuses,
    /// Bits of write protection.
    Protected(u8),
    /// The bus fails.
    Bus,
}

#[derive(Debug)]
pub(super) struct Chip {
    pub(super) cells: Vec<u8>,
    pub(super) id: [u8; 3],
    pub(super) fault: Fault,
    now_us: u64,
    busy_until_us: u64,
    awake_from_us: u64,
    asleep: bool,
    enabled: bool,
    /// Commands that came while the chip could not hear them.
    pub(super) unheard: u32,
    /// Pages programmed and sectors erased.
    pub(super) programs: u32,
    pub(super) erases: u32,
}

/// One chip, shared by its bus and by the one that waits.
#[derive(Clone, Debug)]
pub(super) struct Shared(pub(super) Rc<RefCell<Chip>>);

impl Shared {
    /// A chip of this capacity as it comes: blank, with content where the driver must not look.
    pub(super) fn new(bytes: usize) -> Self {
        let size_log2 = u8::try_from(bytes.trailing_zeros()).expect("small");
        Self(Rc::new(RefCell::new(Chip {
            cells: vec![0xFF; bytes],
            id: [0x20, 0x40, size_log2],
            fault: Fault::None,
            now_us: 0,
            busy_until_us: 0,
            awake_from_us: 0,
            asleep: true,
            enabled: false,
            unheard: 0,
            programs: 0,
            erases: 0,
        })))
    }
}

impl Chip {
    /// Lets an operation go on as if a restart had come in the middle of it.
    pub(super) fn left_busy(&mut self, for_us: u64) {
        self.asleep = false;
        self.busy_until_us = self.now_us + for_us;
    }

    pub(super) fn is_asleep(&self) -> bool {
        self.asleep
    }

    pub(super) fn waited_us(&self) -> u64 {
        self.now_us
    }

    fn is_busy(&self) -> bool {
        self.fault == Fault::Stuck && self.busy_until_us > 0 || self.now_us < self.busy_until_us
    }

    fn status(&self) -> u8 {
        let protected = if let Fault::Protected(bits) = self.fault { bits } else { 0 };
        u8::from(self.is_busy()) | u8::from(self.enabled) << 1 | protected
    }

    fn address(sent: &[u8]) -> usize {
        usize::from(sent[1]) << 16 | usize::from(sent[2]) << 8 | usize::from(sent[3])
    }

    /// One chip select: bytes sent, then bytes wanted.
    fn select(&mut self, sent: &[u8], wanted: &mut [u8]) {
        if let Fault::Absent(level) = self.fault {
            wanted.fill(level);
            return;
        }
        let hears = match sent[0] {
            0xAB => true,
            _ if self.asleep || self.now_us < self.awake_from_us => false,
            0x05 => true,
            _ => !self.is_busy(),
        };
        if !hears {
            self.unheard += 1;
            wanted.fill(0xFF);
            return;
        }
        match sent[0] {
            0xAB if self.asleep => {
                self.asleep = false;
                self.awake_from_us = self.now_us + RELEASE_US;
            }
            0xB9 => self.asleep = true,
            0x05 => wanted.fill(self.status()),
            0x06 => self.enabled = self.fault != Fault::Refuses,
            0x9F => wanted.copy_from_slice(&self.id),
            0x03 => {
                let from = Self::address(sent);
                wanted.copy_from_slice(&self.cells[from..from + wanted.len()]);
            }
            0x02 | 0x20 if !self.enabled => self.unheard += 1,
            0x02 => {
                let at = Self::address(sent);
                for (number, byte) in sent[4..].iter().enumerate() {
                    // Round within the page, as these chips do.
                    self.cells[at / 256 * 256 + (at + number) % 256] &= byte;
                }
                self.begin(PROGRAM_US);
                self.programs += 1;
            }
            0x20 => {
                let from = Self::address(sent) / 4096 * 4096;
                self.cells[from..from + 4096].fill(0xFF);
                self.begin(ERASE_US);
                self.erases += 1;
            }
            _ => {}
        }
    }

    fn begin(&mut self, for_us: u64) {
        self.enabled = false;
        self.busy_until_us = self.now_us + for_us;
    }
}

impl ErrorType for Shared {
    type Error = ErrorKind;
}

impl SpiDevice for Shared {
    fn transaction(&mut self, steps: &mut [Operation<'_, u8>]) -> Result<(), ErrorKind> {
        let mut chip = self.0.borrow_mut();
        if chip.fault == Fault::Bus {
            return Err(ErrorKind::Overrun);
        }
        let mut sent = Vec::new();
        let mut nobody = [0; 0];
        let mut wanted: &mut [u8] = &mut nobody;
        for step in steps {
            match step {
                Operation::Write(bytes) => sent.extend_from_slice(bytes),
                Operation::Read(bytes) => wanted = bytes,
                _ => panic!("not used by the driver"),
            }
        }
        chip.select(&sent, wanted);
        Ok(())
    }
}

impl DelayNs for Shared {
    fn delay_ns(&mut self, ns: u32) {
        self.0.borrow_mut().now_us += u64::from(ns.div_ceil(1000));
    }
}
