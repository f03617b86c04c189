//! The targets. Each gives the arm it reached and panics when something that must hold does not.

use std::cell::RefCell;
use std::io::Cursor;
use std::path::Path;
use strake::journal_file::JournalFile;
use strake::sim::board::Bench;
use strake::sim::machine::Machine;
use strake::sim::sensor::{Level, Sensor};
use strake_core::evaluate::{State, loads, step};
use strake_core::journal::block::Place;
use strake_core::journal::{Item, PageReader, STATE_BYTES_MAX, Sample, SectorReader, Word};
use strake_core::plan::{Plan, codec};
use strake_core::signal::{Channel, Quality};
use strake_core::wire::{
    Acknowledge, ClockSet, Frame, Hello, Identity, Kind, Message, PartStatusRequest, PlanBegin,
    PlanChunk, PlanCommit, PlanRead, REPLY_FRAME_BYTES, Receiver, SectorData, SectorRequest,
    Status, Text,
};

/// What items say together: kinds of entries, and of damage.
fn told<'a>(items: impl Iterator<Item = Item<'a>>, most: usize) -> String {
    let (mut kinds, mut damage, mut count) = (0_u16, Vec::new(), 0);
    for item in items {
        count += 1;
        match item {
            Item::Entry(entry) => {
                kinds |= 1 << entry.number();
                let tick_ms = entry.tick_ms();
                assert!(tick_ms < strake_core::journal::TICK_LIMIT_MS, "{entry:?}");
            }
            Item::State { part, payload } => {
                assert!(part < 32 && payload.len() <= 256);
                kinds |= 1;
            }
            Item::Damage(found) => {
                if !damage.contains(&found.kind) {
                    damage.push(found.kind);
                }
            }
        }
    }
    damage.sort_by_key(|kind| *kind as u8);
    // Each entry takes a bit at the very least.
    assert!(count <= most * 8, "{count} items in {most} bytes");
    let kinds = match kinds.count_ones() {
        0 => "nothing",
        1..3 => "some",
        _ => "much",
    };
    format!("{kinds} read, damage {damage:?}")
}

pub(crate) fn sector(bytes: &[u8]) -> String {
    match SectorReader::new(bytes) {
        Ok(reader) => {
            let mut room = [0; STATE_BYTES_MAX];
            let state = reader.checkpoint(&mut room).map(State::decode);
            if let Some(Some(state)) = &state {
                let mut again = [0; STATE_BYTES_MAX];
                let len = state.encode(&mut again).expect("a state that was read can be written");
                assert_eq!(State::decode(&again[..len]).as_ref(), Some(state));
            }
            let state = ["no checkpoint", "a foreign one", "a checkpoint"]
                [usize::from(state.is_some()) + usize::from(state.flatten().is_some())];
            format!("{state}, {}", told(reader, bytes.len()))
        }
        Err(error) => {
            let name = format!("{error:?}");
            name.split('(').next().unwrap_or_default().to_owned()
        }
    }
}

/// Word, sequence, then a page.
pub(crate) fn block(bytes: &[u8]) -> String {
    let Some((&[word, a, b, c, d], page)) = bytes.split_first_chunk::<5>() else {
        return "too short".into();
    };
    let word = if word & 1 == 0 { Word::One } else { Word::Four };
    let page = page.get(..256).unwrap_or(page);
    let place = Place { sequence: u32::from_le_bytes([a, b, c, d]), offset: 256, word };
    told(PageReader::at(page, 0, place), page.len())
}

/// A plan that passes its checks can be judged without a number that is none.
fn judge(plan: &Plan) -> &'static str {
    let mut state = State::new();
    let mut nan = false;
    let counts = [i32::MIN, -1, 0, 4_000 * 16, 12_000 * 16, 20_000 * 16, i32::MAX];
    for (count_16, tick_ms) in counts.into_iter().zip((0..).step_by(10_000)) {
        let level = Channel { count_16, quality: Quality::Good };
        let sample = Sample { tick_ms, level, temperature: level, battery_mv: 3_600 };
        let resolved = step(plan, &mut state, &sample, |_| {});
        loads(plan, &[resolved], |_, part| {
            nan |= part.utilisation.lane(0).is_nan() || part.utilisation_bound.lane(0).is_nan();
        });
    }
    assert!(!nan, "a load that is no number: {plan:?}");
    "a plan"
}

pub(crate) fn plan(bytes: &[u8]) -> String {
    match codec::decode(bytes) {
        Ok((header, plan)) => {
            let mut names = Vec::new();
            let Ok(tank) = codec::names(bytes, |_, name| names.push(name.to_owned())) else {
                return "a plan without names".into();
            };
            let names: Vec<&str> = names.iter().map(String::as_str).collect();
            let mut out = [0; codec::PLAN_BYTES_MAX];
            let len = codec::encode(&header, &plan, &tank, &names, &mut out).expect("it was read");
            let (header_again, plan_again) = codec::decode(&out[..len]).expect("it was written");
            assert_eq!((header, &plan), (header_again, &plan_again));
            judge(&plan).into()
        }
        Err(error) => format!("{error:?}"),
    }
}

pub(crate) fn plan_file(bytes: &[u8]) -> String {
    match strake::plan_file::read(bytes) {
        Ok(file) => judge(&file.plan).into(),
        Err(error) => format!("{error:?}").split(['{', ' ']).next().unwrap_or_default().to_owned(),
    }
}

fn message(frame: &Frame<'_>) -> &'static str {
    fn is<'a, M: Message<'a>>(frame: &Frame<'a>) -> bool {
        M::decode(frame.body).is_ok()
    }
    let sound = match Kind::from_number(frame.kind) {
        Some(Kind::Hello) => is::<Hello>(frame),
        Some(Kind::Identity) => is::<Identity>(frame),
        Some(Kind::Status) => is::<Status>(frame),
        Some(Kind::PartStatusRequest) => is::<PartStatusRequest>(frame),
        Some(Kind::PlanBegin) => is::<PlanBegin>(frame),
        Some(Kind::PlanChunk) => is::<PlanChunk<'_>>(frame),
        Some(Kind::PlanCommit) => is::<PlanCommit>(frame),
        Some(Kind::PlanRead) => is::<PlanRead>(frame),
        Some(Kind::ClockSet) => is::<ClockSet>(frame),
        Some(Kind::Acknowledge) => is::<Acknowledge>(frame),
        Some(Kind::SectorRequest) => is::<SectorRequest>(frame),
        Some(Kind::SectorData) => is::<SectorData<'_>>(frame),
        Some(_) => return "of a kind read elsewhere",
        None => return "of an unknown kind",
    };
    if sound { "sound" } else { "malformed" }
}

pub(crate) fn frame(bytes: &[u8]) -> String {
    let mut receiver = Receiver::<REPLY_FRAME_BYTES>::new();
    let mut last = "nothing".into();
    for &byte in bytes.iter().chain(&[0]) {
        match receiver.accept(byte) {
            Some(Ok(frame)) => {
                let kind = Kind::from_number(frame.kind);
                last = format!("{kind:?} {}", message(&frame));
            }
            Some(Err(error)) => last = format!("{error:?}"),
            None => {}
        }
    }
    last
}

#[derive(Debug)]
struct Still;

impl Level for Still {
    fn level_m(&self, _: u64) -> f64 {
        4.0
    }
}

/// The whole device: whatever comes over the line, it goes on and answers a greeting.
pub(crate) fn device(bytes: &[u8]) -> String {
    thread_local! {
        static DEVICE: RefCell<Option<Machine>> = const { RefCell::new(None) };
    }
    DEVICE.with_borrow_mut(|kept| {
        let machine = kept.get_or_insert_with(|| {
            let sensor = Sensor::new(&Plan::zeroed(), Box::new(Still), 0.0, 1);
            Machine::new(Bench::new(sensor, 4), Text::new("fuzz").unwrap_or_default())
        });
        let wire = machine.bench().wire.clone();
        let answers = |machine: &mut Machine, bytes: &[u8]| {
            let mut port = strake::link::InProcess::new(&wire, || machine.poll());
            strake::link::Port::write(&mut port, bytes).expect("a wire takes everything");
            let mut receiver = Receiver::<REPLY_FRAME_BYTES>::new();
            let mut kinds = Vec::new();
            let mut room = [0; 512];
            for _ in 0..40 {
                let wait = std::time::Duration::from_millis(20);
                let count = strake::link::Port::read(&mut port, &mut room, wait).unwrap_or(0);
                if count == 0 {
                    break;
                }
                for &byte in &room[..count] {
                    if let Some(Ok(frame)) = receiver.accept(byte) {
                        kinds.push((Kind::from_number(frame.kind), frame.body.to_vec()));
                    }
                }
            }
            kinds
        };
        let given = answers(machine, bytes);
        let mut hello = [0; REPLY_FRAME_BYTES];
        let greeting = Hello { protocol: strake_core::wire::PROTOCOL_VERSION };
        let len = greeting.encode(&mut hello).expect("it has room");
        // Zeros end what the bytes may have begun.
        let greeted = answers(machine, &[&[0], &hello[..len]].concat());
        assert!(greeted.iter().any(|(kind, _)| *kind == Some(Kind::Identity)), "it greets no more");
        match given.first() {
            Some((Some(Kind::ErrorReply), body)) => format!("refused, {:?}", body.get(1)),
            Some((kind, _)) => format!("{kind:?}"),
            None => "silent".into(),
        }
    })
}

pub(crate) fn tank(bytes: &[u8]) -> String {
    match strake::tank::parse("fuzz.toml", bytes) {
        Ok(file) => match strake::compile::for_device(&file) {
            Ok(compiled) => compiled.encode(1).map_or_else(
                |error| format!("no plan: {error:?}"),
                |_| judge(&compiled.plan).into(),
            ),
            Err(findings) => format!("not for a device: {:?}", findings.list()[0].code),
        },
        Err(findings) => {
            // Every finding can be shown at its place.
            assert!(!findings.to_text(false).is_empty());
            format!("{:?}", findings.list()[0].code)
        }
    }
}

pub(crate) fn journal_file(bytes: &[u8]) -> String {
    let path = Path::new("fuzz.strake-journal");
    let Ok(mut file) = JournalFile::read(Cursor::new(bytes.to_vec()), path) else {
        return "no journal".into();
    };
    let report = strake::verify::verify(&mut file).expect("memory can be read");
    let replay = strake::replay::replay(&mut file).expect("memory can be read");
    assert_eq!(report.entries, replay.records, "both read the same entries");
    let same = report.damage.iter().map(ToString::to_string);
    assert!(same.eq(replay.damage.iter().map(ToString::to_string)), "both find the same damage");
    if report.sound() && replay.engine.verdict.first_difference.is_none() {
        return "sound".into();
    }
    let what = match (report.contradictions.first(), report.damage.first()) {
        (Some(one), _) => {
            format!("{one:?}").split([' ', '{']).next().unwrap_or_default().to_owned()
        }
        (None, Some(one)) => {
            let what = format!("{:?}", one.what);
            format!("damage: {}", what.split([' ', '{', '(']).next().unwrap_or_default())
        }
        (None, None) if !report.missing_plans.is_empty() => "a plan is missing".into(),
        (None, None) if report.head.is_none() => "no head".into(),
        (None, None) => "sound".into(),
    };
    let replayed =
        if replay.engine.verdict.first_difference.is_some() { "differs" } else { "same" };
    format!("{what}; replay {replayed}")
}
