//! What holds the cover of a hatch.

use crate::tank::finding::Located;

/// What holds a cover on its opening.
#[derive(Clone, Debug, PartialEq)]
pub enum Secured {
    /// Equal bolts.
    Bolts(Bolts),
    /// A hinge or pivot, and latches.
    Hinged(Hinged),
}

/// Equal bolts along a line, concentric with the cover.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bolts {
    /// Number of bolts, 3 at least.
    pub count: u32,
    /// The line through their axes, along which they are evenly spaced.
    pub line: BoltLine,
    /// Where the first one stands.
    pub first: FirstBolt,
}

/// The line through the axes of the bolts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BoltLine {
    /// A circle.
    Circle {
        /// Its diameter.
        diameter_m: f64,
    },
    /// A rectangle with one level pair of sides.
    Rectangle {
        /// Level extent.
        width_m: f64,
        /// Extent along the slope.
        length_m: f64,
    },
}

/// Where the first bolt stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FirstBolt {
    /// At the lowest point, on a rectangle in the middle of the lower side.
    Lowest,
    /// Half a pitch beside it.
    Astride,
}

/// A cover that turns about a line, held by latches. A rigid cover on a rigid line leaves equal
/// latches the same turn: each carries in proportion to its lever.
#[derive(Clone, Debug, PartialEq)]
pub struct Hinged {
    /// The line about which it turns.
    pub axis: Axis,
    /// The latches; one at least, but of a pivot.
    pub latches: Vec<Latch>,
}

/// The line about which a cover turns.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Axis {
    /// Level, above the opening.
    Top {
        /// From the opening's upper edge outward, in the plane of the cover.
        offset_m: f64,
    },
    /// Level, below the opening.
    Bottom {
        /// From the opening's lower edge outward.
        offset_m: f64,
    },
    /// Up the slope, beside the opening.
    Side {
        /// From the opening's side outward.
        offset_m: f64,
        /// Heights of the two pins, the lower first, when stated.
        pins_m: Option<[f64; 2]>,
    },
    /// Level, across the opening.
    Pivot {
        /// Its height.
        height_m: Located<f64>,
    },
}

/// A latch, dog or clamp.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Latch {
    /// Distance from the hinge line; none of a pivot, where the height tells.
    pub lever_m: Option<f64>,
    /// Its height, of a hinge at the side and of a pivot.
    pub height_m: Option<f64>,
}

impl Hinged {
    /// Distances of the latches from the line about which the cover turns; those of a pivot are
    /// negative below it. `sine` is that of the slope.
    pub fn levers_m(&self, sine: f64) -> impl Iterator<Item = f64> {
        let pivot_m = match self.axis {
            Axis::Pivot { height_m } => height_m.value,
            _ => 0.0,
        };
        let along = move |height_m: f64| (height_m - pivot_m) / sine;
        self.latches
            .iter()
            .filter_map(move |latch| latch.lever_m.or_else(|| latch.height_m.map(along)))
    }
}

/// Mass of a cover.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CoverMass {
    /// Mass.
    pub kg: f64,
    /// Whether it was measured: only then it may relieve.
    pub measured: bool,
}
