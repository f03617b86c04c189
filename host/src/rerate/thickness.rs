//! Thickness that a course needs at a level, and what is left of its plate's life.

use super::document::{Required, Thickness};
use super::life;
use super::part::Sides;
use crate::assess::Desk;
use crate::tank::{Capacity, Part as Stated, Rating, Vessel};
use strake_core::lane::Lane;
use strake_core::part::{Part, evaluate};

/// Of the plate that needs most beside what it has; `None` of a part without one.
pub(super) fn of(
    sides: &Sides<'_>,
    stated: &Stated,
    (old, new): (&Part, &Part),
) -> Option<Thickness> {
    let tensions = [tension_n_m(sides, sides.old, old), tension_n_m(sides, sides.new, new)];
    let plates = stated.capacity().iter();
    let found = plates.filter_map(|rating| plate(sides, stated, rating, tensions));
    let spare = |one: &Thickness| one.now_m - one.new.required_with_allowance_m;
    found.min_by(|a, b| spare(a).total_cmp(&spare(b)))
}

/// Hoop tension of the estimate at the level of the question, N/m; nothing when it is inward.
fn tension_n_m(sides: &Sides<'_>, desk: &Desk, part: &Part) -> f64 {
    let states = desk.at_true_level(Lane([sides.level_m()]));
    let loads = evaluate(desk.plan(), part, &states);
    f64::from(loads.estimate.hoop_tension_n_m.lane(0)).max(0.0)
}

fn plate(
    sides: &Sides<'_>,
    stated: &Stated,
    rating: &Rating,
    [old, new]: [f64; 2],
) -> Option<Thickness> {
    let Stated::Course(course) = stated else { return None };
    let Capacity::Plate {
        thickness_m,
        corrosion_allowance_m,
        allowable_stress_pa,
        joint_efficiency,
    } = &rating.capacity.value
    else {
        return None;
    };
    let (now_m, allowance_m) = (thickness_m.value, corrosion_allowance_m.value);
    let rule = course.design_point.rule.as_ref().map(|rule| rule.value.as_str());
    let diameter_m = match sides.file.vessel {
        Vessel::Cylinder { diameter_m, .. } => diameter_m.value,
        _ => 0.0,
    };
    let floor = rule.and_then(|rule| floor(rule, diameter_m));
    let required = |tension_n_m: f64| {
        let calculated_m = tension_n_m / (allowable_stress_pa.value * joint_efficiency.value);
        let required_m = floor.map_or(calculated_m, |(floor_m, _)| calculated_m.max(floor_m));
        let remaining_life = course.corrosion_rate_m_s.map(|rate| {
            let plate = life::Plate { now_m, allowance_m, required_m, rate_m_s: rate.value };
            life::of(plate, rating.basis.as_ref().map(|basis| basis.value.text.as_str()))
        });
        Required {
            calculated_m,
            required_m,
            required_with_allowance_m: required_m + allowance_m,
            remaining_life,
        }
    };
    Some(Thickness {
        now_m,
        corrosion_allowance_m: allowance_m,
        floor_m: floor.map(|(floor_m, _)| floor_m),
        floor_from: floor.map(|(_, from)| from),
        old: required(old),
        new: required(new),
    })
}

/// Least thickness by the rule that the file names, m, and its clause.
///
/// API 653 4.3.3.1: 0.1 in. API 650 5.6.1.1, nominal, by diameter: 5 mm below 15 m, 6 mm below
/// 36 m, 8 mm to 60 m, else 10 mm (SI table, from memory).
pub(super) fn floor(rule: &str, diameter_m: f64) -> Option<(f64, &'static str)> {
    if rule.contains("653") {
        return Some((2.54e-3, "API 653 4.3.3.1"));
    }
    if !rule.contains("650") {
        return None;
    }
    let floor_m = match diameter_m {
        d if d < 15.0 => 5e-3,
        d if d < 36.0 => 6e-3,
        d if d <= 60.0 => 8e-3,
        _ => 10e-3,
    };
    Some((floor_m, "API 650 5.6.1.1"))
}
