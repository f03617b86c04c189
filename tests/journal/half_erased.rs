//! Sectors that a cut left half erased while their headers read as sound.
//!
//! Bits rise one by one, so the first 104 bytes may happen to stay as they were and their check to
//! hold. Such a header belongs to the lap before; nothing behind it may be taken for new, and no
//! other sector may suffer.

use crate::bench::{Bench, Op, op};
use strake::sim::nor::{Nor, Tear};
use strake_core::journal::SectorHeader;
use strake_core::journal::header::HEADER_BYTES;

/// Runs until the next operation would erase a sector that holds entries.
fn before_an_erase<const WORD: usize>() -> Bench<Nor<WORD>>
where
    Nor<WORD>: crate::bench::Medium,
{
    let mut bench = Bench::new(Nor::<WORD>::new(4), 300);
    (0..2_500).for_each(|index| bench.run(op(index)).unwrap());
    for index in 2_500.. {
        let before = bench.clone();
        bench.run(op(index)).unwrap();
        bench.run(Op::Housekeep).unwrap();
        if bench.journal.counters().erases > before.journal.counters().erases {
            return before;
        }
    }
    unreachable!("a ring that goes round erases")
}

/// How often the restored header made the sector look whole, of `ways` half erases.
fn headers_that_stay<const WORD: usize>(ways: u64) -> u64
where
    Nor<WORD>: crate::bench::Medium,
{
    let mut bench = before_an_erase::<WORD>();
    bench.flush().unwrap();
    bench.restart().unwrap();
    bench.start_up().unwrap();
    let mut seen = 0;
    for seed in 0..ways {
        let mut cut = bench.clone();
        let before = cut.journal.flash().image();
        cut.journal.flash_mut().seed(seed);
        cut.journal.flash_mut().cut_in_erase(Some(Tear::During));
        for index in 0.. {
            // Until the power is gone, in an idle erase or in one in the way of an append.
            let _ = cut.run(op(index));
            if !cut.journal.flash().is_powered() {
                break;
            }
        }
        let after = cut.journal.flash().image();
        assert_eq!(cut.journal.flash().counters().half_erased, 1);
        let place = (0..4_usize).find(|place| {
            let header = place * 4096..place * 4096 + HEADER_BYTES;
            SectorHeader::decode(&before[header.clone()]).is_ok()
                && before[header.clone()] != after[header]
        });
        // A share of nothing or of everything leaves no header to mend, or a sound one.
        if let Some(place) = place {
            let address = u32::try_from(place * 4096).unwrap();
            let mut old = before[place * 4096..].iter();
            cut.journal.flash_mut().corrupt(address, HEADER_BYTES, |_| *old.next().unwrap());
            seen += 1;
        }
        let result = cut.restart().and_then(|_| {
            cut.start_up().map_err(|error| format!("{error:?}"))?;
            for next in 0..900 {
                cut.run(op(next)).map_err(|error| format!("going on: {error:?}"))?;
            }
            cut.flush().map_err(|error| format!("{error:?}"))?;
            cut.restart().map(|_| ())
        });
        assert_eq!(result, Ok(()), "seed {seed}");
    }
    seen
}

#[test]
fn a_valid_header_on_a_half_erased_sector() {
    let seen = (headers_that_stay::<4>(300), headers_that_stay::<1>(300));
    println!("half erased under a sound header: {} times W = 4, {} times W = 1", seen.0, seen.1);
    assert!(seen.0 > 200 && seen.1 > 200, "{seen:?}");
}
