//! The one formula.
//!
//! `z` points up from the tank datum; pressures are gauge. With gas pressure `p_g` and surfaces at
//! `h_i`, each with its step `g (rho_i - rho_(i-1))` in specific weight,
//!
//! ```text
//! p(z) = p_g + sum_i step_i max(0, h_i - z)
//! R    = p_g W + sum_i step_i M(h_i)
//! W    = integral w dz,   M(h) = integral over z < h of (h - z) w dz
//! ```
//!
//! `p` is hydrostatics; `R` follows because the load is a linear functional of the pressure with
//! the part's weighting `w`. A new elementary load is a new pair `(W, M)` and nothing else. Liquid
//! against the outside is one more surface with a negative step.

use crate::lane::Lane;
use crate::shape::{Cut, Face, Wetted};
use heapless::Vec;

/// Most surfaces of one state: four layers, and two liquids against the outside.
pub const SURFACES_MAX: usize = 6;

/// One liquid surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Surface<const N: usize> {
    /// Height above the datum, m.
    pub height_m: Lane<N>,
    /// Step in specific weight below it, N/m³; negative for liquid outside.
    pub step_n_m3: Lane<N>,
}

/// A pressure distribution: gas and a short list of surfaces.
#[derive(Clone, Debug, PartialEq)]
pub struct Pressure<const N: usize> {
    /// Gas pressure, Pa gauge.
    pub gas_pa: Lane<N>,
    surfaces: Vec<Surface<N>, SURFACES_MAX>,
}

/// Force and moment of a pressure on a plane part or a piece of it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resultant<const N: usize> {
    /// Force, N, positive from the liquid outwards.
    pub force_n: Lane<N>,
    /// Moment about the level line through the centroid, N m, positive when it pushes the upper
    /// side outward.
    pub moment_n_m: Lane<N>,
    /// Pressure at the part's lowest point, Pa gauge.
    pub foot_pa: Lane<N>,
}

impl<const N: usize> Pressure<N> {
    /// Gas alone.
    #[must_use]
    #[inline]
    pub const fn gas(gas_pa: Lane<N>) -> Self {
        Self { gas_pa, surfaces: Vec::new() }
    }

    /// Adds a surface. Beyond [`SURFACES_MAX`] nothing is added; the plan's limits keep it from
    /// happening.
    #[inline]
    pub fn add(&mut self, height_m: Lane<N>, step_n_m3: Lane<N>) {
        let _ = self.surfaces.push(Surface { height_m, step_n_m3 });
    }

    /// The surfaces in the order in which they were added.
    #[must_use]
    #[inline]
    pub fn surfaces(&self) -> &[Surface<N>] {
        &self.surfaces
    }

    /// Pressure at a height, Pa gauge. Error: 3e-7 of the largest term.
    #[must_use]
    #[expect(clippy::inline_always, reason = "the call would cost half of what it does")]
    #[inline(always)]
    pub fn at(&self, z_m: Lane<N>) -> Lane<N> {
        let mut p = self.gas_pa;
        for surface in self.surfaces() {
            p = p + surface.step_n_m3 * (surface.height_m - z_m).ramp();
        }
        p
    }

    /// Resultant on a whole plane part.
    #[must_use]
    #[inline]
    pub fn on(&self, face: &Face<'_>) -> Resultant<N> {
        self.resultant(face.shape.area_m2(), 0.0, face.bottom_m, |y| face.wetted(y))
    }

    /// Resultant on the piece of a plane part below a cut, about the centroid of the whole part.
    #[must_use]
    #[inline]
    pub fn below(&self, cut: &Cut, face: &Face<'_>) -> Resultant<N> {
        self.resultant(cut.area_m2, cut.static_m3, face.bottom_m, |y| cut.wetted(face, y))
    }

    /// `R = p_g W + sum step_i M(h_i)` for the two weightings of a plane part at once.
    #[inline]
    fn resultant(
        &self,
        area_m2: f32,
        static_m3: f32,
        bottom_m: f32,
        m: impl Fn(Lane<N>) -> Wetted<N>,
    ) -> Resultant<N> {
        let mut force_n = self.gas_pa * area_m2;
        let mut moment_n_m = self.gas_pa * static_m3;
        let mut foot_pa = self.gas_pa;
        for surface in self.surfaces() {
            let y_m = surface.height_m - bottom_m;
            if y_m.none_positive() {
                continue;
            }
            foot_pa = foot_pa + surface.step_n_m3 * y_m.ramp();
            let wetted = m(y_m);
            force_n = force_n + surface.step_n_m3 * wetted.q0;
            moment_n_m = moment_n_m + surface.step_n_m3 * wetted.q1;
        }
        Resultant { force_n, moment_n_m, foot_pa }
    }
}

#[cfg(test)]
mod tests;
