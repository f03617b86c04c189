//! The numbers of a cover: weightings along it, worked out in f64, and where they change sign.
//!
//! With `s` up the slope from the centroid, `F` the force and `Mc = integral p s dA`, every
//! reaction is `alpha F + beta Mc` (equilibrium of a rigid cover; bolts as an elastic group). On
//! the device the weighting is given from the lowest point, `w = foot + slope t`.

use super::number::single;
use crate::tank::{Axis, BoltLine, Bolts, FirstBolt, Hatch, Hinged, Plane, Secured};
use std::f64::consts::PI;
use strake_core::part::{BoltPattern, CoverNumbers, Held, WeightingNumbers};
use strake_core::shape::Shape;

/// A weighting `alpha + beta s`.
#[derive(Clone, Copy, Debug)]
struct Straight {
    alpha: f64,
    beta: f64,
}

/// The cover of a hatch under a local gravity; `shape` is that of its gasket line in the plan.
pub(crate) fn numbers(hatch: &Hatch, gravity_m_s2: f64, shape: &Shape) -> CoverNumbers {
    let plane = &hatch.sealed;
    let mut cover = match hatch.secured.as_ref().map(|secured| &secured.value) {
        None => CoverNumbers::default(),
        Some(Secured::Bolts(bolts)) => self::bolts(bolts, plane, shape),
        Some(Secured::Hinged(hinged)) => self::hinged(hinged, hatch),
    };
    cover.sill_above_m = if plane.is_level() {
        0.0
    } else {
        // Two outlines that are the same may differ in the last bit of their heights.
        single((hatch.opening.heights.bottom_m - plane.heights.bottom_m).max(0.0))
    };
    if let Some(mass) = hatch.mass {
        cover.weight_n = single(mass.value.kg * gravity_m_s2 * cosine(plane.slope_deg));
        cover.weight_is_measured = mass.value.measured;
    }
    cover
}

/// Cosine of a slope, exact where people write exact angles.
fn cosine(slope_deg: f64) -> f64 {
    if (slope_deg - 90.0).abs() < 1e-9 { 0.0 } else { slope_deg.to_radians().cos() }
}

/// Force of the latch that carries most, N per N m of moment; `None` without a latch.
pub(crate) fn latch_per_moment(hinged: &Hinged, sine: f64) -> Option<f64> {
    let levers: Vec<f64> = hinged.levers_m(sine).map(f64::abs).collect();
    let longest = levers.iter().copied().reduce(f64::max)?;
    Some(longest / levers.iter().map(|lever| lever * lever).sum::<f64>())
}

/// Equal bolts: bolt `i` carries `F/n + (Mc - F s_m)(s_i - s_m) / sum (s_j - s_m)²`, `s_m` their
/// mean height; only the lowest and the highest can carry most.
pub(super) fn bolts(bolts: &Bolts, plane: &Plane, shape: &Shape) -> CoverNumbers {
    let heights_m = heights(bolts);
    let count = u16::try_from(bolts.count).unwrap_or(u16::MAX);
    let n = f64::from(count);
    let mean_m = match bolts.line {
        // Evenly about the centre, whatever their number: a sum of roots of unity.
        BoltLine::Circle { .. } => 0.0,
        BoltLine::Rectangle { .. } => heights_m.iter().sum::<f64>() / n,
    };
    let squares_m2: f64 = match bolts.line {
        BoltLine::Circle { diameter_m } => 0.125 * n * diameter_m * diameter_m,
        BoltLine::Rectangle { .. } => heights_m.iter().map(|s| (s - mean_m).powi(2)).sum(),
    };
    let lowest_m = heights_m.iter().copied().fold(f64::INFINITY, f64::min);
    let highest_m = heights_m.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let shares = [lowest_m, highest_m].map(|s_m| {
        let beta = (s_m - mean_m) / squares_m2;
        Straight { alpha: 1.0 / n - mean_m * beta, beta }
    });
    if plane.is_level() || mean_m.abs() > 1e-9 * (highest_m - lowest_m) {
        let weightings = shares.map(|share| weighting(share, plane));
        return CoverNumbers { held: Held::Bolts(count), weightings, ..CoverNumbers::default() };
    }
    let pattern = BoltPattern {
        count,
        per_moment: shares.map(|share| single(share.beta)),
        cuts: shares.map(|share| cut(plane, -share.alpha / share.beta)),
    };
    pattern.cover(shape)
}

/// Heights of the bolts above the centre.
fn heights(bolts: &Bolts) -> Vec<f64> {
    let n = f64::from(bolts.count);
    let start = if bolts.first == FirstBolt::Lowest { 0.0 } else { 0.5 };
    let share = (0..bolts.count).map(|i| (start + f64::from(i)) / n);
    match bolts.line {
        BoltLine::Circle { diameter_m } => {
            share.map(|share| -0.5 * diameter_m * (2.0 * PI * share).cos()).collect()
        }
        BoltLine::Rectangle { width_m, length_m } => {
            // Along the line from the middle of the lower side; the way back is the way there.
            let half_line_m = width_m + length_m;
            let height = |share: f64| {
                let along_m = 2.0 * half_line_m * share.min(1.0 - share);
                (along_m - 0.5 * width_m).clamp(0.0, length_m) - 0.5 * length_m
            };
            share.map(height).collect()
        }
    }
}

/// A cover on a hinge or pivot.
fn hinged(hinged: &Hinged, hatch: &Hatch) -> CoverNumbers {
    let plane = &hatch.sealed;
    let sine = plane.sine();
    let opening = &hatch.opening;
    let below_m = opening.centroid_up_m();
    let above_m = opening.shape.length_m() - below_m;
    let levers: Vec<f64> = hinged.levers_m(sine).collect();
    let squares: f64 = levers.iter().map(|lever| lever * lever).sum();
    // Latches in proportion to their levers: all of them per moment.
    let per_moment = |sum: f64| if squares > 0.0 { sum / squares } else { 0.0 };
    let all = per_moment(levers.iter().map(|lever| lever.abs()).sum());
    let moment = match hinged.axis {
        Axis::Top { offset_m } => Straight { alpha: above_m + offset_m, beta: -1.0 },
        Axis::Bottom { offset_m } => Straight { alpha: below_m + offset_m, beta: 1.0 },
        Axis::Pivot { height_m } => {
            let pivot_m = (height_m.value - plane.heights.centre_m) / sine;
            // Opens the latch's side; the upper one where there is none.
            let sign = if levers.first().is_some_and(|lever| *lever < 0.0) { -1.0 } else { 1.0 };
            Straight { alpha: -sign * pivot_m, beta: sign }
        }
        Axis::Side { offset_m, pins_m } => {
            let arm_m = 0.5 * opening.shape.width_m() + offset_m;
            let latches = arm_m * all;
            let pins = pins_m.map_or([Straight { alpha: 1.0 - latches, beta: 0.0 }; 2], |pins_m| {
                let up = |height_m: f64| (height_m - plane.heights.centre_m) / sine;
                let at_heights = hinged.latches.iter().zip(&levers).filter_map(|(latch, lever)| {
                    latch.height_m.map(|height_m| lever * up(height_m))
                });
                let latch_moment_m = arm_m * per_moment(at_heights.sum());
                two_pins(pins_m.map(up), latches, latch_moment_m)
            });
            return CoverNumbers {
                held: Held::Side,
                arm_m: single(arm_m),
                weightings: pins.map(|pin| weighting(pin, plane)),
                ..CoverNumbers::default()
            };
        }
    };
    let line = Straight { alpha: 1.0 - all * moment.alpha, beta: -all * moment.beta };
    CoverNumbers {
        held: Held::Line,
        weightings: [moment, line].map(|one| weighting(one, plane)),
        ..CoverNumbers::default()
    }
}

/// Lower and upper pin, `latches` the share of the force that the latches carry and
/// `latch_moment_m` its moment about the level line through the centroid, per force:
/// `R_l + R_u = (1 - latches) F`, `R_l s_l + R_u s_u = Mc - latch_moment F`.
fn two_pins([lower_m, upper_m]: [f64; 2], latches: f64, latch_moment_m: f64) -> [Straight; 2] {
    let (apart_m, rest) = (upper_m - lower_m, 1.0 - latches);
    [
        Straight { alpha: (latch_moment_m + upper_m * rest) / apart_m, beta: -1.0 / apart_m },
        Straight { alpha: -(latch_moment_m + lower_m * rest) / apart_m, beta: 1.0 / apart_m },
    ]
}

/// From the lowest point, rounded once. An even pressure makes no moment on a level cover.
fn weighting(straight: Straight, plane: &Plane) -> WeightingNumbers {
    let Straight { alpha, beta } = straight;
    if plane.is_level() {
        return WeightingNumbers { foot: single(alpha), slope: 0.0, cut: None };
    }
    WeightingNumbers {
        foot: single(alpha - plane.centroid_up_m() * beta),
        slope: single(beta),
        cut: cut(plane, -alpha / beta),
    }
}

/// The piece of a surface below a line `s_m` up the slope from its centroid: height of the line
/// above the lowest point (m), area (m²) and first moment of area about that point (m³). `None`
/// when the line misses the surface or touches its end, or that is level.
fn cut(plane: &Plane, s_m: f64) -> Option<[f32; 3]> {
    /// Of the length: what lies beyond a line so near to an end is nothing, but for rounding.
    const TOUCH: f64 = 1e-6;
    let up_m = s_m + plane.centroid_up_m();
    let length_m = plane.shape.length_m();
    // Not a number where the weighting is nothing.
    if plane.is_level() || !(up_m > TOUCH * length_m && up_m < (1.0 - TOUCH) * length_m) {
        return None;
    }
    let [area_m2, first_m3] = plane.pieces().below(up_m);
    Some([single(up_m * plane.sine()), single(area_m2), single(first_m3)])
}

/// The weighting of the moment about the centroid; of a level surface nothing.
pub(crate) fn about_centroid(plane: &Plane) -> WeightingNumbers {
    weighting(Straight { alpha: 0.0, beta: 1.0 }, plane)
}
