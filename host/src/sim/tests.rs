//! The whole line on a plan made by hand: commission, fill, alarm, acknowledge, cut, collect,
//! replay.

use super::board::Bench;
use super::machine::{Happening, Machine};
use super::sensor::{Failure, Level, Sensor};
use crate::journal_file::{JournalFile, PartFile};
use crate::link::{Client, InProcess, collect};
use crate::replay::replay;
use std::cell::RefCell;
use std::ops::ControlFlow;
use std::rc::Rc;
use strake_core::liquid::{Band, Gas};
use strake_core::part::{Capacities, Geometry, Part, Stated};
use strake_core::plan::{
    AlarmPlan, LevelPlan, LevelSensor, LoggingPlan, Plan, PlanHeader, Reference, SignalKind,
    ThresholdPlan, codec,
};
use strake_core::plan_slot::fingerprint;
use strake_core::wire::Text;

fn plan() -> Plan {
    let threshold = |utilisation, latch| ThresholdPlan {
        utilisation,
        deadband: 0.02,
        on_delay_ms: 5_000,
        off_delay_ms: 60_000,
        latch,
    };
    let mut plan = Plan {
        gravity_m_s2: 9.80665,
        shell_top_m: 9.6,
        overflow_m: 9.3,
        highest_rise_m_s: 2.0e-4,
        highest_fall_m_s: 3.0e-4,
        gas: Gas { lowest_pa: 0.0, nominal_pa: 0.0, highest_pa: 0.0 },
        level: LevelPlan {
            sensor: LevelSensor::Head {
                at_m: 0.15,
                reference: Reference::Atmosphere { offset_pa: [0.0; 3] },
            },
            signal: SignalKind::CurrentLoop,
            zero_count_16: 64_000,
            value_at_zero: 0.0,
            value_per_count_16: 150_000.0 / 256_000.0,
            uncertainty: 200.0,
            uncertainty_per_distance: 0.0,
            reference_m: 0.0,
            failed_after_ms: 60_000,
        },
        alarm: AlarmPlan {
            warn: threshold(0.85, false),
            alarm: threshold(0.95, true),
            inward: None,
            response_time_ms: 900_000,
            sounds_again_after_ms: 600_000,
        },
        logging: LoggingPlan {
            interval_ms: 10_000,
            idle_interval_ms: 60_000,
            flush_after_ms: 60_000,
        },
        ..Plan::empty()
    };
    plan.liquid.top = Band { estimate_kg_m3: 1280.0, low_kg_m3: 1270.0, high_kg_m3: 1290.0 };
    let course = Part {
        geometry: Geometry::Course { half_diameter_m: 4.0, design_point_m: 0.3, height_m: 2.4 },
        bottom_m: 0.0,
        top_m: 2.4,
        outward: Capacities { hoop_tension_n_m: Stated::new(419_000.0), ..Capacities::default() },
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        outside: 0,
    };
    assert!(plan.parts.push(course).is_ok());
    plan
}

/// Rises, stands, falls.
#[derive(Debug)]
struct Hill;

impl Level for Hill {
    #[expect(clippy::cast_precision_loss, reason = "a day of milliseconds is small")]
    fn level_m(&self, now_ms: u64) -> f64 {
        let hours = now_ms as f64 / 3.6e6;
        (7.0 + 0.6 * hours).min(8.4).min(8.4 - 1.0 * (hours - 3.5))
    }
}

#[test]
fn a_filling_with_an_alarm_replays_identically() {
    let plan = plan();
    let header = PlanHeader { serial: 1_770_000_000, ..PlanHeader::default() };
    let mut room = [0; codec::PLAN_BYTES_MAX];
    let length = codec::encode(&header, &plan, "brine", &["course 1"], &mut room).unwrap();
    let bytes = &room[..length];
    let print = fingerprint(bytes);

    let bench = Bench::new(Sensor::new(&plan, Box::new(Hill), 20.0, 7), 64);
    let machine = Rc::new(RefCell::new(Machine::new(bench, Text::new("pump house 7").unwrap())));
    assert!(!machine.borrow().bench().contact.get(), "without a plan the device cannot see");
    let wire = machine.borrow().bench().wire.clone();
    let turning = machine.clone();
    let mut client =
        Client::connect(InProcess::new(&wire, move || turning.borrow_mut().poll())).unwrap();
    client.load_plan(bytes, header.serial, print, Text::default()).unwrap();
    assert_eq!(client.read_plan(print).unwrap(), bytes);
    client.set_clock(1_780_000_000).unwrap();

    let hour = 3_600_000;
    let at = |machine: &Rc<RefCell<Machine>>, time_ms, happening: Option<Happening>| {
        machine.borrow_mut().run_until(time_ms);
        if let Some(happening) = happening {
            machine.borrow_mut().happen(happening);
        }
    };
    at(&machine, hour / 10, None);
    assert!(machine.borrow().bench().contact.get(), "healthy");
    at(&machine, 2 * hour + hour / 2, Some(Happening::Button(true)));
    assert!(!machine.borrow().bench().contact.get(), "the alarm opened the contact");
    at(&machine, 2 * hour + hour / 2 + 500, Some(Happening::Button(false)));
    at(&machine, 3 * hour, Some(Happening::PowerOff));
    at(&machine, 3 * hour + 200_000, Some(Happening::PowerOn));
    assert!(!machine.borrow().bench().contact.get(), "a start never clears an alarm");
    at(&machine, 5 * hour, Some(Happening::Sensor(Some(Failure::WireBreak))));
    at(&machine, 5 * hour + 300_000, Some(Happening::Sensor(None)));
    at(&machine, 6 * hour, Some(Happening::WarmRestart));
    at(&machine, 7 * hour, None);

    let directory = tempfile::tempdir().unwrap();
    let part_path = directory.path().join("journal.part");
    let path = directory.path().join("journal");
    let mut part = PartFile::open(&part_path).unwrap();
    let collected =
        collect(&mut client, &mut part, Some(1_780_025_200), &mut |_| ControlFlow::Continue(()))
            .unwrap();
    part.finish(&collected.head, &path, false).unwrap();
    let mut file = JournalFile::open(&path).unwrap();
    let replayed = replay(&mut file).unwrap();
    let engine = &replayed.engine;
    assert!(replayed.damage.is_empty(), "{:?}", replayed.damage);
    assert_eq!(engine.verdict.first_difference, None);
    assert!(engine.verdict.identical());
    assert!(engine.verdict.moves_compared >= 4, "{:?}", engine.verdict);
    let kinds: Vec<_> = engine.summary.alarms.iter().map(|line| line.kind).collect();
    assert!(kinds.contains(&"warn") && kinds.contains(&"alarm") && kinds.contains(&"fault"));
    assert_eq!(engine.summary.starts, 3);
    assert!(engine.summary.samples > 2_400, "{}", engine.summary.samples);
}
