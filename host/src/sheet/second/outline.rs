//! Widths of flat outlines from the dimensions of the drawing. `s` runs up the slope from the
//! lowest point, `x` runs level.

use super::quadrature::{integral, stretches};
use crate::tank::{Plane, Shape};

/// The chords of an outline `s` above its lowest point.
fn chords(shape: &Shape, s: f64) -> Vec<[f64; 2]> {
    let round = |radius: f64, from_middle: f64| {
        (radius * radius - from_middle * from_middle).max(0.0).sqrt()
    };
    let half = match *shape {
        Shape::Circle { diameter_m } => round(0.5 * diameter_m, s - 0.5 * diameter_m),
        Shape::Ellipse { width_m, length_m } => {
            let along = 2.0 * s / length_m - 1.0;
            0.5 * width_m * (1.0 - along * along).max(0.0).sqrt()
        }
        Shape::Obround { width_m, length_m } if width_m >= length_m => {
            0.5 * (width_m - length_m) + round(0.5 * length_m, s - 0.5 * length_m)
        }
        Shape::Obround { width_m, length_m } => {
            let radius = 0.5 * width_m;
            let beyond = (radius - s).max(s - (length_m - radius)).max(0.0);
            round(radius, beyond)
        }
        Shape::Rectangle { width_m, .. } => 0.5 * width_m,
        Shape::Triangle { base_m, height_m, apex_up } => {
            let share = s / height_m;
            0.5 * base_m * if apex_up { 1.0 - share } else { share }
        }
        Shape::Trapezoid { top_m, bottom_m, length_m } => {
            0.5 * (bottom_m + (top_m - bottom_m) * s / length_m)
        }
        Shape::Polygon(ref corners) => return crossings(corners.points(), s),
    };
    if (0.0..=length_m(shape)).contains(&s) { vec![[-half, half]] } else { Vec::new() }
}

fn lowest(points: &[[f64; 2]]) -> f64 {
    points.iter().map(|point| point[1]).fold(f64::INFINITY, f64::min)
}

/// Where the sides of a polygon cross the level line.
fn crossings(points: &[[f64; 2]], s: f64) -> Vec<[f64; 2]> {
    let line = lowest(points) + s;
    let mut found = Vec::new();
    let mut from = points.last().copied().unwrap_or([0.0; 2]);
    for &to in points {
        let (low, high) = if from[1] < to[1] { (from, to) } else { (to, from) };
        if low[1] <= line && line < high[1] {
            let share = (line - low[1]) / (high[1] - low[1]);
            found.push(low[0] + share * (high[0] - low[0]));
        }
        from = to;
    }
    found.sort_by(f64::total_cmp);
    found.chunks_exact(2).map(|pair| [pair[0], pair[1]]).collect()
}

fn length_m(shape: &Shape) -> f64 {
    match *shape {
        Shape::Circle { diameter_m } => diameter_m,
        Shape::Triangle { height_m, .. } => height_m,
        Shape::Ellipse { length_m, .. }
        | Shape::Obround { length_m, .. }
        | Shape::Rectangle { length_m, .. }
        | Shape::Trapezoid { length_m, .. } => length_m,
        Shape::Polygon(ref corners) => {
            let points = corners.points();
            let highest = points.iter().map(|point| point[1]).fold(f64::NEG_INFINITY, f64::max);
            highest - lowest(points)
        }
    }
}

/// Places at which the width turns or ends.
fn corners(shape: &Shape) -> Vec<f64> {
    let mut found = vec![0.0, length_m(shape)];
    match *shape {
        Shape::Obround { width_m, length_m } if width_m < length_m => {
            found.extend([0.5 * width_m, length_m - 0.5 * width_m]);
        }
        Shape::Polygon(ref corners) => {
            let points = corners.points();
            found.extend(points.iter().map(|point| point[1] - lowest(points)));
        }
        _ => {}
    }
    found
}

/// A flat surface, ready to be integrated over.
#[derive(Debug)]
pub(super) struct Area<'a> {
    plane: &'a Plane,
    /// Sine of the slope; zero of a level surface.
    pub(super) sine: f64,
    pub(super) length_m: f64,
    corners: Vec<f64>,
    pub(super) size_m2: f64,
    /// Centroid up the slope from the lowest point.
    pub(super) centroid_m: f64,
}

impl<'a> Area<'a> {
    pub(super) fn new(plane: &'a Plane) -> Self {
        let mut corners = corners(&plane.shape);
        if let Some(hole) = plane.left_out() {
            corners.extend(self::corners(&hole.shape).into_iter().map(|s| s + hole.at_m[1]));
        }
        let level = plane.slope_deg <= 0.0 || plane.slope_deg >= 180.0;
        let sine = if level { 0.0 } else { plane.slope_deg.to_radians().sin() };
        let length_m = length_m(&plane.shape);
        let mut found = Self { plane, sine, length_m, corners, size_m2: 0.0, centroid_m: 0.0 };
        let [area, first] = integral(&found.stretches([]), |s| {
            let width = found.width(s);
            [width, s * width]
        });
        (found.size_m2, found.centroid_m) = (area, first / area);
        found
    }

    /// Height above the datum of a place up the slope.
    pub(super) fn height_m(&self, s: f64) -> f64 {
        self.plane.heights.bottom_m + s * self.sine
    }

    /// The stretches between corners and the heights given.
    pub(super) fn stretches(&self, heights_m: impl IntoIterator<Item = f64>) -> Vec<f64> {
        let bottom_m = self.plane.heights.bottom_m;
        let up = |z_m: f64| (z_m - bottom_m) / self.sine;
        let heights = heights_m.into_iter().filter(|_| self.sine > 0.0).map(up);
        stretches(0.0, self.length_m, heights.chain(self.corners.iter().copied()))
    }

    /// A sum over the chords at a place, those of an opening taken off.
    pub(super) fn across(&self, s: f64, of: impl Fn([f64; 2]) -> f64) -> f64 {
        let around: f64 = chords(&self.plane.shape, s).into_iter().map(&of).sum();
        let opening = self.plane.left_out().map_or(0.0, |hole| {
            let inside = chords(&hole.shape, s - hole.at_m[1]).into_iter();
            inside.map(|chord| of(chord.map(|x| x + hole.at_m[0]))).sum()
        });
        around - opening
    }

    pub(super) fn width(&self, s: f64) -> f64 {
        self.across(s, |[left, right]| right - left)
    }
}
