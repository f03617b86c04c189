//! `[logging]`, `[device]` and `[power]`.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::Located;
use crate::tank::model::{Cell, Logging, Power, SensorSupply};
use crate::units::Quantity::{Charge, Current, Time, Voltage};

/// Longest interval, s.
const LONGEST_INTERVAL_S: f64 = 3600.0;
/// Longest time a sample may wait, s.
const LONGEST_WAIT_S: f64 = 600.0;

pub(super) fn logging(root: &mut Section<'_>) -> Option<Logging> {
    let mut section = root.table("logging", "[logging] with interval and idle_interval")?;
    let interval = Range::between(0.1, LONGEST_INTERVAL_S);
    let moving = section.need(field("interval", Time, interval, "\"10 s\", while it moves"));
    let idle = section.need(field("idle_interval", Time, interval, "\"60 s\", at rest"));
    let flush = section.need(field(
        "flush_after",
        Time,
        Range::between(0.0, LONGEST_WAIT_S),
        "\"60 s\", how long a sample may wait in memory that a power cut empties",
    ));
    section.finish();
    Some(Logging { interval_s: moving?, idle_interval_s: idle?, flush_after_s: flush? })
}

pub(super) fn device(root: &mut Section<'_>) -> Option<Located<String>> {
    let mut section = root.table("device", "[device] with id = \"pump house 7\"")?;
    let id = section.need_name("id", "\"pump house 7\", as the device reports it");
    section.finish();
    id
}

pub(super) fn power(root: &mut Section<'_>) -> Option<Power> {
    let mut section = root.table("power", "[power] with cell and sensor")?;
    let write = "{ capacity = \"19 Ah\", voltage = \"3.6 V\", efficiency = 0.85 }";
    let cell = section.need_table("cell", write).and_then(cell);
    let write = "{ voltage = \"12 V\", current = \"12 mA\", warm_up = \"0.3 s\" }";
    let sensor = section.need_table("sensor", write).and_then(sensor);
    let relay = section.take(field(
        "relay_current",
        Current,
        Range::NOT_NEGATIVE,
        "\"20 mA\", that holds the relay in while all is well",
    ));
    section.finish();
    Some(Power { cell: cell?, sensor: sensor?, relay_current_a: relay })
}

fn cell(mut section: Section<'_>) -> Option<Cell> {
    let capacity = section.need(field("capacity", Charge, Range::POSITIVE, "\"19 Ah\""));
    let voltage = section.need(field("voltage", Voltage, Range::POSITIVE, "\"3.6 V\""));
    let efficiency = section.need_ratio(
        "efficiency",
        Range::SHARE,
        "0.85, the share of its energy that reaches the circuit",
    );
    section.finish();
    Some(Cell { capacity_c: capacity?, voltage_v: voltage?, efficiency: efficiency? })
}

fn sensor(mut section: Section<'_>) -> Option<SensorSupply> {
    let voltage = section.need(field("voltage", Voltage, Range::POSITIVE, "\"12 V\""));
    let current = section.need(field("current", Current, Range::POSITIVE, "\"12 mA\""));
    let warm_up = section.need(field(
        "warm_up",
        Time,
        Range::between(0.0, 3600.0),
        "\"0.3 s\", from switching on to a valid reading",
    ));
    section.finish();
    Some(SensorSupply { voltage_v: voltage?, current_a: current?, warm_up_s: warm_up? })
}
