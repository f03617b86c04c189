//! The document `strake.status/1`. Its keys are a promise to scripts; quantities are SI, the unit
//! stands in the key.

use super::words::{cause_words, health_name, reading_name, state_name};
use super::{InForce, Seen};
use crate::assess::FIELD_CHECK;
use crate::plan_file::PlanFile;
use serde::Serialize;
use strake_core::alarm::AlarmState;
use strake_core::journal::SECTOR_BYTES;
use strake_core::wire::{Identity, LinkCounters, LoadValue, PartStatus, Status};

/// Thresholds of a part, in the order of the link.
const THRESHOLDS: [&str; 3] = ["warn", "alarm", "inward"];

/// The whole document.
#[derive(Clone, Debug, Serialize)]
pub struct Document {
    /// `strake.status/1`.
    pub schema: &'static str,
    /// Where the device was asked.
    pub port: String,
    /// Who it is.
    pub device: DeviceRow,
    /// Its plan; null without one, or when it cannot be read.
    pub plan: Option<PlanRow>,
    /// Why there is a plan that cannot be read; else null.
    pub plan_unreadable: Option<String>,
    /// Of the device, never of the tank: `healthy`, `act_now` or `cannot_see`.
    pub health: &'static str,
    /// A load's bound is at or above its alarm threshold, or such an alarm stands: exit status 1.
    pub above_alarm: bool,
    /// Alarms that are not normal, the most pressing first.
    pub alarms: Vec<AlarmRow>,
    /// Fault causes that are not normal or have occurred since the start, standing ones first.
    pub faults: Vec<FaultRow>,
    /// What is known of the level.
    pub level: LevelRow,
    /// The parts, the worst first; none before the first sample.
    pub parts: Vec<PartRow>,
    /// Supply; null when the board cannot tell.
    pub battery_v: Option<f64>,
    /// The device's clock.
    pub clock: ClockRow,
    /// The journal.
    pub journal: JournalRow,
    /// What has passed over the link since the start, counted by the device.
    pub link: LinkRow,
    /// What the reader must know beside the numbers.
    pub cautions: Vec<String>,
}

/// Who the device is.
#[derive(Clone, Debug, Serialize)]
pub struct DeviceRow {
    /// Its own name.
    pub id: String,
    /// Version of its firmware.
    pub firmware: String,
    /// Version of the link's language.
    pub protocol: u16,
    /// Version of its journal.
    pub journal_format: u8,
    /// Version of the plans it takes.
    pub plan_format: u8,
    /// Number of this start.
    pub boot: u16,
    /// Since this start.
    pub running_s: f64,
}

impl DeviceRow {
    /// Of an identity.
    #[must_use]
    pub fn of(identity: &Identity) -> Self {
        Self {
            id: identity.device_id.as_str().to_owned(),
            firmware: identity.firmware.as_str().to_owned(),
            protocol: identity.protocol,
            journal_format: identity.journal_format,
            plan_format: identity.plan_format,
            boot: identity.boot,
            running_s: seconds(identity.tick_ms),
        }
    }
}

/// The plan in force.
#[derive(Clone, Debug, Serialize)]
pub struct PlanRow {
    /// The tank's name.
    pub tank: String,
    /// Fingerprint of its bytes, hexadecimal.
    pub fingerprint: String,
    /// UTC seconds at sealing.
    pub serial: u64,
    /// Whether a key has signed it.
    pub signed: bool,
    /// Parts.
    pub parts: usize,
    /// Utilisation of a bound at or above which a part warns.
    pub warn_utilisation: f32,
    /// Utilisation of an outward bound at or above which it alarms.
    pub alarm_utilisation: f32,
    /// The same of an inward bound; null where nothing is judged inward.
    pub inward_utilisation: Option<f32>,
}

impl PlanRow {
    /// Of a plan.
    #[must_use]
    pub fn of(plan: &PlanFile) -> Self {
        Self {
            tank: plan.tank_name.clone(),
            fingerprint: format!("{:016x}", plan.fingerprint),
            serial: plan.header.serial,
            signed: false,
            parts: plan.plan.parts.len(),
            warn_utilisation: plan.plan.alarm.warn.utilisation,
            alarm_utilisation: plan.plan.alarm.alarm.utilisation,
            inward_utilisation: plan.plan.alarm.inward.map(|inward| inward.utilisation),
        }
    }
}

/// An alarm of a part.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AlarmRow {
    /// The part.
    pub part: String,
    /// `warn`, `alarm` or `inward`.
    pub threshold: &'static str,
    /// State of the alarm (ISA-18.2), in lower case with underscores.
    pub state: &'static str,
    #[serde(skip)]
    urgency: u8,
}

/// A fault cause.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct FaultRow {
    /// What is wrong.
    pub cause: String,
    /// State of its alarm.
    pub state: &'static str,
    /// Occurrences since the start; stays at 65535.
    pub count: u16,
    #[serde(skip)]
    urgency: u8,
}

/// What is known of the level.
#[derive(Clone, Debug, Serialize)]
pub struct LevelRow {
    /// `not_yet_read`, `valid`, `held`, `projected` or `failed`.
    pub reading: &'static str,
    /// Above the datum; null unless valid, held or projected. So are the bounds.
    pub estimate_m: Option<f32>,
    /// Lower bound.
    pub low_m: Option<f32>,
    /// Upper bound.
    pub high_m: Option<f32>,
}

/// A part.
#[derive(Clone, Debug, Serialize)]
pub struct PartRow {
    /// Its name; its number where the plan cannot be read.
    pub name: String,
    /// Of the estimate, outward.
    pub utilisation: f32,
    /// Of the outward bound.
    pub utilisation_bound: f32,
    /// Of the inward bound; null where no inward capacity is stated: not judged.
    pub utilisation_inward: Option<f32>,
    /// At or above its alarm threshold, outward or inward.
    pub above_alarm: bool,
    /// Estimates of its loads by their names in `strake.assess/1`.
    pub loads: LoadsRow,
    /// Their outward bounds.
    pub loads_outward_bound: LoadsRow,
    #[serde(skip)]
    share_of_threshold: f32,
}

/// Loads of a part; only what it has appears.
#[derive(Clone, Debug, Serialize)]
pub struct LoadsRow {
    /// Largest pressure.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pressure_pa: Option<f32>,
    /// Hoop tension of a course at its design point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hoop_tension_n_m: Option<f32>,
    /// Force on a plane part.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_n: Option<f32>,
    /// Largest share of a bolt.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub bolt_n: Option<f32>,
}

/// The device's clock.
#[derive(Clone, Debug, Serialize)]
pub struct ClockRow {
    /// UTC seconds; null while it is not set.
    pub utc_s: Option<u64>,
    /// Ahead of this computer's clock, s; null while it is not set.
    pub ahead_s: Option<i64>,
}

impl ClockRow {
    /// Of a status that came at `utc_s`.
    #[must_use]
    pub fn of(status: &Status, utc_s: u64) -> Self {
        let set = status.clock_set.then_some(status.utc_s);
        let ahead = |device_s: u64| {
            let ahead = i128::from(device_s) - i128::from(utc_s);
            i64::try_from(ahead).unwrap_or(i64::MAX)
        };
        Self { utc_s: set, ahead_s: set.map(ahead) }
    }
}

/// The journal.
#[derive(Clone, Debug, Serialize)]
pub struct JournalRow {
    /// Sequence of the oldest sector; null without any.
    pub oldest_sector: Option<u32>,
    /// Sequence of the newest; null without any.
    pub newest_sector: Option<u32>,
    /// Bytes in use.
    pub bytes: u64,
    /// Bytes of the ring.
    pub capacity_bytes: u64,
    /// Samples since the start.
    pub samples: u32,
}

/// What has passed over the link.
#[derive(Clone, Debug, Serialize)]
pub struct LinkRow {
    /// Bytes received by the device.
    pub bytes_in: u32,
    /// Bytes sent by it.
    pub bytes_out: u32,
    /// Damaged frames received by it.
    pub bad_frames: u32,
}

impl Document {
    /// Of a visit.
    #[must_use]
    pub fn of(seen: &Seen) -> Self {
        let Seen { identity, status, faults, in_force, .. } = seen;
        let plan = in_force.plan();
        let mut parts: Vec<PartRow> =
            seen.parts.iter().map(|part| part_row(part, plan, status.level_reading)).collect();
        parts.sort_by(|a, b| b.share_of_threshold.total_cmp(&a.share_of_threshold));
        let mut alarms = alarms(&seen.parts, plan);
        alarms.sort_by_key(|row| row.urgency);
        let pairs = faults.states.iter().zip(&faults.counts).enumerate();
        let mut faults: Vec<FaultRow> = pairs
            .filter(|&(_, (&state, &count))| state != 0 || count > 0)
            .map(|(number, (&state, &count))| FaultRow {
                cause: cause_words(number),
                state: state_name(state),
                count,
                urgency: urgency(state),
            })
            .collect();
        faults.sort_by_key(|row| row.urgency);
        let LinkCounters { bytes_in, bytes_out, bad_frames } = status.link;
        Self {
            schema: "strake.status/1",
            port: seen.port.clone(),
            device: DeviceRow::of(identity),
            plan: plan.map(PlanRow::of),
            plan_unreadable: match in_force {
                InForce::Unreadable(why) => Some(why.clone()),
                InForce::Nothing | InForce::Plan(_) => None,
            },
            health: health_name(status.output),
            above_alarm: parts.iter().any(|part| part.above_alarm),
            alarms,
            faults,
            level: level_row(status),
            parts,
            battery_v: (status.battery_mv > 0).then(|| f64::from(status.battery_mv) / 1000.0),
            clock: ClockRow::of(status, seen.utc_s),
            journal: journal_row(status, identity),
            link: LinkRow { bytes_in, bytes_out, bad_frames },
            cautions: cautions(in_force, plan),
        }
    }
}

fn cautions(in_force: &InForce, plan: Option<&PlanFile>) -> Vec<String> {
    let mut found = Vec::new();
    match in_force {
        InForce::Nothing => found.push("no plan: the device judges nothing".to_owned()),
        InForce::Unreadable(why) => {
            found.push(format!("the plan in force cannot be read back ({why}): no names"));
        }
        InForce::Plan(_) => {
            found.push("unsigned: a device cannot tell who made its plan".to_owned());
        }
    }
    for (part, name) in
        plan.into_iter().flat_map(|plan| plan.plan.parts.iter().zip(&plan.part_names))
    {
        if !part.judged_outward() {
            found.push(format!("{name} is not judged outward: the plan states no capacity"));
        }
    }
    found.push(FIELD_CHECK.to_owned());
    found
}

fn level_row(status: &Status) -> LevelRow {
    let known = (1..=3).contains(&status.level_reading);
    LevelRow {
        reading: reading_name(status.level_reading),
        estimate_m: known.then_some(status.level_m),
        low_m: known.then_some(status.level_low_m),
        high_m: known.then_some(status.level_high_m),
    }
}

fn journal_row(status: &Status, identity: &Identity) -> JournalRow {
    let bounds = status.journal;
    let sector_bytes = SECTOR_BYTES as u64;
    let closed = bounds.newest.checked_sub(bounds.oldest);
    JournalRow {
        oldest_sector: closed.map(|_| bounds.oldest),
        newest_sector: closed.map(|_| bounds.newest),
        bytes: closed
            .map_or(0, |closed| u64::from(closed) * sector_bytes + u64::from(bounds.newest_used)),
        capacity_bytes: u64::from(identity.sectors) * sector_bytes,
        samples: status.samples,
    }
}

fn part_name(plan: Option<&PlanFile>, part: u8) -> String {
    let name = plan.and_then(|plan| plan.part_names.get(usize::from(part)));
    name.cloned().unwrap_or_else(|| format!("part {}", u16::from(part) + 1))
}

fn part_row(part: &PartStatus, plan: Option<&PlanFile>, reading: u8) -> PartRow {
    let alarm = plan.map(|plan| plan.plan.alarm);
    let outward = alarm.map(|alarm| part.utilisation_bound / alarm.alarm.utilisation);
    let inward = alarm
        .and_then(|alarm| alarm.inward)
        .filter(|_| part.inward_judged)
        .map(|inward| part.utilisation_inward / inward.utilisation);
    let share =
        [outward, inward].into_iter().flatten().fold(0.0, |a: f32, b| if b > a { b } else { a });
    let [_, alarm_state, inward_state] = part.alarms;
    let stands = |number| AlarmState::from_number(number).is_some_and(AlarmState::is_active);
    // Before the first reading the bounds are those of a full tank: "cannot see", no alarm.
    let above_alarm = reading != 0 && share >= 1.0 || stands(alarm_state) || stands(inward_state);
    PartRow {
        name: part_name(plan, part.part),
        utilisation: part.utilisation,
        utilisation_bound: part.utilisation_bound,
        utilisation_inward: part.inward_judged.then_some(part.utilisation_inward),
        above_alarm,
        loads: loads(&part.loads, |load| load.estimate),
        loads_outward_bound: loads(&part.loads, |load| load.bound),
        share_of_threshold: if alarm.is_some() { share } else { part.utilisation_bound },
    }
}

/// Loads by the numbers of the link: those of the plan format plus one.
fn loads(loads: &[LoadValue], pick: fn(&LoadValue) -> f32) -> LoadsRow {
    let value = |number| loads.iter().find(|load| load.load == number).map(pick);
    LoadsRow {
        pressure_pa: value(1),
        hoop_tension_n_m: value(2),
        force_n: value(3),
        bolt_n: value(4),
    }
}

fn alarms(parts: &[PartStatus], plan: Option<&PlanFile>) -> Vec<AlarmRow> {
    let mut found = Vec::new();
    for part in parts {
        for (threshold, state) in THRESHOLDS.into_iter().zip(part.alarms) {
            if state != 0 {
                found.push(AlarmRow {
                    part: part_name(plan, part.part),
                    threshold,
                    state: state_name(state),
                    urgency: 2 * urgency(state) + u8::from(threshold == "warn"),
                });
            }
        }
    }
    found
}

/// What must be looked at first has the lowest number.
fn urgency(state: u8) -> u8 {
    match AlarmState::from_number(state) {
        Some(AlarmState::Unacknowledged) | None => 0,
        Some(AlarmState::LatchedUnacknowledged) => 1,
        Some(AlarmState::ReturnedUnacknowledged) => 2,
        Some(AlarmState::Acknowledged) => 3,
        Some(AlarmState::LatchedAcknowledged) => 4,
        Some(_) => 5,
    }
}

#[expect(clippy::cast_precision_loss, reason = "a device does not run for 2^53 ms")]
fn seconds(tick_ms: u64) -> f64 {
    tick_ms as f64 / 1000.0
}
