//! The ring on a healthy and on a worn flash: wrap-around, erasing ahead, holds, refusals, RAM.

use crate::bench::{Bench, Op, Remembered, op};
use core::mem::size_of;
use strake::sim::nor::Nor;
use strake_core::journal::Sample;
use strake_firmware::board::RetainedMemory;
use strake_firmware::journal::collect::HOLD_MS;
use strake_firmware::journal::{Journal, OpenError, ReadError};

#[test]
fn laps_keep_all_but_one_sector() {
    let mut bench = Bench::new(Nor::<4>::new(5), 600);
    for index in 0..20_000 {
        bench.run(op(index)).unwrap();
        if index % 997 == 0 {
            bench.flush().unwrap();
            bench.restart().unwrap();
            bench.start_up().unwrap();
        }
    }
    let newest = bench.journal.newest_sequence().unwrap();
    assert!(newest > 20, "{newest}");
    assert!(newest - bench.journal.oldest_sequence() >= 3);
}

#[test]
fn an_idle_erase_spares_the_append() {
    let mut bench = Bench::new(Nor::<1>::new(4), 200);
    (0..6_000).for_each(|index| bench.run(op(index)).unwrap());
    let counters = *bench.journal.counters();
    assert!(counters.erases > 5, "{counters:?}");
    // Only the very first sector had to be erased while an entry waited.
    assert_eq!(counters.erases_inline, 1);
    assert_eq!(counters.flash_errors, 0);
}

#[test]
fn a_held_sector_stays_for_two_seconds() {
    let mut bench = Bench::new(Nor::<4>::new(3), 100);
    while bench.journal.newest_sequence() != Some(2) {
        bench.event().unwrap();
    }
    while bench.journal.used_bytes::<()>(2).unwrap() < 2048 {
        bench.event().unwrap();
    }
    bench.journal.hold(0, 1_000);
    assert_eq!(bench.journal.housekeeping(1_000 + HOLD_MS - 1), Ok(false));
    assert_eq!(bench.journal.oldest_sequence(), 0);
    assert_eq!(bench.journal.housekeeping(1_000 + HOLD_MS), Ok(true));
    assert_eq!(bench.journal.counters().released_holds, 1);
    assert_eq!(bench.journal.read_sector(0, 0, &mut [0; 4]), Err(ReadError::Gone));
    assert!(bench.journal.read_sector(1, 0, &mut [0; 4]).is_ok());
}

#[test]
fn a_worn_sector_is_passed_over() {
    let mut bench = Bench::new(Nor::<4>::new(6), 100);
    bench.journal.flash_mut().wear_out(2);
    for index in 0..6_000 {
        // Only the idle erase may say so; every append finds another place.
        if let Err(error) = bench.run(op(index)) {
            assert!(matches!(op(index), Op::Housekeep), "{error:?}");
        }
    }
    assert!(bench.journal.newest_sequence().unwrap() > 8);
    assert_eq!(bench.journal.counters().lost_samples, 0);
    let (journal, _) =
        Journal::open(bench.journal.flash().clone(), &mut Remembered::default()).unwrap();
    assert_eq!(journal.newest_sequence(), bench.journal.newest_sequence());
    assert_eq!(journal.next_entry(), bench.journal.next_entry());
}

#[test]
fn a_dead_flash_is_an_error_every_time() {
    let mut flash = Nor::<4>::new(3);
    (0..3).for_each(|sector| flash.wear_out(sector));
    let mut bench = Bench::new(flash, 100);
    (0..50).for_each(|_| assert!(bench.sample().is_err()));
    assert!(bench.event().is_err());
    assert_eq!(bench.journal.counters().lost_samples, 50);
}

#[test]
fn two_sectors_are_too_few() {
    let outcome = Journal::open(Nor::<4>::new(2), &mut Remembered::default());
    assert_eq!(outcome.unwrap_err(), OpenError::TooSmall { sectors: 2 });
}

#[test]
fn the_journal_takes_little_ram() {
    let without_flash = size_of::<Journal<()>>();
    println!("journal without its flash: {without_flash} bytes");
    assert!(without_flash <= 1_400, "{without_flash}");
    assert!(size_of::<Sample>() <= 32);
}

/// RAM of a few hundred bytes.
struct Ram(Vec<u8>);

impl RetainedMemory for Ram {
    fn capacity(&self) -> usize {
        self.0.len()
    }
    fn read(&self, offset: usize, out: &mut [u8]) {
        out.fill(0);
        for (place, byte) in out.iter_mut().zip(self.0.iter().skip(offset)) {
            *place = *byte;
        }
    }
    fn write(&mut self, offset: usize, bytes: &[u8]) {
        for (place, byte) in self.0.iter_mut().skip(offset).zip(bytes) {
            *place = *byte;
        }
    }
}

#[test]
fn waiting_samples_survive_a_warm_restart_once() {
    let area = 16..16 + 512;
    let mut ram = Ram(vec![0x5A; 528]);
    let mut bench = Bench::new(Nor::<4>::new(4), 100);
    bench.start_up().unwrap();
    (0..20).for_each(|_| bench.sample().unwrap());
    let waiting: Vec<Sample> = bench.journal.waiting().iter().copied().collect();
    assert_eq!(bench.journal.waiting().save(0, &mut ram, &area), 20);

    // A warm restart: the samples come back, each once.
    let mut cold = bench.clone();
    let recovery = cold.restart().unwrap();
    let carried = cold.journal.carried(&ram, &area, &recovery).unwrap();
    assert_eq!(carried.iter().copied().collect::<Vec<_>>(), waiting);

    // Flushed, but the area not yet marked as empty: nothing comes twice.
    bench.flush().unwrap();
    let recovery = bench.restart().unwrap();
    assert_eq!(bench.journal.carried(&ram, &area, &recovery).unwrap().len(), 0);

    // Another boot, a flipped bit, an emptied area: nothing.
    let mut other = recovery;
    other.last_tick_ms = None;
    other.last_boot = 7;
    assert_eq!(bench.journal.carried(&ram, &area, &other).unwrap().len(), 0);
    ram.0[20] ^= 1;
    other.last_boot = 0;
    assert_eq!(bench.journal.carried(&ram, &area, &other).unwrap().len(), 0);
    bench.journal.waiting().save(0, &mut ram, &area);
    assert_eq!(bench.journal.carried(&ram, &area, &other).unwrap().len(), 0);
}
