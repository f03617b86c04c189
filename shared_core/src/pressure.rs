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
use crate::shape::{Cut, Face};
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

/// Force and moments of a pressure on a plane part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resultant<const N: usize> {
    /// Force, N, positive from the liquid outwards.
    pub force_n: Lane<N>,
    /// Moment about the level line through the centroid, N m, positive when it pushes the upper
    /// side outward.
    pub moment_n_m: Lane<N>,
    /// The same about the level line through the lowest point, N m.
    pub foot_moment_n_m: Lane<N>,
    /// Pressure at the part's lowest point, Pa gauge.
    pub foot_pa: Lane<N>,
    /// Force and moment about the level line through the lowest point, N and N m, on the piece
    /// below each of two cuts; zero where there is none.
    pub below: [[Lane<N>; 2]; 2],
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

    /// Resultant on a whole plane part: the one formula for its weightings at once.
    #[must_use]
    pub fn on(&self, face: &Face<'_>) -> Resultant<N> {
        self.on_pieces(face, [None; 2])
    }

    /// [`Pressure::on`], and what stands on the pieces below up to two cuts.
    #[must_use]
    // One function in every image, called for three states.
    #[inline(never)]
    pub fn on_pieces(&self, face: &Face<'_>, cuts: [Option<&Cut>; 2]) -> Resultant<N> {
        let force_n = self.gas_pa * face.shape.area_m2();
        let mut found = Resultant {
            force_n,
            moment_n_m: Lane::ZERO,
            foot_moment_n_m: force_n * face.shape.centroid_up_m(),
            foot_pa: self.gas_pa,
            below: [[Lane::ZERO; 2]; 2],
        };
        for (below, cut) in found.below.iter_mut().zip(cuts) {
            if let Some(cut) = cut {
                *below = [self.gas_pa * cut.area_m2, self.gas_pa * cut.static_m3];
            }
        }
        for surface in self.surfaces() {
            let y_m = surface.height_m - face.bottom_m;
            if y_m.none_positive() {
                continue;
            }
            let step_n_m3 = surface.step_n_m3;
            found.foot_pa = found.foot_pa + step_n_m3 * y_m.ramp();
            let wetted = face.wetted(y_m);
            found.force_n = found.force_n + step_n_m3 * wetted.q0;
            found.moment_n_m = found.moment_n_m + step_n_m3 * wetted.q1;
            found.foot_moment_n_m = found.foot_moment_n_m + step_n_m3 * wetted.q2;
            for (below, cut) in found.below.iter_mut().zip(cuts) {
                if let Some(cut) = cut {
                    let [q0, q2] = cut.wetted(face, y_m, &wetted);
                    let [force, moment] = *below;
                    *below = [force + step_n_m3 * q0, moment + step_n_m3 * q2];
                }
            }
        }
        found
    }
}

#[cfg(test)]
mod tests;
