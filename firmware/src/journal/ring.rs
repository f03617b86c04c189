//! The flash region as a ring of sectors.

use embedded_storage::nor_flash::{NorFlash, ReadNorFlash};
use strake_core::journal::header::{HEADER_BYTES, HeaderError, PEEK_BYTES, peek_sequence};
use strake_core::journal::{PAGE_BYTES, SECTOR_BYTES, SectorHeader, Word};

/// Bytes of a sector, as an address.
pub(super) const SECTOR: u32 = 4096;
/// Most bytes of one read.
const READ_BYTES: usize = 64;

/// A place's header as far as one short read shows it.
pub(super) enum Peek {
    /// Nothing was written here since the erase.
    Blank,
    /// Something that is no header of this ring.
    Damaged,
    /// A header with this sequence number, not checked.
    Sequence(u32),
}

/// The flash region; a sector with sequence s stands at place s mod n.
#[derive(Clone, Debug)]
pub(super) struct Ring<F> {
    pub(super) flash: F,
    sectors: u32,
    reads: u32,
}

impl<F: ReadNorFlash> Ring<F> {
    pub(super) fn new(flash: F) -> Self {
        let sectors = u32::try_from(flash.capacity() / SECTOR_BYTES).unwrap_or(u32::MAX / SECTOR);
        Self { flash, sectors, reads: 0 }
    }

    pub(super) const fn sectors(&self) -> u32 {
        self.sectors
    }

    /// Reads made so far.
    pub(super) const fn reads(&self) -> u32 {
        self.reads
    }

    /// Where the sector with this sequence number stands.
    pub(super) fn place(&self, sequence: u32) -> u32 {
        // At least SECTORS_MIN sectors, checked at opening.
        sequence.checked_rem(self.sectors).unwrap_or(0)
    }

    fn address(place: u32, offset: u32) -> u32 {
        place.wrapping_mul(SECTOR).wrapping_add(offset)
    }

    /// Fills `out` from `offset` of the sector at `place`, in reads of at most 64 bytes.
    pub(super) fn read(
        &mut self,
        place: u32,
        mut offset: u32,
        out: &mut [u8],
    ) -> Result<(), F::Error> {
        for chunk in out.chunks_mut(READ_BYTES) {
            self.reads = self.reads.saturating_add(1);
            self.flash.read(Self::address(place, offset), chunk)?;
            offset = offset.wrapping_add(64);
        }
        Ok(())
    }

    pub(super) fn read_page(
        &mut self,
        sequence: u32,
        index: u8,
        page: &mut [u8; PAGE_BYTES],
    ) -> Result<(), F::Error> {
        self.read(self.place(sequence), u32::from(index) * 256, page)
    }

    pub(super) fn peek(&mut self, place: u32) -> Result<Peek, F::Error> {
        let mut bytes = [0; PEEK_BYTES];
        self.read(place, 0, &mut bytes)?;
        Ok(match peek_sequence(&bytes) {
            Ok(sequence) if self.place(sequence) == place => Peek::Sequence(sequence),
            Err(HeaderError::Blank) => Peek::Blank,
            Ok(_) | Err(_) => Peek::Damaged,
        })
    }
}

impl<F: NorFlash> Ring<F> {
    /// The flash's word. The format knows two; another one does not compile.
    pub(super) const WORD: Word = {
        assert!(F::ERASE_SIZE == SECTOR_BYTES, "the format needs sectors of 4,096 bytes");
        assert!(F::READ_SIZE <= 4, "the format needs reads of words");
        match Word::of_bytes(F::WRITE_SIZE) {
            Some(word) => word,
            None => panic!("the format knows words of 1 and 4 bytes"),
        }
    };

    /// The header at `place`, when it is one of this ring.
    pub(super) fn header(&mut self, place: u32) -> Result<Option<SectorHeader>, F::Error> {
        let mut bytes = [0; HEADER_BYTES];
        self.read(place, 0, &mut bytes)?;
        Ok(SectorHeader::decode(&bytes)
            .ok()
            .filter(|header| self.place(header.sequence) == place && header.word == Self::WORD))
    }

    pub(super) fn program(
        &mut self,
        sequence: u32,
        offset: u16,
        bytes: &[u8],
    ) -> Result<(), F::Error> {
        self.flash.write(Self::address(self.place(sequence), offset.into()), bytes)
    }

    pub(super) fn erase(&mut self, sequence: u32) -> Result<(), F::Error> {
        let from = Self::address(self.place(sequence), 0);
        self.flash.erase(from, from.wrapping_add(SECTOR))
    }
}
