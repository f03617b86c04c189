//! Warm restarts with retained memory, at every step of every write: what waited comes back, each
//! sample once.

use crate::bench::{Bench, Medium, Op, op};
use std::ops::Range;
use strake::sim::nor::{Cut, Nor, Tear};
use strake_core::journal::{Entry, Item, SectorReader};
use strake_firmware::board::RetainedMemory;

const AREA: Range<usize> = 0..1024;

/// RAM that a reset leaves as it is.
#[derive(Clone)]
struct Ram(Vec<u8>);

impl RetainedMemory for Ram {
    fn capacity(&self) -> usize {
        self.0.len()
    }
    fn read(&self, offset: usize, out: &mut [u8]) {
        out.copy_from_slice(&self.0[offset..offset + out.len()]);
    }
    fn write(&mut self, offset: usize, bytes: &[u8]) {
        self.0[offset..offset + bytes.len()].copy_from_slice(bytes);
    }
}

/// Numbers of the samples that stand on the flash, in order.
fn stored<F: Medium>(bench: &mut Bench<F>) -> Vec<i32> {
    let mut numbers = Vec::new();
    for sequence in bench.journal.oldest_sequence()..=bench.journal.newest_sequence().unwrap() {
        let mut bytes = [0; 4096];
        bench.journal.read_sector(sequence, 0, &mut bytes).unwrap();
        for item in SectorReader::new(&bytes).unwrap() {
            if let Item::Entry(Entry::Sample(sample)) = item {
                numbers.push(sample.level.count_16);
            }
        }
    }
    numbers
}

fn waiting<F: Medium>(bench: &Bench<F>) -> Vec<i32> {
    bench.journal.waiting().iter().map(|sample| sample.level.count_16).collect()
}

/// What came back after a reset in the midst of one operation: carried samples, and resets.
fn every_reset<F: Medium>(flash: F, ops: Range<usize>) -> (u64, u64) {
    let mut bench = Bench::new(flash, 100);
    let mut ram = Ram(vec![0; AREA.end]);
    let (mut carried_over, mut resets) = (0, 0);
    for index in 0..ops.end {
        let before = (bench.clone(), ram.clone());
        bench.run(op(index)).unwrap();
        bench.journal.waiting().save(0, &mut ram, &AREA);
        if index < ops.start {
            continue;
        }
        let steps = bench.journal.flash().steps() - before.0.journal.flash().steps();
        for step in 0..=steps {
            for tear in [Tear::Before, Tear::During] {
                let (mut cut, ram) = before.clone();
                // What must be there afterwards: all that was stored or waited before.
                let mut expected = stored(&mut cut);
                expected.extend(waiting(&cut));
                cut.journal.flash_mut().seed(step);
                let armed = Cut { steps: step, tear, scattered: step % 2 == 0 };
                cut.journal.flash_mut().cut_after(Some(armed));
                let _ = cut.run(op(index));
                let recovery = cut.restart().unwrap();
                let carried = cut.journal.carried(&ram, &AREA, &recovery).unwrap();
                let mut found = stored(&mut cut);
                found.extend(carried.iter().map(|sample| sample.level.count_16));
                // The operation itself may have added its own sample, or erased the oldest sector.
                if matches!(op(index), Op::Push) && found.len() > expected.len() {
                    expected.push(found[found.len() - 1]);
                }
                let kept = expected.len() - found.len().min(expected.len());
                assert_eq!(found, expected[kept..], "op {index} step {step} {tear:?}");
                assert!(kept == 0 || cut.journal.oldest_sequence() > 0, "{kept} lost");
                carried_over += carried.len() as u64;
                resets += 1;
            }
        }
    }
    (carried_over, resets)
}

#[test]
fn a_warm_restart_at_every_step_carries_over() {
    let (carried, resets) = every_reset(Nor::<4>::new(4), 400..900);
    println!("warm, W = 4: {resets} resets, {carried} samples carried over");
    assert!(carried > 1_000 && resets > 1_000, "{carried} {resets}");
    let (carried, resets) = every_reset(Nor::<1>::new(4), 400..520);
    println!("warm, W = 1: {resets} resets, {carried} samples carried over");
    assert!(carried > 1_000 && resets > 1_000, "{carried} {resets}");
}
