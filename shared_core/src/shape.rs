//! Plane shapes and what a liquid surface at some height makes of them.
//!
//! A plane part lies on a slope; `s` runs up the slope from the centroid, `z = z_c + s sin(slope)`.
//! Of each liquid surface the load engine needs three numbers, integrals over the wetted area with
//! `h` the surface height and `t` the distance up the slope from the lowest point:
//!
//! * `q0 = integral (h - z) dA`, m³ (volume of the pressure prism over `rho g`),
//! * `q1 = integral (h - z) s dA`, m⁴ (its moment about the level line through the centroid), and
//! * `q2 = integral (h - z) t dA`, m⁴ (its moment about the level line through the lowest point).
//!
//! Every load on a plane part is `alpha * F + beta * M`, so these serve force, centre of pressure,
//! moments about any level line, hinges and bolt shares. `q2` is no difference of the other two: a
//! hinge at the foot of a cover sees the first film of liquid with all digits.
//! The wetted part is clipped first and then integrated: differences of powers of large depths
//! would cost three digits.

mod circle;
mod pieces;
mod rectangle;

use crate::lane::Lane;
pub use circle::{Circle, disc_prism};
pub use pieces::{PIECE_NUMBERS, Pieces};
pub use rectangle::Rectangle;

/// The integrals of one liquid surface over a plane part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wetted<const N: usize> {
    /// `integral (h - z) dA`, m³.
    pub q0: Lane<N>,
    /// `integral (h - z) s dA`, m⁴; negative where the lower side carries more.
    pub q1: Lane<N>,
    /// `integral (h - z) t dA`, m⁴; never negative, unless a hole is counted alone.
    pub q2: Lane<N>,
}

/// A plane shape on its slope, ready for evaluation. Lengths in metres.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Shape {
    /// A disc or an ellipse.
    Circle(Circle),
    /// A rectangle with two level sides.
    Rectangle(Rectangle),
    /// Strips and discs, one or several, whose numbers stand in the plan.
    Pieces(Pieces),
    /// Any shape that lies level: all of its area, m², stands at one height.
    Level {
        /// Area, m².
        area_m2: f32,
    },
}

impl Shape {
    /// Area, m².
    #[must_use]
    pub const fn area_m2(&self) -> f32 {
        match self {
            Self::Circle(circle) => circle.area_m2,
            Self::Rectangle(rectangle) => rectangle.area_m2,
            Self::Pieces(pieces) => pieces.area_m2,
            Self::Level { area_m2 } => *area_m2,
        }
    }

    /// Vertical distance from the lowest to the highest point, m.
    #[must_use]
    pub const fn rise_m(&self) -> f32 {
        match self {
            Self::Circle(circle) => circle.rise_m,
            Self::Rectangle(rectangle) => rectangle.rise_m,
            Self::Pieces(pieces) => pieces.rise_m,
            Self::Level { .. } => 0.0,
        }
    }

    /// Distance of the centroid from the lowest point, up the slope, m; zero for a level shape.
    // The third number of each: one load.
    #[must_use]
    #[inline]
    pub const fn centroid_up_m(&self) -> f32 {
        match self {
            Self::Circle(circle) => circle.radius_m(),
            Self::Rectangle(rectangle) => rectangle.centroid_m,
            Self::Pieces(pieces) => pieces.centroid_m,
            Self::Level { .. } => 0.0,
        }
    }

    /// Distance of the highest from the lowest point, up the slope, m; zero for a level shape.
    #[must_use]
    pub const fn length_m(&self) -> f32 {
        match self {
            Self::Pieces(pieces) => pieces.length_m,
            _ => 2.0 * self.centroid_up_m(),
        }
    }

    /// Height of the centroid above the lowest point, m.
    #[must_use]
    pub const fn centroid_above_m(&self) -> f32 {
        match self {
            Self::Pieces(pieces) => pieces.centroid_m * pieces.sine,
            _ => 0.5 * self.rise_m(),
        }
    }
}

/// A shape in its place, with the numbers of the plan that it may refer to.
#[derive(Clone, Copy, Debug)]
pub struct Face<'a> {
    /// The shape.
    pub shape: &'a Shape,
    /// [`crate::plan::Plan::numbers`]; empty for shapes that need none.
    pub numbers: &'a [f32],
    /// Height of its lowest point above the datum, m.
    pub bottom_m: f32,
}

impl<'a> Face<'a> {
    /// A shape without numbers in the plan.
    #[must_use]
    pub const fn of(shape: &'a Shape, bottom_m: f32) -> Self {
        Self { shape, numbers: &[], bottom_m }
    }

    /// The integrals for a surface that stands `y_m` above the shape's lowest point.
    ///
    /// Domain: any finite `y_m`. Error of `q0`: 5e-7 of itself; of `q1`: 5e-7 of
    /// `integral (h - z) |s| dA`; of `q2`: 1.8e-6 of itself; of pieces 1e-6 of the
    /// first two. Met in 400,000 random cases: 7.1e-7, 7.7e-7 and 1.5e-6.
    #[must_use]
    #[inline]
    pub fn wetted<const N: usize>(&self, y_m: Lane<N>) -> Wetted<N> {
        match self.shape {
            Shape::Circle(circle) => circle.wetted(y_m),
            Shape::Rectangle(rectangle) => rectangle.wetted(y_m),
            Shape::Pieces(pieces) => pieces.wetted(self.numbers, y_m),
            Shape::Level { area_m2 } => {
                Wetted { q0: y_m.ramp() * *area_m2, q1: Lane::ZERO, q2: Lane::ZERO }
            }
        }
    }
}

/// The lower piece of a shape, cut along a level line: where a weighting changes its sign.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cut {
    /// Height of the cut above the shape's lowest point, m.
    pub y_m: f32,
    /// Area below the cut, m².
    pub area_m2: f32,
    /// `integral t dA` below the cut, m³; never negative.
    pub static_m3: f32,
    /// `q0` and `q2` of a surface that stands at the cut.
    full: [f32; 2],
}

impl Cut {
    /// A cut `y_m` above the lowest point of `face`, with the area (m²) and first moment of area
    /// about the level line through the lowest point (m³) below it.
    #[must_use]
    pub fn new(face: &Face<'_>, y_m: f32, area_m2: f32, static_m3: f32) -> Self {
        let Wetted { q0, q2, .. } = face.wetted(Lane([y_m]));
        Self { y_m, area_m2, static_m3, full: [q0.lane(0), q2.lane(0)] }
    }

    /// `q0` and `q2` over the piece below the cut; `whole` is the whole shape under the same
    /// surface.
    ///
    /// Above the cut the piece is covered and both grow linearly with the surface.
    #[must_use]
    #[inline]
    pub fn wetted<const N: usize>(
        &self,
        face: &Face<'_>,
        y_m: Lane<N>,
        whole: &Wetted<N>,
    ) -> [Lane<N>; 2] {
        let above = y_m - self.y_m;
        // Where every lane is covered, or none, what is known is the same bits without the root.
        let [q0, q2] = if above.all_positive() {
            self.full.map(Lane::splat)
        } else if above.none_positive() {
            [whole.q0, whole.q2]
        } else {
            let lower = face.wetted(y_m.at_most(Lane::splat(self.y_m)));
            [lower.q0, lower.q2]
        };
        let above = above.ramp();
        [q0 + above * self.area_m2, q2 + above * self.static_m3]
    }
}

#[cfg(test)]
mod tests;
