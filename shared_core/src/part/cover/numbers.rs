//! The numbers of a cover as the plan holds them.

use crate::part::plate::Nodes;
use crate::shape::Shape;

/// Most bolts of a cover; the plan keeps larger numbers for other things.
pub const BOLTS_MAX: u16 = 0x1FFF;

/// What holds a cover.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[repr(u8)]
pub enum Held {
    /// Not stated. The two weightings are zero.
    #[default]
    Otherwise,
    /// So many equal bolts; the weightings are the shares of the lowest and of the highest.
    Bolts(u16),
    /// A level hinge line or pivot; the weightings are the moment about it and the force on it.
    Line,
    /// A hinge line up the slope with two pins; the weightings are the forces on the pins.
    Side,
    /// No cover: a panel whose plate is judged by its bending moments, see
    /// [`crate::part::plate`]. The two weightings are zero.
    Plate(Nodes),
}

/// A weighting that is straight along the slope.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct WeightingNumbers {
    /// At the lowest point: 1 of a share or a force, m of a moment.
    pub foot: f32,
    /// Per metre up the slope.
    pub slope: f32,
    /// Where it changes sign: height above the cover's lowest point (m), area below (m²) and first
    /// moment of that area about the level line through the lowest point (m³). `None` where it
    /// keeps its sign on the cover.
    pub cut: Option<[f32; 3]>,
}

/// Numbers from which a cover is made; they stand in the plan.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct CoverNumbers {
    /// What holds it.
    pub held: Held,
    /// Its weight may be counted where it relieves.
    pub weight_is_measured: bool,
    /// Height of the opening's lowest point above that of the gasket line, m.
    pub sill_above_m: f32,
    /// Weight of the cover along the outward normal, N; negative where it presses the cover inward;
    /// zero where not stated.
    pub weight_n: f32,
    /// Distance of the centroid from a hinge line at the side, m; else zero.
    pub arm_m: f32,
    /// See [`Held`].
    pub weightings: [WeightingNumbers; 2],
}

/// Equal bolts whose heights lie evenly about the centroid, as plans write them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BoltPattern {
    /// Number of bolts, at least three.
    pub count: u16,
    /// `s / sum s_j²` of the lowest bolt (not positive) and the highest (not negative), 1/m.
    pub per_moment: [f32; 2],
    /// Cuts of the two weightings, as in [`WeightingNumbers`].
    pub cuts: [Option<[f32; 3]>; 2],
}

impl BoltPattern {
    /// The cover that they hold: bolt `i` carries `F / n + Mc s_i / sum s_j²`.
    #[must_use]
    pub fn cover(&self, shape: &Shape) -> CoverNumbers {
        let [low, high] = self.per_moment;
        let [low_cut, high_cut] = self.cuts;
        let weighting =
            |slope: f32, cut| WeightingNumbers { foot: self.foot(slope, shape), slope, cut };
        CoverNumbers {
            held: Held::Bolts(self.count),
            weightings: [weighting(low, low_cut), weighting(high, high_cut)],
            ..CoverNumbers::default()
        }
    }

    fn foot(&self, slope: f32, shape: &Shape) -> f32 {
        1.0 / f32::from(self.count) - slope * shape.centroid_up_m()
    }

    /// The pattern of a cover, when that is all that holds it.
    #[must_use]
    pub fn of(cover: &CoverNumbers, shape: &Shape) -> Option<Self> {
        let Held::Bolts(count) = cover.held else { return None };
        let [low, high] = cover.weightings;
        let pattern =
            Self { count, per_moment: [low.slope, high.slope], cuts: [low.cut, high.cut] };
        (pattern.cover(shape).weightings == cover.weightings).then_some(pattern)
    }
}
