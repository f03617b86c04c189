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

/// The centre of force `force_n` with the moment `moment_n_m` about the centroid's level line.
pub(super) fn centre(
    plane: &Plane,
    pressure: &Pressure<1>,
    force_n: f32,
    moment_n_m: f32,
) -> Centre {
    let (force, moment) = (f64::from(force_n), f64::from(moment_n_m));
    if force.abs() <= LEAST_SHARE * magnitude(plane, pressure) {
        return Centre { centre_of_pressure_m: None, centre_of_pressure_slope_m: None };
    }
    // From the small moment about the centroid: no difference of large heights.
    let up_slope_m = moment / force;
    Centre {
        centre_of_pressure_m: Some(plane.heights.centre_m + up_slope_m * plane.sine()),
        centre_of_pressure_slope_m: Some(if moment == 0.0 { 0.0 } else { -up_slope_m }),
    }
}

/// `integral |p| dA`, N, by strips.
fn magnitude(plane: &Plane, pressure: &Pressure<1>) -> f64 {
    if plane.is_level() {
        return at(pressure, plane.heights.centre_m).abs() * plane.shape.area_m2();
    }
    let length_m = plane.shape.length_m();
    let strip_m = length_m / f64::from(STRIPS);
    let strips = (0..STRIPS).map(|strip| {
        let s_m = (f64::from(strip) + 0.5) * strip_m - 0.5 * length_m;
        let z_m = plane.heights.centre_m + s_m * plane.sine();
        at(pressure, z_m).abs() * width_m(&plane.shape, s_m) * strip_m
    });
    strips.sum()
}

fn width_m(shape: &Shape, s_m: f64) -> f64 {
    match *shape {
        Shape::Circle { diameter_m } => {
            2.0 * (0.25 * diameter_m * diameter_m - s_m * s_m).max(0.0).sqrt()
        }
        Shape::Rectangle { width_m, .. } => width_m,
    }
}

#[expect(clippy::cast_possible_truncation, reason = "a height for the core")]
fn at(pressure: &Pressure<1>, z_m: f64) -> f64 {
    f64::from(pressure.at(Lane([z_m as f32])).lane(0))
}
