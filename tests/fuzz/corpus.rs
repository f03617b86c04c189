//! Seeds, made by the product itself: a simulated hour with an alarm, and what it left. What the
//! fuzzer found besides.

use std::cell::RefCell;
use std::path::Path;
use std::rc::Rc;
use strake::compile::{self, fingerprint};
use strake::journal_file::{DeviceIdentity, MAGIC, PartFile, Record};
use strake::link::{Client, InProcess, Progress, collect};
use strake::sim::board::Bench;
use strake::sim::machine::{Happening, Machine};
use strake::sim::sensor::{Failure, Level, Sensor};
use strake_core::wire::{
    Acknowledge, ClockSet, HeadRequest, Hello, JournalBoundsRequest, Message, PartStatusRequest,
    PlanBegin, PlanChunk, PlanCommit, PlanListRequest, PlanRead, REPLY_FRAME_BYTES, SectorRequest,
    StatusRequest, Text,
};

const SERIAL: u64 = 1_780_000_000;

/// The inputs that the fuzzer found for a target, by their names.
pub(crate) fn found(target: &str) -> Vec<Vec<u8>> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/fuzz/corpus").join(target);
    let Ok(entries) = std::fs::read_dir(folder) else { return Vec::new() };
    let mut paths: Vec<_> = entries.map(|entry| entry.unwrap().path()).collect();
    paths.sort();
    paths.iter().map(|path| std::fs::read(path).unwrap()).collect()
}

/// The shipped tank files, and the broken ones with their mistakes.
pub(crate) fn tanks() -> Vec<Vec<u8>> {
    let configs = Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs");
    let mut files = Vec::new();
    for folder in [configs.clone(), configs.join("invalid")] {
        let mut paths: Vec<_> =
            std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
        paths.sort();
        paths.retain(|path| path.extension().is_some_and(|extension| extension == "toml"));
        files.extend(paths.iter().map(|path| std::fs::read(path).unwrap()));
    }
    files
}

pub(crate) fn plans() -> Vec<Vec<u8>> {
    let good = tanks().into_iter().filter_map(|tank| strake::tank::parse("tank.toml", &tank).ok());
    good.filter_map(|file| compile::for_device(&file).ok()?.encode(SERIAL).ok()).collect()
}

pub(crate) fn plan_files() -> Vec<Vec<u8>> {
    plans().iter().map(|plan| strake::plan_file::write(plan).unwrap()).collect()
}

pub(crate) fn frames() -> Vec<Vec<u8>> {
    fn framed<'a>(message: &impl Message<'a>) -> Vec<u8> {
        let mut out = vec![0; REPLY_FRAME_BYTES];
        let len = message.encode(&mut out).unwrap();
        out.truncate(len);
        out
    }
    let plan = &plans()[0];
    let (length, serial, print) = (plan.len() as u32, SERIAL, fingerprint(plan));
    let begin = PlanBegin { length, serial, fingerprint: print, device_id: Text::default() };
    vec![
        framed(&Hello { protocol: 1 }),
        framed(&StatusRequest {}),
        framed(&PartStatusRequest { part: 3 }),
        framed(&begin),
        framed(&PlanChunk { offset: 0, bytes: &plan[..64] }),
        framed(&PlanCommit { fingerprint: print }),
        framed(&PlanListRequest {}),
        framed(&PlanRead { fingerprint: print, offset: 0, length: 64 }),
        framed(&ClockSet { token: 7, utc_s: SERIAL }),
        framed(&Acknowledge { token: 8 }),
        framed(&JournalBoundsRequest {}),
        framed(&HeadRequest {}),
        framed(&SectorRequest { ticket: 1, sequence: 0, wanted: u32::MAX, frame_units: 4 }),
    ]
}

/// Rises past every threshold within the hour.
#[derive(Debug)]
struct Rising;

impl Level for Rising {
    fn level_m(&self, now_ms: u64) -> f64 {
        (6.0 + now_ms as f64 * 1e-6).min(9.0)
    }
}

/// The sectors of a device that saw alarms, faults, presses, restarts and a second plan.
fn device() -> (Bench, Vec<u8>) {
    let file = strake::tank::parse("tank.toml", &tanks()[0]).unwrap();
    let compiled = compile::for_device(&file).unwrap();
    let bench = Bench::new(Sensor::new(&compiled.plan, Box::new(Rising), 20.0, 3), 8);
    let machine = Rc::new(RefCell::new(Machine::new(bench.clone(), Text::new("fuzz").unwrap())));
    let turning = machine.clone();
    let port = InProcess::new(&bench.wire, move || turning.borrow_mut().poll());
    let mut client = Client::connect(port).unwrap();
    let run = |until_s: u64| machine.borrow_mut().run_until(until_s * 1_000);
    for (number, until_s) in [(0, 3_000), (1, 5_000)] {
        let bytes = compiled.encode(SERIAL + number).unwrap();
        client.load_plan(&bytes, SERIAL + number, fingerprint(&bytes), Text::default()).unwrap();
        client.set_clock(SERIAL + 10 + number).unwrap();
        run(until_s - 1_000);
        machine.borrow_mut().happen(Happening::Sensor(Some(Failure::Silent)));
        run(until_s - 800);
        machine.borrow_mut().happen(Happening::Sensor(None));
        machine.borrow_mut().happen(Happening::Button(true));
        run(until_s - 700);
        machine.borrow_mut().happen(Happening::Button(false));
        machine.borrow_mut().happen(Happening::WarmRestart);
        run(until_s);
    }
    let folder = tempfile::tempdir().unwrap();
    let mut part = PartFile::open(&folder.path().join("part")).unwrap();
    let head = collect(&mut client, &mut part, None, &mut |_: &Progress| {
        std::ops::ControlFlow::Continue(())
    })
    .unwrap()
    .head;
    let mut bytes = std::fs::read(part.path()).unwrap();
    bytes.extend(Record::Head(head).encode());
    (bench, bytes)
}

pub(crate) fn sectors() -> Vec<Vec<u8>> {
    let image = device().0.journal.with(|flash| flash.image());
    image.chunks(4096).filter(|sector| sector[0] != 0xFF).map(<[u8]>::to_vec).collect()
}

/// Word, sequence, then a page.
pub(crate) fn blocks() -> Vec<Vec<u8>> {
    let mut found = Vec::new();
    for sector in sectors() {
        for page in sector.chunks(256).skip(1).filter(|page| page[0] != 0xFF) {
            found.push([&[1], &sector[4..8], page].concat());
        }
    }
    found
}

pub(crate) fn journal_files() -> Vec<Vec<u8>> {
    let (_, whole) = device();
    let identity = DeviceIdentity {
        device_id: "fuzz".into(),
        firmware: "0.1.0".into(),
        word_bytes: 4,
        sectors: 8,
    };
    let mut bare = MAGIC.to_vec();
    bare.extend(Record::Identity(identity).encode());
    vec![whole, bare]
}
