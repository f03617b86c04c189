//! Bending moments of a plate, by influence functions.
//!
//! The bending moment at a point of a plate is `integral p w dz`, `w` the point's influence surface
//! summed across the width (Timoshenko and Woinowsky-Krieger, Theory of Plates and Shells, art. 29
//! and 76), so a plate under any level is judged by the one formula. The desk chooses the points
//! that govern, proves that no other carries more, and states what that costs
//! (`host/src/plate/governing.rs`). A deflection that ends the theory before the strength does is
//! one of them, as the same share of the moment that the plate carries.
//!
//! A weighting is a list of nodes, straight between them and of one sign there, so that the bound
//! `integral w+ p_upper - integral w- p_lower` is rigorous. The nodes of the points follow each
//! other in the plan's numbers; where the height does not rise the next point begins.

use super::curved::{RowKind, add_row};
use crate::lane::Lane;
use crate::pressure::Pressure;

/// Numbers of a node.
pub const NODE_NUMBERS: usize = 2;
/// A node: its height above the part's lowest point (m) and the weighting there (m); moments are
/// per width, N m/m, positive as even pressure from the liquid bends the point.
pub type Node = [f32; NODE_NUMBERS];

/// Where the nodes of a plate stand in [`crate::plan::Plan::numbers`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Nodes {
    /// How many nodes.
    pub count: u8,
    /// Place of the first number.
    pub first: u16,
}

impl Nodes {
    /// The nodes themselves; none where the plan is short.
    #[must_use]
    pub fn of(self, numbers: &[f32]) -> &[Node] {
        let from = numbers.get(usize::from(self.first)..).unwrap_or(&[]);
        let (nodes, _) = from.as_chunks();
        nodes.get(..usize::from(self.count)).unwrap_or(&[])
    }
}

/// The largest moment of all points, N m/m: of the estimate and of any state; last the least. A
/// plate has one point or more; without any the answer is no moment that a plate could have.
///
/// Error against the nodes: 2e-6 of `integral |p| |w| dz`.
#[must_use]
#[inline(never)]
pub fn moments<const N: usize>(
    nodes: &[Node],
    bottom_m: f32,
    states: [&Pressure<N>; 3],
) -> [Lane<N>; 3] {
    let mut found = [-f32::MAX, -f32::MAX, f32::MAX].map(Lane::splat);
    let mut sums = [Lane::ZERO; 3];
    let mut rest = nodes;
    while let [[y_m, w], after @ ..] = rest {
        rest = after;
        let &[next_m, next] = after.first().unwrap_or(&[-f32::MAX; NODE_NUMBERS]);
        let length_m = next_m - y_m;
        if length_m > 0.0 {
            let row = [*y_m, length_m, *w, (next - w) / length_m, 0.0];
            add_row(&mut sums, RowKind::Even, &row, bottom_m, states);
            continue;
        }
        let ([a, b, c], [middle, most, least]) = (found, sums);
        found = [a.at_least(middle), b.at_least(most), c.at_most(least)];
        sums = [Lane::ZERO; 3];
    }
    found
}

#[cfg(test)]
mod tests;
