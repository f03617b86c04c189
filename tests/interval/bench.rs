//! The unchanged application in virtual time, and what its journal holds.

use std::cell::RefCell;
use std::rc::Rc;
use strake::compile::{self, fingerprint};
use strake::link::{Client, InProcess};
use strake::sim::board::Bench;
use strake::sim::machine::{Happening, Machine};
use strake::sim::sensor::{Level, Sensor};
use strake_core::journal::{Entry, Item, SectorHeader, SectorReader};
use strake_core::plan::{Plan, PlanHeader, codec};
use strake_core::wire::Text;

pub(crate) const MINUTE_MS: u64 = 60_000;
pub(crate) const HOUR_MS: u64 = 60 * MINUTE_MS;
pub(crate) const DAY_MS: u64 = 24 * HOUR_MS;
/// Sectors of the ring: none is overwritten in these tests.
const SECTORS: usize = 256;

/// The shipped tank, some of its text replaced.
pub(crate) fn brine_tank(changes: &[(&str, &str)]) -> strake::tank::TankFile {
    let text = include_str!("../../configs/brine_day_tank.toml");
    let text = changes.iter().fold(text.to_owned(), |text, (from, to)| {
        assert!(text.contains(from), "{from}");
        text.replacen(from, to, 1)
    });
    strake::tank::parse("tank.toml", text.as_bytes()).unwrap()
}

pub(crate) fn brine_plan(changes: &[(&str, &str)]) -> Plan {
    compile::for_device(&brine_tank(changes)).unwrap().plan
}

/// A level, straight between points of time (ms) and height (m).
#[derive(Clone, Debug)]
pub(crate) struct Path(pub(crate) Vec<(u64, f64)>);

impl Level for Path {
    fn level_m(&self, now_ms: u64) -> f64 {
        let after = self.0.partition_point(|&(time_ms, _)| time_ms <= now_ms);
        match (self.0[after - 1], self.0.get(after)) {
            ((t0, h0), Some(&(t1, h1))) => h0 + (h1 - h0) * (now_ms - t0) as f64 / (t1 - t0) as f64,
            ((_, level_m), None) => level_m,
        }
    }
}

/// What a journal holds.
pub(crate) struct Logged {
    pub(crate) entries: Vec<Entry>,
    /// Bytes of flash: whole sectors and what is used of the newest.
    pub(crate) bytes: u64,
}

impl Logged {
    pub(crate) fn samples(&self) -> usize {
        self.entries.iter().filter(|entry| matches!(entry, Entry::Sample(_))).count()
    }
}

/// Runs a device with this plan over a level; `noise` is a share of the sensor's half-width.
pub(crate) fn run(
    plan: &Plan,
    level: Box<dyn Level>,
    noise: f64,
    happenings: &[(u64, Happening)],
    end_ms: u64,
) -> Logged {
    let mut room = [0; codec::PLAN_BYTES_MAX];
    let header = PlanHeader { serial: 1_780_000_000, ..PlanHeader::default() };
    let names = vec!["part"; plan.parts.len()];
    let length = codec::encode(&header, plan, "tank", &names, &mut room).unwrap();
    let noise = noise * f64::from(plan.level.uncertainty);
    let bench = Bench::new(Sensor::new(plan, level, noise, 7), SECTORS);
    let (wire, flash) = (bench.wire.clone(), bench.journal.clone());
    let machine = Rc::new(RefCell::new(Machine::new(bench, Text::new("tank 1").unwrap())));
    let turning = machine.clone();
    let port = InProcess::new(&wire, move || turning.borrow_mut().poll());
    let mut client = Client::connect(port).unwrap();
    let bytes = &room[..length];
    client.load_plan(bytes, header.serial, fingerprint(bytes), Text::default()).unwrap();
    for &(time_ms, happening) in happenings {
        machine.borrow_mut().run_until(time_ms);
        machine.borrow_mut().happen(happening);
    }
    machine.borrow_mut().run_until(end_ms);
    let head = client.head().unwrap();
    let image = flash.with(|flash| flash.image());
    let entries = image.chunks(4096).take_while(|sector| SectorHeader::decode(sector).is_ok());
    let entries = entries.flat_map(|sector| {
        SectorReader::new(sector).unwrap().filter_map(|item| match item {
            Item::Entry(entry) => Some(entry),
            _ => None,
        })
    });
    Logged {
        entries: entries.collect(),
        bytes: u64::from(head.newest) * 4096 + u64::from(head.used),
    }
}
