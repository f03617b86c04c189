//! The two plans of the scenario: one tank, its level on the bus, a sample ten times a second that
//! is written at once.

use std::error::Error;

use strake_core::liquid::{Band, Gas};
use strake_core::part::{Capacities, Geometry, Part, Stated};
use strake_core::plan::codec::{PLAN_BYTES_MAX, encode};
use strake_core::plan::{
    AlarmPlan, LevelPlan, LevelSensor, LiquidPlan, LoggingPlan, Plan, PlanHeader, SignalKind,
    ThresholdPlan,
};
use strake_core::plan_slot::fingerprint;
use strake_core::shape::{Rectangle, Shape};

/// The register that holds the level.
pub(super) const REGISTER: u16 = 3;
/// Count that stands for a level without any alarm, and one above every threshold; millimetres.
pub(super) const LOW_MM: u16 = 2_000;
pub(super) const HIGH_MM: u16 = 9_000;

/// A plan with its bytes.
#[derive(Debug)]
pub(super) struct Sealed {
    pub(super) plan: Box<Plan>,
    pub(super) bytes: Vec<u8>,
    pub(super) serial: u64,
    pub(super) fingerprint: u64,
}

pub(super) fn sealed(serial: u64, capacity_pa: f32) -> Result<Sealed, Box<dyn Error>> {
    let plan = Box::new(plan(capacity_pa));
    let header = PlanHeader { serial, ..PlanHeader::default() };
    let mut bytes = vec![0; PLAN_BYTES_MAX];
    let used = encode(&header, &plan, "water", &["course", "hatch"], &mut bytes)?;
    bytes.truncate(used);
    let fingerprint = fingerprint(&bytes);
    Ok(Sealed { plan, bytes, serial, fingerprint })
}

fn plan(capacity_pa: f32) -> Plan {
    let threshold = |utilisation, latch| ThresholdPlan {
        utilisation,
        deadband: 0.02,
        on_delay_ms: 0,
        off_delay_ms: 0,
        latch,
    };
    let part = |geometry, bottom_m, top_m| Part {
        geometry,
        bottom_m,
        top_m,
        outward: Capacities { pressure_pa: Stated::new(capacity_pa), ..Capacities::default() },
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        outside: 0,
    };
    let course = Geometry::Course { half_diameter_m: 4.0, design_point_m: 0.3, height_m: 2.4 };
    let hatch = Geometry::plane(Shape::Rectangle(Rectangle::new(0.6, 0.6, 1.0)), 1.0, None);
    let empty = Plan::empty();
    let water = Band { estimate_kg_m3: 998.0, low_kg_m3: 995.0, high_kg_m3: 1000.0 };
    Plan {
        gravity_m_s2: 9.80665,
        shell_top_m: 10.0,
        overflow_m: 9.5,
        floor_m: 0.0,
        highest_rise_m_s: 0.001,
        highest_fall_m_s: 0.001,
        liquid: LiquidPlan { top: water, ..empty.liquid },
        gas: Gas { lowest_pa: 0.0, nominal_pa: 0.0, highest_pa: 0.0 },
        level: LevelPlan {
            sensor: LevelSensor::Surface,
            signal: SignalKind::Register { unit: 1, function: 4, register: REGISTER, coding: 0 },
            value_per_count_16: 1.0 / 16_000.0,
            uncertainty: 0.01,
            failed_after_ms: 60_000,
            ..empty.level
        },
        alarm: AlarmPlan {
            warn: threshold(0.85, false),
            alarm: threshold(0.95, true),
            inward: None,
            response_time_ms: 900_000,
            sounds_again_after_ms: 600_000,
        },
        logging: LoggingPlan { interval_ms: 100, idle_interval_ms: 100, flush_after_ms: 0 },
        parts: [part(course, 0.0, 2.4), part(hatch, 0.5, 1.1)].into_iter().collect(),
        ..empty
    }
}
