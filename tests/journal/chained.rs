//! A control: a device without anchors. Its first block of samples in a page can be read by those
//! alone who know what the page before ended with; each sector begins anew.
//!
//! The medium makes it so: it writes such a block under a mask, the check sum of the block of
//! samples before it in the sector, and takes the mask off again when it is read. A reader who
//! misses the end of the page before, or takes another one for it, reads something else: what
//! chaining across pages comes to. Length, place, and check stay as the device wrote them.

use crate::bench::{Around, Bench, Medium, op};
use crate::cuts::{Seen, every_cut, goes_on};
use embedded_storage::nor_flash::{ErrorType, NorFlash, ReadNorFlash};
use strake::sim::nor::{Nor, NorError};
use strake_core::journal::check::{CRC32, block_check};
use strake_core::journal::{Entry, Item, SectorReader};

/// How the writer knows what the page before ended with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Memory {
    /// It keeps it in RAM, which a loss of power takes.
    Ram,
    /// It reads the sector from its beginning, as the reader must.
    Sector,
}

/// The end of a chain of blocks: nothing at a sector's beginning.
type End = [u8; 4];

#[derive(Clone)]
struct Chained {
    flash: Nor<4>,
    memory: Memory,
    in_ram: End,
    /// Offset of a block's check and what is to stand there, once its body is written.
    check: Option<(u32, [u8; 4])>,
}

/// A page's blocks may begin here.
fn begin(page: usize) -> usize {
    if page == 0 { 104 } else { page * 256 }
}

fn has_samples(block: &[u8]) -> bool {
    block[1] >> 5 < 2
}

fn mask(body: &mut [u8], end: End) {
    body[2..].iter_mut().zip(end.into_iter().cycle()).for_each(|(byte, mask)| *byte ^= mask);
}

fn end_of(body: &[u8]) -> End {
    CRC32.checksum(body).to_le_bytes()
}

impl Chained {
    fn new(memory: Memory) -> Self {
        Self { flash: Nor::new(4), memory, in_ram: End::default(), check: None }
    }

    fn sector(&self, offset: u32) -> Result<[u8; 4096], NorError> {
        let mut sector = [0; 4096];
        // A copy, since looking is no operation of the device.
        self.flash.clone().read(offset & !4095, &mut sector)?;
        Ok(sector)
    }
}

/// Takes the masks off the blocks before `until`; gives the end of the chain there, and whether the
/// page of `until` has samples before it.
fn unmask(sector: &mut [u8; 4096], until: usize) -> (End, bool) {
    let sequence = u32::from_le_bytes(sector[4..8].try_into().unwrap());
    let (mut end, mut anchored) = (End::default(), false);
    for page in 0..16 {
        let (mut at, page_end) = (begin(page), (page + 1) * 256);
        if at > until {
            break;
        }
        anchored = false;
        while at < page_end.min(until) {
            let next = at + usize::from(sector[at]) * 4;
            if next < at + 8 || next > page_end {
                break;
            }
            let (body, check) = sector[at..next].split_at_mut(next - at - 4);
            let offset = u16::try_from(at).unwrap();
            if *check != block_check(sequence, offset, body).to_le_bytes() {
                break;
            }
            if has_samples(body) {
                if !anchored {
                    mask(body, end);
                    check.copy_from_slice(&block_check(sequence, offset, body).to_le_bytes());
                }
                anchored = true;
                end = end_of(body);
            }
            at = next;
        }
    }
    (end, anchored)
}

impl ErrorType for Chained {
    type Error = NorError;
}

impl ReadNorFlash for Chained {
    const READ_SIZE: usize = 4;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorError> {
        self.flash.read(offset, bytes)?;
        let mut sector = self.sector(offset)?;
        unmask(&mut sector, 4096);
        let at = offset as usize % 4096;
        bytes.copy_from_slice(&sector[at..at + bytes.len()]);
        Ok(())
    }

    fn capacity(&self) -> usize {
        self.flash.capacity()
    }
}

impl NorFlash for Chained {
    const WRITE_SIZE: usize = 4;
    const ERASE_SIZE: usize = 4096;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorError> {
        self.flash.erase(from, to)
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorError> {
        if let Some((_, check)) = self.check.take().filter(|&(at, _)| at == offset) {
            return self.flash.write(offset, &check);
        }
        let at = offset as usize % 4096;
        if at < 104 {
            self.in_ram = End::default();
            return self.flash.write(offset, bytes);
        }
        let mut sector = self.sector(offset)?;
        let (read, anchored) = unmask(&mut sector, at);
        let end = if self.memory == Memory::Ram { self.in_ram } else { read };
        let mut body = bytes.to_vec();
        if has_samples(bytes) {
            self.in_ram = end_of(bytes);
            if !anchored {
                mask(&mut body, end);
            }
        }
        let sequence = u32::from_le_bytes(sector[4..8].try_into().unwrap());
        let check = block_check(sequence, u16::try_from(at).unwrap(), &body);
        self.check = Some((offset + u32::try_from(body.len()).unwrap(), check.to_le_bytes()));
        self.flash.write(offset, &body)
    }
}

impl Around for Chained {
    fn inner(&self) -> &Nor<4> {
        &self.flash
    }
    fn inner_mut(&mut self) -> &mut Nor<4> {
        &mut self.flash
    }
    fn forget(&mut self) {
        if !self.flash.is_powered() {
            self.in_ram = End::default();
        }
        self.check = None;
    }
}

/// Every cut in the first two thirds of the first sector, so that no erase plays a part.
fn run(memory: Memory) -> Seen {
    let seen = every_cut(Chained::new(memory), 0..200, 100, goes_on);
    println!("no anchors, {memory:?}: {} of {} cuts fail", seen.failures.len(), seen.cuts);
    seen
}

/// A cut takes the chain from the writer, and what it writes next is read as something else. With
/// the power on, all is well.
#[test]
fn without_anchors_a_cut_loses_or_invents() {
    let mut uncut = Bench::new(Chained::new(Memory::Ram), 100);
    for index in 0..1_500 {
        uncut.run(op(index)).unwrap();
        if index % 50 == 0 {
            uncut.flush().unwrap();
            assert_eq!(uncut.restart().map(|_| ()), Ok(()), "operation {index}");
        }
    }
    let seen = run(Memory::Ram);
    let of = |what| seen.failures.iter().filter(|failure| failure.contains(what)).count();
    let (lost, invented) = (of("lost:"), of("invented"));
    println!("lost in {lost}, invented in {invented}");
    assert!(lost + invented > 100, "{:?}", seen.failures.first());
}

/// The same medium holds where the writer reads the chain again, so it is the missing anchor that
/// the control above sees, and not the medium. What anchors spare this device is the reading.
#[test]
fn a_chain_that_is_read_again_outlives_a_cut() {
    let seen = run(Memory::Sector);
    assert!(seen.failures.is_empty(), "{:?}", seen.failures.first());
}

/// Samples read from the first sector.
fn samples<F: Medium>(bench: &mut Bench<F>) -> Vec<Entry> {
    let mut sector = [0; 4096];
    bench.journal.read_sector(0, 0, &mut sector).unwrap();
    let items = SectorReader::new(&sector).unwrap();
    let entries = items.filter_map(|item| match item {
        Item::Entry(entry @ Entry::Sample(_)) => Some(entry),
        _ => None,
    });
    entries.collect()
}

/// Samples lost, and invented, when one bit turns in the fourth page's first block of samples.
fn after_a_turned_bit<F: Medium>(flash: F, turn: impl Fn(&mut F, u32)) -> (usize, usize) {
    let mut bench = Bench::new(flash, 100);
    (0..280).for_each(|index| bench.run(op(index)).unwrap());
    bench.flush().unwrap();
    let whole = samples(&mut bench);
    turn(bench.journal.flash_mut(), 3 * 256 + 8);
    let read = samples(&mut bench);
    let lost = whole.iter().filter(|entry| !read.contains(entry)).count();
    (lost, read.iter().filter(|entry| !whole.contains(entry)).count())
}

/// What the anchor is for beside cuts: a damaged page costs itself, and not the sector's rest.
#[test]
fn without_anchors_a_turned_bit_reaches_beyond_its_page() {
    let flip = |byte: u8| byte ^ 0x10;
    let with = after_a_turned_bit(Nor::<4>::new(4), |flash, at| flash.corrupt(at, 1, flip));
    let chained = Chained::new(Memory::Sector);
    let without = after_a_turned_bit(chained, |medium, at| medium.flash.corrupt(at, 1, flip));
    println!("a turned bit, samples lost and invented: anchors {with:?}, none {without:?}");
    assert!(with.0 > 0 && with.0 < 40 && with.1 == 0, "{with:?}");
    assert!(without.0 > with.0, "{without:?}");
}
