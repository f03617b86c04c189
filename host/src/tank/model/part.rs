//! The parts of a tank that carry the liquid.

use super::capacity::Rating;
use super::outline::{Pieces, Shape};
use super::secured::{Axis, CoverMass, Secured};
pub use crate::compile::curved::Profile;
use crate::mesh::Mesh;
use crate::tank::finding::{Located, Span};
use std::sync::Arc;

/// One part.
#[expect(clippy::large_enum_variant, reason = "a file has some thirty parts")]
#[derive(Clone, Debug, PartialEq)]
pub enum Part {
    /// Ring of a cylindrical shell.
    Course(Course),
    /// Flat piece of wall, floor or roof.
    Panel(Panel),
    /// Cover over an opening.
    Hatch(Hatch),
    /// Curved piece of wall, bottom or roof.
    Curved(Curved),
}

/// The kind of a part.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum PartKind {
    /// Ring of a cylindrical shell.
    Course,
    /// Flat piece of wall, floor or roof.
    Panel,
    /// Cover over an opening.
    Hatch,
    /// Curved piece of wall, bottom or roof.
    Curved,
}

impl PartKind {
    /// The kind as files and outputs write it.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Course => "course",
            Self::Panel => "panel",
            Self::Hatch => "hatch",
            Self::Curved => "curved",
        }
    }
}

impl Part {
    /// Its kind.
    #[must_use]
    pub const fn kind(&self) -> PartKind {
        match self {
            Self::Course(_) => PartKind::Course,
            Self::Panel(_) => PartKind::Panel,
            Self::Hatch(_) => PartKind::Hatch,
            Self::Curved(_) => PartKind::Curved,
        }
    }

    /// Its name.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.located_name().value
    }

    /// Its name and where it is written.
    #[must_use]
    pub const fn located_name(&self) -> &Located<String> {
        match self {
            Self::Course(part) => &part.name,
            Self::Panel(part) => &part.name,
            Self::Hatch(part) => &part.name,
            Self::Curved(part) => &part.name,
        }
    }

    /// Where the part begins in the file.
    #[must_use]
    pub const fn span(&self) -> Span {
        match self {
            Self::Course(part) => part.span,
            Self::Panel(part) => part.span,
            Self::Hatch(part) => part.span,
            Self::Curved(part) => part.span,
        }
    }

    /// Heights of what the liquid presses on: of a hatch the surface inside the gasket line.
    #[must_use]
    pub const fn heights(&self) -> Heights {
        match self {
            Self::Course(part) => part.heights,
            Self::Panel(part) => part.plane.heights,
            Self::Hatch(part) => part.sealed.heights,
            Self::Curved(part) => part.heights,
        }
    }

    /// Where the key that places the part stands.
    #[must_use]
    pub const fn placed_at(&self) -> Span {
        match self {
            Self::Course(part) => part.bottom_m.span,
            Self::Panel(part) => part.placed_at,
            Self::Hatch(part) => part.placed_at,
            Self::Curved(part) => part.placed_at,
        }
    }

    /// What it may carry outwards, one entry at least.
    #[must_use]
    pub fn capacity(&self) -> &[Rating] {
        match self {
            Self::Course(part) => &part.capacity,
            Self::Panel(part) => &part.capacity,
            Self::Hatch(part) => &part.capacity,
            Self::Curved(part) => &part.capacity,
        }
    }

    /// What it may carry inwards; empty when not stated, then it is not judged inward.
    #[must_use]
    pub fn capacity_inward(&self) -> &[Rating] {
        match self {
            Self::Course(part) => &part.capacity_inward,
            Self::Panel(part) => &part.capacity_inward,
            Self::Hatch(part) => &part.capacity_inward,
            Self::Curved(part) => &part.capacity_inward,
        }
    }
}

/// Where a part stands, above the datum. For a level part the three are one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Heights {
    /// Lowest point.
    pub bottom_m: f64,
    /// Centroid.
    pub centre_m: f64,
    /// Highest point.
    pub top_m: f64,
}

/// Ring of a cylindrical shell.
#[derive(Clone, Debug, PartialEq)]
pub struct Course {
    /// Its name.
    pub name: Located<String>,
    /// Height of its lower edge.
    pub bottom_m: Located<f64>,
    /// Height of the ring itself.
    pub height_m: Located<f64>,
    /// Lower edge, middle, upper edge.
    pub heights: Heights,
    /// Where its tension is taken.
    pub design_point: DesignPoint,
    /// What it may carry outwards.
    pub capacity: Vec<Rating>,
    /// What it may carry inwards.
    pub capacity_inward: Vec<Rating>,
    /// Loss of thickness.
    pub corrosion_rate_m_s: Option<Located<f64>>,
    /// Where it begins in the file.
    pub span: Span,
}

/// The point of a course at which its tension is taken.
#[derive(Clone, Debug, PartialEq)]
pub struct DesignPoint {
    /// Height above the lower edge: 0, 0.3 or 0.3048.
    pub above_edge_m: f64,
    /// The rule that allows a point above the edge.
    pub rule: Option<Located<String>>,
}

impl Course {
    /// Height of the design point above the datum.
    #[must_use]
    pub fn design_height_m(&self) -> f64 {
        self.bottom_m.value + self.design_point.above_edge_m
    }
}

/// An opening in a flat surface.
#[derive(Clone, Debug, PartialEq)]
pub struct Hole {
    /// Its outline.
    pub shape: Shape,
    /// Its lowest point: x, and up the slope from the lowest point of the surface around it.
    pub at_m: [f64; 2],
    /// Whether others carry what presses on it; else what closes it hands its load to the surface.
    pub carried_elsewhere: bool,
}

/// A flat surface in its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Plane {
    /// Its outline.
    pub shape: Shape,
    /// An opening in it.
    pub hole: Option<Hole>,
    /// Angle through the liquid from the level floor, degrees: 0 floor, 90 wall, above 90
    /// overhang, 180 roof. Either 0 or 180, or from 1 to 179.
    pub slope_deg: f64,
    /// Its heights; the centre is the centroid of what carries.
    pub heights: Heights,
}

impl Plane {
    /// A surface with its lowest point at a height.
    #[must_use]
    pub fn standing(shape: Shape, hole: Option<Hole>, slope_deg: f64, bottom_m: f64) -> Self {
        let heights = Heights { bottom_m, centre_m: bottom_m, top_m: bottom_m };
        let mut plane = Self { shape, hole, slope_deg, heights };
        let sine = plane.sine();
        plane.heights.centre_m += plane.centroid_up_m() * sine;
        plane.heights.top_m += plane.shape.length_m() * sine;
        plane
    }

    /// A surface without opening, with its centroid at a height.
    #[must_use]
    pub fn centred(shape: Shape, slope_deg: f64, centre_m: f64) -> Self {
        let below_m = shape.centroid_m()[1] * sine(slope_deg);
        let mut plane = Self::standing(shape, None, slope_deg, centre_m - below_m);
        plane.heights.centre_m = centre_m;
        plane
    }

    /// The opening whose load others carry.
    #[must_use]
    pub fn left_out(&self) -> Option<&Hole> {
        self.hole.as_ref().filter(|hole| hole.carried_elsewhere)
    }

    /// What it is made of, an opening whose load others carry left out.
    #[must_use]
    pub fn pieces(&self) -> Pieces {
        let mut pieces = self.shape.pieces();
        if let Some(hole) = self.left_out() {
            pieces.cut_out(&hole.shape.pieces(), hole.at_m[1]);
        }
        pieces
    }

    /// Area of what carries, m².
    #[must_use]
    pub fn area_m2(&self) -> f64 {
        self.shape.area_m2() - self.left_out().map_or(0.0, |hole| hole.shape.area_m2())
    }

    /// Centroid of what carries, up the slope from the lowest point, m.
    #[must_use]
    pub fn centroid_up_m(&self) -> f64 {
        let whole = self.shape.centroid_m()[1];
        self.left_out().map_or(whole, |_| {
            let [area, first] = self.pieces().below(f64::INFINITY);
            first / area
        })
    }

    /// Sine of its slope; zero when level.
    #[must_use]
    pub fn sine(&self) -> f64 {
        sine(self.slope_deg)
    }

    /// Whether it is level, so that one height describes it.
    #[must_use]
    pub fn is_level(&self) -> bool {
        self.slope_deg <= 0.0 || self.slope_deg >= 180.0
    }
}

/// Sine of a slope, exact where people write exact angles.
pub(in crate::tank) fn sine(slope_deg: f64) -> f64 {
    if slope_deg <= 0.0 || slope_deg >= 180.0 { 0.0 } else { slope_deg.to_radians().sin() }
}

/// Flat piece of wall, floor or roof.
#[derive(Clone, Debug, PartialEq)]
pub struct Panel {
    /// Its name.
    pub name: Located<String>,
    /// The surface.
    pub plane: Plane,
    /// Where its height is written.
    pub placed_at: Span,
    /// What it may carry outwards.
    pub capacity: Vec<Rating>,
    /// What it may carry inwards.
    pub capacity_inward: Vec<Rating>,
    /// Where it begins in the file.
    pub span: Span,
}

/// Cover over an opening.
#[derive(Clone, Debug, PartialEq)]
pub struct Hatch {
    /// Its name.
    pub name: Located<String>,
    /// The clear opening.
    pub opening: Plane,
    /// The surface inside the gasket line, concentric with the opening; the liquid presses on it.
    pub sealed: Plane,
    /// Where its height is written.
    pub placed_at: Span,
    /// To which side it opens.
    pub opens: Located<Opens>,
    /// What holds it, when stated.
    pub secured: Option<Located<Secured>>,
    /// Its mass, when stated.
    pub mass: Option<Located<CoverMass>>,
    /// What it may carry outwards.
    pub capacity: Vec<Rating>,
    /// What it may carry inwards.
    pub capacity_inward: Vec<Rating>,
    /// Where it begins in the file.
    pub span: Span,
}

impl Hatch {
    /// Whether an outward load (or an inward one) presses the cover on its seat, so that what
    /// secures it carries nothing. A cover on a pivot has one half on either side.
    #[must_use]
    pub fn seats(&self, outward: bool) -> bool {
        !self.pivots() && (self.opens.value == Opens::Inward) == outward
    }

    /// Whether it turns about a line across the opening.
    #[must_use]
    pub fn pivots(&self) -> bool {
        match self.secured.as_ref().map(|secured| &secured.value) {
            Some(Secured::Hinged(hinged)) => matches!(hinged.axis, Axis::Pivot { .. }),
            _ => false,
        }
    }
}

/// Curved piece of wall, bottom or roof.
#[derive(Clone, Debug, PartialEq)]
pub struct Curved {
    /// Its name.
    pub name: Located<String>,
    /// Its surface.
    pub surface: Surface,
    /// Its heights; the centre is that of the axis, of a dome, of the base, or a mesh's z = 0.
    pub heights: Heights,
    /// Where its height is written.
    pub placed_at: Span,
    /// What it may carry outwards.
    pub capacity: Vec<Rating>,
    /// What it may carry inwards.
    pub capacity_inward: Vec<Rating>,
    /// Where it begins in the file.
    pub span: Span,
}

/// A curved surface.
#[derive(Clone, Debug, PartialEq)]
pub enum Surface {
    /// Arc about a level axis, x along angle 0.
    Arc {
        /// Radius.
        radius_m: f64,
        /// Length along the axis.
        length_m: f64,
        /// First angle from the horizontal, counter-clockwise.
        from_deg: f64,
        /// Last angle.
        to_deg: f64,
        /// Whether the liquid stands on the side of the axis.
        inside: bool,
    },
    /// Hemisphere on a vertical wall, x outward.
    Dome {
        /// Radius.
        radius_m: f64,
        /// Whether it bulges out of the tank.
        inside: bool,
    },
    /// Bottom or head about a vertical axis, wetted on its hollow side, held at its rim.
    Revolved {
        /// Its meridian.
        profile: Profile,
        /// Radius of its rim.
        base_radius_m: f64,
        /// Distance of the apex from the rim.
        height_m: f64,
        /// Whether the apex is its highest point.
        apex_up: bool,
    },
    /// Triangles, x along the mesh's own x axis.
    Mesh(Arc<Mesh>),
}

/// To which side a cover opens.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Opens {
    /// Away from the liquid: an outward load pulls at what secures it.
    Outward,
    /// Into the liquid: an outward load presses it on its seat.
    Inward,
}
