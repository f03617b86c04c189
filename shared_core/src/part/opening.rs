//! Whether an opening must stay shut, judged by wetting, never by load.
//!
//! No net force on a cover says nothing: liquid on both sides, or liquid against a vacuum, cancels
//! and still runs out. There is no state "safe to open"; the other answer is that no liquid is
//! computed at this opening.

use super::{Geometry, Held, Part};
use crate::liquid::highest_surface_m;
use crate::plan::Plan;
use crate::signal::{ReadingClass, Resolved};

/// Gas pressure (either way, over all that the plan allows) up to which a cover is not held to be
/// pressed, Pa: 5 mm of water, 14 N on a cover of 0.6 m.
pub const OPENING_GAS_PA: f32 = 50.0;

/// Why an opening must stay shut: one bit for each reason, none where no liquid is computed at it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Shut(pub u8);

impl Shut {
    /// Liquid in the tank may stand above the opening's lowest point.
    pub const LIQUID_INSIDE: u8 = 1;
    /// Liquid against the outside may stand above it.
    pub const LIQUID_OUTSIDE: u8 = 2;
    /// The gas may press on the cover, inward or outward.
    pub const GAS: u8 = 4;
    /// The reading is not valid, so nothing is known.
    pub const NOT_VALID: u8 = 8;

    /// Judges a part under a reading; `None` where the part is no opening.
    #[must_use]
    pub fn of(plan: &Plan, part: &Part, reading: &Resolved) -> Option<Self> {
        let surface_m = highest_surface_m(plan, reading.high, reading.density.low_kg_m3);
        let known = reading.class == ReadingClass::Valid;
        let mut shut = Self::under(plan, part, surface_m)?;
        if !known {
            shut.0 |= Self::NOT_VALID;
        }
        Some(shut)
    }

    /// Judges a part while no liquid in the tank stands above `surface_m`; `None` where the part is
    /// no opening.
    #[must_use]
    pub fn under(plan: &Plan, part: &Part, surface_m: f32) -> Option<Self> {
        let Geometry::Plane { cover: Some(cover), .. } = &part.geometry else { return None };
        if matches!(cover.held(), Held::Plate(_)) {
            return None;
        }
        let sill_m = part.bottom_m + cover.sill_above_m();
        // What is no number is no proof.
        let above = |height_m: f32| height_m > sill_m || height_m.is_nan();
        let mut reasons = 0;
        if above(surface_m) {
            reasons |= Self::LIQUID_INSIDE;
        }
        for (bit, outside) in plan.outside.iter().enumerate() {
            if part.outside & (1 << bit) != 0 && above(outside.highest_m) {
                reasons |= Self::LIQUID_OUTSIDE;
            }
        }
        if plan.gas.highest_pa > OPENING_GAS_PA || plan.gas.lowest_pa < -OPENING_GAS_PA {
            reasons |= Self::GAS;
        }
        Some(Self(reasons))
    }

    /// Whether the opening must stay shut.
    #[must_use]
    pub const fn stands(self) -> bool {
        self.0 != 0
    }
}

#[cfg(test)]
mod tests;
