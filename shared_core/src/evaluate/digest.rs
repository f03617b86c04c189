//! The running hash over the bits of every result.
//!
//! Per sample, all loads, bounds and utilisations are folded into two 32-bit words, lane by lane,
//! by exclusive or, rotation and addition. The two words, and every move of an alarm machine, are
//! then folded into one running 64-bit number. It stands in each checkpoint, each alarm entry and
//! each collection; the replay recomputes it. It finds a differing bit; it is no seal.

use crate::lane::Lane;
use crate::part::{Cover, Geometry, Held, Loads, Part, PartLoads};

/// Two words per lane over all results of one sample.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Digest<const N: usize> {
    a: [u32; N],
    b: [u32; N],
}

impl<const N: usize> Digest<N> {
    pub(super) const fn new() -> Self {
        Self { a: [0x5354_5241; N], b: [0x4B45_4A31; N] }
    }

    /// Folds the bits of one number in.
    fn word(&mut self, value: Lane<N>) {
        for ((a, b), x) in self.a.iter_mut().zip(&mut self.b).zip(value.0) {
            // Adding zero makes the two zeros one.
            *a = (*a ^ (x + 0.0).to_bits()).rotate_left(11).wrapping_add(*b);
            *b = b.rotate_left(7) ^ *a;
        }
    }

    /// Folds all results of a part in.
    // One function in every image, so that its instructions can be told from those of the loads.
    #[inline(never)]
    pub(super) fn add(&mut self, part: &Part, loads: &PartLoads<N>) {
        match &part.geometry {
            Geometry::Course { .. } => {
                for one in [&loads.estimate, &loads.outward, &loads.inward] {
                    self.word(one.hoop_tension_n_m);
                }
            }
            Geometry::Plane { cover, .. } => {
                self.word(loads.estimate.moment_centroid_n_m);
                let held = cover.as_ref().map_or(Held::Otherwise, Cover::held);
                for one in [&loads.estimate, &loads.outward, &loads.inward] {
                    self.plane(one, held);
                }
            }
            Geometry::Curved(_) => {
                for one in [&loads.estimate, &loads.outward, &loads.inward] {
                    self.plane(one, Held::Otherwise);
                    self.word(one.force_x_n);
                    self.word(one.force_z_n);
                    self.word(one.hoop_tension_n_m);
                }
            }
        }
        self.word(loads.utilisation);
        self.word(loads.utilisation_bound);
        self.word(loads.utilisation_inward);
    }

    fn plane(&mut self, loads: &Loads<N>, held: Held) {
        self.word(loads.pressure_pa);
        self.word(loads.force_n);
        if held != Held::Otherwise {
            self.word(loads.bolt_n);
        }
        if matches!(held, Held::Line | Held::Side | Held::Plate(_)) {
            self.word(loads.moment_n_m);
        }
    }

    /// The 64 bits of one lane.
    #[must_use]
    pub fn lane(&self, index: usize) -> u64 {
        let word = |words: &[u32; N]| u64::from(words.get(index).copied().unwrap_or(0));
        word(&self.a) << 32 | word(&self.b)
    }
}

/// Folds 64 bits into the running hash.
#[must_use]
pub(super) const fn fold(running: u64, bits: u64) -> u64 {
    let mixed = (running ^ bits).wrapping_mul(0x9E37_79B9_7F4A_7C15);
    mixed ^ mixed >> 29
}

#[cfg(test)]
mod tests;
