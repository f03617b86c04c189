//! What holds the liquid, and the volume below a level.

use crate::tank::finding::{Located, Span};
use std::f64::consts::FRAC_PI_4;

/// What holds the liquid.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Vessel {
    /// Upright cylinder with a flat bottom.
    Cylinder {
        /// Inside diameter.
        diameter_m: Located<f64>,
        /// Height of the shell.
        height_m: Located<f64>,
    },
    /// Box with level bottom and upright walls.
    Box {
        /// Inside length.
        length_m: Located<f64>,
        /// Inside width.
        width_m: Located<f64>,
        /// Height of the walls.
        height_m: Located<f64>,
    },
    /// Lying drum with flat heads; its lowest line is the datum.
    Lying {
        /// Inside diameter.
        diameter_m: Located<f64>,
        /// Inside length.
        length_m: Located<f64>,
    },
    /// Only a strapping table describes it.
    Strapped {
        /// Height of the table's last row, which is taken as the top.
        top_m: Located<f64>,
    },
    /// No vessel is described: parts stand alone and have no shell top.
    Loose,
}

impl Vessel {
    /// Height of the shell top.
    #[must_use]
    pub fn height_m(&self) -> Option<f64> {
        match self {
            Self::Cylinder { height_m, .. } | Self::Box { height_m, .. } => Some(height_m.value),
            Self::Lying { diameter_m, .. } => Some(diameter_m.value),
            Self::Strapped { top_m } => Some(top_m.value),
            Self::Loose => None,
        }
    }

    /// Area of the liquid's surface, m², where it is the same at every level.
    #[must_use]
    pub fn area_m2(&self) -> Option<f64> {
        match self {
            Self::Cylinder { diameter_m, .. } => {
                Some(FRAC_PI_4 * diameter_m.value * diameter_m.value)
            }
            Self::Box { length_m, width_m, .. } => Some(length_m.value * width_m.value),
            Self::Lying { .. } | Self::Strapped { .. } | Self::Loose => None,
        }
    }

    /// Volume below a level by the shape, m³; held at empty and full. `None` where the shape is not
    /// known.
    #[must_use]
    pub fn volume_m3(&self, level_m: f64) -> Option<f64> {
        let wetted_m = level_m.clamp(0.0, self.height_m()?);
        match self {
            Self::Lying { diameter_m, length_m } => {
                Some(lying_volume_m3(diameter_m.value, length_m.value, wetted_m))
            }
            _ => Some(self.area_m2()? * wetted_m),
        }
    }
}

/// Volume of a partly filled lying drum with flat heads, m³: the circular segment times the length
/// (any table of plane areas; in Jones, Calculating Tank Volume, the cylindrical part). Exact.
/// Valid for `0 <= level_m <= diameter_m`.
#[must_use]
fn lying_volume_m3(diameter_m: f64, length_m: f64, level_m: f64) -> f64 {
    let radius_m = 0.5 * diameter_m;
    let below_axis_m = radius_m - level_m;
    let half_chord_m = (level_m * (diameter_m - level_m)).max(0.0).sqrt();
    // The angle by its two sides keeps its digits where the cosine is flat.
    let angle = half_chord_m.atan2(below_axis_m);
    length_m * (radius_m * radius_m * angle - below_axis_m * half_chord_m)
}

/// A measured table of volumes.
#[derive(Clone, Debug, PartialEq)]
pub struct Strapping {
    /// Height above the datum, m, and volume below it, m³; both rise, 2 to 32 rows.
    pub rows: Vec<(f64, f64)>,
    /// Where it is written.
    pub span: Span,
}

impl Strapping {
    /// Volume below a level, m³: straight lines between the rows, held at the ends.
    #[must_use]
    pub fn volume_m3(&self, level_m: f64) -> f64 {
        super::liquid::interpolate(&self.rows, level_m).unwrap_or(0.0)
    }
}
