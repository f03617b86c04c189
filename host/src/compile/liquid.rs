//! Densities, their bands, layers, and the table over temperature.

use super::Contents;
use super::number::{located, single};
use crate::tank::{Liquid, TankFile, Thermal};
use strake_core::liquid::{Band, DensityTable, Layer, TABLE_POINTS_MAX};
use strake_core::plan::Plan;

pub(super) fn liquid(file: &TankFile, contents: &Contents, plan: &mut Plan) {
    plan.liquid.top = band(contents.density_kg_m3(), contents.band_kg_m3());
    for layer in &file.below {
        let compiled = Layer {
            surface_m: located(layer.surface_m),
            surface_uncertainty_m: located(layer.surface_uncertainty_m),
            density: of_file(&layer.liquid),
        };
        // The tank room lets no more layers through than a plan holds.
        let _ = plan.liquid.below.push(compiled);
    }
}

/// The band of a liquid as the file has it. An estimate at the very edge of a table's band widens
/// it by the difference.
pub(super) fn of_file(liquid: &Liquid) -> Band {
    band(liquid.density_kg_m3.value, liquid.band_kg_m3())
}

fn band(estimate: f64, (low, high): (f64, f64)) -> Band {
    Band {
        estimate_kg_m3: single(estimate),
        low_kg_m3: single(low.min(estimate)),
        high_kg_m3: single(high.max(estimate)),
    }
}

/// Density over temperature in straight lines, and the relative half-width of its values: the
/// stated one and what the lines leave out.
pub(super) fn table(liquid: &Liquid) -> Option<(DensityTable, f32)> {
    let points = points(liquid);
    let left_out = largest_miss(liquid, &points);
    let rounded: Vec<(f32, f32)> = points.iter().map(|&(t, d)| (single(t), single(d))).collect();
    let table = DensityTable::new(&rounded)?;
    Some((table, single(liquid.uncertainty.value + left_out)))
}

/// Points of the table that the device gets, and the largest relative distance of its straight
/// lines from the density of the liquid, over the range of service; beside the rounding to f32.
pub(crate) fn table_error(liquid: &Liquid) -> (usize, f64) {
    let points = points(liquid);
    (points.len(), largest_miss(liquid, &points))
}

fn points(liquid: &Liquid) -> Vec<(f64, f64)> {
    let (cold, hot) = (liquid.coldest_c.value, liquid.hottest_c.value);
    let at = |celsius: f64| (celsius, liquid.density_at(celsius));
    match &liquid.thermal.value {
        Thermal::None => vec![at(cold)],
        Thermal::Expansion { .. } | Thermal::Petroleum(_) => {
            let steps = u8::try_from(TABLE_POINTS_MAX - 1).unwrap_or(1);
            let width = (hot - cold) / f64::from(steps);
            (0..=steps).map(|step| at(cold + width * f64::from(step))).collect()
        }
        Thermal::Table { rows } => {
            let inner = rows.iter().copied().filter(|&(t, _)| cold < t && t < hot);
            let mut points: Vec<(f64, f64)> =
                std::iter::once(at(cold)).chain(inner).chain(std::iter::once(at(hot))).collect();
            while points.len() > TABLE_POINTS_MAX {
                points.remove(least_missed(&points));
            }
            points
        }
    }
}

/// The inner point that lies nearest to the line between its neighbours.
fn least_missed(points: &[(f64, f64)]) -> usize {
    let mut least = (f64::INFINITY, 1);
    for (index, three) in points.windows(3).enumerate() {
        let [(t0, d0), (t, d), (t1, d1)] = *three else { continue };
        let apart = (d0 + (d1 - d0) * (t - t0) / (t1 - t0) - d).abs();
        if apart < least.0 {
            least = (apart, index + 1);
        }
    }
    least.1
}

/// Largest relative distance of the lines from the liquid's own density, over the range of service.
fn largest_miss(liquid: &Liquid, points: &[(f64, f64)]) -> f64 {
    /// Places looked at in each stretch; the extreme of a smooth stretch lies near its middle.
    const PLACES: u8 = 32;
    let mut largest: f64 = 0.0;
    for pair in points.windows(2) {
        let [(t0, d0), (t1, d1)] = *pair else { continue };
        for place in 0..=PLACES {
            let share = f64::from(place) / f64::from(PLACES);
            let own = liquid.density_at(t0 + (t1 - t0) * share);
            largest = largest.max(((d0 + (d1 - d0) * share) / own - 1.0).abs());
        }
    }
    largest
}
