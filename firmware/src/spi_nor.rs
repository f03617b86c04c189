//! NOR flash on an SPI bus, by the command set that chips of all makes share.
//!
//! The commands are the read, program, erase and status commands of JEDEC JESD216's common parts,
//! with addresses of three bytes: pages of 256 bytes, sectors of 4,096, program words of one byte.
//! Every wait ends. Before anything else, and again for as long as it is not found, the chip is
//! asked who it is: one that does not answer, is too small or holds write protection is an error
//! and never taken for an empty flash. Between operations the chip lies in deep power-down.

use core::fmt;
use embedded_hal::delay::DelayNs;
use embedded_hal::spi::{Operation, SpiDevice};
use embedded_storage::nor_flash::{
    ErrorType, NorFlash, NorFlashError, NorFlashErrorKind, ReadNorFlash, check_erase, check_read,
    check_write,
};

const PAGE_BYTES: u32 = 256;
const SECTOR_BYTES: u32 = 4096;

const PROGRAM: u8 = 0x02;
const READ: u8 = 0x03;
const READ_STATUS: u8 = 0x05;
const WRITE_ENABLE: u8 = 0x06;
const ERASE_SECTOR: u8 = 0x20;
const IDENTIFY: u8 = 0x9F;
const RELEASE: u8 = 0xAB;
const POWER_DOWN: u8 = 0xB9;

/// Status: an operation goes on.
const BUSY: u8 = 1 << 0;
/// Status: the next program or erase is allowed.
const WRITE_ENABLED: u8 = 1 << 1;
/// Status: bits that keep areas from being written.
const PROTECTED: u8 = 0b111 << 2;

/// Twice what such chips need to leave deep power-down, or to enter it.
const REST_US: u32 = 70;
/// A page takes some 0.7 ms, 3 ms at most.
const PROGRAM_POLL: Poll = Poll { every_us: 50, times: 200 };
/// A sector takes some 50 ms, 400 ms at most; one that a restart left going too.
const ERASE_POLL: Poll = Poll { every_us: 1000, times: 1000 };

/// How often a chip is asked whether it is done.
#[derive(Clone, Copy, Debug)]
struct Poll {
    every_us: u32,
    times: u32,
}

/// Why the flash refused.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum SpiNorError<E> {
    /// The bus failed.
    Bus(E),
    /// An address or a length off the words or sectors.
    NotAligned,
    /// Beyond the capacity.
    OutOfBounds,
    /// No chip of this capacity: what it said it is (maker, kind, capacity), JEDEC JEP106 and
    /// JESD216; all ones or all zeros where none answers.
    WrongChip {
        /// The three bytes.
        id: [u8; 3],
    },
    /// The chip holds write protection, by these bits of its status.
    Protected {
        /// The status register.
        status: u8,
    },
    /// The chip did not take the permission to write.
    NotEnabled,
    /// An operation did not end in its time.
    Busy,
}

impl<E> From<NorFlashErrorKind> for SpiNorError<E> {
    fn from(kind: NorFlashErrorKind) -> Self {
        match kind {
            NorFlashErrorKind::NotAligned => Self::NotAligned,
            _ => Self::OutOfBounds,
        }
    }
}

impl<E: fmt::Debug> NorFlashError for SpiNorError<E> {
    fn kind(&self) -> NorFlashErrorKind {
        match self {
            Self::NotAligned => NorFlashErrorKind::NotAligned,
            Self::OutOfBounds => NorFlashErrorKind::OutOfBounds,
            _ => NorFlashErrorKind::Other,
        }
    }
}

/// The first `BYTES` of a chip: whole sectors, at most 16 MiB.
pub struct SpiNor<S, D, const BYTES: u32> {
    spi: S,
    delay: D,
    is_known: bool,
}

impl<S: SpiDevice, D: DelayNs, const BYTES: u32> SpiNor<S, D, BYTES> {
    const FITS: () = assert!(
        BYTES.is_multiple_of(SECTOR_BYTES) && BYTES > 0 && BYTES <= 1 << 24,
        "whole sectors that three bytes address"
    );

    /// The chip on this bus. Nothing is asked of it yet.
    pub const fn new(spi: S, delay: D) -> Self {
        let () = Self::FITS;
        Self { spi, delay, is_known: false }
    }

    fn command(&mut self, bytes: &[u8]) -> Result<(), SpiNorError<S::Error>> {
        self.spi.write(bytes).map_err(SpiNorError::Bus)
    }

    /// Sends a command and takes what the chip says to it.
    fn ask<const N: usize>(&mut self, command: u8) -> Result<[u8; N], SpiNorError<S::Error>> {
        let mut answer = [0; N];
        let mut steps = [Operation::Write(&[command]), Operation::Read(&mut answer)];
        self.spi.transaction(&mut steps).map_err(SpiNorError::Bus)?;
        Ok(answer)
    }

    fn status(&mut self) -> Result<u8, SpiNorError<S::Error>> {
        self.ask(READ_STATUS).map(|[status]| status)
    }

    fn wait(&mut self, poll: Poll) -> Result<(), SpiNorError<S::Error>> {
        for _ in 0..poll.times {
            if self.status()? & BUSY == 0 {
                return Ok(());
            }
            self.delay.delay_us(poll.every_us);
        }
        Err(SpiNorError::Busy)
    }

    /// Makes sure that the chip is there and is the right one.
    fn identify(&mut self) -> Result<(), SpiNorError<S::Error>> {
        // A line that nobody drives reads as all ones, which no chip's status is.
        if self.status()? == u8::MAX {
            return Err(SpiNorError::WrongChip { id: [u8::MAX; 3] });
        }
        // Who it is cannot be asked while a restart's operation goes on.
        self.wait(ERASE_POLL)?;
        let id: [u8; 3] = self.ask(IDENTIFY)?;
        let [maker, _, size_log2] = id;
        let bytes = 1_u32.checked_shl(size_log2.into()).unwrap_or(0);
        if matches!(maker, 0x00 | 0xFF) || bytes < BYTES {
            return Err(SpiNorError::WrongChip { id });
        }
        let status = self.status()?;
        if status & PROTECTED != 0 {
            return Err(SpiNorError::Protected { status });
        }
        self.is_known = true;
        Ok(())
    }

    /// Wakes the chip, works on it, and lays it down again whatever came of that.
    fn awake<R>(
        &mut self,
        work: impl FnOnce(&mut Self) -> Result<R, SpiNorError<S::Error>>,
    ) -> Result<R, SpiNorError<S::Error>> {
        self.command(&[RELEASE])?;
        self.delay.delay_us(REST_US);
        let known = if self.is_known { Ok(()) } else { self.identify() };
        let result = known.and_then(|()| work(self));
        // What did not end in its time, or did not listen, is looked at anew.
        if let Err(SpiNorError::Busy | SpiNorError::NotEnabled) = result {
            self.is_known = false;
        }
        self.command(&[POWER_DOWN])?;
        self.delay.delay_us(REST_US);
        result
    }

    /// Allows one program or erase.
    fn enable(&mut self) -> Result<(), SpiNorError<S::Error>> {
        self.command(&[WRITE_ENABLE])?;
        if self.status()? & WRITE_ENABLED == 0 {
            return Err(SpiNorError::NotEnabled);
        }
        Ok(())
    }

    /// Programs bytes that lie in one page.
    fn program(&mut self, address: u32, bytes: &[u8]) -> Result<(), SpiNorError<S::Error>> {
        self.enable()?;
        let head = addressed(PROGRAM, address);
        let mut steps = [Operation::Write(&head), Operation::Write(bytes)];
        self.spi.transaction(&mut steps).map_err(SpiNorError::Bus)?;
        self.wait(PROGRAM_POLL)
    }
}

/// A command with its address, highest byte first.
const fn addressed(command: u8, address: u32) -> [u8; 4] {
    let [_, high, middle, low] = address.to_be_bytes();
    [command, high, middle, low]
}

impl<S: SpiDevice, D: DelayNs, const BYTES: u32> ErrorType for SpiNor<S, D, BYTES> {
    type Error = SpiNorError<S::Error>;
}

impl<S: SpiDevice, D: DelayNs, const BYTES: u32> ReadNorFlash for SpiNor<S, D, BYTES> {
    const READ_SIZE: usize = 1;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), Self::Error> {
        check_read(self, offset, bytes.len())?;
        self.awake(|chip| {
            let head = addressed(READ, offset);
            let mut steps = [Operation::Write(&head), Operation::Read(bytes)];
            chip.spi.transaction(&mut steps).map_err(SpiNorError::Bus)
        })
    }

    fn capacity(&self) -> usize {
        usize::try_from(BYTES).unwrap_or(usize::MAX)
    }
}

impl<S: SpiDevice, D: DelayNs, const BYTES: u32> NorFlash for SpiNor<S, D, BYTES> {
    const WRITE_SIZE: usize = 1;
    const ERASE_SIZE: usize = SECTOR_BYTES as usize;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), Self::Error> {
        check_erase(self, from, to)?;
        self.awake(|chip| {
            let mut address = from;
            while address < to {
                chip.enable()?;
                chip.command(&addressed(ERASE_SECTOR, address))?;
                chip.wait(ERASE_POLL)?;
                address = address.wrapping_add(SECTOR_BYTES);
            }
            Ok(())
        })
    }

    /// A program that reaches the end of a page goes on at its beginning, in these chips: so every
    /// page is programmed by itself.
    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), Self::Error> {
        check_write(self, offset, bytes.len())?;
        self.awake(|chip| {
            let (mut address, mut rest) = (offset, bytes);
            while !rest.is_empty() {
                let room = PAGE_BYTES - address % PAGE_BYTES;
                let length = usize::try_from(room).unwrap_or(0).min(rest.len());
                let (page, behind) = rest.split_at_checked(length).unwrap_or((rest, &[]));
                chip.program(address, page)?;
                address = address.wrapping_add(room);
                rest = behind;
            }
            Ok(())
        })
    }
}

impl<S, D, const BYTES: u32> fmt::Debug for SpiNor<S, D, BYTES> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("SpiNor").field("is_known", &self.is_known).finish_non_exhaustive()
    }
}

#[cfg(test)]
mod chip;
#[cfg(test)]
mod tests;
