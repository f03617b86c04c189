//! Any bytes into everything that takes bytes from outside.
//!
//! A **target** is a plain function from bytes to the **arm** it reached, a name for what became of
//! them; it panics when something that must hold does not. Here each one runs over a small corpus
//! and seeded mutations of it, and over the same mutations with every check sum **mended**, since
//! nothing gets past a check sum by luck. Executions and arms are counted and printed.
//!
//! More executions:
//! `STRAKE_FUZZ=1000000 cargo test --release -p strake --test fuzz -- --nocapture`.
//!
//! Guided by coverage, with libFuzzer: `.ci/fuzz`. The smallest set of inputs that reaches all it
//! reached stands in `corpus`, one folder per target, and is run and mutated here as the seeds are.
//!
//! `STRAKE_CORPUS=DIR` makes this test write its seeds there, one folder per target, and do nothing
//! else.
#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    reason = "lengths here are small, and a cut number is as good a mutation as any"
)]
#![allow(missing_docs, reason = "a test binary has no public interface")]

mod corpus;
mod mend;
mod mutate;
mod targets;

use mutate::Mutator;
use std::collections::BTreeMap;
use std::path::Path;

type Target = fn(&[u8]) -> String;
type Mend = fn(&[u8]) -> Vec<u8>;

/// Runs a target; `executions` are shared out over plain and mended mutations. `arms` is how many
/// different ones must be reached.
fn fuzz(name: &str, target: Target, mend: Mend, seeds: Vec<Vec<u8>>, executions: u32, arms: usize) {
    if keep(name, &seeds) {
        return;
    }
    let found = corpus::found(name);
    println!("{name}: {} inputs found with the guide of coverage", found.len());
    assert!(!found.is_empty(), "tests/fuzz/corpus has no inputs for {name}");
    let corpus = &[seeds, found].concat();
    let executions = match std::env::var("STRAKE_FUZZ") {
        Ok(count) => count.parse().expect("STRAKE_FUZZ is a number"),
        Err(_) => executions,
    };
    let mut reached: BTreeMap<String, u32> = BTreeMap::new();
    let mut mutator = Mutator::new(name.len() as u64, corpus);
    for seed in corpus {
        *reached.entry(target(seed)).or_default() += 1;
        *reached.entry(target(&mend(seed))).or_default() += 1;
    }
    for turn in 0..executions {
        let bytes = mutator.next();
        let bytes = if turn % 2 == 0 { bytes } else { mend(&bytes) };
        *reached.entry(target(&bytes)).or_default() += 1;
    }
    let sum: u32 = reached.values().sum();
    println!("{name}: {sum} executions over {} seeds, {} arms", corpus.len(), reached.len());
    for (arm, count) in &reached {
        println!("  {count:7}  {arm}");
    }
    assert!(reached.len() >= arms, "{name} reached only {} arms", reached.len());
}

/// Writes the seeds where they are asked for; gives whether they are.
fn keep(name: &str, seeds: &[Vec<u8>]) -> bool {
    let Some(folder) = std::env::var_os("STRAKE_CORPUS") else { return false };
    let folder = Path::new(&folder).join(name);
    std::fs::create_dir_all(&folder).expect("a folder for the corpus");
    for (number, seed) in seeds.iter().enumerate() {
        std::fs::write(folder.join(number.to_string()), seed).expect("a seed is written");
    }
    true
}

#[test]
fn sectors() {
    fuzz("sector", targets::sector, mend::sector, corpus::sectors(), 6_000, 12);
}

#[test]
fn blocks() {
    fuzz("block", targets::block, mend::block, corpus::blocks(), 40_000, 12);
}

#[test]
fn plans() {
    fuzz("plan", targets::plan, <[u8]>::to_vec, corpus::plans(), 20_000, 10);
}

#[test]
fn plan_files() {
    fuzz("plan_file", targets::plan_file, mend::plan_file, corpus::plan_files(), 10_000, 8);
}

#[test]
fn frames() {
    fuzz("frame", targets::frame, mend::frame, corpus::frames(), 40_000, 20);
}

#[test]
fn frames_into_a_device() {
    fuzz("device", targets::device, mend::frame, corpus::frames(), 2_000, 10);
}

#[test]
fn tank_files() {
    fuzz("tank", targets::tank, mend::tank, corpus::tanks(), 6_000, 20);
}

#[test]
fn journal_files() {
    let mend = mend::journal_file;
    fuzz("journal_file", targets::journal_file, mend, corpus::journal_files(), 600, 10);
}
