//! Any content of the flash: opening finishes, and the journal can be used afterwards.

use crate::bench::{Bench, Medium, op};
use proptest::prelude::*;
use strake::sim::nor::Nor;
use strake_core::journal::{Item, SectorReader};
use strake_firmware::journal::{Journal, Restore};

struct Count(u32);

impl Restore for Count {
    fn checkpoint(&mut self, _: &[u8]) {}
    fn entry(&mut self, _: &strake_core::journal::Entry) {
        self.0 += 1;
    }
}

/// A few laps of a ring of six sectors.
fn used<const WORD: usize>() -> Bench<Nor<WORD>> {
    let mut bench = Bench::new(Nor::new(6), 200);
    (0..4_000).for_each(|index| bench.run(op(index)).unwrap());
    bench.flush().unwrap();
    bench
}

fn opens_and_goes_on<F: Medium>(flash: F) {
    let mut count = Count(0);
    let Ok((mut journal, _)) = Journal::open(flash, &mut count) else {
        panic!("a flash that can be read opens")
    };
    let mut bench = Bench::new(journal.flash().clone(), 200);
    bench.journal = journal.clone();
    for index in 0..400 {
        // A wild header may have used up the sequence numbers; that is an error, not a panic.
        let _ = bench.run(op(index));
    }
    let newest = journal.newest_sequence().unwrap_or(0);
    let mut bytes = [0; 4096];
    for sequence in journal.oldest_sequence()..=newest {
        if journal.read_sector(sequence, 0, &mut bytes).is_ok()
            && let Ok(reader) = SectorReader::new(&bytes)
        {
            let _ = reader.filter(|item| matches!(item, Item::Entry(_))).count();
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(60))]

    #[test]
    fn noise_opens(seed in prop::collection::vec(any::<u8>(), 64)) {
        let mut flash = Nor::<4>::new(6);
        let mut at = 0_usize;
        flash.corrupt(0, 6 * 4096, |_| {
            at += 1;
            seed[at % 64].wrapping_mul(seed[(at / 64) % 64] | 1).wrapping_add(seed[at / 4096])
        });
        opens_and_goes_on(flash);
    }

    #[test]
    fn a_used_ring_with_wild_places_opens(
        places in prop::collection::vec((0_u32..6 * 4096, 1_usize..300, any::<u8>()), 0..40)
    ) {
        let mut flash = used::<4>().journal.flash().clone();
        for (address, len, pattern) in places {
            let len = len.min(6 * 4096 - address as usize);
            flash.corrupt(address, len, |byte| byte ^ pattern);
        }
        opens_and_goes_on(flash);
    }
}

/// Any single sector destroyed: the others give all their entries, and the restart finds the end.
#[test]
fn one_destroyed_sector_costs_no_other() {
    let bench = used::<1>();
    let newest = bench.journal.newest_sequence().unwrap();
    for place in 0..6 {
        for pattern in [0x00, 0xFF, 0x55] {
            let mut flash = bench.journal.flash().clone();
            flash.corrupt(place * 4096, 4096, |_| pattern);
            let mut count = Count(0);
            let (mut journal, recovery) = Journal::open(flash, &mut count).unwrap();
            let found = recovery.newest_sequence.unwrap();
            assert_eq!(found, if newest % 6 == place { newest - 1 } else { newest });
            assert!(recovery.state_found);
            let mut readable = 0;
            for sequence in journal.oldest_sequence()..=found {
                let mut bytes = [0; 4096];
                journal.read_sector(sequence, 0, &mut bytes).unwrap();
                if let Ok(reader) = SectorReader::new(&bytes) {
                    assert_eq!(reader.header().sequence, sequence);
                    readable += 1;
                }
            }
            assert!(readable >= 4, "{place} {pattern:#x}: {readable}");
        }
    }
}

/// A checkpoint that rotted away: the one before it serves, with all entries of both sectors.
#[test]
fn a_rotten_checkpoint_falls_back_to_the_one_before() {
    let mut bench = used::<4>();
    let newest = bench.journal.newest_sequence().unwrap();
    bench.journal.flash_mut().corrupt((newest % 6) * 4096 + 120, 1, |byte| byte ^ 4);
    let recovery = bench.restart().unwrap();
    assert!(recovery.state_found);
    assert_eq!(recovery.damaged_blocks, 1);
    assert_eq!(recovery.damaged_sectors, 1);
}
