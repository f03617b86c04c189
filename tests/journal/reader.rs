//! The second reader, in another language, counts what this one wrote.

use crate::bench::{Bench, op};
use serde_json::Value;
use std::path::Path;
use std::process::{Command, Output};
use strake::sim::nor::Nor;
use strake_core::alarm::{AlarmState, FaultCause, MachineId};
use strake_core::journal::check::CRC32;
use strake_core::journal::entry::{Presser, Transition, TransitionCause};
use strake_core::journal::{Entry, Item, Sample, SectorReader};
use strake_core::signal::{Channel, Quality, SensorError};

fn record(file: &mut Vec<u8>, tag: u8, payload: &[u8]) {
    let begin = file.len();
    file.push(tag);
    file.extend(u32::try_from(payload.len()).unwrap().to_le_bytes());
    file.extend(payload);
    let check = CRC32.checksum(&file[begin..]);
    file.extend(check.to_le_bytes());
}

/// A journal file as a collection writes it.
pub(crate) fn file_of<const WORD: usize>(bench: &mut Bench<Nor<WORD>>) -> Vec<u8> {
    let mut file = b"STRAKEJ1".to_vec();
    let word = u8::try_from(WORD).unwrap();
    record(&mut file, 1, &[&b"\x02T1\x050.1.0"[..], &[word, 6, 0, 0, 0]].concat());
    record(&mut file, 2, &[&[1; 8][..], &[2; 8], b"plan"].concat());
    let newest = bench.journal.newest_sequence().unwrap();
    for sequence in bench.journal.oldest_sequence()..=newest {
        let used = bench.journal.used_bytes::<()>(sequence).unwrap();
        let mut bytes = vec![0; used.into()];
        bench.journal.read_sector(sequence, 0, &mut bytes).unwrap();
        let head = [&sequence.to_le_bytes()[..], &used.to_le_bytes()].concat();
        record(&mut file, 3, &[head, bytes].concat());
    }
    let used = bench.journal.used_bytes::<()>(newest).unwrap();
    let mut head = [&newest.to_le_bytes()[..], &used.to_le_bytes()].concat();
    head.extend(bench.journal.next_entry().to_le_bytes());
    head.extend(0x0123_4567_89AB_CDEF_u64.to_le_bytes());
    head.extend([0; 2 + 8]);
    head.extend([0xFF; 8 + 64]);
    record(&mut file, 4, &head);
    file
}

fn run_reader(file: &[u8]) -> Output {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("tank.journal");
    std::fs::write(&path, file).unwrap();
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/journal_reader");
    Command::new("python3")
        .arg(script.join("read_journal.py"))
        .arg(&path)
        .output()
        .expect("python3 is needed to run the second reader")
}

pub(crate) fn counts_of(file: &[u8]) -> Value {
    let output = run_reader(file);
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

/// Some laps with every kind of entry in them, ending with a transition.
pub(crate) fn journal<const WORD: usize>() -> Bench<Nor<WORD>> {
    let mut bench = Bench::new(Nor::<WORD>::new(6), 500);
    for index in 0..4_000 {
        bench.run(op(index)).unwrap();
        if index % 9 == 0 {
            let sample = odd_sample(index as u64);
            bench.journal.push(&sample, &mut bench.app).unwrap();
        }
        let tick_ms = 20_000 + index as u64;
        let entry = match index % 400 {
            40 => Entry::ClockFix { tick_ms, utc_s: 1_754_000_000 },
            80 => Entry::PlanChange { tick_ms, fingerprint: u64::MAX, serial: 1_754_000_000 },
            120 => Entry::Acknowledge { tick_ms, by: Presser::Link },
            160 => Entry::Gap { tick_ms, missing: 6 },
            390 => Entry::Transition(Transition {
                tick_ms,
                machine: MachineId::of_fault(FaultCause::Stale),
                from: AlarmState::Normal,
                to: AlarmState::Unacknowledged,
                cause: TransitionCause::Raised,
                utilisation: -0.5,
                hash: 0xFEDC_BA98_0000_0000 + tick_ms,
            }),
            200 => {
                bench.start_up().unwrap();
                continue;
            }
            _ => continue,
        };
        bench.append(entry).unwrap();
    }
    bench.flush().unwrap();
    bench
}

/// Samples out of the common: levels of a coarse sensor, failures, gaps, anything at all.
fn odd_sample(index: u64) -> Sample {
    let word = index.wrapping_mul(0x9E37_79B9_7F4A_7C15);
    let [a, b, c, d, e, f, g, h] = word.to_le_bytes();
    let coarse = Channel::good(320 * i32::from(a));
    let temperature = Channel::good(1600 + i32::from(b % 8));
    let quality = Quality::from_number(c % 8).unwrap();
    let any = Channel { count_16: i32::from_le_bytes([d, e, f, g]), quality };
    let (level, temperature) = match h % 5 {
        0 => (any, any),
        1 => (Channel::failed(SensorError::Silent), temperature),
        2 => (coarse, Channel::default()),
        _ => (coarse, temperature),
    };
    let tick_ms = if h % 7 == 0 { word >> 16 } else { 20_000 * index };
    Sample { tick_ms, level, temperature, battery_mv: u16::from_le_bytes([g, h % 32]) }
}

/// The same counts by the product's own reader.
#[derive(Default)]
pub(crate) struct Own {
    pub(crate) samples: u64,
    pub(crate) events: [u64; 12],
    /// Counts of the levels that are good or sparse.
    levels: Vec<i32>,
    /// All fields of all samples.
    fields: Vec<u8>,
    hash: u64,
}

impl Own {
    /// Takes all that stands in a sector.
    pub(crate) fn take(&mut self, sector: &[u8]) {
        for item in SectorReader::new(sector).unwrap() {
            match item {
                Item::Entry(Entry::Sample(sample)) => self.take_sample(&sample),
                Item::Entry(entry) => {
                    self.events[usize::from(entry.number())] += 1;
                    if let Entry::Transition(transition) = entry {
                        self.hash = transition.hash;
                    }
                }
                Item::State { .. } => {}
                Item::Damage(damage) => panic!("{damage:?}"),
            }
        }
    }

    fn take_sample(&mut self, sample: &Sample) {
        self.samples += 1;
        self.fields.extend(sample.tick_ms.to_le_bytes());
        for channel in [sample.level, sample.temperature] {
            self.fields.extend(channel.count_16.to_le_bytes());
            self.fields.push(channel.quality.number());
        }
        self.fields.extend(sample.battery_mv.to_le_bytes());
        if matches!(sample.level.quality, Quality::Good | Quality::Sparse) {
            self.levels.push(sample.level.count_16);
        }
    }

    /// CRC-32 over tick u64, count i32 and quality u8 of level and of temperature, battery u16, of
    /// all samples.
    pub(crate) fn samples_check(&self) -> String {
        format!("{:08x}", CRC32.checksum(&self.fields))
    }
}

fn own_counts<const WORD: usize>(bench: &mut Bench<Nor<WORD>>) -> Own {
    let mut own = Own::default();
    for sequence in bench.journal.oldest_sequence()..=bench.journal.newest_sequence().unwrap() {
        let mut bytes = [0; 4096];
        bench.journal.read_sector(sequence, 0, &mut bytes).unwrap();
        own.take(&bytes);
    }
    own
}

fn both_readers_agree<const WORD: usize>() {
    let mut bench = journal::<WORD>();
    let own = own_counts(&mut bench);
    let counts = counts_of(&file_of(&mut bench));
    println!("{counts}");
    assert_eq!(counts["samples"], own.samples);
    assert_eq!(counts["samples_check"], own.samples_check());
    assert!(own.samples > 800, "{}", own.samples);
    let names = ["transition", "fault", "start_up", "clock_fix", "plan_change"];
    for (number, name) in (2..).zip(names).chain([(10, "acknowledgement"), (11, "gap")]) {
        assert_eq!(counts["entries"][name], own.events[number], "{name}");
    }
    assert!([2, 3, 4, 5, 6, 10, 11].iter().all(|&number| own.events[number] > 0));
    assert_eq!(counts["damaged"], 0);
    assert_eq!(counts["damaged_sectors"], 0);
    assert_eq!(counts["checkpoints"], counts["sectors"]);
    assert_eq!(counts["first_level_count_16"], own.levels[0]);
    assert_eq!(counts["last_level_count_16"], *own.levels.last().unwrap());
    assert_eq!(counts["last_hash"], format!("{:016x}", own.hash));
    assert_eq!(counts["head"]["hash"], "0123456789abcdef");
    let entries = own.samples + own.events.iter().sum::<u64>();
    let next_entry = counts["head"]["next_entry"].as_u64().unwrap();
    assert_eq!(next_entry, counts["first_entry"].as_u64().unwrap() + entries);
}

#[test]
fn both_readers_agree_words_of_four() {
    both_readers_agree::<4>();
}

#[test]
fn both_readers_agree_words_of_one() {
    both_readers_agree::<1>();
}

#[test]
fn the_second_reader_sees_damage() {
    let mut bench = journal::<4>();
    let sound = counts_of(&file_of(&mut bench));
    let newest = bench.journal.newest_sequence().unwrap();
    // A bit of a block in a closed sector, and a bit of the header of the one before.
    let place = |sequence: u32| sequence % 6 * 4096;
    bench.journal.flash_mut().corrupt(place(newest - 1) + 2048 + 9, 1, |byte| byte ^ 1);
    bench.journal.flash_mut().corrupt(place(newest - 2) + 10, 1, |byte| byte ^ 1);
    let counts = counts_of(&file_of(&mut bench));
    assert_eq!((&counts["damaged"], &counts["damaged_sectors"]), (&1.into(), &1.into()));
    assert!(counts["samples"].as_u64() < sound["samples"].as_u64());
    // A record with a wrong check is refused.
    let mut file = file_of(&mut bench);
    file[40] ^= 1;
    assert!(!run_reader(&file).status.success());
}
