//! Loads on plane parts: force, moments, centre of pressure.
//!
//! `slope_deg` is the angle through the liquid from the level floor: 0 floor, 90 wall, above 90
//! overhang, 180 roof. Force is positive from the liquid outwards.

use crate::liquid::{Pressure, kinks_and_zeros};
use crate::patch::Patch;
use crate::quadrature::{integral, visit};
use crate::shape::{Shape, Strip};
use crate::vector::Vec3;

/// An opening left out of a part, its load carried by others.
#[derive(Clone, Debug, PartialEq)]
pub struct Hole {
    /// Outline.
    pub shape: Shape,
    /// Where the origin of the outline lies in the coordinates of the part, (x, s) in m.
    pub origin: (f64, f64),
}

/// A flat part of a wall.
#[derive(Clone, Debug, PartialEq)]
pub struct PlanePart {
    /// Outline.
    pub shape: Shape,
    /// Openings in it.
    pub holes: Vec<Hole>,
    /// Height above the datum of the line s = 0, m.
    pub bottom_m: f64,
    /// Slope, degrees from 0 to 180.
    pub slope_deg: f64,
}

/// Where a flat part stands in space: a point of the line s = 0 on the line x = 0, and the
/// heading of the outward direction about the vertical.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Placement {
    /// Level coordinates of the origin, m.
    pub at: (f64, f64),
    /// Heading of the outward direction, rad from x to y.
    pub heading_rad: f64,
}

impl PlanePart {
    /// A part without openings.
    #[must_use]
    pub fn new(shape: Shape, bottom_m: f64, slope_deg: f64) -> Self {
        Self { shape, holes: Vec::new(), bottom_m, slope_deg }
    }

    /// The part whose highest point lies at `top_m` and whose lowest at the height that follows.
    #[must_use]
    pub fn hung_at(shape: Shape, top_m: f64, slope_deg: f64) -> Self {
        let top = shape.extent().1;
        let mut part = Self::new(shape, 0.0, slope_deg);
        part.bottom_m = top_m - top * part.rise();
        part
    }

    /// The part whose centroid lies at `centre_m`.
    #[must_use]
    pub fn centred_at(shape: Shape, centre_m: f64, slope_deg: f64) -> Self {
        let mut part = Self::new(shape, 0.0, slope_deg);
        part.bottom_m = centre_m - part.centroid().1 * part.rise();
        part
    }

    /// Rise per unit length up the slope; exactly 0 for level parts.
    #[must_use]
    pub fn rise(&self) -> f64 {
        let level = self.slope_deg <= 0.0 || self.slope_deg >= 180.0;
        if level { 0.0 } else { self.slope_deg.to_radians().sin() }
    }

    /// Height of the level line s, m.
    #[must_use]
    pub fn height_of(&self, s: f64) -> f64 {
        self.bottom_m + s * self.rise()
    }

    /// Lowest and highest height of the part, m.
    #[must_use]
    pub fn heights(&self) -> (f64, f64) {
        let (low, high) = self.shape.extent();
        (self.height_of(low), self.height_of(high))
    }

    fn strips(&self) -> Vec<Strip> {
        let mut strips = self.shape.strips((0.0, 0.0), 1.0);
        for hole in &self.holes {
            strips.extend(hole.shape.strips(hole.origin, -1.0));
        }
        strips
    }

    /// s of the level lines at `heights`; none for a level part.
    fn lines_at(&self, heights: &[f64]) -> Vec<f64> {
        let rise = self.rise();
        if rise == 0.0 {
            return Vec::new();
        }
        heights.iter().map(|z| (z - self.bottom_m) / rise).collect()
    }

    /// Integral of `f(x, s)` over the part, exact where `f` is smooth between the level lines
    /// `lines`.
    pub fn over(&self, lines: &[f64], f: impl Fn(f64, f64) -> f64) -> f64 {
        let mut sum = 0.0;
        for strip in self.strips() {
            let breaks: Vec<f64> = lines.iter().filter_map(|s| strip.parameter(*s)).collect();
            visit(strip.range.0, strip.range.1, &breaks, |u, du| {
                let (s, stretch) = strip.slope_coordinate(u);
                let (left, right) = (strip.chord)(u);
                let chord = integral(left, right, &[], |x| f(x, s));
                sum += strip.sign * chord * stretch * du;
            });
        }
        sum
    }

    /// Area, m2.
    #[must_use]
    pub fn area(&self) -> f64 {
        self.over(&[], |_, _| 1.0)
    }

    /// Centroid (x, s), m.
    #[must_use]
    pub fn centroid(&self) -> (f64, f64) {
        let area = self.area();
        (self.over(&[], |x, _| x) / area, self.over(&[], |_, s| s) / area)
    }

    /// Height of the centroid, m.
    #[must_use]
    pub fn centroid_height(&self) -> f64 {
        self.height_of(self.centroid().1)
    }

    /// Integral of p(z) f(x, s) over the part, for `f` smooth.
    pub fn pressed(&self, pressure: &dyn Pressure, f: impl Fn(f64, f64) -> f64) -> f64 {
        let lines = self.lines_at(&pressure.kinks());
        self.over(&lines, |x, s| pressure.at(self.height_of(s)) * f(x, s))
    }

    /// Force, N.
    #[must_use]
    pub fn force(&self, pressure: &dyn Pressure) -> f64 {
        self.pressed(pressure, |_, _| 1.0)
    }

    /// Moment about the level line at `s`, N m: positive when the part above it is pushed outward.
    #[must_use]
    pub fn moment(&self, pressure: &dyn Pressure, s: f64) -> f64 {
        self.pressed(pressure, |_, along| along - s)
    }

    /// Moment about the upright line at `x`, N m: positive when the side of larger x is pushed
    /// outward.
    #[must_use]
    pub fn sideways_moment(&self, pressure: &dyn Pressure, x: f64) -> f64 {
        self.pressed(pressure, |across, _| across - x)
    }

    /// Integral of |p| dA, N.
    #[must_use]
    pub fn pressed_force(&self, pressure: &dyn Pressure) -> f64 {
        self.weighed(pressure, &[], |_, _| 1.0)
    }

    /// Integral of |p| |s - `s_line`| dA, N m.
    #[must_use]
    pub fn pressed_moment(&self, pressure: &dyn Pressure, s_line: f64) -> f64 {
        self.weighed(pressure, &[s_line], |_, s| (s - s_line).abs())
    }

    /// Integral over the height of |p| times |w| for the moment about the upright line `x_line`,
    /// with w the lever summed along each level line, N m. For tests of error bounds: relative
    /// error about 1e-6.
    #[must_use]
    pub fn pressed_sideways(&self, pressure: &dyn Pressure, x_line: f64) -> f64 {
        let (low, high) = self.shape.extent();
        let strips = self.strips();
        let slices: Vec<f64> =
            (1..200).map(|i| low + (high - low) * f64::from(i) / 200.0).collect();
        integral(low, high, &slices, |s| {
            let lever: f64 = strips
                .iter()
                .filter_map(|strip| strip.parameter(s).map(|u| (strip, u)))
                .map(|(strip, u)| {
                    let (left, right) = (strip.chord)(u);
                    strip.sign * (right - left) * (0.5 * (left + right) - x_line)
                })
                .sum();
            (pressure.at(self.height_of(s)) * lever).abs()
        })
    }

    fn weighed(
        &self,
        pressure: &dyn Pressure,
        more_lines: &[f64],
        f: impl Fn(f64, f64) -> f64,
    ) -> f64 {
        let mut lines = self.lines_at(&kinks_and_zeros(pressure));
        lines.extend(more_lines);
        self.over(&lines, |x, s| pressure.at(self.height_of(s)).abs() * f(x, s))
    }

    /// Centre of pressure (x, s), m; none when the force is at most a thousandth of the integral
    /// of |p| dA, where the load is a couple rather than a force.
    #[must_use]
    pub fn centre_of_pressure(&self, pressure: &dyn Pressure) -> Option<(f64, f64)> {
        let force = self.force(pressure);
        if force.abs() <= 1e-3 * self.pressed_force(pressure) {
            return None;
        }
        let (x, s) = self.centroid();
        Some((x + self.sideways_moment(pressure, x) / force, s + self.moment(pressure, s) / force))
    }

    /// Largest moment about the level line `s_line` that pressures between `lower` and `upper`
    /// can cause: the upper one where the lever is positive, the lower one where it is not.
    #[must_use]
    pub fn moment_bound(&self, lower: &dyn Pressure, upper: &dyn Pressure, s_line: f64) -> f64 {
        let mut lines = self.lines_at(&lower.kinks());
        lines.extend(self.lines_at(&upper.kinks()));
        lines.push(s_line);
        self.over(&lines, |_, s| {
            let governing = if s > s_line { upper } else { lower };
            governing.at(self.height_of(s)) * (s - s_line)
        })
    }

    /// The part as patches in space.
    #[must_use]
    pub fn patches(&self, placement: Placement) -> Vec<Patch> {
        self.strips().into_iter().map(|strip| self.patch(strip, placement)).collect()
    }

    fn patch(&self, strip: Strip, placement: Placement) -> Patch {
        let (sine, cosine) = (self.rise(), self.slope_deg.to_radians().cos());
        let (heading_sin, heading_cos) = placement.heading_rad.sin_cos();
        let (bottom, at) = (self.bottom_m, placement.at);
        let inward = [-sine * heading_cos, -sine * heading_sin, cosine];
        let Strip { range, map, chord, sign } = strip;
        let along = Strip { range, map, chord: Box::new(|_| (0.0, 0.0)), sign };
        let s_of = move |u: f64| along.slope_coordinate(u);
        let s_of = std::rc::Rc::new(s_of);
        let (for_height, for_point) = (s_of.clone(), s_of.clone());
        let point = move |u: f64, x: f64| -> Vec3 {
            let s = for_point(u).0;
            let out = s * cosine;
            [
                at.0 + out * heading_cos - x * heading_sin,
                at.1 + out * heading_sin + x * heading_cos,
                bottom + s * sine,
            ]
        };
        Patch {
            range,
            height: Box::new(move |u| bottom + for_height(u).0 * sine),
            across: chord,
            point: Box::new(point),
            into_liquid: Box::new(move |u, _| inward.map(|n| n * sign * s_of(u).1)),
        }
    }
}
