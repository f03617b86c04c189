//! The driver against the simulated chip.

use embedded_hal::spi::ErrorKind;
use embedded_storage::nor_flash::{NorFlash, NorFlashError, NorFlashErrorKind, ReadNorFlash};

use strake_core::journal::{Entry, Sample, SectorHeader};
use strake_core::signal::{Channel, Quality};

use super::chip::{Fault, Shared};
use super::{SpiNor, SpiNorError};
use crate::journal::{Journal, OpenError, Restore, Snapshot};

const BYTES: u32 = 64 << 10;
const CHIP_BYTES: usize = 128 << 10;

type Nor = SpiNor<Shared, Shared, BYTES>;

fn nor() -> (Nor, Shared) {
    let chip = Shared::new(CHIP_BYTES);
    (SpiNor::new(chip.clone(), chip.clone()), chip)
}

/// Numbers that are the same in every run (Knuth, The Art of Computer Programming, vol. 2, 3.3.4).
struct Numbers(u64);

impl Numbers {
    fn below(&mut self, bound: usize) -> usize {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1);
        usize::try_from(self.0 >> 33).expect("31 bits") % bound
    }
}

#[test]
fn what_is_written_is_read_back() {
    let (mut nor, chip) = nor();
    nor.write(250, b"over the end of a page").expect("written");
    let mut bytes = [0; 22];
    nor.read(250, &mut bytes).expect("read");
    assert_eq!(&bytes, b"over the end of a page");
    let chip = chip.0.borrow();
    assert_eq!(&chip.cells[250..272], b"over the end of a page");
    assert!(chip.cells[..250].iter().chain(&chip.cells[272..]).all(|&byte| byte == 0xFF));
    assert_eq!((chip.programs, chip.unheard), (2, 0));
    assert!(chip.is_asleep(), "between operations the chip draws next to nothing");
}

#[test]
fn any_operations_do_what_a_flash_does() {
    let (mut nor, chip) = nor();
    let mut numbers = Numbers(7);
    let mut model = vec![0xFF_u8; CHIP_BYTES];
    for _ in 0..4000 {
        let at = numbers.below(usize::try_from(BYTES).expect("small") - 700);
        let length = numbers.below(700);
        let offset = u32::try_from(at).expect("small");
        match numbers.below(8) {
            0 => {
                let first = at / 4096 * 4096;
                let last = first + 4096 * (1 + numbers.below(2));
                let last = last.min(usize::try_from(BYTES).expect("small"));
                let range = [first, last].map(|end| u32::try_from(end).expect("small"));
                nor.erase(range[0], range[1]).expect("erased");
                model[first..last].fill(0xFF);
            }
            1..4 => {
                let byte = u8::try_from(numbers.below(256)).expect("a byte");
                let bytes: Vec<u8> = (0..length).map(|_| byte ^ 0x5A).collect();
                nor.write(offset, &bytes).expect("written");
                for (cell, byte) in model[at..].iter_mut().zip(bytes) {
                    *cell &= byte;
                }
            }
            _ => {
                let mut bytes = vec![0; length];
                nor.read(offset, &mut bytes).expect("read");
                assert_eq!(bytes, model[at..at + length]);
            }
        }
    }
    let chip = chip.0.borrow();
    assert_eq!(chip.cells, model);
    assert_eq!(chip.unheard, 0, "nothing was sent to a chip that could not hear it");
    assert!(chip.erases > 400 && chip.programs > 2000, "{} {}", chip.erases, chip.programs);
}

#[test]
fn bounds_and_places_are_kept() {
    let (mut nor, chip) = nor();
    let mut byte = [0];
    assert_eq!(nor.read(BYTES, &mut byte), Err(SpiNorError::OutOfBounds));
    assert_eq!(nor.read(u32::MAX, &mut byte), Err(SpiNorError::OutOfBounds));
    assert_eq!(nor.write(BYTES - 1, &[0, 0]), Err(SpiNorError::OutOfBounds));
    assert_eq!(nor.erase(0, BYTES + 4096), Err(SpiNorError::OutOfBounds));
    assert_eq!(nor.erase(8, 4096), Err(SpiNorError::NotAligned));
    assert_eq!(nor.capacity(), 64 << 10);
    assert_eq!(chip.0.borrow().waited_us(), 0, "the chip was not asked");
    assert_eq!(SpiNorError::<ErrorKind>::OutOfBounds.kind(), NorFlashErrorKind::OutOfBounds);
    assert_eq!(SpiNorError::<ErrorKind>::NotAligned.kind(), NorFlashErrorKind::NotAligned);
    assert_eq!(SpiNorError::<ErrorKind>::Busy.kind(), NorFlashErrorKind::Other);
}

#[test]
fn another_chip_is_no_flash() {
    for level in [0x00, 0xFF] {
        let (mut nor, chip) = nor();
        chip.0.borrow_mut().fault = Fault::Absent(level);
        let mut byte = [0];
        let absent = SpiNorError::WrongChip { id: [level; 3] };
        assert_eq!(nor.read(0, &mut byte), Err(absent));
        assert_eq!(nor.write(0, &[1]), Err(absent));
        assert_eq!(nor.erase(0, 4096), Err(absent));
        assert!(chip.0.borrow().waited_us() < 1000, "nobody is not waited for");
        // Plugged in after all.
        chip.0.borrow_mut().fault = Fault::None;
        assert_eq!(nor.read(0, &mut byte), Ok(()));
        assert_eq!(byte, [0xFF]);
    }
    for (size_log2, fits) in [(0x00, false), (0x0F, false), (0x10, true), (0x18, true)] {
        let (mut nor, chip) = nor();
        chip.0.borrow_mut().id[2] = size_log2;
        assert_eq!(nor.read(0, &mut [0]).is_ok(), fits, "{size_log2:#x}");
    }
    let (mut nor, chip) = nor();
    chip.0.borrow_mut().id[2] = 0xE0;
    assert!(nor.read(0, &mut [0]).is_err(), "a capacity that no number holds");
}

#[test]
fn write_protection_is_told() {
    let (mut nor, chip) = nor();
    chip.0.borrow_mut().fault = Fault::Protected(0x1C);
    assert_eq!(nor.write(0, &[1]), Err(SpiNorError::Protected { status: 0x1C }));
    assert_eq!(chip.0.borrow().programs, 0);
}

#[test]
fn a_permission_that_is_not_taken_is_an_error() {
    let (mut nor, chip) = nor();
    chip.0.borrow_mut().fault = Fault::Refuses;
    assert_eq!(nor.write(0, &[1]), Err(SpiNorError::NotEnabled));
    assert_eq!(nor.erase(0, 4096), Err(SpiNorError::NotEnabled));
    assert_eq!(nor.read(0, &mut [0]), Ok(()), "reading needs none");
    assert_eq!(chip.0.borrow().programs, 0);
}

#[test]
fn a_chip_that_never_ends_is_given_up() {
    let (mut nor, chip) = nor();
    nor.read(0, &mut [0]).expect("known");
    chip.0.borrow_mut().fault = Fault::Stuck;
    let before_us = chip.0.borrow().waited_us();
    assert_eq!(nor.write(0, &[1]), Err(SpiNorError::Busy));
    let waited_us = chip.0.borrow().waited_us() - before_us;
    assert!((10_000..11_000).contains(&waited_us), "{waited_us}");
    let before_us = chip.0.borrow().waited_us();
    assert_eq!(nor.erase(0, 4096), Err(SpiNorError::Busy));
    let waited_us = chip.0.borrow().waited_us() - before_us;
    assert!((1_000_000..1_100_000).contains(&waited_us), "{waited_us}");
    // Cured: it is looked at anew and serves.
    chip.0.borrow_mut().fault = Fault::None;
    assert_eq!(nor.write(0, &[1]), Ok(()));
}

#[test]
fn what_a_restart_left_going_is_waited_for() {
    let (mut nor, chip) = nor();
    chip.0.borrow_mut().left_busy(300_000);
    let mut byte = [0];
    assert_eq!(nor.read(0, &mut byte), Ok(()));
    assert_eq!(byte, [0xFF]);
    assert!(chip.0.borrow().waited_us() >= 300_000);
    assert_eq!(chip.0.borrow().unheard, 0);
}

#[test]
fn a_failing_bus_is_told() {
    let (mut nor, chip) = nor();
    chip.0.borrow_mut().fault = Fault::Bus;
    let failed = SpiNorError::Bus(ErrorKind::Overrun);
    assert_eq!(nor.read(0, &mut [0]), Err(failed));
    assert_eq!(nor.write(0, &[0]), Err(failed));
    assert_eq!(nor.erase(0, 4096), Err(failed));
}

/// An application without a state of its own.
struct Plain;

impl Snapshot for Plain {
    fn plan_fingerprint(&self) -> u64 {
        7
    }
    fn boot(&self) -> u16 {
        1
    }
    fn tick_ms(&self) -> u64 {
        0
    }
    fn utc_s(&self) -> Option<u64> {
        None
    }
    fn write_state(&mut self, out: &mut [u8]) -> usize {
        out[..4].copy_from_slice(b"same");
        4
    }
}

/// Ticks of the samples behind the newest checkpoint.
#[derive(Default)]
struct Ticks(Vec<u64>);

impl Restore for Ticks {
    fn checkpoint(&mut self, bytes: &[u8]) {
        assert_eq!(bytes, b"same");
        self.0.clear();
    }
    fn sector(&mut self, header: &SectorHeader) {
        assert_eq!(header.plan_fingerprint, 7);
    }
    fn entry(&mut self, entry: &Entry) {
        if let Entry::Sample(sample) = entry {
            self.0.push(sample.tick_ms);
        }
    }
}

fn sample(number: u64) -> Sample {
    // Steps of their own each time, so that a lap of the ring comes soon.
    let count_16 = i32::try_from(number * number % 100_003).expect("small");
    let level = Channel { count_16, quality: Quality::Good };
    Sample { tick_ms: number * 10_000, level, ..Sample::default() }
}

#[test]
fn the_journal_laps_its_ring_on_the_chip() {
    const SAMPLES: u64 = 30_000;
    let (nor, chip) = nor();
    let (mut journal, _) = Journal::open(nor, &mut Ticks::default()).expect("open");
    for number in 1..=SAMPLES {
        journal.push(&sample(number), &mut Plain).expect("taken");
        if number % 6 == 0 {
            journal.flush().expect("written");
        }
        journal.housekeeping(number).expect("erased ahead");
    }
    journal.flush().expect("written");
    assert_eq!(journal.counters().flash_errors, 0);
    let mut found = Ticks::default();
    let (_, recovery) = Journal::open(journal.into_flash(), &mut found).expect("open");
    assert_eq!(found.0.last(), Some(&(SAMPLES * 10_000)));
    assert!(found.0.windows(2).all(|pair| pair[1] - pair[0] == 10_000), "none is missing");
    assert!(recovery.newest_sequence > Some(20), "{recovery:?}");
    assert_eq!((recovery.damaged_blocks, recovery.damaged_sectors), (0, 0));
    assert_eq!(chip.0.borrow().unheard, 0);
}

#[test]
fn without_its_chip_there_is_no_journal() {
    let (nor, chip) = nor();
    chip.0.borrow_mut().fault = Fault::Absent(0xFF);
    let opened = Journal::open(nor, &mut Ticks::default());
    let absent = SpiNorError::WrongChip { id: [0xFF; 3] };
    assert!(matches!(opened, Err(OpenError::Flash(error)) if error == absent), "not an empty one");
}
