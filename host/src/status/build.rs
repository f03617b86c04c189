//! From what a device said to the document.

use super::document::{
    AlarmRow, ClockRow, DeviceRow, Document, FaultRow, FillingRow, JournalRow, LevelRow, LinkRow,
    LoadsRow, PartRow, PlanRow,
};
use super::words::{cause_words, health_name, reading_name, state_name};
use super::{InForce, Seen};
use crate::assess::{FIELD_CHECK, Opening, PROVISIONAL};
use crate::plan_file::PlanFile;
use strake_core::alarm::AlarmState;
use strake_core::journal::SECTOR_BYTES;
use strake_core::part::Shut;
use strake_core::signal::ReadingClass;
use strake_core::wire::{FillingStatus, Identity, LinkCounters, LoadValue, PartStatus, Status};

/// Thresholds of a part, in the order of the link.
const THRESHOLDS: [&str; 3] = ["warn", "alarm", "inward"];

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
        let time_alarm = seen.filling.map_or(0, |filling| filling.alarm);
        alarms.extend(time_row(time_alarm));
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
            above_alarm: parts.iter().any(|part| part.above_alarm) || stands(time_alarm),
            alarms,
            faults,
            level: level_row(status),
            filling: seen.filling.as_ref().and_then(|filling| filling_row(filling, plan)),
            parts,
            battery_v: (status.battery_mv > 0).then(|| f64::from(status.battery_mv) / 1000.0),
            energy: None,
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
        InForce::Plan(plan) => {
            if plan.header.provisional {
                found.push(PROVISIONAL.to_owned());
            }
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
    // Before the first reading the bounds are those of a full tank: "cannot see", no alarm.
    let above_alarm = reading != ReadingClass::NotYetRead as u8 && share >= 1.0
        || stands(alarm_state)
        || stands(inward_state);
    PartRow {
        name: part_name(plan, part.part),
        utilisation: part.utilisation,
        utilisation_bound: part.utilisation_bound,
        utilisation_inward: part.inward_judged.then_some(part.utilisation_inward),
        above_alarm,
        opening: opening(part.opening),
        loads: loads(&part.loads, |load| load.estimate),
        loads_outward_bound: loads(&part.loads, |load| load.bound),
        share_of_threshold: if alarm.is_some() { share } else { part.utilisation_bound },
    }
}

/// The device's verdict on an opening; none of what is no opening.
const fn shut(opening: u8) -> Option<Shut> {
    if opening & PartStatus::OPENING == 0 {
        return None;
    }
    Some(Shut(opening & !PartStatus::OPENING))
}

fn opening(opening: u8) -> Option<Opening> {
    shut(opening).map(Opening::of)
}

/// Loads by the numbers of the link: those of the plan format plus one.
fn loads(loads: &[LoadValue], pick: fn(&LoadValue) -> f32) -> LoadsRow {
    let value = |number| loads.iter().find(|load| load.load == number).map(pick);
    LoadsRow {
        pressure_pa: value(1),
        hoop_tension_n_m: value(2),
        force_n: value(3),
        bolt_n: value(4),
        moment_n_m: value(5),
        force_x_n: value(8),
        force_z_n: value(9),
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

fn time_row(state: u8) -> Option<AlarmRow> {
    (state != 0).then(|| AlarmRow {
        part: "tank".to_owned(),
        threshold: "time to limit",
        state: state_name(state),
        urgency: 2 * urgency(state),
    })
}

/// Whether an alarm counts as raised.
fn stands(state: u8) -> bool {
    AlarmState::from_number(state).is_some_and(AlarmState::is_active)
}

fn filling_row(filling: &FillingStatus, plan: Option<&PlanFile>) -> Option<FillingRow> {
    let state = match filling.state {
        0 => return None,
        1 => "not_known",
        2 => "not_filling",
        3 => "filling",
        _ => "unknown",
    };
    let fills = filling.state == 3;
    Some(FillingRow {
        state,
        time_to_limit_s: fills.then_some(filling.time_s),
        inflow_m3_s: fills.then_some(filling.inflow_m3_s),
        response_time_s: plan.map(|plan| f64::from(plan.plan.alarm.response_time_ms) * 1e-3),
    })
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
