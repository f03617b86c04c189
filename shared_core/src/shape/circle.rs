//! The disc.
//!
//! With radius `r` and `u = (h - z_c) / (r sin(slope))` the two integrals are
//! `q0 = r³ sin m(u)` and `q1 = r⁴ sin m1(u)`,
//!
//! * `m(u)  = integral from -1 to u of (u - t) 2 sqrt(1 - t²) dt`, with `m(u) - m(-u) = pi u`,
//! * `m1(u) = integral from -1 to u of (u - t) t 2 sqrt(1 - t²) dt`,
//!   with `m1(u) + m1(-u) = -pi/4`.
//!
//! So only a surface below the centre needs work. There, with `a = 1 + u` in [0, 1], both are
//! `a² sqrt(a)` times a function that is analytic in `a`: one square root and a short polynomial.
//! No arcsine stands on the load path.
//!
//! The polynomials interpolate the exact series (binomial series of `sqrt(x (2 - x))`, integrated
//! term by term) at Chebyshev nodes of [0, 1]; largest relative error 4.9e-8 and 1.3e-7.

use super::Wetted;
use crate::lane::Lane;
use core::f32::consts::PI;

/// `m(u) / a^(5/2)` on `a` in [0, 1], lowest power first.
const M: [f32; 6] =
    [7.542_472_5e-1, -8.081_373e-2, -5.594_621_3e-3, -9.631_896e-4, -6.962_577e-5, -1.393_930_5e-4];

/// `m1(u) / a^(5/2)` on `a` in [0, 1], lowest power first.
const M1: [f32; 6] =
    [-7.542_472e-1, 4.040_587e-1, -3.925_702_2e-2, -2.787_091_2e-3, -2.331_560_7e-4, -2.332_418e-4];

/// `m2(u) / a^(7/2)` on `a` in [0, 1], lowest power first.
const M2: [f32; 6] = [
    3.232_488_3e-1,
    -4.489_690_8e-2,
    -3.557_155_8e-3,
    -6.752_370_4e-4,
    -4.156_358_4e-5,
    -1.103_570_9e-4,
];

/// A disc, or an ellipse with a level axis, on a slope that is not level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Circle {
    /// Area, m².
    pub(super) area_m2: f32,
    /// Height of the highest above the lowest point, m.
    pub(super) rise_m: f32,
    /// Half the length up the slope, m.
    radius_m: f32,
    /// Half the level width over half the length up the slope.
    aspect: f32,
    /// `1 / (r sin)`, 1/m.
    per_half_rise: f32,
    /// `r³ sin`, m³.
    q0_scale: f32,
    /// `r⁴ sin`, m⁴.
    q1_scale: f32,
}

impl Circle {
    /// A disc of `radius_m` on a slope with the sine `sine` (above zero, at most one).
    #[must_use]
    pub fn new(radius_m: f32, sine: f32) -> Self {
        Self::ellipse(radius_m, 1.0, sine)
    }

    /// An ellipse of half the length `radius_m` up the slope; half its level width is `aspect`
    /// times that. Every width of the disc is scaled, and both integrals with it.
    #[must_use]
    pub fn ellipse(radius_m: f32, aspect: f32, sine: f32) -> Self {
        let half_rise_m = radius_m * sine;
        let square = radius_m * radius_m * aspect;
        Self {
            area_m2: PI * square,
            rise_m: 2.0 * half_rise_m,
            aspect,
            radius_m,
            per_half_rise: 1.0 / half_rise_m,
            q0_scale: square * half_rise_m,
            q1_scale: square * radius_m * half_rise_m,
        }
    }

    /// Radius, of an ellipse half its length up the slope, m.
    #[must_use]
    pub const fn radius_m(&self) -> f32 {
        self.radius_m
    }

    /// Width over length: one of a disc.
    #[must_use]
    pub const fn aspect(&self) -> f32 {
        self.aspect
    }

    /// See [`super::Shape::wetted`].
    #[inline]
    pub(super) fn wetted<const N: usize>(&self, y_m: Lane<N>) -> Wetted<N> {
        let [m, m1, m2] = unit(y_m * self.per_half_rise);
        Wetted { q0: m * self.q0_scale, q1: m1 * self.q1_scale, q2: m2 * self.q1_scale }
    }
}

/// `m(u)`, `m1(u)` and `m2(u)` of a surface `a = 1 + u` radii above the lowest point.
#[inline]
pub(super) fn unit<const N: usize>(a: Lane<N>) -> [Lane<N>; 3] {
    if (Lane::splat(2.0) - a).none_positive() {
        // Covered in every lane: the same bits, and nothing of what a surface on the disc needs.
        let (m, m1) = ((a - 1.0) * PI, Lane::splat(-PI / 4.0));
        return [m, m1, m + m1];
    }
    unit_on_disc(a)
}

// One function in every image, apart from what covered discs take.
#[inline(never)]
fn unit_on_disc<const N: usize>(a: Lane<N>) -> [Lane<N>; 3] {
    let u = a - 1.0;
    // Distance of the surface from the nearer end of the vertical diameter: zero when dry or
    // covered. Below the centre it is `a` itself, which keeps all digits at first wetting.
    let end = u.positive_selects(Lane::splat(2.0) - a, a).ramp();
    let [m, m1, m2] = if end.none_positive() {
        [Lane::ZERO; 3]
    } else {
        let k = end * end * end.root();
        [k * polynomial(&M, end), k * polynomial(&M1, end), k * end * polynomial(&M2, end)]
    };
    let m = u.positive_selects(u * PI + m, m);
    let m1 = u.positive_selects(Lane::splat(-PI / 4.0) - m1, m1);
    [m, m1, u.positive_selects(m + m1, m2)]
}

#[expect(clippy::inline_always, reason = "a call would cost half of what it does")]
#[inline(always)]
fn polynomial<const N: usize>(coefficients: &[f32; 6], x: Lane<N>) -> Lane<N> {
    let [c0, c1, c2, c3, c4, c5] = *coefficients;
    ((((x * c5 + c4) * x + c3) * x + c2) * x + c1) * x + c0
}

/// `integral of (h - z) over the wetted part` of a disc of radius 1 whose lowest point lies `a`
/// below the surface.
#[must_use]
#[inline]
pub fn disc_prism<const N: usize>(a: Lane<N>) -> Lane<N> {
    let [prism, ..] = unit(a);
    prism
}
