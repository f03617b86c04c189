//! The rectangle with two level sides.
//!
//! With width `b`, length `l` along the slope and wetted length `x`, the surface `y` above the
//! lower side (textbook statics, for example White, Fluid Mechanics, hydrostatic forces on plane
//! surfaces):
//!
//! * `q0 = b x (y - x sin / 2)`,
//! * `q1 = b x (y (x - l) / 2 - x sin (x / 3 - l / 4))`, about the level line at half length,
//! * `q2 = b x² (y / 2 - x sin / 3)`, about the lower side.

use super::Wetted;
use crate::lane::Lane;

/// A rectangle on a slope that is not level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rectangle {
    /// Area, m².
    pub(super) area_m2: f32,
    /// Height of the upper above the lower side, m.
    pub(super) rise_m: f32,
    /// Half the length.
    pub(super) centroid_m: f32,
    width_m: f32,
    length_m: f32,
    sine: f32,
    per_sine: f32,
}

impl Rectangle {
    /// A rectangle of level width `width_m` and length `length_m` along a slope with the sine
    /// `sine` (above zero, at most one).
    #[must_use]
    pub fn new(width_m: f32, length_m: f32, sine: f32) -> Self {
        Self {
            area_m2: width_m * length_m,
            rise_m: length_m * sine,
            centroid_m: 0.5 * length_m,
            width_m,
            length_m,
            sine,
            per_sine: 1.0 / sine,
        }
    }

    /// Level width and length along the slope, m.
    #[must_use]
    pub const fn sides_m(&self) -> [f32; 2] {
        [self.width_m, self.length_m]
    }

    /// See [`super::Shape::wetted`].
    #[inline]
    pub(super) fn wetted<const N: usize>(&self, y_m: Lane<N>) -> Wetted<N> {
        let x = (y_m * self.per_sine).ramp().at_most(Lane::splat(self.length_m));
        let strip = x * self.width_m;
        let drop = x * self.sine;
        let q0 = strip * (y_m - drop * 0.5);
        let lever =
            y_m * (x - self.length_m) * 0.5 - drop * (x * (1.0 / 3.0) - 0.25 * self.length_m);
        let q2 = strip * x * (y_m * 0.5 - drop * (1.0 / 3.0));
        Wetted { q0, q1: strip * lever, q2 }
    }
}
