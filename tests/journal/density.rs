//! Bytes of flash per sample, everything in: sector headers with the room of a signature,
//! checkpoints, anchors, frames and checks of the blocks, padding, ends of pages.
//!
//! Measured between the first and the last sector of a ring, over whole sectors.

use crate::bench::Remembered;
use crate::series::{INTERVAL_MS, Logged, resting_tank, slow, tank};
use embedded_storage::nor_flash::NorFlash;
use strake::sim::nor::Nor;
use strake_core::evaluate::{Pace, State, step};
use strake_core::journal::{Entry, Item, Sample, SectorHeader, SectorReader};
use strake_core::plan::{LevelSensor, SignalKind};
use strake_firmware::journal::{Journal, Snapshot};

/// Sectors of the ring; none is overwritten.
const SECTORS: usize = 64;

/// Most bytes that a change of the interval may cost.
const BYTES_A_CHANGE: f64 = 8.0;

/// A device with one machine in alarm, nothing else.
struct Device {
    tick_ms: u64,
}

impl Snapshot for Device {
    fn plan_fingerprint(&self) -> u64 {
        1
    }
    fn boot(&self) -> u16 {
        1
    }
    fn tick_ms(&self) -> u64 {
        self.tick_ms
    }
    fn utc_s(&self) -> Option<u64> {
        None
    }
    fn write_state(&mut self, out: &mut [u8]) -> usize {
        // Ten bytes more for each machine that is not normal; the content does not matter.
        let length = State::new().encode(out).unwrap();
        out[length..length + 10].fill(0);
        length + 10
    }
}

/// Bytes of flash per sample when every `wait` samples are written; the samples must come back.
fn bytes_per_sample<const WORD: usize>(samples: &[Sample], wait: usize) -> f64
where
    Nor<WORD>: NorFlash,
{
    let ends: Vec<bool> = (1..=samples.len()).map(|number| number % wait == 0).collect();
    bytes_written::<WORD>(samples, &ends)
}

/// The same when all that waits is written after the samples that `ends` marks.
fn bytes_written<const WORD: usize>(samples: &[Sample], ends: &[bool]) -> f64
where
    Nor<WORD>: NorFlash,
{
    let (mut journal, _) =
        Journal::<_>::open(Nor::<WORD>::new(SECTORS), &mut Remembered::default()).unwrap();
    for (sample, &end) in samples.iter().zip(ends) {
        journal.push(sample, &mut Device { tick_ms: sample.tick_ms }).unwrap();
        if end {
            journal.flush().unwrap();
        }
    }
    journal.flush().unwrap();
    let newest = journal.newest_sequence().unwrap();
    assert_eq!(journal.oldest_sequence(), 0);
    let mut found = Vec::new();
    let mut first_entries = Vec::new();
    for sequence in 0..=newest {
        let mut bytes = [0; 4096];
        journal.read_sector(sequence, 0, &mut bytes).unwrap();
        first_entries.push(SectorHeader::decode(&bytes).unwrap().first_entry);
        found.extend(SectorReader::new(&bytes).unwrap().filter_map(|item| match item {
            Item::Entry(Entry::Sample(sample)) => Some(sample),
            Item::State { .. } => None,
            other => panic!("{other:?}"),
        }));
    }
    assert!(found == samples);
    f64::from(newest * 4096) / f64::from(first_entries[first_entries.len() - 1])
}

/// A series: words of four and of one byte at a wait of 60 s, the same at 300 s.
type Row = (&'static str, Vec<Sample>, [f64; 4]);

fn print_and_compare(rows: &[Row], most: [f64; 4]) {
    println!("bytes of flash per sample of 10 s       4 B 60 s  1 B 60 s  4 B 300 s  1 B 300 s");
    let mut wrong = Vec::new();
    for (name, samples, expected) in rows {
        let found = [
            bytes_per_sample::<4>(samples, 6),
            bytes_per_sample::<1>(samples, 6),
            bytes_per_sample::<4>(samples, 30),
            bytes_per_sample::<1>(samples, 30),
        ];
        let [a, b, c, d] = found;
        println!("{name:38} {a:9.3} {b:9.3} {c:10.3} {d:10.3}");
        // The noise comes from the platform's logarithm and cosine.
        let near =
            found.iter().zip(expected).all(|(found, expected)| (found - expected).abs() < 0.01);
        if !near || found.iter().zip(most).any(|(&found, most)| found > most) {
            wrong.push(*name);
        }
    }
    assert!(wrong.is_empty(), "not as recorded, or above {most:?}: {wrong:?}");
}

/// Three slow series with 1 mm of noise on counts of 0.5 mm; and what the device makes of bursts.
#[test]
fn series_with_noise() {
    assert_eq!(INTERVAL_MS, 10_000);
    let (river, tide, well) =
        ("river_blacksmithfork_15min.csv", "tide_newlondon_6min.csv", "well_transducer_2min.csv");
    let rows = [
        ("river, single readings", slow(river, Logged::WithNoise), [2.309, 2.180, 1.232, 1.180]),
        ("tide, single readings", slow(tide, Logged::WithNoise), [2.342, 2.211, 1.258, 1.205]),
        ("well, single readings", slow(well, Logged::WithNoise), [2.312, 2.182, 1.230, 1.181]),
        ("river, bursts", slow(river, Logged::Burst), [2.327, 2.196, 1.238, 1.187]),
        ("tide, bursts", slow(tide, Logged::Burst), [2.371, 2.236, 1.276, 1.223]),
        ("well, bursts", slow(well, Logged::Burst), [2.333, 2.200, 1.242, 1.189]),
    ];
    print_and_compare(&rows, [2.60, 2.35, 1.5, 1.5]);
}

/// The recorded tank, its own noise.
#[test]
fn recorded_tank() {
    let rows =
        [("laboratory tank, single readings", tank(Logged::AsRead), [2.971, 2.742, 1.788, 1.739])];
    print_and_compare(&rows, [3.00, 2.75, 2.0, 2.0]);
}

/// Those of the samples that a device with the shipped tank's plan takes with this idle interval,
/// and after which of them it writes what waits.
fn adaptive(all: &[Sample], idle_ms: u32) -> (Vec<Sample>, Vec<bool>) {
    let text = include_str!("../../configs/brine_day_tank.toml");
    let file = strake::tank::parse("tank.toml", text.as_bytes()).unwrap();
    let mut plan = strake::compile::for_device(&file).unwrap().plan;
    // The series counts the height of the surface in half millimetres.
    plan.level.sensor = LevelSensor::Surface;
    plan.level.signal = SignalKind::Register { unit: 1, function: 4, register: 0, coding: 0 };
    (plan.level.zero_count_16, plan.level.value_at_zero) = (0, 0.0);
    (plan.level.value_per_count_16, plan.level.uncertainty) = (0.000_5 / 16.0, 0.015);
    plan.logging.idle_interval_ms = idle_ms;
    assert_eq!(plan.check(), Ok(()));
    let (mut state, mut pace) = (State::new(), Pace::default());
    let (mut due_ms, mut flush_ms) = (0, u64::MAX);
    let (mut taken, mut ends) = (Vec::new(), Vec::new());
    for sample in all {
        if sample.tick_ms < due_ms {
            continue;
        }
        let resolved = step(&plan, &mut state, sample, |_| {});
        let next_ms = pace.next_ms(&plan, &resolved, sample.tick_ms);
        due_ms = sample.tick_ms + u64::from(next_ms);
        flush_ms = flush_ms.min(sample.tick_ms + u64::from(plan.logging.wait_ms(next_ms)));
        // As the device does it: what is due is written with the sample of that moment.
        let end = sample.tick_ms >= flush_ms;
        if end {
            flush_ms = u64::MAX;
        }
        taken.push(*sample);
        ends.push(end);
    }
    (taken, ends)
}

/// How long 8 MiB hold of a tank that rests for four fifths of the day.
#[test]
fn retention() {
    const DAYS: u32 = 10;
    const RING_BYTES: f64 = 8.0 * 1024.0 * 1024.0;
    let all = resting_tank(DAYS);
    println!("idle, ms  a day  bytes, words of 4 and 1  days");
    let mut wrong = Vec::new();
    for (idle_ms, expected) in
        [(10_000, [433.0, 481.0]), (60_000, [1251.0, 1408.0]), (300_000, [1659.0, 1898.0])]
    {
        let (samples, ends) = adaptive(&all, idle_ms);
        let per_day = f64::from(u32::try_from(samples.len()).unwrap()) / f64::from(DAYS);
        let bytes = [bytes_written::<4>(&samples, &ends), bytes_written::<1>(&samples, &ends)];
        let days = bytes.map(|bytes| RING_BYTES / (bytes * per_day));
        println!("{idle_ms:7} {per_day:7.0}  {bytes:.3?}  {days:.0?}");
        // The noise comes from the platform's logarithm and cosine.
        let near = days.iter().zip(expected).all(|(is, was)| (is / was - 1.0_f64).abs() < 0.01);
        if !near || (idle_ms > 10_000 && days.iter().any(|&days| days < 550.0)) {
            wrong.push((idle_ms, days));
        }
    }
    assert!(wrong.is_empty(), "not as recorded, or below 550 days: {wrong:?}");
}

/// What a change of the interval costs: the same samples with the ticks of one interval, and with
/// stretches of fifty at 10 s and at 60 s in turn.
#[test]
fn a_change_of_the_interval() {
    const STRETCH: usize = 50;
    let even = resting_tank(4);
    let mut uneven = even.clone();
    let mut tick_ms = even[0].tick_ms;
    for (number, sample) in uneven.iter_mut().enumerate() {
        sample.tick_ms = tick_ms;
        tick_ms += if (number / STRETCH).is_multiple_of(2) { 10_000 } else { 60_000 };
    }
    let [even, uneven] = [even, uneven].map(|samples| bytes_per_sample::<1>(&samples, 6));
    let bytes = (uneven - even) * f64::from(u32::try_from(STRETCH).unwrap());
    println!("{bytes:.2} bytes a change of the interval, words of 1");
    assert!((0.0..=BYTES_A_CHANGE).contains(&bytes), "{bytes}");
}
