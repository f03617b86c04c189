//! Parts: what is judged, and against what.
//!
//! Each part has a geometry, and for each direction the capacities that the engineer states. The
//! loads of a part are elementary loads (one weighting each) or the largest of several.

mod cover;
pub mod curved;
mod evaluate;
mod opening;
pub mod plate;

pub use cover::{BOLTS_MAX, BoltPattern, Cover, CoverNumbers, Held, Weighting, WeightingNumbers};
pub use curved::Curved;
pub(crate) use evaluate::evaluate_into;
pub use evaluate::{Loads, PartLoads, acting, evaluate};
pub use opening::{OPENING_GAS_PA, Shut};

use crate::shape::Shape;
use core::fmt;
use core::num::NonZeroU32;
use heapless::Vec;

/// Design states a part can be compared with.
pub const DESIGN_STATES_MAX: usize = 2;
/// Largest utilisation reported; a load without any design pressure against it shows as this.
pub const UTILISATION_MAX: f32 = 999.0;
/// Design pressures below this, Pa, count as this (about 1 mm of water): at the very surface of the
/// design liquid the ratio of two pressures near zero means nothing.
pub const DESIGN_PRESSURE_FLOOR_PA: f32 = 10.0;

/// What a part is.
#[derive(Clone, Debug, PartialEq)]
pub enum Geometry {
    /// A ring of shell plates: hoop tension at its design point.
    Course {
        /// Half the diameter, m.
        half_diameter_m: f32,
        /// Height of the design point above the datum, m.
        design_point_m: f32,
        /// Height of the course itself, m.
        height_m: f32,
    },
    /// A plane part: panel or hatch cover, to the line to which the liquid presses.
    Plane {
        /// Shape on its slope.
        shape: Shape,
        /// Sine of the slope, zero for a level part.
        sine: f32,
        /// Height of the centroid above the lowest point, m.
        centroid_above_m: f32,
        /// The cover of an opening, or what the plate of a panel is judged by.
        cover: Option<Cover>,
    },
    /// A curved part, or whatever else has tables.
    Curved(Curved),
}

impl Geometry {
    /// A plane part on a slope with the sine `sine` (zero: level, the shape must be
    /// [`Shape::Level`]).
    #[must_use]
    pub const fn plane(shape: Shape, sine: f32, cover: Option<Cover>) -> Self {
        let centroid_above_m = shape.centroid_above_m();
        Self::Plane { shape, sine, centroid_above_m, cover }
    }
}

/// A number that the engineer states; zero is none. As large as the number alone, also where it is
/// absent: a device holds some hundred of them.
#[derive(Clone, Copy, PartialEq, Eq)]
pub struct Stated(NonZeroU32);

impl Stated {
    /// The number; `None` of zero.
    #[must_use]
    pub const fn new(value: f32) -> Option<Self> {
        match NonZeroU32::new(value.to_bits()) {
            Some(bits) => Some(Self(bits)),
            None => None,
        }
    }

    /// Zero where there is none.
    #[inline]
    const fn bits(stated: Option<Self>) -> u32 {
        match stated {
            Some(stated) => stated.0.get(),
            None => 0,
        }
    }

    /// The number.
    #[must_use]
    #[inline]
    pub const fn get(self) -> f32 {
        f32::from_bits(self.0.get())
    }
}

impl fmt::Debug for Stated {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Debug::fmt(&self.get(), f)
    }
}

/// Capacities in one direction, each absent where the engineer states none.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Capacities {
    /// Largest pressure on the part, Pa.
    pub pressure_pa: Option<Stated>,
    /// Hoop tension of a course, N/m; of a shell of revolution largest tension in any direction,
    /// inward largest compression.
    pub hoop_tension_n_m: Option<Stated>,
    /// Force on a plane part, or size of the force on a curved one, N.
    pub force_n: Option<Stated>,
    /// Largest share of a bolt, or force on a pin or hinge line, N.
    pub bolt_n: Option<Stated>,
    /// Moment about the hinge or pivot, N m; a latch's force times its lever. Of a panel the
    /// bending moment of its plate, N m/m.
    pub moment_n_m: Option<Stated>,
}

impl Capacities {
    /// Whether nothing is stated.
    #[must_use]
    #[inline]
    pub const fn is_empty(&self) -> bool {
        // Zero is none; no jump for each of them.
        Stated::bits(self.pressure_pa)
            | Stated::bits(self.hoop_tension_n_m)
            | Stated::bits(self.force_n)
            | Stated::bits(self.bolt_n)
            | Stated::bits(self.moment_n_m)
            == 0
    }
}

/// A state that the part was designed for: one liquid to one level, and gas.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DesignState {
    /// Surface height, m above the datum.
    pub level_m: f32,
    /// Specific weight times the remaining share of strength, N/m³.
    pub weight_n_m3: f32,
    /// Gas pressure times the remaining share of strength, Pa.
    pub gas_pa: f32,
}

impl DesignState {
    /// Pressure the part is good for at a height, Pa, not below [`DESIGN_PRESSURE_FLOOR_PA`].
    #[must_use]
    pub fn pressure_pa(&self, z_m: f32) -> f32 {
        let p = self.gas_pa + self.weight_n_m3 * crate::lane::ramp(self.level_m - z_m);
        crate::lane::at_least(p, DESIGN_PRESSURE_FLOOR_PA)
    }
}

/// One part of the plan.
#[derive(Clone, Debug, PartialEq)]
pub struct Part {
    /// What it is.
    pub geometry: Geometry,
    /// Height of its lowest point above the datum, m.
    pub bottom_m: f32,
    /// Height of its highest point above the datum, m.
    pub top_m: f32,
    /// Against load from the liquid outwards.
    pub outward: Capacities,
    /// Against load from outside inwards.
    pub inward: Capacities,
    /// States it was designed for; the pressure at every height must stay within each.
    pub designed_for: Vec<DesignState, DESIGN_STATES_MAX>,
    /// Bit `i` set: the plan's outside liquid `i` stands against it.
    pub outside: u8,
}

impl Part {
    /// Whether any outward capacity is stated.
    #[must_use]
    #[inline]
    pub fn judged_outward(&self) -> bool {
        !self.outward.is_empty() || !self.designed_for.is_empty()
    }

    /// Whether an inward capacity is stated.
    #[must_use]
    #[inline]
    pub const fn judged_inward(&self) -> bool {
        !self.inward.is_empty()
    }
}
