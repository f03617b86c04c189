//! The bending moment of a plate by finite elements: another theory's basis and another program
//! than the series of the first method.
//!
//! Wanted is the moment at one point in one direction. The elements are solved for the influence
//! surface of that very moment, so one solution serves every pressure: the moment is the integral
//! of the pressure times the surface, and for the bounds its positive and its negative part get
//! the one and the other pressure. Two meshes, the finer with half the step, give the figure
//! (drawn out to no step) and how far it may be off.
//!
//! Rectangles: conforming bicubic elements of four nodes (Bogner, Fox and Schmit, 1965). Circles:
//! cubic elements along the radius for each circular harmonic. Thin plates of constant rigidity
//! (Timoshenko and Woinowsky-Krieger, Theory of Plates and Shells, art. 21 and 62).

mod banded;
mod rectangle;
mod round;

use super::Figure;
use super::plane::ERROR;
use super::profile::Profiles;
use super::quadrature::{integral, stretches};
use crate::plate::{Direction, Edges, Place};
use crate::tank::{Plane, Shape};

/// What is asked of a plate.
#[derive(Clone, Copy, Debug)]
pub(super) struct Wanted {
    pub(super) edges: Edges,
    pub(super) poisson: f64,
    pub(super) place: Place,
    pub(super) direction: Direction,
}

/// Influence of the pressure along the slope on the moment, `m = integral p w ds`.
trait Influence {
    /// `w` at a place up the slope, m.
    fn at(&self, s_m: f64) -> f64;
    /// Places at which it turns.
    fn turns(&self) -> Vec<f64>;
}

/// Share of the moment of an even pressure, the largest there is, that elements, series and the
/// table of the first method may differ by, beside what is measured of each.
const METHODS: f64 = 2e-3;

/// The moment of the estimate, and the largest size of it that the bounds allow, N.
/// `series_error` is what the first method states of its own.
pub(super) fn moments(
    plane: &Plane,
    wanted: Wanted,
    profiles: &Profiles,
    series_error: f64,
) -> Option<[Figure; 2]> {
    let meshes = [1_u8, 2].map(|fine| -> Option<Loads> {
        let influence: Box<dyn Influence> = match plane.shape {
            Shape::Rectangle { width_m, length_m } => {
                Box::new(rectangle::solve([width_m, length_m], wanted, fine)?)
            }
            Shape::Circle { diameter_m } => Box::new(round::solve(0.5 * diameter_m, wanted, fine)?),
            _ => return None,
        };
        Some(loads(plane, influence.as_ref(), profiles))
    });
    let [Some(coarse), Some(fine)] = meshes else { return None };
    let figures = fine.moments.into_iter().zip(coarse.moments).map(|(fine_n, coarse_n)| {
        // The error falls with the square of the step.
        let left = (fine_n - coarse_n) / 3.0;
        let allowed = 2.0 * left.abs() + (METHODS + series_error) * fine.even + fine.off;
        Figure { value: fine_n + left, allowed }
    });
    <[Figure; 2]>::try_from(figures.collect::<Vec<_>>()).ok()
}

/// Moments at a point by one mesh, N.
struct Loads {
    /// Of the estimate, and the largest of the bounds, both by size.
    moments: [f64; 2],
    /// Under the largest pressure, held even and wherever it bends the point more.
    even: f64,
    /// What the first method's single precision may cost.
    off: f64,
}

fn loads(plane: &Plane, influence: &dyn Influence, profiles: &Profiles) -> Loads {
    let bottom_m = plane.heights.bottom_m;
    let sine = plane.sine();
    let length_m = plane.shape.length_m();
    let kinks = profiles.kinks().into_iter().filter(|_| sine > 0.0);
    let kinks = kinks.map(|z_m| (z_m - bottom_m) / sine);
    let ends = stretches(0.0, length_m, influence.turns().into_iter().chain(kinks));
    let [estimate, most, least, size, off] = integral(&ends, |s_m| {
        let z_m = bottom_m + s_m * sine;
        let w = influence.at(s_m);
        let [p, upper, lower] = profiles.all().map(|one| one.at(z_m));
        let (out, back) = if w > 0.0 { (upper, lower) } else { (lower, upper) };
        let off = ERROR * upper.abs().max(p.abs()) + profiles.rounding_pa(z_m);
        [p * w, out * w, back * w, w.abs(), off * w.abs()]
    });
    let largest_pa =
        profiles.all().map(|one| one.at(bottom_m).abs()).into_iter().fold(0.0, f64::max);
    Loads { moments: [estimate.abs(), most.abs().max(least.abs())], even: size * largest_pa, off }
}

/// A small count as a float.
fn float(count: usize) -> f64 {
    u32::try_from(count).map_or(f64::INFINITY, f64::from)
}

/// Cubic shape functions on [0, 1] with a value and a slope at each end: `[value, slope] x [start,
/// end]` of the function, its first and its second derivative. Slopes are per length `h`.
fn hermite(t: f64, h: f64) -> [[f64; 4]; 3] {
    [
        [
            1.0 - t * t * (3.0 - 2.0 * t),
            h * t * (1.0 - t) * (1.0 - t),
            t * t * (3.0 - 2.0 * t),
            -h * t * t * (1.0 - t),
        ],
        [
            -6.0 * t * (1.0 - t) / h,
            (1.0 - t) * (1.0 - 3.0 * t),
            6.0 * t * (1.0 - t) / h,
            t * (3.0 * t - 2.0),
        ],
        [
            (12.0 * t - 6.0) / (h * h),
            (6.0 * t - 4.0) / h,
            (6.0 - 12.0 * t) / (h * h),
            (6.0 * t - 2.0) / h,
        ],
    ]
}

/// Nodes and weights of Gauss's rule of four points on [0, 1].
const GAUSS: [(f64, f64); 4] = [
    (0.069_431_844_202_973_7, 0.173_927_422_568_726_9),
    (0.330_009_478_207_571_9, 0.326_072_577_431_273_1),
    (0.669_990_521_792_428_1, 0.326_072_577_431_273_1),
    (0.930_568_155_797_026_3, 0.173_927_422_568_726_9),
];

#[cfg(test)]
mod tests;
