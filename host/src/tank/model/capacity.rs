//! What a part was designed to carry, and where that number comes from.

use super::PanelPlate;
use crate::tank::finding::Located;

/// One entry of a `capacity` list. The smallest of a list governs.
#[derive(Clone, Debug, PartialEq)]
pub struct Rating {
    /// What may be carried.
    pub capacity: Located<Capacity>,
    /// Where it comes from; only a capacity that is none has no basis.
    pub basis: Option<Located<Basis>>,
    /// The metal, when stated.
    pub material: Option<Located<String>>,
}

impl Rating {
    /// Whether it rests on an assumption.
    #[must_use]
    pub fn is_assumed(&self) -> bool {
        self.basis.as_ref().is_some_and(|basis| basis.value.kind == BasisKind::Assumed)
    }
}

/// The load that a part may carry.
#[derive(Clone, Debug, PartialEq)]
pub enum Capacity {
    /// A course by the thin-shell formula.
    Plate {
        /// Thickness now, as measured or drawn.
        thickness_m: Located<f64>,
        /// Part of the thickness that is kept for corrosion, not below zero.
        corrosion_allowance_m: Located<f64>,
        /// Allowable stress of the plate.
        allowable_stress_pa: Located<f64>,
        /// Strength of the seam as a share of that of the plate, above 0, 1 at most.
        joint_efficiency: Located<f64>,
    },
    /// A panel by the bending of its plate.
    Panel(PanelPlate),
    /// Hoop tension of a course.
    HoopTension {
        /// Force per height.
        n_m: f64,
    },
    /// A state of the tank for which the part was designed.
    DesignedFor {
        /// Level of that state, above the lowest point of the part.
        level_m: Located<f64>,
        /// Density of its liquid.
        density_kg_m3: Located<f64>,
        /// Its gas pressure.
        gas_pa: Located<f64>,
        /// Thickness now as a share of that when new; none when not stated, which outputs show
        /// as "as new".
        remaining: Option<Located<f64>>,
    },
    /// Force on the bolt that carries most.
    Bolt {
        /// Force on one bolt.
        n: f64,
    },
    /// Force on the latch that carries most.
    Latch {
        /// Force on one latch.
        n: f64,
    },
    /// Force on a pin, or on the whole hinge line or pivot where pins are not stated.
    Hinge {
        /// Force.
        n: f64,
    },
    /// Moment about the hinge or pivot.
    Moment {
        /// Moment.
        n_m: f64,
    },
    /// A flat circular cover by its thickness.
    Cover(CoverPlate),
    /// Resulting force on the part.
    Force {
        /// Force.
        n: f64,
    },
    /// Tension of a shell of revolution, in any direction and place.
    Tension {
        /// Force per length.
        n_m: f64,
    },
    /// Compression of a shell of revolution, in any direction and place.
    Compression {
        /// Force per length.
        n_m: f64,
    },
    /// Largest pressure on the part; of a course, that at its design point.
    Pressure {
        /// Pressure.
        pa: f64,
    },
    /// Nothing to compare with.
    None {
        /// Why.
        reason: String,
    },
}

impl Capacity {
    /// The key under which the file gives it.
    #[must_use]
    pub const fn key(&self) -> &'static str {
        match self {
            Self::Plate { .. } | Self::Panel(_) => "plate",
            Self::HoopTension { .. } => "hoop_tension",
            Self::DesignedFor { .. } => "designed_for",
            Self::Bolt { .. } => "bolt",
            Self::Latch { .. } => "latch",
            Self::Hinge { .. } => "hinge",
            Self::Moment { .. } => "moment",
            Self::Cover(_) => "cover",
            Self::Force { .. } => "force",
            Self::Tension { .. } => "tension",
            Self::Compression { .. } => "compression",
            Self::Pressure { .. } => "pressure",
            Self::None { .. } => "none",
        }
    }

    /// Hoop tension that a course may carry, N/m: stress x joint efficiency x (thickness -
    /// allowance) for a plate, the number itself for a hoop tension.
    ///
    /// Source: the thin-shell formula, as in API 650 5.6.3.1 solved for the load.
    #[must_use]
    pub fn hoop_tension_n_m(&self) -> Option<f64> {
        match self {
            Self::Plate {
                thickness_m,
                corrosion_allowance_m,
                allowable_stress_pa,
                joint_efficiency,
            } => {
                let sound_m = thickness_m.value - corrosion_allowance_m.value;
                Some(allowable_stress_pa.value * joint_efficiency.value * sound_m)
            }
            Self::HoopTension { n_m } => Some(*n_m),
            _ => None,
        }
    }
}

/// The plate of a flat circular cover.
#[derive(Clone, Debug, PartialEq)]
pub struct CoverPlate {
    /// Thickness now, as measured or drawn.
    pub thickness_m: Located<f64>,
    /// Part of it that is kept for corrosion; none when not stated.
    pub corrosion_allowance_m: Option<Located<f64>>,
    /// Allowable stress of the plate.
    pub allowable_stress_pa: Located<f64>,
    /// Strength of a seam in the cover as a share of that of the plate; one piece when not stated.
    pub joint_efficiency: Option<Located<f64>>,
    /// The factor C of the rule, for the way in which the cover is attached.
    pub attachment_factor: Located<f64>,
    /// Force of all bolts where it exceeds that of the liquid, as in seating a gasket.
    pub bolt_load_n: Option<Located<f64>>,
}

/// Where a capacity comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Basis {
    /// Its kind.
    pub kind: BasisKind,
    /// The whole text, beginning with the word of the kind.
    pub text: String,
}

/// The kinds of basis, by falling trust.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum BasisKind {
    /// Measured on the tank.
    Surveyed,
    /// Taken from the drawing.
    Drawing,
    /// A value that a code allows when nothing better is known.
    CodeDefault,
    /// An assumption; it makes every output provisional.
    Assumed,
}

impl BasisKind {
    /// Every kind with the words that a basis begins with.
    pub const WORDS: [(&'static str, Self); 4] = [
        ("surveyed", Self::Surveyed),
        ("drawing", Self::Drawing),
        ("code default", Self::CodeDefault),
        ("assumed", Self::Assumed),
    ];
}
