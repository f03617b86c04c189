//! Bending of flat plates under pressure that varies with height: influence functions.
//!
//! Every bending moment at a point of a thin elastic plate is a linear functional of the pressure,
//! `m = integral p(s) w(s) ds` with `s` up the slope from the lowest edge: the influence surface of
//! the point, summed across the width. So a plate under any level, partly wetted or not, is one
//! table of `w` per checked point, and no superposition of uniform and triangular load is needed,
//! which puts suction on the dry part.
//!
//! | plate | method | source |
//! | --- | --- | --- |
//! | rectangle, all edges supported | single series, exact | Lévy; Timoshenko and Woinowsky-Krieger, Theory of Plates and Shells, art. 30 |
//! | rectangle, all edges clamped; base and sides fixed, top free | Ritz, polynomials whose second derivatives are orthogonal | art. 44 (method), error measured by two orders |
//! | circle, clamped or supported | Ritz for each circular harmonic; exact when wetted to the top | art. 16, 62, 63 |
//!
//! Valid for thin plates (least span at least ten thicknesses) with deflections up to half the
//! thickness, linear elastic, flat, of even thickness, on edges that do not yield. [`Solution`]
//! gives the deflection with which that is checked.

mod circle;
pub mod governing;
mod legendre;
mod linear;
mod rectangle;
mod ritz;
mod supported;
mod table;
#[cfg(test)]
mod tests;

pub use table::{Table, Weighted};

/// Heights at which a weighting is kept: this many stretches and one.
pub const STRETCHES: usize = 128;
/// Stretches between checked points up a line.
pub const POINT_STRETCHES: usize = 32;
/// Largest ratio of the sides of a rectangle.
pub const ASPECT_MAX: f64 = 8.0;
/// Least span in thicknesses for which the theory of thin plates is taken as valid.
pub const SPAN_PER_THICKNESS_MIN: f64 = 10.0;
/// Largest deflection in thicknesses for which small-deflection theory is taken as valid.
pub const DEFLECTION_PER_THICKNESS_MAX: f64 = 0.5;

/// Outline of a plate.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Outline {
    /// Rectangle with two level edges.
    Rectangle {
        /// Level extent, m.
        width_m: f64,
        /// Extent up the slope, m.
        length_m: f64,
    },
    /// Circle.
    Circle {
        /// Diameter, m.
        diameter_m: f64,
    },
}

impl Outline {
    /// Extent up the slope, m.
    #[must_use]
    pub const fn length_m(&self) -> f64 {
        match *self {
            Self::Rectangle { length_m, .. } => length_m,
            Self::Circle { diameter_m } => diameter_m,
        }
    }

    /// Least span, m: the shorter side, or the diameter.
    #[must_use]
    pub const fn span_m(&self) -> f64 {
        match *self {
            Self::Rectangle { width_m, length_m } => width_m.min(length_m),
            Self::Circle { diameter_m } => diameter_m,
        }
    }
}

/// How the edges are held.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Edges {
    /// All edges clamped: no deflection, no rotation.
    Clamped,
    /// All edges simply supported: no deflection, free to turn, corners held down.
    Supported,
    /// Base and sides clamped, upper edge free; rectangles only.
    TopFree,
}

impl Edges {
    /// As files and outputs write it.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Clamped => "clamped",
            Self::Supported => "supported",
            Self::TopFree => "top free",
        }
    }
}

/// What is bent, per width.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// Moment whose stress acts up the slope (on a circle: radial).
    Up,
    /// Moment whose stress acts level (on a circle: around).
    Level,
    /// Twisting moment, at the corner of a supported plate; its stress acts at 45 degrees.
    Twist,
}

/// Where a point lies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    /// Sideways from the middle, m.
    pub x_m: f64,
    /// Up the slope from the lowest edge, m.
    pub s_m: f64,
}

/// The bending moment at one point in one direction.
#[derive(Clone, Debug)]
pub struct MomentAt {
    /// The point.
    pub place: Place,
    /// The direction.
    pub direction: Direction,
    /// `w`, m: the moment is `integral p w ds`, N m/m, positive when the side away from the liquid
    /// is in tension.
    pub weight: Table,
}

/// The deflection at one point, times the plate's rigidity.
#[derive(Clone, Debug)]
pub struct DeflectionAt {
    /// The point.
    pub place: Place,
    /// `w`, m³: the deflection is `integral p w ds / D`, positive away from the liquid.
    pub weight: Table,
}

/// An edge of a rectangle, or a corner.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Edge {
    /// The lowest.
    Base,
    /// Either side.
    Side,
    /// The highest.
    Top,
    /// A lower corner: the force that holds it down.
    LowerCorner,
    /// An upper corner, likewise.
    UpperCorner,
}

/// What the plate presses on its support at one point of an edge, per width of the edge.
#[derive(Clone, Debug)]
pub struct ReactionAt {
    /// The edge.
    pub edge: Edge,
    /// The point.
    pub place: Place,
    /// `w`: the reaction is `integral p w ds`, N/m, positive away from the liquid; of a corner N,
    /// positive where it has to be held against rising towards the liquid.
    pub weight: Table,
}

/// A solved plate.
#[derive(Clone, Debug)]
pub struct Solution {
    /// Checked moments.
    pub moments: Vec<MomentAt>,
    /// Checked deflections.
    pub deflections: Vec<DeflectionAt>,
    /// Reactions of the edges of a rectangle that is supported all round. The series of the others
    /// give moments well and shear, a third derivative, badly: none.
    pub reactions: Vec<ReactionAt>,
    /// What cutting the series off costs: largest difference between two orders over all checked
    /// moments and three probing loads, as a share of the largest moment under that load.
    pub series_error: f64,
}

/// Why a plate has no solution here.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PlateError {
    /// A side is no positive number.
    #[error("the sides of a plate are positive lengths")]
    Size,
    /// The sides differ too much.
    #[error("the sides of a plate differ by more than 1 to 8: take it as a strip")]
    Aspect,
    /// A circle has no upper edge to be free.
    #[error("a round plate has no upper edge that could be free")]
    RoundTopFree,
    /// Poisson's ratio is not from 0 to 0.5.
    #[error("Poisson's ratio runs from 0 to 0.5")]
    Poisson,
    /// The equations could not be solved.
    #[error("the equations of the plate could not be solved")]
    Singular,
}

/// Solves a plate.
///
/// Bound of the error: the series error in the solution (below 2e-3 for sides up to 1 to 4, see the
/// tests), and what the table of [`STRETCHES`] costs, below 1e-4 of the largest moment.
///
/// # Errors
/// [`PlateError`] outside the domain: positive sides, at most 1 to 8, Poisson's ratio 0 to 0.5.
pub fn solve(outline: Outline, edges: Edges, poisson: f64) -> Result<Solution, PlateError> {
    if !(0.0..=0.5).contains(&poisson) {
        return Err(PlateError::Poisson);
    }
    match outline {
        Outline::Rectangle { width_m, length_m } => {
            if !(width_m > 0.0 && length_m > 0.0 && (width_m * length_m).is_finite()) {
                return Err(PlateError::Size);
            }
            let aspect = width_m / length_m;
            if !(1.0 / ASPECT_MAX..=ASPECT_MAX).contains(&aspect) {
                return Err(PlateError::Aspect);
            }
            match edges {
                Edges::Supported => Ok(supported::solve(width_m, length_m, poisson)),
                Edges::Clamped | Edges::TopFree => ritz::solve(width_m, length_m, edges, poisson),
            }
        }
        Outline::Circle { diameter_m } => {
            if !(diameter_m > 0.0 && diameter_m.is_finite()) {
                return Err(PlateError::Size);
            }
            match edges {
                Edges::TopFree => Err(PlateError::RoundTopFree),
                Edges::Clamped => circle::solve(0.5 * diameter_m, true, poisson),
                Edges::Supported => circle::solve(0.5 * diameter_m, false, poisson),
            }
        }
    }
}

/// Rigidity `E t³ / (12 (1 - nu²))`, N m (Theory of Plates and Shells, art. 2).
#[must_use]
pub fn rigidity_n_m(elastic_modulus_pa: f64, poisson: f64, thickness_m: f64) -> f64 {
    elastic_modulus_pa * thickness_m.powi(3) / (12.0 * (1.0 - poisson * poisson))
}

/// A small count as a float, exact.
fn float(count: usize) -> f64 {
    u32::try_from(count).map_or(f64::INFINITY, f64::from)
}

/// The loads with which two orders are compared: uniform, and wetted up to quarters of the length.
fn probe(table: &Table, length_m: f64) -> [f64; 5] {
    let wet = |share: f64| table.ramp(share * length_m) / (share * length_m);
    [table.total(), wet(0.25), wet(0.5), wet(0.75), wet(1.0)]
}

/// Largest difference of two solutions, see [`Solution::series_error`].
fn difference(fine: &[MomentAt], coarse: &[MomentAt], length_m: f64) -> f64 {
    let mut largest = [0.0_f64; 5];
    let mut off = [0.0_f64; 5];
    for (fine, coarse) in fine.iter().zip(coarse) {
        let (a, b) = (probe(&fine.weight, length_m), probe(&coarse.weight, length_m));
        for ((largest, off), (a, b)) in largest.iter_mut().zip(&mut off).zip(a.iter().zip(b)) {
            *largest = largest.max(a.abs());
            *off = off.max((a - b).abs());
        }
    }
    off.iter().zip(largest).map(|(off, largest)| off / largest).fold(0.0, f64::max)
}
