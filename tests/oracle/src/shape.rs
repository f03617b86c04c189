//! Plane outlines cut into strips between level lines.
//!
//! Local coordinates: x sideways, s up the slope. Every outline but the polygon has x = 0 on its
//! line of symmetry and s = 0 at its lowest point; a polygon keeps the coordinates of its corners.

use std::f64::consts::FRAC_PI_2;
use std::fmt;

/// An outline in its own plane, lengths in metres.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// Circle.
    Circle {
        /// Diameter.
        diameter: f64,
    },
    /// Ellipse, width level, length up the slope.
    Ellipse {
        /// Level axis.
        width: f64,
        /// Axis up the slope.
        length: f64,
    },
    /// Rectangle with two half circles at the ends of its longer direction.
    Obround {
        /// Level extent.
        width: f64,
        /// Extent up the slope.
        length: f64,
    },
    /// Rectangle.
    Rectangle {
        /// Level side.
        width: f64,
        /// Side up the slope.
        length: f64,
    },
    /// Isosceles triangle with a level base.
    Triangle {
        /// Base.
        base: f64,
        /// Height up the slope.
        height: f64,
        /// Whether the apex is the highest point.
        apex_up: bool,
    },
    /// Symmetric trapezoid with level top and bottom.
    Trapezoid {
        /// Upper side.
        top: f64,
        /// Lower side.
        bottom: f64,
        /// Length up the slope.
        length: f64,
    },
    /// Half circle with its diameter level and uppermost.
    HalfDisc {
        /// Radius.
        radius: f64,
    },
    /// Polygon without self-crossing.
    Polygon {
        /// Corners (x, s) in order.
        corners: Vec<(f64, f64)>,
    },
}

/// How the parameter of a strip maps to s.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Map {
    /// s = u.
    Straight,
    /// s = centre + radius sin u: removes the square root at the end of a round outline.
    Sine {
        /// s of the centre.
        centre: f64,
        /// Half extent.
        radius: f64,
    },
}

/// Part of an outline between two level lines, met by each level line in one chord.
pub struct Strip {
    /// Range of the parameter u.
    pub range: (f64, f64),
    /// From u to s.
    pub map: Map,
    /// Ends of the chord at u.
    pub chord: Box<dyn Fn(f64) -> (f64, f64)>,
    /// +1, or -1 for a hole.
    pub sign: f64,
}

impl fmt::Debug for Strip {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut out = f.debug_struct("Strip");
        out.field("range", &self.range).field("map", &self.map).finish_non_exhaustive()
    }
}

impl Strip {
    /// s and ds/du at u.
    #[must_use]
    pub fn slope_coordinate(&self, u: f64) -> (f64, f64) {
        match self.map {
            Map::Straight => (u, 1.0),
            Map::Sine { centre, radius } => (centre + radius * u.sin(), radius * u.cos()),
        }
    }

    /// The parameter of the level line at s, if it meets the strip.
    #[must_use]
    pub fn parameter(&self, s: f64) -> Option<f64> {
        let u = match self.map {
            Map::Straight => s,
            Map::Sine { centre, radius } => ((s - centre) / radius).asin(),
        };
        (self.range.0 < u && u < self.range.1).then_some(u)
    }

    /// The strip moved by (x, s).
    fn moved(self, x: f64, s: f64) -> Self {
        let chord = self.chord;
        let (map, shift) = match self.map {
            Map::Straight => (Map::Straight, s),
            Map::Sine { centre, radius } => (Map::Sine { centre: centre + s, radius }, 0.0),
        };
        Self {
            range: (self.range.0 + shift, self.range.1 + shift),
            map,
            chord: Box::new(move |u| {
                let (low, high) = chord(u - shift);
                (low + x, high + x)
            }),
            sign: self.sign,
        }
    }
}

impl Shape {
    /// Strips of the outline moved by (`x`, `s`), each counted with `sign`.
    #[must_use]
    pub fn strips(&self, (x, s): (f64, f64), sign: f64) -> Vec<Strip> {
        let strips = match *self {
            Self::Circle { diameter } => vec![oval(diameter, diameter, 0.0)],
            Self::Ellipse { width, length } => vec![oval(width, length, 0.0)],
            Self::Obround { width, length } => obround(width, length),
            Self::Rectangle { width, length } => vec![trapezoid(width, width, length)],
            Self::Triangle { base, height, apex_up: true } => vec![trapezoid(base, 0.0, height)],
            Self::Triangle { base, height, apex_up: false } => vec![trapezoid(0.0, base, height)],
            Self::Trapezoid { top, bottom, length } => vec![trapezoid(bottom, top, length)],
            Self::HalfDisc { radius } => vec![round((-FRAC_PI_2, 0.0), radius, radius, 0.0)],
            Self::Polygon { ref corners } => polygon(corners),
        };
        strips.into_iter().map(|strip| Strip { sign, ..strip.moved(x, s) }).collect()
    }

    /// Lowest and highest s.
    #[must_use]
    pub fn extent(&self) -> (f64, f64) {
        match *self {
            Self::Circle { diameter } => (0.0, diameter),
            Self::Ellipse { length, .. }
            | Self::Obround { length, .. }
            | Self::Rectangle { length, .. }
            | Self::Trapezoid { length, .. } => (0.0, length),
            Self::Triangle { height, .. } => (0.0, height),
            Self::HalfDisc { radius } => (0.0, radius),
            Self::Polygon { ref corners } => {
                corners.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), corner| {
                    (low.min(corner.1), high.max(corner.1))
                })
            }
        }
    }
}

/// A round strip: s = centre + half sin u, chord of half width `half_width` cos u + `extra`.
/// The centre lies at s = `half`.
fn round(range: (f64, f64), half_width: f64, half: f64, extra: f64) -> Strip {
    Strip {
        range,
        map: Map::Sine { centre: half, radius: half },
        chord: Box::new(move |u| {
            let reach = half_width * u.cos() + extra;
            (-reach, reach)
        }),
        sign: 1.0,
    }
}

fn oval(width: f64, length: f64, extra: f64) -> Strip {
    round((-FRAC_PI_2, FRAC_PI_2), 0.5 * width, 0.5 * length, extra)
}

fn obround(width: f64, length: f64) -> Vec<Strip> {
    if width >= length {
        return vec![oval(length, length, 0.5 * (width - length))];
    }
    let radius = 0.5 * width;
    vec![
        round((-FRAC_PI_2, 0.0), radius, radius, 0.0),
        trapezoid(width, width, length - width).moved(0.0, radius),
        round((0.0, FRAC_PI_2), radius, radius, 0.0).moved(0.0, length - width),
    ]
}

fn trapezoid(bottom: f64, top: f64, length: f64) -> Strip {
    Strip {
        range: (0.0, length),
        map: Map::Straight,
        chord: Box::new(move |s| {
            let reach = 0.5 * (bottom + (top - bottom) * s / length);
            (-reach, reach)
        }),
        sign: 1.0,
    }
}

/// Between two neighbouring corner heights the edges do not cross: pair them from left to right.
fn polygon(corners: &[(f64, f64)]) -> Vec<Strip> {
    let mut levels: Vec<f64> = corners.iter().map(|corner| corner.1).collect();
    levels.sort_by(f64::total_cmp);
    levels.dedup();
    let next = corners.iter().cycle().skip(1);
    let edges: Vec<_> = corners.iter().copied().zip(next.copied()).collect();
    let mut strips = Vec::new();
    for pair in levels.windows(2) {
        let (low, high) = (pair[0], pair[1]);
        let middle = 0.5 * (low + high);
        let mut crossing: Vec<_> =
            edges.iter().copied().filter(|(a, b)| (a.1 < middle) != (b.1 < middle)).collect();
        crossing.sort_by(|e, f| x_on(*e, middle).total_cmp(&x_on(*f, middle)));
        for sides in crossing.chunks_exact(2) {
            let (left, right) = (sides[0], sides[1]);
            strips.push(Strip {
                range: (low, high),
                map: Map::Straight,
                chord: Box::new(move |s| (x_on(left, s), x_on(right, s))),
                sign: 1.0,
            });
        }
    }
    strips
}

type Edge = ((f64, f64), (f64, f64));

fn x_on((a, b): Edge, s: f64) -> f64 {
    a.0 + (b.0 - a.0) * (s - a.1) / (b.1 - a.1)
}
