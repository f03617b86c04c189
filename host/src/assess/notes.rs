//! What is not judged, and what the reader must know beside the numbers.

use super::desk::Desk;
use super::document::{NotJudged, PartRow};
use super::judged;
use super::part::single;
use super::request::{Request, Source};
use super::securing;
use crate::compile::{Bending, HEIGHT_MAX_M, Inward, Judged, cover_pressure_pa, judged};
use crate::inverse::first_reached;
use crate::tank::{Axis, Capacity, Hatch, Part as Stated, Rating, Secured, TankFile, Vessel};
use crate::units::Quantity::{Length, Pressure, Temperature};
use crate::units::{UnitSystem, format};
use strake_core::lane::Lane;
use strake_core::part::{Geometry, Part, evaluate};

/// The line under every output that shows a load.
pub const FIELD_CHECK: &str = "field check: it replaces no licensed inspection and is no overfill \
                               prevention system";

/// What is not judged, part by part, then the bare stretches of the shell.
pub(crate) fn not_judged(file: &TankFile, desk: &Desk, units: UnitSystem) -> Vec<NotJudged> {
    let mut found = Vec::new();
    for (stated, part) in file.parts.iter().zip(&desk.plan().parts) {
        let mut note = |why: String| found.push(NotJudged { name: stated.name().to_owned(), why });
        for reason in reasons(stated.capacity()) {
            note(format!("outward: {reason}"));
        }
        for reason in reasons(stated.capacity_inward()) {
            note(format!("inward: {reason}"));
        }
        if let Stated::Hatch(hatch) = stated {
            hatch_notes(hatch, &mut note);
            turning_notes(desk, hatch, part, &mut note);
        }
        if let Geometry::Curved(curved) = &part.geometry
            && curved.places > 0
        {
            shell_notes(desk, part, &mut note);
        }
        let said = !stated.capacity_inward().is_empty();
        if !said && may_turn_inward(desk, part) {
            note("inward: the load may turn inward and no inward capacity is stated".to_owned());
        }
    }
    for (low_m, high_m) in file.uncovered_shell() {
        found.push(NotJudged {
            name: format!(
                "shell {} to {}",
                format(low_m, Length, units),
                format(high_m, Length, units)
            ),
            why: "no course covers it".to_owned(),
        });
    }
    found
}

/// Plates for which no number is given.
pub(crate) fn plates_not_judged(parts: &[PartRow]) -> Vec<NotJudged> {
    let mut found = Vec::new();
    for row in parts {
        let withheld = row
            .plates
            .iter()
            .filter_map(|plate| plate.why_not.as_ref().map(|why| format!("{}: {why}", plate.side)));
        for why in withheld {
            found.push(NotJudged { name: row.name.clone(), why });
        }
    }
    found
}

/// By what a plan judges plates, in words.
fn by_what(judged: &Judged, units: UnitSystem) -> String {
    match judged {
        Judged::Moments { tables, by_deflection, .. } => {
            let points = tables.points.len();
            format!(
                "the plate outward by its true moments at {points} governing point{}, at most \
                 {:.1} % above the largest checked one from half wetted up and never below it{}",
                if points == 1 { "" } else { "s" },
                (1e3 * tables.excess).ceil() / 10.0,
                if *by_deflection {
                    "; its limit is where it sags by half its thickness"
                } else {
                    ""
                }
            )
        }
        Judged::Level(pa) => format!(
            "the level plate outward by its even pressure, up to {}",
            format(*pa, Pressure, units)
        ),
        Judged::Substitute(pa, why) => format!(
            "the plate outward by the pressure at its lowest edge taken as even (conservative \
             substitute: {why}), up to {}",
            format(*pa, Pressure, units)
        ),
    }
}

/// What the numbers of plates leave out, and how the device judges them.
pub(crate) fn plate_cautions(file: &TankFile, units: UnitSystem, who: &str) -> Vec<String> {
    let (mut found, mut upright) = (Vec::new(), false);
    for (part, judged) in file.parts.iter().zip(judged(file)) {
        let (plates, inward) = (Bending::of_part(part), Bending::inward_of_part(part));
        let name = part.name();
        match &judged.outward {
            Some(judged) => found.push(format!("{name}: {who} {}", by_what(judged, units))),
            None if plates.is_empty() => {}
            None => found.push(format!("{name}: the device does not judge the plate")),
        }
        match judged.inward {
            Some(Inward::Suction(pa)) => found.push(format!(
                "{name}: {who} the plate inward by the suction at its highest edge taken as even, \
                 up to {}",
                format(pa, Pressure, units)
            )),
            Some(Inward::Unjudged(why)) => {
                found.push(format!("{name}: the device does not judge the plate inward: {why}"));
            }
            None if inward.is_empty() => {}
            None => found.push(format!("{name}: the device does not judge the plate inward")),
        }
        for bending in plates.into_iter().chain(inward) {
            if bending.elastic.taken_as_steel {
                found.push(format!(
                    "{name}: no material is stated, the plate is taken as steel, 200 GPa and 0.3"
                ));
            }
            upright |= matches!(part, Stated::Panel(panel) if !panel.plane.is_level());
        }
    }
    if upright && matches!(file.vessel, Vessel::Box { .. }) {
        let pull = "plates of a box wall: bending alone; the pull of the neighbouring walls' \
                    reactions comes on top as direct tension";
        found.push(pull.to_owned());
    }
    found
}

fn reasons(ratings: &[Rating]) -> impl Iterator<Item = &str> {
    ratings.iter().filter_map(|rating| match &rating.capacity.value {
        Capacity::None { reason } => Some(reason.as_str()),
        _ => None,
    })
}

/// A cover is held by something and is something: what has no capacity is not judged.
fn hatch_notes(hatch: &Hatch, note: &mut impl FnMut(String)) {
    for (side, ratings, outward) in
        [("outward", &hatch.capacity, true), ("inward", &hatch.capacity_inward, false)]
    {
        withheld(hatch, ratings, (side, outward), note);
        // An inward load without any capacity is noted where it may come.
        if ratings.is_empty() {
            continue;
        }
        let has = |keys: &[&str]| {
            ratings.iter().any(|rating| keys.contains(&rating.capacity.value.key()))
        };
        if has(&["none", "designed_for"]) {
            continue;
        }
        if !has(&["force", "pressure", "cover"]) {
            note(format!("{side}: the cover plate, no capacity is stated"));
        }
        if hatch.seats(outward) {
            continue;
        }
        match hatch.secured.as_ref().map(|secured| &secured.value) {
            None => note(format!("{side}: what secures the cover, no capacity is stated")),
            Some(Secured::Bolts(_)) if !has(&["bolt"]) => {
                note(format!("{side}: the bolts, no capacity is stated"));
            }
            Some(Secured::Bolts(_)) => {}
            Some(Secured::Hinged(hinged)) => {
                let (latch, hinge) = match hinged.axis {
                    Axis::Pivot { .. } if hinged.latches.is_empty() => {
                        ("what holds the cover against the moment", "the pivot")
                    }
                    Axis::Pivot { .. } => ("the latch", "the pivot"),
                    _ => ("the latch", "the hinge"),
                };
                if !has(&["latch", "moment"]) {
                    note(format!("{side}: {latch}, no capacity is stated"));
                }
                if !has(&["hinge"]) {
                    note(format!("{side}: {hinge}, no capacity is stated"));
                }
            }
        }
    }
}

/// Covers whose rule gives no number, with the reason.
fn withheld(
    hatch: &Hatch,
    ratings: &[Rating],
    (side, outward): (&str, bool),
    note: &mut impl FnMut(String),
) {
    for rating in ratings {
        if let Capacity::Cover(plate) = &rating.capacity.value
            && let Err(why) = cover_pressure_pa(plate, rating, hatch, outward)
        {
            note(format!("{side}: the cover plate, {why}"));
        }
    }
}

/// A pin or a pivot that is loaded the other way than the one it is rated for.
fn turning_notes(desk: &Desk, hatch: &Hatch, part: &Part, note: &mut impl FnMut(String)) {
    let [pin, pivot] = securing::turns_back(desk, hatch, part);
    let stated = |keys: &[&str]| {
        let ratings = hatch.capacity_inward.iter();
        ratings.into_iter().any(|rating| keys.contains(&rating.capacity.value.key()))
    };
    if pin && !stated(&["hinge", "none"]) {
        let what = "inward: a pin or the hinge line may be pushed inward, no inward capacity of \
                    the hinge is stated";
        note(what.to_owned());
    }
    if pivot && !stated(&["moment", "latch", "none"]) {
        let what = "inward: the moment about the pivot may turn inward, no inward capacity for it \
                    is stated";
        note(what.to_owned());
    }
}

/// A shell holds its rim and may be pressed together in places.
fn shell_notes(desk: &Desk, part: &Part, note: &mut impl FnMut(String)) {
    note("the ring at its rim, which the shell pulls at".to_owned());
    let range = desk.range();
    let pressed =
        [range.low_m, part.bottom_m, part.top_m, range.high_m].into_iter().any(|level_m| {
            let states = desk.at_true_level(Lane([level_m]));
            evaluate(desk.plan(), part, &states).inward.hoop_tension_n_m.lane(0) < 0.0
        });
    if pressed && part.inward.hoop_tension_n_m.is_none() {
        note("compression: it is pressed together in places and no capacity is stated".to_owned());
    }
}

/// Whether the least load on an empty tank is an inward one.
fn may_turn_inward(desk: &Desk, part: &Part) -> bool {
    let empty = desk.at_true_level(Lane([desk.range().low_m]));
    let inward = evaluate(desk.plan(), part, &empty).inward;
    inward.pressure_pa.lane(0) < 0.0 || inward.force_n.lane(0) < 0.0
}

/// The caution of every output of a plan that stands on an assumed capacity.
pub const PROVISIONAL: &str = "PROVISIONAL: a capacity of the plan is assumed";

/// The cautions, the most pressing first.
pub(crate) fn cautions(
    file: &TankFile,
    request: &Request,
    desk: &Desk,
    parts: &[PartRow],
    units: UnitSystem,
) -> Vec<String> {
    let mut found = Vec::new();
    if file.is_provisional() {
        found.push(format!("PROVISIONAL: {}", assumed(file).join("; ")));
    }
    let (outward, inward) = judged::thresholds(file, desk);
    for (row, side, bound) in judged::over(file, desk, parts) {
        let threshold = if side == "outward" { outward } else { inward };
        let of = if file.alarm.is_some() { "its alarm threshold" } else { "its capacity" };
        found.push(format!(
            "{}: the {side} bound of the utilisation, {bound:.3}, is at or above {of}, {threshold}",
            row.name
        ));
    }
    if parts.iter().all(|row| row.judgement.utilisation_bound.is_none()) {
        found.push("no part is judged outward".to_owned());
    }
    state_cautions(file, request, units, &mut found);
    found.extend(chatter(file, desk, units));
    file_cautions(file, units, &mut found);
    found.extend(plate_cautions(file, units, "the device judges"));
    found.push(FIELD_CHECK.to_owned());
    found
}

/// Every assumed capacity with the part that it stands for.
#[must_use]
pub fn assumed(file: &TankFile) -> Vec<String> {
    let mut found = Vec::new();
    for part in &file.parts {
        for rating in part.capacity().iter().chain(part.capacity_inward()) {
            if let Some(basis) = rating.basis.as_ref().filter(|_| rating.is_assumed()) {
                found.push(format!("{}: {}", part.name(), basis.value.text));
            }
        }
    }
    found
}

fn state_cautions(file: &TankFile, request: &Request, units: UnitSystem, found: &mut Vec<String>) {
    let level = format(request.level_m, Length, units);
    match request.level_source {
        Source::Overflow => {
            found.push(format!("no level stated: taken at the overflow, {level}"));
        }
        Source::ShellTop => {
            found.push(format!("no level stated: taken at the shell top, {level}"));
        }
        Source::Override => {
            let overflow = file.fill.overflow_m.filter(|top| request.level_m > top.value);
            if let Some(overflow) = overflow {
                let top = format(overflow.value, Length, units);
                found.push(format!("the level, {level}, stands above the overflow, {top}"));
            }
        }
    }
    let liquid = &request.contents.liquid;
    let (cold, hot) = (liquid.coldest_c.value, liquid.hottest_c.value);
    if !(cold..=hot).contains(&request.contents.temperature_c) {
        found.push(format!(
            "the temperature, {}, lies outside the liquid's range, {} to {}",
            format(request.contents.temperature_c, Temperature, units),
            format(cold, Temperature, units),
            format(hot, Temperature, units)
        ));
    }
}

/// Thresholds whose deadband is narrower than what the sensor may waver.
fn chatter(file: &TankFile, desk: &Desk, units: UnitSystem) -> Vec<String> {
    let Some(alarms) = &file.alarm else { return Vec::new() };
    let pairs = [("warn", &alarms.warn), ("alarm", &alarms.alarm)];
    let said = pairs.into_iter().filter_map(|(name, threshold)| {
        let (at, deadband) = (threshold.utilisation.value, threshold.deadband.value);
        let reached_m = first_reached(desk, single(at))?;
        let gone_m = first_reached(desk, single(at - deadband))?;
        let apart_m = f64::from(reached_m) - f64::from(gone_m);
        let [(_, half_m), ..] = desk.half_widths_m(reached_m);
        (apart_m < 2.0 * half_m).then(|| {
            format!(
                "{name}: its deadband, {deadband}, is {} of level, less than the sensor's +-{}: \
                 the alarm may come and go",
                format(apart_m, Length, units),
                format(half_m, Length, units)
            )
        })
    });
    said.collect()
}

fn file_cautions(file: &TankFile, units: UnitSystem, found: &mut Vec<String>) {
    for part in &file.parts {
        let as_new = part.capacity().iter().any(|rating| {
            matches!(rating.capacity.value, Capacity::DesignedFor { remaining: None, .. })
        });
        if as_new {
            found.push(format!("{}: designed-for is taken as new, no loss is stated", part.name()));
        }
    }
    if !file.outside.is_empty() {
        let still = "liquid outside is taken at rest: no wave of a tank that bursts";
        found.push(still.to_owned());
    }
    if file.level.is_none() {
        found.push("no [level]: the bounds hold no uncertainty of a level sensor".to_owned());
    }
    if file.alarm.is_none() {
        found.push("no [alarm]: bounds are compared with the capacity itself".to_owned());
    }
    if file.vessel.height_m().is_none() && file.fill.overflow_m.is_none() {
        let highest = format(HEIGHT_MAX_M, Length, units);
        found.push(format!("no shell and no overflow: levels are looked at up to {highest}"));
    }
}
