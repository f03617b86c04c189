//! The row of one part: loads under three states, capacities, judgement.

use super::bending;
use super::centre::centre;
use super::curved;
use super::desk::Desk;
use super::document::{Capacity, Judgement, Limits, Loads, Lowest, PartRow, PartTable};
use super::request::Request;
use super::securing;
use crate::compile::{
    self, Bending, Plates, about_centroid, cover_pressure_pa, judged, without_plates,
};
use crate::inverse::{self, PartLimits};
use crate::tank::{self, Part as Stated, PartKind, Plane, Rating, TankFile};
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{
    Cover, Curved, Geometry, Held, Part, PartLoads, Weighting, acting, evaluate,
};
use strake_core::shape::{Face, Shape};

/// All rows, in the order of the file.
pub(super) fn rows(file: &TankFile, desk: &Desk, request: &Request) -> Vec<PartRow> {
    let level_m = single(request.level_m);
    let parts = file.parts.iter().zip(&desk.plan().parts);
    let states = desk.as_seen(Lane([level_m]));
    let plates_judged = judged(file);
    let judged = |((stated, part), judged): ((&Stated, &Part), &Plates)| {
        let plates = Bending::of_part(stated);
        let inward = Bending::inward_of_part(stated);
        if plates.is_empty() && inward.is_empty() {
            return row(file, desk, stated, part, level_m);
        }
        let part = without_plates(stated, part);
        let mut row = row(file, desk, stated, &part, level_m);
        bending::judge(desk, (&plates, judged.outward.as_ref()), &part, &states, &mut row);
        bending::inward::judge(desk, (&inward, judged.inward), &part, &states, &mut row);
        row
    };
    parts.zip(&plates_judged).map(judged).collect()
}

#[expect(clippy::cast_possible_truncation, reason = "a level for the core, and file values shown")]
pub(super) fn single(value: f64) -> f32 {
    value as f32
}

fn row(file: &TankFile, desk: &Desk, stated: &Stated, part: &Part, level_m: f32) -> PartRow {
    let all = desk.as_seen(Lane([level_m]));
    let computed: PartLoads<1> = evaluate(desk.plan(), part, &all);
    let states = acting(desk.plan(), part, &all);
    let plane = match stated {
        Stated::Course(_) | Stated::Curved(_) => None,
        Stated::Panel(panel) => Some(&panel.plane),
        Stated::Hatch(hatch) => Some(&hatch.sealed),
    };
    let face_of = |shape| Face { shape, numbers: &desk.plan().numbers, bottom_m: part.bottom_m };
    let moments = moments(part, face_of, plane, &states, &computed);
    let hatch = match stated {
        Stated::Hatch(hatch) => Some(hatch),
        _ => None,
    };
    let reactions = hatch.and_then(|hatch| securing::reactions(desk, hatch, part, &states));
    // What holds a cover that opens inward carries nothing while the load presses it on its seat.
    let seated = hatch.is_some_and(|hatch| hatch.seats(true));
    let rows = match &part.geometry {
        Geometry::Curved(curved) => Some(curved),
        _ => None,
    };
    let loads = |loads: &strake_core::part::Loads<1>, state: usize, bolts: bool| {
        let has = |holds: bool, value: Lane<1>| holds.then(|| value.lane(0));
        let course = matches!(part.geometry, Geometry::Course { .. });
        let held = securing::cover_of(part).map_or(Held::Otherwise, Cover::held);
        let bolted = matches!(held, Held::Bolts(_));
        let reactions = reactions.as_ref().map(|all| &all[state]);
        Loads {
            pressure_pa: loads.pressure_pa.lane(0),
            hoop_tension_n_m: has(course, loads.hoop_tension_n_m),
            tension_n_m: None,
            compression_n_m: None,
            force_n: has(!course, loads.force_n),
            force_x_n: has(rows.is_some_and(|one| one.places == 0), loads.force_x_n),
            force_z_n: has(rows.is_some(), loads.force_z_n),
            centre: None,
            moment_centroid_n_m: (!course && rows.is_none()).then_some(moments[state]),
            bolt_n: has(bolted && bolts, loads.bolt_n),
            stress_pa: None,
            moment_n_m: reactions.map(|one| one.moment_n_m),
            latch_n: reactions.and_then(|one| one.latch_n),
            hinge_n: reactions.map_or_else(Vec::new, |one| one.hinge_n.clone()),
        }
    };
    let mut estimate = loads(&computed.estimate, 0, !seated);
    let force = computed.estimate.force_n.lane(0);
    estimate.centre = plane.map(|plane| centre(plane, &states.estimate, force, moments[0]));
    let mut outward = loads(&computed.outward, 1, !seated);
    let mut inward = loads(&computed.inward, 2, true);
    if let Some(rows) = rows {
        // The size of a force has no least value that would say anything.
        inward.force_n = None;
        shell(desk, part, rows, &states, [&mut estimate, &mut outward, &mut inward]);
    }
    let line_of_action = curved::line_of_action(stated, &states);
    curved::withhold(line_of_action.as_ref(), [&mut estimate, &mut outward]);
    PartRow {
        name: stated.name().to_owned(),
        kind: stated.kind().as_str(),
        loads: estimate,
        loads_outward_bound: outward,
        loads_inward_bound: inward,
        capacity: capacities(file, stated, true),
        capacity_inward: capacities(file, stated, false),
        plates: Vec::new(),
        table: table(stated),
        opening: securing::opening(desk, part, level_m),
        line_of_action,
        judgement: judgement(desk, stated, part, &computed),
    }
}

/// The table of a curved part, as it was compiled.
fn table(stated: &Stated) -> Option<PartTable> {
    let Stated::Curved(curved) = stated else { return None };
    let table = compile::table(&curved.surface);
    let rows = table.rows.iter().map(Vec::len).sum();
    let places = table.places.len();
    Some(PartTable { rows: if places > 0 { places } else { rows }, error: table.error })
}

/// Tensions of a shell: largest and least of the estimate, the largest and the least of the bounds.
fn shell(
    desk: &Desk,
    part: &Part,
    curved: &Curved,
    states: &States<1>,
    [estimate, outward, inward]: [&mut Loads; 3],
) {
    if curved.places == 0 {
        return;
    }
    let of = |hoop| curved.tensions(hoop, &desk.plan().numbers, part.bottom_m, states);
    let both = of(true).with(&of(false));
    let [most, least] = both.estimate.map(|one| one.lane(0));
    let pressed = |tension: f32| Some(if tension < 0.0 { -tension } else { 0.0 });
    estimate.tension_n_m = Some(most);
    estimate.compression_n_m = pressed(least);
    outward.tension_n_m = Some(both.most.lane(0));
    inward.compression_n_m = pressed(both.least.lane(0));
}

/// Moment about the centroid: of the estimate, its largest and its least value.
///
/// The weighting is negative below the centroid and positive above it, so a bound takes the one
/// pressure on the lower piece and the other on the upper.
fn moments<'a>(
    part: &'a Part,
    face_of: impl Fn(&'a Shape) -> Face<'a>,
    plane: Option<&Plane>,
    states: &States<1>,
    computed: &PartLoads<1>,
) -> [f32; 3] {
    let estimate = computed.estimate.moment_centroid_n_m.lane(0);
    let (Geometry::Plane { shape, .. }, Some(plane)) = (&part.geometry, plane) else {
        return [0.0; 3];
    };
    let face = face_of(shape);
    let weighting = Weighting::new(&about_centroid(plane), &face);
    let [_, most, least] = weighting.under(&face, states);
    [estimate, most.lane(0), least.lane(0)]
}

fn judgement(desk: &Desk, stated: &Stated, part: &Part, computed: &PartLoads<1>) -> Judgement {
    let outward = part.judged_outward();
    let inward = part.judged_inward();
    let limits = inverse::of_part(desk, part);
    let lowest = limits.as_ref().and_then(|limits| limits.lowest_m);
    Judgement {
        utilisation: outward.then(|| computed.utilisation.lane(0)),
        utilisation_bound: outward.then(|| computed.utilisation_bound.lane(0)),
        utilisation_inward: inward.then(|| computed.utilisation_inward.lane(0)),
        limits: limits.as_ref().filter(|_| outward).map(shown),
        lowest: lowest.map(|lowest_level_m| Lowest { lowest_level_m }),
        thickness_for_state_m: thickness(stated, computed),
    }
}

fn shown(limits: &PartLimits) -> Limits {
    Limits {
        limited_by: limits.estimate.limited_by.as_str(),
        limit_level_m: limits.estimate.level_m,
        limit_level_bound_m: limits.bound.level_m,
        limit_intervals_m: limits.intervals.iter().map(|one| [one.low_m, one.high_m]).collect(),
        capacity_alone_m: limits.estimate.capacity_alone_m,
    }
}

/// Thickness at which the estimate's hoop tension is the capacity of the plate, allowance included;
/// the largest over the plates stated.
fn thickness(stated: &Stated, computed: &PartLoads<1>) -> Option<f64> {
    if stated.kind() != PartKind::Course {
        return None;
    }
    let tension_n_m = f64::from(computed.estimate.hoop_tension_n_m.lane(0)).max(0.0);
    let plates = stated.capacity().iter().filter_map(|rating| match &rating.capacity.value {
        tank::Capacity::Plate {
            allowable_stress_pa,
            joint_efficiency,
            corrosion_allowance_m,
            ..
        } => {
            let per_metre = allowable_stress_pa.value * joint_efficiency.value;
            Some(tension_n_m / per_metre + corrosion_allowance_m.value)
        }
        _ => None,
    });
    plates.max_by(f64::total_cmp)
}

fn capacities(file: &TankFile, stated: &Stated, outward: bool) -> Vec<Capacity> {
    let ratings = if outward { stated.capacity() } else { stated.capacity_inward() };
    let found = ratings.iter().enumerate().filter_map(|(place, rating)| {
        let one = capacity(file, stated, rating, outward)?;
        Some(Capacity { place, ..one })
    });
    found.collect()
}

/// `None` for a capacity that is none, or whose rule gives no number.
fn capacity(file: &TankFile, stated: &Stated, rating: &Rating, outward: bool) -> Option<Capacity> {
    let stated_capacity = &rating.capacity.value;
    let (load, value) = match stated_capacity {
        tank::Capacity::Plate { .. } | tank::Capacity::HoopTension { .. } => {
            ("hoop_tension_n_m", stated_capacity.hoop_tension_n_m()?)
        }
        tank::Capacity::Panel(plate) => ("stress_pa", plate.allowable_stress_pa.value),
        tank::Capacity::DesignedFor { level_m, density_kg_m3, gas_pa, remaining } => {
            let depth_m = level_m.value - stated.heights().bottom_m;
            let head = density_kg_m3.value * file.gravity.m_s2() * depth_m.max(0.0);
            let share = remaining.map_or(1.0, |remaining| remaining.value);
            ("pressure_pa", (gas_pa.value + head) * share)
        }
        tank::Capacity::Bolt { n } => ("bolt_n", *n),
        tank::Capacity::Latch { n } => ("latch_n", *n),
        tank::Capacity::Hinge { n } => ("hinge_n", *n),
        tank::Capacity::Moment { n_m } => ("moment_n_m", *n_m),
        tank::Capacity::Cover(plate) => {
            let Stated::Hatch(hatch) = stated else { return None };
            ("pressure_pa", cover_pressure_pa(plate, rating, hatch, outward).ok()?)
        }
        tank::Capacity::Force { n } => ("force_n", *n),
        tank::Capacity::Tension { n_m } => ("tension_n_m", *n_m),
        tank::Capacity::Compression { n_m } => ("compression_n_m", *n_m),
        tank::Capacity::Pressure { pa } => ("pressure_pa", *pa),
        tank::Capacity::None { .. } => return None,
    };
    let basis = rating.basis.as_ref().map_or_else(String::new, |basis| basis.value.text.clone());
    Some(Capacity { load, value: single(value), basis, place: 0 })
}
