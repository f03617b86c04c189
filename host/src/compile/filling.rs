//! The volume curve, and the limit levels for the time to limit.

use super::faults::Faults;
use super::number::{milliseconds, single};
use crate::assess::Desk;
use crate::inverse::first_reached;
use crate::tank::{TankFile, Vessel};
use std::f64::consts::PI;
use strake_core::liquid::Band;
use strake_core::plan::{CURVE_ROWS_MAX, Filling, NUMBERS_MAX, Plan};

/// A volume curve as a plan holds it.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// Height above the datum, m, and volume below it, m³; straight lines between.
    pub rows: Vec<(f64, f64)>,
    /// Largest distance of the lines from the shape's own volume, m³. Nothing for a prism; of a
    /// strapping table it says nothing, as what lies between its rows is not known.
    pub error_m3: f64,
}

/// The volume curve of a tank; `None` for loose parts.
#[must_use]
pub fn curve(file: &TankFile) -> Option<Curve> {
    if let Some(strapping) = &file.strapping {
        return Some(Curve { rows: strapping.rows.clone(), error_m3: 0.0 });
    }
    let top_m = file.vessel.height_m()?;
    let volume = |level_m: f64| file.vessel.volume_m3(level_m).map(|volume| (level_m, volume));
    if !matches!(file.vessel, Vessel::Lying { .. }) {
        return Some(Curve { rows: vec![volume(0.0)?, volume(top_m)?], error_m3: 0.0 });
    }
    // Even steps of the angle: rows crowd where the volume bends.
    let steps = u8::try_from(CURVE_ROWS_MAX - 1).unwrap_or(1);
    let row = |step: u8| {
        let angle = PI * f64::from(step) / f64::from(steps);
        volume(0.5 * top_m * (1.0 - angle.cos()))
    };
    let rows: Vec<(f64, f64)> = (0..=steps).filter_map(row).collect();
    let error_m3 = largest_error_m3(&rows, |level_m| file.vessel.volume_m3(level_m));
    Some(Curve { rows, error_m3 })
}

/// Largest distance of straight lines between rows from a volume, looked for at 64 places each.
fn largest_error_m3(rows: &[(f64, f64)], volume: impl Fn(f64) -> Option<f64>) -> f64 {
    let mut largest: f64 = 0.0;
    for pair in rows.windows(2) {
        let [(h0, v0), (h1, v1)] = *pair else { continue };
        for place in 0..=64_u8 {
            let share = f64::from(place) / 64.0;
            if let Some(own) = volume(h0 + share * (h1 - h0)) {
                largest = largest.max((v0 + share * (v1 - v0) - own).abs());
            }
        }
    }
    largest
}

/// What the device needs for the time to limit. Nothing where the file describes no volume, or
/// where no part reaches its capacity below the overflow.
pub(super) fn state(file: &TankFile, plan: &mut Plan, faults: &mut Faults) {
    let (Some(curve), Some(window_s)) = (curve(file), file.inflow_window_s()) else { return };
    let reached: Vec<Option<f32>> =
        each_liquid(plan).map(|plan| first_reached(&Desk::of_plan(plan, file), 1.0)).collect();
    if reached.iter().all(Option::is_none) {
        return;
    }
    // With a liquid that reaches no capacity the overflow ends the way up.
    let limits_m: Vec<f32> = reached.iter().map(|limit| limit.unwrap_or(plan.overflow_m)).collect();
    let rows: Vec<[f32; 2]> =
        curve.rows.iter().map(|&(height, volume)| [single(height), single(volume)]).collect();
    if plan.state_filling(milliseconds(window_s), &limits_m, &rows).is_none() {
        faults.too_many(file.name.span, "numbers of curves and tables", NUMBERS_MAX);
    }
}

/// The plan as it is judged while the product is not confirmed, with its own liquid, and with each
/// product.
pub(crate) fn each_liquid(plan: &Plan) -> impl Iterator<Item = Plan> + '_ {
    let bands = [plan.liquid.any_product(), plan.liquid.top];
    let with = |top: Band| {
        let mut one = plan.clone();
        one.liquid.top = top;
        one.liquid.products.clear();
        one.filling = Filling::NONE;
        one
    };
    bands.into_iter().chain(plan.liquid.products.iter().copied()).map(with)
}

#[cfg(test)]
mod tests;
