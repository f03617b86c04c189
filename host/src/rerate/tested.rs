//! How far a water test covers another liquid.
//!
//! A test proves a pressure at each height. A denser liquid to a lower level presses as hard at the
//! foot and less above it, so the foot decides how far the test reaches; higher up it leaves much
//! untested at the same level.

use super::document::Coverage;
use super::part::Sides;
use crate::inverse::lines;
use serde::Serialize;
use strake_core::lane::Lane;
use strake_core::part::{Capacities, DesignState, Part};

/// A water test.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Tested {
    /// Its level above the datum.
    pub level_m: f64,
    /// Density of its water.
    pub density_kg_m3: f64,
}

/// Coverage of one part; `None` without a test.
pub(super) fn coverage(sides: &Sides<'_>, part: &Part) -> Option<Coverage> {
    let tested = sides.question.tested?;
    let state = DesignState {
        level_m: single(tested.level_m),
        weight_n_m3: single(tested.density_kg_m3 * sides.file.gravity.m_s2()),
        gas_pa: 0.0,
    };
    let mut designed_for = heapless::Vec::new();
    // There is room for one.
    let _ = designed_for.push(state);
    let none = Capacities::default();
    let alone = Part { outward: none, inward: none, designed_for, ..part.clone() };
    let wetted = state.level_m > part.bottom_m;
    let proven = lines(sides.new, &alone).first().and_then(|line| line.level_m);
    let full = sides.new.at_true_level(Lane([sides.new.range().high_m])).estimate;
    let full_pa = full.at(Lane([part.bottom_m])).lane(0);
    let tested_pa = if wetted { state.pressure_pa(part.bottom_m) } else { 0.0 };
    let share = (full_pa > 0.0).then(|| f64::from(tested_pa) / f64::from(full_pa));
    Some(Coverage { proven_level_m: proven.filter(|_| wetted), share_of_full: share })
}

#[expect(clippy::cast_possible_truncation, reason = "a state for the core")]
const fn single(value: f64) -> f32 {
    value as f32
}
