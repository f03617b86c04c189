//! The unchanged application in a world made from one number, against a model of a few lines.
//!
//! Everything is virtual and drawn from a seed: level, sensor, flash, power, time, visits. After
//! every operation the flash is read and compared with what the model knows. A run that fails
//! prints an **id** that makes it happen again:
//!
//! ```sh
//! STRAKE_SIMULATION=7-12-48 cargo test -p strake --test simulation again -- --ignored --nocapture
//! ```
//!
//! An id is seed, days and sectors of the journal. More seeds, hours of them, run with
//! `STRAKE_SEEDS=100..400 cargo test --release -p strake --test simulation long -- --ignored`.
//!
//! # What must be survived, and what it may cost
//!
//! | fault | may cost |
//! | --- | --- |
//! | power lost before, within or after any program, words of a write in any order | what waited in RAM: at most `flush_after` and one interval, as the start-up entry says |
//! | power lost within an erase, bits at random | the sector that was being erased, which was the oldest |
//! | power lost again during the start, once or twice | nothing more |
//! | power lost while a plan is loaded | nothing: the old plan or the new one is in force, whole |
//! | warm restart, between any two steps | nothing: what waited is carried over |
//! | a sector that refuses programs and erases from some day on | at most 32 samples, stated as a gap; nothing that was durable |
//! | wire broken, fault current, silence, a stuck reading | nothing |
//! | a line that flips bits and drops bytes, or goes dead in the midst of a collection | nothing: another try goes on |
//! | nobody comes for so long that the ring goes round | the oldest sectors, counted as gone |
//!
//! In return, always: no durable entry is lost or changes, none is invented (each sample is what
//! the sensor showed at that moment), entry numbers run on, no latched alarm clears without a
//! person, every start-up finishes, and after every collection the journal contradicts itself
//! nowhere and its replay is identical.
#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    reason = "counts and times of a simulation are far below 2^53"
)]
#![allow(missing_docs, reason = "a test binary has no public interface")]

mod flash;
mod model;
mod random;
mod run;
mod starts;
mod visit;
mod world;

use run::{Parameters, Tally, run, run_with};
use std::time::Instant;

fn all(runs: impl Iterator<Item = Parameters>) -> Tally {
    let started = Instant::now();
    let mut sum = Tally::default();
    for parameters in runs {
        match run(parameters) {
            Ok(tally) => sum.add(&tally),
            Err(error) => panic!("STRAKE_SIMULATION={parameters}: {error}"),
        }
    }
    println!("{sum:#?}\nin {:.1} s", started.elapsed().as_secs_f64());
    sum
}

/// Three virtual months.
#[test]
fn a_few_months_in_short() {
    let runs =
        (1..=18).map(|seed| Parameters { seed, days: 5, sectors: [6, 10, 24][seed as usize % 3] });
    let tally = all(runs);
    assert!(tally.harm_was_done(), "{tally:?}");
}

/// A control: one flipped bit in one block must be noticed, so the model can see.
#[test]
fn rot_is_noticed() {
    let parameters = Parameters { seed: 3, days: 2, sectors: 24 };
    let outcome = run_with(parameters, |bench| {
        if bench.now_ms.get() > 86_400_000 {
            bench.journal.with(|flash| flash.corrupt(3 * 256 + 9, 1, |byte| byte ^ 0x10));
        }
    });
    let error = outcome.expect_err("a durable entry was destroyed");
    assert!(error.contains("is lost"), "{error}");
}

#[test]
#[ignore = "runs for as long as STRAKE_SEEDS asks: the long proof"]
fn long() {
    let range = std::env::var("STRAKE_SEEDS").unwrap_or_else(|_| "1000..1040".into());
    let (first, end) = range.split_once("..").expect("STRAKE_SEEDS is a range, as 100..200");
    let seeds = first.parse().expect("a number")..end.parse().expect("a number");
    let tally =
        all(seeds.map(|seed: u64| Parameters { seed, days: 15, sectors: 6 + seed as usize % 24 }));
    assert!(tally.harm_was_done(), "{tally:?}");
}

#[test]
#[ignore = "repeats the one run that STRAKE_SIMULATION names"]
fn again() {
    let id = std::env::var("STRAKE_SIMULATION").expect("STRAKE_SIMULATION names a run");
    all(std::iter::once(id.parse().expect("seed-days-sectors")));
}
