//! Power cuts at every step, alone and in pairs: nothing durable lost, nothing invented.

use crate::bench::{Bench, Medium, op};
use core::iter::repeat_n;
use core::ops::Range;
use std::collections::BTreeSet;
use strake::sim::nor::{Cut, Nor, Tear};

/// What a run over all cuts saw.
#[derive(Debug, Default)]
pub(crate) struct Seen {
    pub(crate) cuts: u64,
    pub(crate) torn_words: u64,
    pub(crate) half_erased: u64,
    pub(crate) failures: Vec<String>,
}

/// Runs operations 0 to the end of `ops`; for those in `ops` the power is cut at every one of their
/// steps in a copy. `then` goes on with the copy after its restart.
pub(crate) fn every_cut<F: Medium>(
    flash: F,
    ops: Range<usize>,
    state_len: usize,
    mut then: impl FnMut(&mut Bench<F>, usize) -> Result<(), String>,
) -> Seen {
    let mut seen = Seen::default();
    every_op(flash, ops, state_len, |before, bench, index| {
        let steps = bench.journal.flash().steps() - before.journal.flash().steps();
        // An erase alone is one step, with many ways to end.
        let ways = if steps == 1 { 25 } else { 1 };
        for step in 0..steps {
            for tear in [Tear::Before].into_iter().chain(repeat_n(Tear::During, ways)) {
                let mut cut = before.clone();
                let seed = seen.cuts;
                let scattered = seed % 3 == 0;
                let outcome = cut_in(&mut cut, Cut { steps: step, tear, scattered }, seed, index)
                    .and_then(|()| then(&mut cut, index));
                seen.cuts += 1;
                seen.torn_words += cut.journal.flash().torn_words();
                seen.half_erased += cut.journal.flash().half_erased();
                if let Err(error) = outcome {
                    seen.failures.push(format!("op {index} step {step} {tear:?}: {error}"));
                }
            }
        }
    });
    seen
}

/// Runs operations 0 to the end of `ops`; shows the bench before and after each of those in `ops`.
fn every_op<F: Medium>(
    flash: F,
    ops: Range<usize>,
    state_len: usize,
    mut show: impl FnMut(&Bench<F>, &Bench<F>, usize),
) {
    let mut bench = Bench::new(flash, state_len);
    for index in 0..ops.end {
        let before = bench.clone();
        bench.run(op(index)).unwrap();
        if index == ops.start {
            // Forgets what the ring has forgotten.
            bench.flush().unwrap();
            bench.restart().unwrap();
        } else if index > ops.start {
            show(&before, &bench, index);
        }
    }
}

/// Runs one operation into a cut and restarts.
fn cut_in<F: Medium>(
    bench: &mut Bench<F>,
    cut: Cut,
    seed: u64,
    index: usize,
) -> Result<(), String> {
    arm(bench, cut, seed);
    bench.run(op(index)).expect_err("the cut falls into this operation");
    bench.restart().map(|_| ())
}

fn arm<F: Medium>(bench: &mut Bench<F>, cut: Cut, seed: u64) {
    let flash = bench.journal.flash_mut();
    flash.seed(seed);
    flash.cut_after(Some(cut));
}

/// Goes on cleanly after a restart, then starts again from the cold.
pub(crate) fn goes_on<F: Medium>(bench: &mut Bench<F>, index: usize) -> Result<(), String> {
    bench.start_up().map_err(|error| format!("start-up entry: {error:?}"))?;
    for next in index..index + 7 {
        bench.run(op(next)).map_err(|error| format!("going on: {error:?}"))?;
    }
    bench.restart().map(|_| ())
}

/// The power fails again at every step of the start-up entry and of the operations behind it.
fn fails_again<F: Medium>(bench: &mut Bench<F>, index: usize) -> Result<u64, String> {
    let mut cuts = 0;
    for tear in [Tear::Before, Tear::During] {
        for step in 0.. {
            let mut again = bench.clone();
            arm(&mut again, Cut { steps: step, tear, scattered: step % 2 == 0 }, step);
            let outcome = again
                .start_up()
                .and_then(|()| (index..index + 5).try_for_each(|next| again.run(op(next))));
            if outcome.is_ok() {
                break;
            }
            cuts += 1;
            again.restart().map_err(|error| format!("second cut {step} {tear:?}: {error}"))?;
            goes_on(&mut again, index)
                .map_err(|error| format!("after second cut {step} {tear:?}: {error}"))?;
        }
    }
    Ok(cuts)
}

fn assert_sound(name: &str, seen: &Seen) {
    let Seen { cuts, torn_words, half_erased, failures } = seen;
    println!("{name}: {cuts} cuts, {torn_words} words torn, {half_erased} sectors half erased");
    assert!(failures.is_empty(), "{} failures, first: {:?}", failures.len(), failures.first());
    assert!(*torn_words > 1_000 && *half_erased > 40, "the cuts must do harm");
}

#[test]
fn every_single_cut_words_of_four() {
    let seen = every_cut(Nor::<4>::new(4), 1_900..3_400, 400, goes_on);
    assert_sound("single, W = 4", &seen);
}

#[test]
fn every_single_cut_words_of_one() {
    let seen = every_cut(Nor::<1>::new(4), 2_000..2_900, 300, goes_on);
    assert_sound("single, W = 1", &seen);
}

/// Every step of every operation is cut first; of these cuts each `every(operation)`-th is cut
/// again at every step behind it. Gives the second cuts.
fn pairs<const WORD: usize>(ops: Range<usize>, every: impl Fn(usize) -> u64) -> u64
where
    Nor<WORD>: Medium,
{
    let (mut second, mut turn) = (0, 0_u64);
    let seen = every_cut(Nor::<WORD>::new(4), ops, 100, |bench, index| {
        turn += 1;
        if turn.is_multiple_of(every(index)) {
            second += fails_again(bench, index)?;
        }
        Ok(())
    });
    println!("pairs, W = {WORD}: {second} second cuts");
    assert_sound(&format!("pairs, W = {WORD}"), &seen);
    second
}

/// The operations in which a sector is begun or erased.
fn sector_changes<const WORD: usize>(ops: Range<usize>) -> BTreeSet<usize>
where
    Nor<WORD>: Medium,
{
    let mut found = BTreeSet::new();
    every_op(Nor::<WORD>::new(4), ops, 100, |before, bench, index| {
        let at = |bench: &Bench<Nor<WORD>>| {
            (bench.journal.newest_sequence(), bench.journal.counters().erases)
        };
        if at(before) != at(bench) {
            found.insert(index);
        }
    });
    found
}

/// All pairs in one operation that begins a sector, a sample of them elsewhere.
#[test]
fn pairs_of_cuts_words_of_four() {
    let begun = sector_changes::<4>(2_000..3_000).into_iter().nth(1);
    println!("pairs, W = 4: all in operation {begun:?}");
    let second = pairs::<4>(2_000..3_000, |index| if Some(index) == begun { 1 } else { 13 });
    assert!(begun.is_some() && second > 9_000, "{second}");
}

/// Bytes are four times as many steps, so fewer of the first cuts are cut again.
#[test]
fn pairs_of_cuts_words_of_one() {
    let second = pairs::<1>(2_000..2_900, |_| 499);
    assert!(second > 2_500, "{second}");
}

#[test]
#[ignore = "a long proof: about a minute in release"]
fn long_every_pair_of_cuts_words_of_four() {
    let second = pairs::<4>(2_000..3_000, |_| 1);
    assert!(second > 100_000, "{second}");
}

#[test]
#[ignore = "a long proof: about fifteen minutes in release"]
fn long_every_pair_of_cuts_words_of_one() {
    let second = pairs::<1>(2_000..2_900, |_| 1);
    assert!(second > 1_000_000, "{second}");
}
