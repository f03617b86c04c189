//! How many reads a restart takes.

use crate::bench::{Bench, Remembered};
use strake::sim::nor::Nor;
use strake_firmware::journal::{Journal, Recovery};

/// Fills the ring until the newest sector has this sequence number, with few entries per sector.
fn filled_to(bench: &mut Bench<Nor<1>>, newest: u32) {
    while bench.journal.newest_sequence() != Some(newest) {
        bench.event().unwrap();
        bench.journal.housekeeping(0).unwrap();
    }
}

fn filled_to_half(bench: &mut Bench<Nor<1>>) {
    while !bench.journal.housekeeping(0).unwrap() {
        bench.event().unwrap();
    }
}

fn reopened(mut flash: Nor<1>) -> (Recovery, usize) {
    flash.reset_counters();
    let (journal, recovery) = Journal::open(flash, &mut Remembered::default()).unwrap();
    let counters = journal.flash().counters();
    assert_eq!(counters.reads, u64::from(recovery.reads));
    (recovery, counters.longest_read)
}

/// The target: the end in 24 reads of at most 64 bytes, and 64 reads for the state.
#[test]
fn restart_of_a_full_ring_of_8_mib() {
    let mut bench = Bench::new(Nor::<1>::new(2048), 1_500);
    let mut most = (0, 0);
    for newest in [2048, 2049, 2100, 3071, 3072, 3073, 4094, 4095, 4096, 4100] {
        filled_to(&mut bench, newest);
        for erased_ahead in [false, true] {
            if erased_ahead {
                filled_to_half(&mut bench);
            }
            let (recovery, longest) = reopened(bench.journal.flash().clone());
            assert!(longest <= 64, "{longest}");
            assert_eq!(recovery.newest_sequence, Some(newest));
            assert!(recovery.state_found);
            assert!(recovery.reads_to_end <= 24, "{recovery:?}");
            assert!(recovery.reads <= 24 + 64, "{recovery:?}");
            most = (most.0.max(recovery.reads_to_end), most.1.max(recovery.reads));
        }
    }
    println!("restart, 2048 sectors: end in {} reads, with the state {}", most.0, most.1);
}
