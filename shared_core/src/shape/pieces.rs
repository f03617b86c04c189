//! Shapes of several pieces: strips whose width is linear up the slope, and discs.
//!
//! Triangle, trapezoid, polygon, obround and plates with a hole are lists of these. The host works
//! the list out in f64 and rounds each number once; a hole counts with a negative width. Lengths
//! run up the slope from the lowest point, the surface stands `eta = y / sin` up it.
//!
//! Strip from `low` over `length`, width `b + g t` at `t` above its lower side, wetted up to `x`,
//! surface `d = eta - low` above it (elementary integrals, clipped first):
//!
//! * `integral (d - t) (b + g t) dt = x (b (d - x/2) + g x (d/2 - x/3))`,
//! * the same with another factor `t`: `x² (b (d/2 - x/3) + g x (d/3 - x/4))`.
//!
//! Disc of radius `r`, its widths times `aspect`, cut along its level diameter and drawn apart by
//! `middle`: the two halves of an upright obround, whose straight part is a strip. With `e` the
//! wetted share of `middle`, the lower half has `e` more head than that of a whole disc.

use super::Wetted;
use super::circle::unit;
use crate::lane::Lane;
use core::f32::consts::{FRAC_PI_2, PI};

/// Numbers of one piece.
pub const PIECE_NUMBERS: usize = 4;

/// A shape whose pieces stand in [`crate::plan::Plan::numbers`], strips first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pieces {
    /// Area, m².
    pub area_m2: f32,
    /// Extent up the slope, m.
    pub length_m: f32,
    /// Centroid above the lowest point, up the slope, m.
    pub centroid_m: f32,
    /// Sine of the slope (above zero, at most one).
    pub sine: f32,
    /// Height of the highest above the lowest point, m.
    pub(super) rise_m: f32,
    /// Place of the first number.
    pub first: u16,
    /// Number of strips.
    pub strips: u8,
    /// Number of discs.
    pub discs: u8,
}

impl Pieces {
    /// A shape of `strips` and `discs`, whose numbers begin at place `first` of the plan's:
    ///
    /// * a strip: lower side up the slope (m), length (m), width there (m), its growth (m/m),
    /// * a disc: lowest point up the slope (m), radius (m), width over length, middle (m).
    #[must_use]
    pub fn new(
        [area_m2, length_m, centroid_m]: [f32; 3],
        sine: f32,
        first: u16,
        [strips, discs]: [u8; 2],
    ) -> Self {
        Self { area_m2, length_m, centroid_m, sine, rise_m: length_m * sine, first, strips, discs }
    }

    /// How many numbers it has in the plan.
    #[must_use]
    pub fn count(&self) -> usize {
        PIECE_NUMBERS * (usize::from(self.strips) + usize::from(self.discs))
    }

    /// Its numbers in the plan, four by four: strips, then discs; none where the plan is short.
    #[must_use]
    pub fn pieces<'a>(&self, numbers: &'a [f32]) -> [&'a [[f32; PIECE_NUMBERS]]; 2] {
        let from = numbers.get(usize::from(self.first)..).unwrap_or(&[]);
        let (pieces, _) = from.as_chunks();
        let strips = usize::from(self.strips);
        let discs = pieces.get(strips..).unwrap_or(&[]);
        [pieces.get(..strips).unwrap_or(&[]), discs.get(..usize::from(self.discs)).unwrap_or(&[])]
    }

    /// See [`super::Face::wetted`].
    #[inline(never)]
    pub(super) fn wetted<const N: usize>(&self, numbers: &[f32], y_m: Lane<N>) -> Wetted<N> {
        let [strips, discs] = self.pieces(numbers);
        let surface_m = y_m / Lane::splat(self.sine);
        let [mut q0, mut q1, mut q2] = [Lane::ZERO; 3];
        for strip in strips {
            let [low_m, ..] = strip;
            let (part, lever) = wetted_strip(strip, surface_m - *low_m);
            q0 = q0 + part;
            q1 = q1 + part * (*low_m - self.centroid_m) + lever;
            q2 = q2 + part * *low_m + lever;
        }
        for disc in discs {
            let [part, lever, foot] = wetted_disc(disc, self.centroid_m, surface_m);
            q0 = q0 + part;
            q1 = q1 + lever;
            q2 = q2 + foot;
        }
        Wetted { q0: q0 * self.sine, q1: q1 * self.sine, q2: q2 * self.sine }
    }

    /// Area and its first moment about the centroid, as the pieces give them.
    #[must_use]
    pub fn moments(&self, numbers: &[f32]) -> [f32; 2] {
        let [strips, discs] = self.pieces(numbers);
        let (mut area_m2, mut first_m3) = (0.0, 0.0);
        for &[low_m, length_m, width_m, growth] in strips {
            let end = growth * length_m;
            let area = length_m * (width_m + 0.5 * end);
            let lever = length_m * length_m * (0.5 * width_m + end * (1.0 / 3.0));
            area_m2 += area;
            first_m3 += area * (low_m - self.centroid_m) + lever;
        }
        for &[low_m, radius_m, aspect, middle_m] in discs {
            let area = PI * radius_m * radius_m * aspect;
            area_m2 += area;
            first_m3 += area * (low_m + radius_m + 0.5 * middle_m - self.centroid_m);
        }
        [area_m2, first_m3]
    }
}

/// The two integrals of a strip under a surface `d` above its lower side, the second about that
/// side.
#[inline]
fn wetted_strip<const N: usize>(
    &[_, length_m, width_m, growth]: &[f32; PIECE_NUMBERS],
    d: Lane<N>,
) -> (Lane<N>, Lane<N>) {
    let x = d.ramp().at_most(Lane::splat(length_m));
    let (half, third) = (d * 0.5, x * (1.0 / 3.0));
    let grown = x * growth;
    let first = (d - x * 0.5) * width_m + grown * (half - third);
    let second = (half - third) * width_m + grown * (d * (1.0 / 3.0) - x * 0.25);
    (x * first, x * x * second)
}

/// The integrals of a disc: the second about the line `centroid_m` up the slope, the third about
/// the shape's lowest point.
#[inline]
fn wetted_disc<const N: usize>(
    &[low_m, radius_m, aspect, middle_m]: &[f32; PIECE_NUMBERS],
    centroid_m: f32,
    surface_m: Lane<N>,
) -> [Lane<N>; 3] {
    let d = surface_m - low_m;
    let apart = (d - radius_m).ramp().at_most(Lane::splat(middle_m));
    let a = (d - apart) / Lane::splat(radius_m);
    let [m, m1, m2] = unit(a);
    let square = aspect * radius_m * radius_m;
    let cube = square * radius_m;
    let whole = m * cube;
    let first = whole + apart * (square * FRAC_PI_2);
    // The upper half carries what the lower, covered, does not.
    let u = a - 1.0;
    let upper = u.positive_selects(m - u * FRAC_PI_2 - 2.0 / 3.0, Lane::ZERO) * cube;
    let drawn = upper * middle_m;
    let second = m1 * (cube * radius_m) - apart * (cube * (2.0 / 3.0))
        + first * (low_m + radius_m - centroid_m)
        + drawn;
    let third =
        m2 * (cube * radius_m) + apart * (cube * (FRAC_PI_2 - 2.0 / 3.0)) + first * low_m + drawn;
    [first, second, third]
}
