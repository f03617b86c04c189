//! The document as text for a person at the tank: the worst on top.

use super::document::{ClockRow, Document};
use super::words::state_words;
use crate::energy::battery;
use crate::page::Page;
use crate::units::Quantity::{Flow, Length, Time};
use crate::units::{UnitSystem, format};
use crate::utc;

/// The whole text.
#[must_use]
pub fn render(document: &Document, units: UnitSystem, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    health(document, &mut page);
    alarms(document, &mut page);
    faults(document, &mut page);
    level(document, units, &mut page);
    filling(document, units, &mut page);
    parts(document, &mut page);
    device(document, &mut page);
    if let Some(energy) = &document.energy {
        battery(&energy.estimate, energy.since_start.as_ref(), &mut page);
    }
    page.blank();
    for caution in &document.cautions {
        page.paragraph("", &format!("{caution}."));
    }
    page.into_text()
}

fn health(document: &Document, page: &mut Page) {
    let says = match document.health {
        "healthy" => "healthy (the device is; this says nothing of the tank)",
        "act_now" => "ACT NOW: a load has passed its margin",
        "cannot_see" => "CANNOT SEE: do not rely on the figures below",
        _ => "in a state unknown here: update strake",
    };
    page.heading(&format!("{} on {}: {says}", document.device.id, document.port));
}

fn alarms(document: &Document, page: &mut Page) {
    if document.alarms.is_empty() {
        return;
    }
    page.blank();
    page.heading("Alarms");
    let width = document.alarms.iter().map(|row| row.part.chars().count()).max().unwrap_or(0);
    for row in &document.alarms {
        let state = state_words(row.state);
        page.line(&format!("  {:<width$}  {:<7} {state}", row.part, row.threshold));
    }
}

fn faults(document: &Document, page: &mut Page) {
    if document.faults.is_empty() {
        return;
    }
    page.blank();
    page.heading("Faults since the start");
    let width = document.faults.iter().map(|row| row.cause.chars().count()).max().unwrap_or(0);
    for row in &document.faults {
        let state = if row.state == "normal" { "over" } else { state_words(row.state) };
        page.line(&format!("  {:<width$}  {:>5} times, {state}", row.cause, row.count));
    }
}

fn level(document: &Document, units: UnitSystem, page: &mut Page) {
    page.blank();
    page.heading("Level");
    let level = &document.level;
    let note = match level.reading {
        "not_yet_read" => "not yet read since the start",
        "valid" => "valid",
        "held" => "held: outside the sensor's specification",
        "projected" => "PROJECTED from the last reading: not measured now",
        "failed" => "FAILED: not measured for longer than the plan allows",
        _ => "in a class unknown here",
    };
    let show = |value: f32| format(f64::from(value), Length, units);
    match (level.estimate_m, level.low_m, level.high_m) {
        (Some(estimate), Some(low), Some(high)) => page.line(&format!(
            "  {} above the datum, from {} to {}, {note}",
            show(estimate),
            show(low),
            show(high)
        )),
        _ => page.line(&format!("  {note}")),
    }
}

/// One line under the level.
fn filling(document: &Document, units: UnitSystem, page: &mut Page) {
    let Some(filling) = &document.filling else { return };
    let said = match (filling.state, filling.time_to_limit_s, filling.inflow_m3_s) {
        ("filling", Some(time_s), Some(inflow)) => {
            let needed = filling.response_time_s.map_or_else(String::new, |needed_s| {
                format!(", {} are needed", format(needed_s, Time, units))
            });
            format!(
                "filling, at most {}: {} to the calculated limit level{needed}",
                format(f64::from(inflow), Flow, units),
                format(f64::from(time_s), Time, units)
            )
        }
        ("not_filling", ..) => "not filling".to_owned(),
        _ => "inflow not known yet".to_owned(),
    };
    page.line(&format!("  {said}"));
}

fn parts(document: &Document, page: &mut Page) {
    page.blank();
    if document.parts.is_empty() {
        let why = match document.plan {
            Some(_) => "none yet: the first sample with this plan is still to come",
            None => "none: without a plan nothing is judged",
        };
        page.heading(&format!("Parts: {why}"));
        return;
    }
    let thresholds = document.plan.as_ref().map_or_else(String::new, |plan| {
        let inward = plan.inward_utilisation.map(|inward| format!(", inward at {inward}"));
        format!(
            ": bounds warn at {}, alarm at {}{}",
            plan.warn_utilisation,
            plan.alarm_utilisation,
            inward.unwrap_or_default()
        )
    });
    page.heading(&format!("Utilisation of the parts, the worst first{thresholds}"));
    let names = document.parts.iter().map(|row| row.name.chars().count());
    let width = names.max().unwrap_or(0).max(4);
    page.line(&format!("  {:<width$}  estimate   bound  inward", "part"));
    for row in &document.parts {
        let inward = row
            .utilisation_inward
            .map_or_else(|| "not judged".to_owned(), |inward| format!("{inward:.3}"));
        let mark = if row.above_alarm { "  ABOVE ITS ALARM THRESHOLD" } else { "" };
        page.line(&format!(
            "  {:<width$}  {:>8.3}  {:>6.3}  {inward}{mark}",
            row.name, row.utilisation, row.utilisation_bound
        ));
    }
    openings(document, page);
}

/// Openings, by wetting and never by load.
fn openings(document: &Document, page: &mut Page) {
    let rows = document.parts.iter();
    let openings: Vec<_> =
        rows.filter_map(|row| row.opening.as_ref().map(|one| (&row.name, one))).collect();
    if openings.is_empty() {
        return;
    }
    page.blank();
    page.heading("Openings, judged by wetting and never by load");
    for (name, opening) in openings {
        page.paragraph("  ", &format!("{name}: {}", opening.says));
    }
}

fn device(document: &Document, page: &mut Page) {
    let Document { device, clock, journal, link, .. } = document;
    page.blank();
    page.heading("Device");
    page.line(&format!(
        "  identity  {}, firmware {}, protocol {}, start {}, running for {}",
        device.id,
        device.firmware,
        device.protocol,
        device.boot,
        format(device.running_s, Time, UnitSystem::Si)
    ));
    match &document.plan {
        Some(plan) => {
            page.line(&format!("  plan      {}, {} parts, unsigned", plan.tank, plan.parts));
            let sealed = utc::text(plan.serial);
            page.line(&format!("            sealed {sealed}, fingerprint {}", plan.fingerprint));
        }
        None => page.line("  plan      none that can be read"),
    }
    let battery = document
        .battery_v
        .map_or_else(|| "not measured by this board".to_owned(), |volts| format!("{volts:.2} V"));
    page.line(&format!("  battery   {battery}"));
    page.line(&format!("  clock     {}", clock_words(clock)));
    let sectors = match (journal.oldest_sector, journal.newest_sector) {
        (Some(oldest), Some(newest)) => format!("sectors {oldest} to {newest}"),
        _ => "no sector".to_owned(),
    };
    page.line(&format!(
        "  journal   {sectors}, {} of {} bytes, {} samples since the start",
        journal.bytes, journal.capacity_bytes, journal.samples
    ));
    page.line(&format!(
        "  link      {} bytes in, {} bytes out, {} damaged frames",
        link.bytes_in, link.bytes_out, link.bad_frames
    ));
}

fn clock_words(clock: &ClockRow) -> String {
    match (clock.utc_s, clock.ahead_s) {
        (Some(utc_s), Some(ahead)) => format!("{}, {}", utc::text(utc_s), ahead_words(ahead)),
        _ => "NOT SET: set it with 'strake commission'".to_owned(),
    }
}

/// How far a clock is ahead of this computer's.
pub(crate) fn ahead_words(ahead_s: i64) -> String {
    let size = format!("{} s", ahead_s.unsigned_abs());
    match ahead_s {
        0 => "as this computer's".to_owned(),
        1.. => format!("{size} ahead of this computer's"),
        _ => format!("{size} behind this computer's"),
    }
}
