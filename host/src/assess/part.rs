//! The row of one part: loads under three states, capacities, judgement.

use super::bending;
use super::centre::centre;
use super::desk::Desk;
use super::document::{Capacity, Judgement, Limits, Loads, Lowest, PartRow};
use super::request::Request;
use crate::compile::{Bending, centroid_cut, without_plates};
use crate::inverse::{self, PartLimits};
use crate::tank::{self, Hatch, Opens, Part as Stated, PartKind, Plane, Rating, TankFile};
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{Geometry, Part, PartLoads, acting, evaluate};
use strake_core::pressure::Pressure;
use strake_core::shape::{Cut, Face};

/// All rows, in the order of the file.
pub(super) fn rows(file: &TankFile, desk: &Desk, request: &Request) -> Vec<PartRow> {
    let states = desk.as_seen(Lane([single(request.level_m)]));
    let parts = file.parts.iter().zip(&desk.plan().parts);
    let judged = |(stated, part): (&Stated, &Part)| {
        let plates = Bending::of_part(stated);
        if plates.is_empty() {
            return row(file, desk, stated, part, &states);
        }
        let part = without_plates(stated, part);
        let mut row = row(file, desk, stated, &part, &states);
        bending::judge(desk, &plates, &part, &states, &mut row);
        row
    };
    parts.map(judged).collect()
}

#[expect(clippy::cast_possible_truncation, reason = "a level for the core, and file values shown")]
pub(super) fn single(value: f64) -> f32 {
    value as f32
}

fn row(file: &TankFile, desk: &Desk, stated: &Stated, part: &Part, all: &States<1>) -> PartRow {
    let computed: PartLoads<1> = evaluate(desk.plan(), part, all);
    let states = acting(desk.plan(), part, all);
    let plane = match stated {
        Stated::Course(_) => None,
        Stated::Panel(panel) => Some(&panel.plane),
        Stated::Hatch(hatch) => Some(&hatch.sealed),
    };
    let moments = moments(part, &desk.plan().numbers, plane, &states, &computed);
    // What holds a cover that opens inward carries nothing while the load presses it on its seat.
    let pulled =
        !matches!(stated, Stated::Hatch(Hatch { opens, .. }) if opens.value == Opens::Inward);
    let loads = |loads: &strake_core::part::Loads<1>, moment: f32, bolts: bool| {
        let (course, bolted) = match &part.geometry {
            Geometry::Course { .. } => (true, false),
            Geometry::Plane { bolts, .. } => (false, bolts.is_some()),
        };
        Loads {
            pressure_pa: loads.pressure_pa.lane(0),
            hoop_tension_n_m: course.then(|| loads.hoop_tension_n_m.lane(0)),
            force_n: (!course).then(|| loads.force_n.lane(0)),
            centre: None,
            moment_centroid_n_m: (!course).then_some(moment),
            bolt_n: (bolted && bolts).then(|| loads.bolt_n.lane(0)),
            stress_pa: None,
        }
    };
    let [moment, moment_outward, moment_inward] = moments;
    let mut estimate = loads(&computed.estimate, moment, pulled);
    estimate.centre = plane
        .map(|plane| centre(plane, &states.estimate, computed.estimate.force_n.lane(0), moment));
    PartRow {
        name: stated.name().to_owned(),
        kind: stated.kind().as_str(),
        loads: estimate,
        loads_outward_bound: loads(&computed.outward, moment_outward, pulled),
        loads_inward_bound: loads(&computed.inward, moment_inward, true),
        capacity: capacities(file, stated, stated.capacity()),
        capacity_inward: capacities(file, stated, stated.capacity_inward()),
        plates: Vec::new(),
        judgement: judgement(desk, stated, part, &computed),
    }
}

/// Moment about the centroid: of the estimate, its largest and its least value.
///
/// The weighting is negative below the centroid and positive above it, so a bound takes the one
/// pressure on the lower piece and the other on the upper.
fn moments(
    part: &Part,
    numbers: &[f32],
    plane: Option<&Plane>,
    states: &States<1>,
    computed: &PartLoads<1>,
) -> [f32; 3] {
    let estimate = computed.estimate.moment_centroid_n_m.lane(0);
    let (Geometry::Plane { shape, .. }, Some(plane)) = (&part.geometry, plane) else {
        return [0.0; 3];
    };
    let Some([y_m, area_m2, static_m3]) = centroid_cut(plane) else {
        return [estimate; 3];
    };
    let face = Face { shape, numbers, bottom_m: part.bottom_m };
    let cut = Cut::new(&face, y_m, area_m2, static_m3);
    let pieces = |pressure: &Pressure<1>| pieces(pressure, &face, &cut);
    let ([upper_low, upper_high], [lower_low, lower_high]) =
        (pieces(&states.upper), pieces(&states.lower));
    [estimate, lower_low + upper_high, upper_low + lower_high]
}

/// Moments of one pressure on the pieces below and above a cut.
fn pieces(pressure: &Pressure<1>, face: &Face<'_>, cut: &Cut) -> [f32; 2] {
    let below = pressure.below(cut, face).moment_n_m.lane(0);
    let whole = pressure.on(face).moment_n_m.lane(0);
    [below, whole - below]
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

fn capacities(file: &TankFile, stated: &Stated, ratings: &[Rating]) -> Vec<Capacity> {
    ratings.iter().filter_map(|rating| capacity(file, stated, rating)).collect()
}

/// `None` for a capacity that is none.
fn capacity(file: &TankFile, stated: &Stated, rating: &Rating) -> Option<Capacity> {
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
        tank::Capacity::Force { n } => ("force_n", *n),
        tank::Capacity::Pressure { pa } => ("pressure_pa", *pa),
        tank::Capacity::None { .. } => return None,
    };
    let basis = rating.basis.as_ref().map_or_else(String::new, |basis| basis.value.text.clone());
    Some(Capacity { load, value: single(value), basis })
}
