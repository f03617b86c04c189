//! The centre of pressure of a plane part.

use super::document::Centre;
use crate::tank::{Plane, Shape};
use strake_core::lane::Lane;
use strake_core::pressure::Pressure;

/// Where the resultant acts. There is no such place when the force is below this share of the
/// integral of `|p|` over the part: pressures cancel, and a couple is left.
const LEAST_SHARE: f64 = 1e-3;
/// Strips of that integral, which only decides whether a centre is given.
const STRIPS: u16 = 512;
/// Nodes and weights of Gauss's rule of three points on [-1, 1]; exact up to the fifth power.
const NODES: [(f64, f64); 3] =
    [(-0.774_596_669_241_483_4, 5.0 / 9.0), (0.0, 8.0 / 9.0), (0.774_596_669_241_483_4, 5.0 / 9.0)];

/// The centre of force `force_n` with the moment `moment_n_m` about the centroid's level line.
#[must_use]
pub fn centre(plane: &Plane, pressure: &Pressure<1>, force_n: f32, moment_n_m: f32) -> Centre {
    let (force, moment) = (f64::from(force_n), f64::from(moment_n_m));
    if force.abs() <= LEAST_SHARE * magnitude(plane, pressure) {
        return Centre {
            centre_of_pressure_m: None,
            centre_of_pressure_slope_m: None,
            centre_of_pressure_sideways_m: None,
        };
    }
    // From the small moment about the centroid: no difference of large heights.
    let up_slope_m = moment / force;
    Centre {
        centre_of_pressure_m: Some(plane.heights.centre_m + up_slope_m * plane.sine()),
        centre_of_pressure_slope_m: Some(if moment == 0.0 { 0.0 } else { -up_slope_m }),
        centre_of_pressure_sideways_m: is_lopsided(plane)
            .then(|| sideways_moment(plane, pressure) / force),
    }
}

/// Whether the two sides of x = 0 may differ.
fn is_lopsided(plane: &Plane) -> bool {
    let beside = plane
        .left_out()
        .is_some_and(|hole| hole.at_m[0] != 0.0 || matches!(hole.shape, Shape::Polygon(_)));
    beside || matches!(plane.shape, Shape::Polygon(_))
}

/// `integral |p| dA`, N, by strips.
fn magnitude(plane: &Plane, pressure: &Pressure<1>) -> f64 {
    if plane.is_level() {
        return at(pressure, plane.heights.centre_m).abs() * plane.area_m2();
    }
    let strip_m = plane.shape.length_m() / f64::from(STRIPS);
    let strips = (0..STRIPS).map(|strip| {
        let up_m = (f64::from(strip) + 0.5) * strip_m;
        let z_m = plane.heights.bottom_m + up_m * plane.sine();
        at(pressure, z_m).abs() * chords(plane, up_m, |[a, b]| b - a) * strip_m
    });
    strips.sum()
}

/// `integral p x dA`, N m: by Gauss's rule between the places where the sum of the chords or the
/// pressure turns. Exact for polygons; a round opening is cut fine enough for 1e-6.
fn sideways_moment(plane: &Plane, pressure: &Pressure<1>) -> f64 {
    let sine = plane.sine();
    let length_m = plane.shape.length_m();
    let mut ends: Vec<f64> =
        (0..=STRIPS).map(|strip| f64::from(strip) / f64::from(STRIPS) * length_m).collect();
    let pieces = plane.pieces();
    ends.extend(pieces.strips.iter().flat_map(|one| [one.low_m, one.low_m + one.length_m]));
    ends.extend(pieces.discs.iter().flat_map(|one| [one.low_m, one.low_m + 2.0 * one.radius_m]));
    if sine > 0.0 {
        let surfaces = pressure.surfaces().iter();
        ends.extend(
            surfaces.map(|surface| {
                (f64::from(surface.height_m.lane(0)) - plane.heights.bottom_m) / sine
            }),
        );
    }
    ends.retain(|end| (0.0..=length_m).contains(end));
    ends.sort_by(f64::total_cmp);
    let stretches = ends.windows(2).map(|pair| {
        let (middle, half) = (0.5 * (pair[0] + pair[1]), 0.5 * (pair[1] - pair[0]));
        let nodes = NODES.iter().map(|(node, weight)| {
            let up_m = middle + half * node;
            let p = at(pressure, plane.heights.bottom_m + up_m * sine);
            weight * half * p * chords(plane, up_m, |[a, b]| 0.5 * (b * b - a * a))
        });
        nodes.sum::<f64>()
    });
    stretches.sum()
}

/// A sum over the chords `up_m` above the lowest point, those of an opening taken off.
fn chords(plane: &Plane, up_m: f64, of: impl Fn([f64; 2]) -> f64) -> f64 {
    let around: f64 = plane.shape.chords(up_m).into_iter().map(&of).sum();
    let left_out = plane.left_out().map_or(0.0, |hole| {
        let chords = hole.shape.chords(up_m - hole.at_m[1]).into_iter();
        chords.map(|chord| of(chord.map(|x| x + hole.at_m[0]))).sum()
    });
    around - left_out
}

#[expect(clippy::cast_possible_truncation, reason = "a height for the core")]
fn at(pressure: &Pressure<1>, z_m: f64) -> f64 {
    f64::from(pressure.at(Lane([z_m as f32])).lane(0))
}
