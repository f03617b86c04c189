//! Numbers of the pieces into which a weighting's change of sign cuts a cover.
//!
//! Bolt `i` of `n` on a circle of radius `R` carries the weighting `(1 + 2 s s_i / R²) / n` along
//! the cover (`sum s_j² = n R²/2` for three bolts or more), see [`strake_core::part::Bolts`]. It
//! changes sign at the kern line `s = -R² / (2 s_i)`.

use super::number::single;
use crate::tank::{Bolts, FirstBolt, Pieces, Plane, Shape};
use std::f64::consts::PI;
use strake_core::part::BoltPattern;

/// The bolts of a cover on a slope with the sine `sine`; zero for a level one, whose even pressure
/// makes no moment and relieves no bolt.
pub(super) fn pattern(bolts: &Bolts, shape: &Shape, sine: f64) -> BoltPattern {
    let radius_m = 0.5 * bolts.circle_diameter_m;
    let extremes_m = extremes(bolts.count, bolts.first).map(|share| share * radius_m);
    let square_sum = 0.5 * f64::from(bolts.count) * radius_m * radius_m;
    let cuts = extremes_m.map(|s_m| {
        let kern_m = -radius_m * radius_m / (2.0 * s_m);
        cut(shape, sine, kern_m)
    });
    BoltPattern {
        count: u16::try_from(bolts.count).unwrap_or(u16::MAX),
        per_moment: extremes_m.map(|s_m| single(s_m / square_sum)),
        cuts,
    }
}

/// Height of the lowest and of the highest bolt above the centre, as a share of the radius.
///
/// With an odd number only one end of the upright diameter has a bolt.
fn extremes(count: u32, first: FirstBolt) -> [f64; 2] {
    let beside = (PI / f64::from(count)).cos();
    match (first, count.is_multiple_of(2)) {
        (FirstBolt::Lowest, true) => [-1.0, 1.0],
        (FirstBolt::Lowest, false) => [-1.0, beside],
        (FirstBolt::Astride, true) => [-beside, beside],
        (FirstBolt::Astride, false) => [-beside, 1.0],
    }
}

/// The piece of a shape below a line `s_m` up the slope from its centroid: height of the line above
/// the lowest point (m), area (m²) and first moment of area (m³). `None` when the line misses the
/// shape, or the shape is level.
fn cut(shape: &Shape, sine: f64, s_m: f64) -> Option<[f32; 3]> {
    let (length_m, centroid_m) = (shape.length_m(), shape.centroid_m()[1]);
    below(&shape.pieces(), sine, [length_m, centroid_m], s_m)
}

/// The same of a shape of given pieces, length and height of the centroid up the slope.
fn below(
    pieces: &Pieces,
    sine: f64,
    [length_m, centroid_m]: [f64; 2],
    s_m: f64,
) -> Option<[f32; 3]> {
    let up_m = s_m + centroid_m;
    if sine <= 0.0 || up_m <= 0.0 || up_m >= length_m {
        return None;
    }
    let [area_m2, first_m3] = pieces.below(up_m);
    let static_m3 = first_m3 - centroid_m * area_m2;
    Some([single(up_m * sine), single(area_m2), single(static_m3)])
}

/// What lies below the centroid: there the weighting of the moment about it changes its sign.
pub(crate) fn centroid_cut(plane: &Plane) -> Option<[f32; 3]> {
    let sizes = [plane.shape.length_m(), plane.centroid_up_m()];
    below(&plane.pieces(), plane.sine(), sizes, 0.0)
}
