//! Outlines of flat surfaces.
//!
//! `x` runs level, `up` runs up the slope from the lowest point. A polygon keeps the x of its
//! points; all other outlines have x = 0 on their line of symmetry.

use std::f64::consts::PI;

/// Most corners of a polygon.
pub const CORNERS_MAX: usize = 16;

/// Outline of a flat surface.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// Circle.
    Circle {
        /// Diameter.
        diameter_m: f64,
    },
    /// Ellipse with a level axis.
    Ellipse {
        /// Level axis.
        width_m: f64,
        /// Axis up the slope.
        length_m: f64,
    },
    /// Rectangle with a half circle at each end of its longer direction.
    Obround {
        /// Level extent over all.
        width_m: f64,
        /// Extent up the slope over all.
        length_m: f64,
    },
    /// Rectangle with one level pair of edges.
    Rectangle {
        /// Level extent.
        width_m: f64,
        /// Extent along the slope.
        length_m: f64,
    },
    /// Triangle of two equal legs with a level base.
    Triangle {
        /// Base.
        base_m: f64,
        /// Height up the slope.
        height_m: f64,
        /// Whether the apex is its highest point.
        apex_up: bool,
    },
    /// Symmetric trapezoid with a level top and bottom.
    Trapezoid {
        /// Upper side.
        top_m: f64,
        /// Lower side.
        bottom_m: f64,
        /// Extent along the slope.
        length_m: f64,
    },
    /// Polygon that does not cross itself.
    Polygon(Corners),
}

/// Corners of a polygon in order: sideways and up the slope, in metres.
#[derive(Clone, Debug, PartialEq)]
pub struct Corners {
    at_m: Vec<[f64; 2]>,
}

impl Corners {
    /// The corners; `None` when there are fewer than three or more than [`CORNERS_MAX`].
    #[must_use]
    pub fn new(points: &[[f64; 2]]) -> Option<Self> {
        (3..=CORNERS_MAX).contains(&points.len()).then(|| Self { at_m: points.to_vec() })
    }

    /// The corners in order.
    #[must_use]
    pub fn points(&self) -> &[[f64; 2]] {
        &self.at_m
    }

    /// The sides, each from corner to corner.
    fn sides(&self) -> impl Iterator<Item = ([f64; 2], [f64; 2])> + Clone {
        let points = self.points();
        points.iter().copied().zip(points.iter().copied().cycle().skip(1))
    }

    /// Twice the area inside, negative when the corners run clockwise.
    fn doubled_area_m2(&self) -> f64 {
        self.sides().map(|(a, b)| a[0] * b[1] - b[0] * a[1]).sum()
    }

    /// Area inside, m².
    #[must_use]
    pub fn area_m2(&self) -> f64 {
        0.5 * self.doubled_area_m2().abs()
    }

    /// The first two sides that meet where no corner is shared, by number from 1.
    #[must_use]
    pub fn crossing(&self) -> Option<(usize, usize)> {
        let sides: Vec<_> = self.sides().collect();
        let turn = |a: [f64; 2], b: [f64; 2], c: [f64; 2]| {
            (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
        };
        let apart = |(a, b): ([f64; 2], [f64; 2]), (c, d): ([f64; 2], [f64; 2])| {
            turn(a, b, c) * turn(a, b, d) > 0.0 || turn(c, d, a) * turn(c, d, b) > 0.0
        };
        for (i, &one) in sides.iter().enumerate() {
            for (j, &other) in sides.iter().enumerate().skip(i + 2) {
                let neighbours = i == 0 && j + 1 == sides.len();
                if !neighbours && !apart(one, other) && boxes_meet(one, other) {
                    return Some((i + 1, j + 1));
                }
            }
        }
        None
    }

    /// The lowest corner.
    pub(in crate::tank) fn lowest_m(&self) -> f64 {
        self.points().iter().map(|point| point[1]).fold(f64::INFINITY, f64::min)
    }

    /// Ends of the chords `up_m` above the lowest corner, from left to right.
    fn chords(&self, up_m: f64) -> Vec<[f64; 2]> {
        let s = up_m + self.lowest_m();
        let crossed = self.sides().filter(|(a, b)| (a[1] <= s) != (b[1] <= s));
        let mut at: Vec<f64> =
            crossed.map(|(a, b)| a[0] + (b[0] - a[0]) * (s - a[1]) / (b[1] - a[1])).collect();
        at.sort_by(f64::total_cmp);
        at.chunks_exact(2).map(|pair| [pair[0], pair[1]]).collect()
    }

    /// Between the heights of two neighbouring corners all chords together grow evenly.
    fn strips(&self) -> Vec<Strip> {
        let lowest_m = self.lowest_m();
        let mut levels: Vec<f64> = self.points().iter().map(|p| p[1] - lowest_m).collect();
        levels.sort_by(f64::total_cmp);
        levels.dedup();
        let strip = |pair: &[f64]| {
            let (low_m, length_m) = (pair[0], pair[1] - pair[0]);
            let width = |share: f64| -> f64 {
                let chords = self.chords(low_m + share * length_m);
                chords.iter().map(|chord| chord[1] - chord[0]).sum()
            };
            // The width is straight between the two: take it well inside and draw it out.
            let (lower, upper) = (width(0.25), width(0.75));
            let growth = 2.0 * (upper - lower);
            let width_m = (lower - 0.25 * growth).max(0.0);
            Strip { low_m, length_m, width_m, growth: growth / length_m }
        };
        levels.windows(2).map(strip).collect()
    }
}

fn boxes_meet((a, b): ([f64; 2], [f64; 2]), (c, d): ([f64; 2], [f64; 2])) -> bool {
    let meet = |axis: usize| {
        a[axis].min(b[axis]) <= c[axis].max(d[axis]) && c[axis].min(d[axis]) <= a[axis].max(b[axis])
    };
    meet(0) && meet(1)
}

/// Piece of an outline between two level lines whose width is straight between them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Strip {
    /// Its lower side, up the slope.
    pub low_m: f64,
    /// Its extent up the slope.
    pub length_m: f64,
    /// Width at the lower side; negative in a hole.
    pub width_m: f64,
    /// Growth of the width per length.
    pub growth: f64,
}

/// Disc of an outline, its widths scaled, its two halves drawn apart.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Disc {
    /// Its lowest point, up the slope.
    pub low_m: f64,
    /// Radius up the slope.
    pub radius_m: f64,
    /// Width over length; negative in a hole.
    pub aspect: f64,
    /// Distance of the two halves.
    pub middle_m: f64,
}

/// What an outline is made of.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Pieces {
    /// Strips.
    pub strips: Vec<Strip>,
    /// Discs.
    pub discs: Vec<Disc>,
}

impl Pieces {
    /// Area (m²) and its first moment about the lowest point (m³) below the line `up_m`; beyond the
    /// outline that of all of it.
    #[must_use]
    pub fn below(&self, up_m: f64) -> [f64; 2] {
        let strips = self.strips.iter().map(|strip| strip.below(up_m));
        let discs = self.discs.iter().map(|disc| disc.below(up_m));
        strips.chain(discs).fold([0.0; 2], |sum, one| [sum[0] + one[0], sum[1] + one[1]])
    }

    /// Adds another outline, its lowest point `up_m` up the slope of this one, as a hole.
    pub(super) fn cut_out(&mut self, hole: &Self, up_m: f64) {
        let strips = hole.strips.iter().map(|strip| Strip {
            low_m: strip.low_m + up_m,
            width_m: -strip.width_m,
            growth: -strip.growth,
            ..*strip
        });
        self.strips.extend(strips);
        let discs = hole.discs.iter();
        self.discs.extend(discs.map(|disc| Disc {
            low_m: disc.low_m + up_m,
            aspect: -disc.aspect,
            ..*disc
        }));
        self.join();
    }

    /// One strip between two neighbouring ends, its width the sum of all that stand there.
    fn join(&mut self) {
        let ends = |strip: &Strip| [strip.low_m, strip.low_m + strip.length_m];
        let mut levels: Vec<f64> = self.strips.iter().flat_map(ends).collect();
        levels.sort_by(f64::total_cmp);
        levels.dedup_by(|a, b| *a - *b < 1e-9);
        let joined = |pair: &[f64]| {
            let (low_m, length_m) = (pair[0], pair[1] - pair[0]);
            let middle_m = low_m + 0.5 * length_m;
            let here = self.strips.iter().filter(|strip| {
                let [low, high] = ends(strip);
                low < middle_m && middle_m < high
            });
            here.fold(Strip { low_m, length_m, width_m: 0.0, growth: 0.0 }, |sum, one| Strip {
                width_m: sum.width_m + one.width_m + one.growth * (low_m - one.low_m),
                growth: sum.growth + one.growth,
                ..sum
            })
        };
        self.strips = levels.windows(2).map(joined).collect();
        self.strips.retain(|strip| strip.width_m != 0.0 || strip.growth != 0.0);
    }
}

impl Strip {
    fn below(&self, up_m: f64) -> [f64; 2] {
        let x = (up_m - self.low_m).clamp(0.0, self.length_m);
        let area = x * (self.width_m + 0.5 * self.growth * x);
        let lever = x * x * (0.5 * self.width_m + self.growth * x / 3.0);
        [area, self.low_m * area + lever]
    }
}

impl Disc {
    fn below(&self, up_m: f64) -> [f64; 2] {
        let (r, low) = (self.radius_m, self.low_m);
        // Segment of a circle below the chord at t radii above the centre, about the centre.
        let segment = |t: f64| {
            let t = t.clamp(-1.0, 1.0);
            let chord = (1.0 - t * t).sqrt();
            let area = r * r * (0.5 * PI + t * chord + t.asin());
            [area, -2.0 / 3.0 * (r * chord).powi(3)]
        };
        let half = segment(0.0);
        let d = up_m - low;
        let lower = segment((d / r - 1.0).min(0.0));
        let all = segment(((d - self.middle_m) / r - 1.0).max(0.0));
        let upper = [all[0] - half[0], all[1] - half[1]];
        let (centre, apart) = (low + r, low + r + self.middle_m);
        let area = lower[0] + upper[0];
        let first = lower[1] + centre * lower[0] + upper[1] + apart * upper[0];
        [self.aspect * area, self.aspect * first]
    }
}

impl Shape {
    /// What it is made of.
    #[must_use]
    pub fn pieces(&self) -> Pieces {
        let strip = |low_m: f64, length_m: f64, bottom_m: f64, top_m: f64| Strip {
            low_m,
            length_m,
            width_m: bottom_m,
            growth: (top_m - bottom_m) / length_m,
        };
        let disc = |radius_m: f64, aspect: f64, middle_m: f64| Disc {
            low_m: 0.0,
            radius_m,
            aspect,
            middle_m,
        };
        let of = |strips: Vec<Strip>, discs: Vec<Disc>| Pieces { strips, discs };
        match *self {
            Self::Circle { diameter_m: d } => of(vec![], vec![disc(0.5 * d, 1.0, 0.0)]),
            Self::Ellipse { width_m, length_m } => {
                of(vec![], vec![disc(0.5 * length_m, width_m / length_m, 0.0)])
            }
            Self::Obround { width_m: w, length_m: l } if w >= l => {
                of(vec![strip(0.0, l, w - l, w - l)], vec![disc(0.5 * l, 1.0, 0.0)])
            }
            Self::Obround { width_m: w, length_m: l } => {
                of(vec![strip(0.5 * w, l - w, w, w)], vec![disc(0.5 * w, 1.0, l - w)])
            }
            Self::Rectangle { width_m: w, length_m } => {
                of(vec![strip(0.0, length_m, w, w)], vec![])
            }
            Self::Triangle { base_m, height_m, apex_up } => {
                let [bottom, top] = if apex_up { [base_m, 0.0] } else { [0.0, base_m] };
                of(vec![strip(0.0, height_m, bottom, top)], vec![])
            }
            Self::Trapezoid { top_m, bottom_m, length_m } => {
                of(vec![strip(0.0, length_m, bottom_m, top_m)], vec![])
            }
            Self::Polygon(ref corners) => of(corners.strips(), vec![]),
        }
    }

    /// Its kind as files and outputs write it.
    #[must_use]
    pub const fn word(&self) -> &'static str {
        match self {
            Self::Circle { .. } => "circle",
            Self::Ellipse { .. } => "ellipse",
            Self::Obround { .. } => "obround",
            Self::Rectangle { .. } => "rectangle",
            Self::Triangle { .. } => "triangle",
            Self::Trapezoid { .. } => "trapezoid",
            Self::Polygon(_) => "polygon",
        }
    }

    /// Area, m².
    #[must_use]
    pub fn area_m2(&self) -> f64 {
        match *self {
            Self::Circle { diameter_m } => std::f64::consts::FRAC_PI_4 * diameter_m * diameter_m,
            Self::Rectangle { width_m, length_m } => width_m * length_m,
            Self::Polygon(ref corners) => corners.area_m2(),
            _ => self.pieces().below(f64::INFINITY)[0],
        }
    }

    /// Extent along the slope.
    #[must_use]
    pub fn length_m(&self) -> f64 {
        match *self {
            Self::Circle { diameter_m } => diameter_m,
            Self::Triangle { height_m, .. } => height_m,
            Self::Ellipse { length_m, .. }
            | Self::Obround { length_m, .. }
            | Self::Rectangle { length_m, .. }
            | Self::Trapezoid { length_m, .. } => length_m,
            Self::Polygon(ref corners) => extent(corners.points(), 1),
        }
    }

    /// Level extent.
    #[must_use]
    pub fn width_m(&self) -> f64 {
        match *self {
            Self::Circle { diameter_m } => diameter_m,
            Self::Triangle { base_m, .. } => base_m,
            Self::Trapezoid { top_m, bottom_m, .. } => top_m.max(bottom_m),
            Self::Ellipse { width_m, .. }
            | Self::Obround { width_m, .. }
            | Self::Rectangle { width_m, .. } => width_m,
            Self::Polygon(ref corners) => extent(corners.points(), 0),
        }
    }

    /// The centroid: x, and up the slope from the lowest point.
    #[must_use]
    pub fn centroid_m(&self) -> [f64; 2] {
        let middle = [0.0, 0.5 * self.length_m()];
        match *self {
            Self::Triangle { .. } | Self::Trapezoid { .. } => {
                let [area, first] = self.pieces().below(f64::INFINITY);
                [0.0, first / area]
            }
            Self::Polygon(ref corners) => {
                let cross = |a: [f64; 2], b: [f64; 2]| a[0] * b[1] - b[0] * a[1];
                let about = |axis: usize| -> f64 {
                    corners.sides().map(|(a, b)| (a[axis] + b[axis]) * cross(a, b)).sum()
                };
                let sixfold = 3.0 * corners.doubled_area_m2();
                [about(0) / sixfold, about(1) / sixfold - corners.lowest_m()]
            }
            _ => middle,
        }
    }

    /// Whether it looks the same turned upside down, as bolts around its middle ask for.
    #[must_use]
    pub const fn has_a_middle(&self) -> bool {
        !matches!(self, Self::Triangle { .. } | Self::Trapezoid { .. } | Self::Polygon(_))
    }

    /// Ends of the chords `up_m` above the lowest point, from left to right.
    #[must_use]
    pub fn chords(&self, up_m: f64) -> Vec<[f64; 2]> {
        if let Self::Polygon(corners) = self {
            return corners.chords(up_m);
        }
        let Pieces { strips, discs } = self.pieces();
        let strips = strips.iter().map(|strip| strip.width(up_m));
        let width: f64 = strips.chain(discs.iter().map(|disc| disc.width(up_m))).sum();
        if width > 0.0 { vec![[-0.5 * width, 0.5 * width]] } else { Vec::new() }
    }

    /// Whether `inner` lies inside this outline with its lowest point at `at_m`: x, and up the
    /// slope. Looked at on many level lines; a hair of overlap passes.
    #[must_use]
    pub fn holds(&self, inner: &Self, at_m: [f64; 2]) -> bool {
        const LINES: u16 = 256;
        let slack_m = 1e-6 * (self.length_m() + self.width_m());
        let length_m = inner.length_m();
        let ends = at_m[1] >= -slack_m && at_m[1] + length_m <= self.length_m() + slack_m;
        ends && (0..LINES).all(|line| {
            let up_m = (f64::from(line) + 0.5) / f64::from(LINES) * length_m;
            let around = self.chords(up_m + at_m[1]);
            inner.chords(up_m).iter().all(|chord| {
                let [left, right] = chord.map(|x| x + at_m[0]);
                around.iter().any(|out| out[0] - slack_m <= left && right <= out[1] + slack_m)
            })
        })
    }

    /// Whether `inner` lies inside this outline when both share the centroid.
    #[must_use]
    pub fn encloses(&self, inner: &Self) -> bool {
        let (own, other) = (self.centroid_m(), inner.centroid_m());
        self.holds(inner, [own[0] - other[0], own[1] - other[1]])
    }
}

impl Strip {
    fn width(&self, up_m: f64) -> f64 {
        let t = up_m - self.low_m;
        if (0.0..=self.length_m).contains(&t) { self.width_m + self.growth * t } else { 0.0 }
    }
}

impl Disc {
    fn width(&self, up_m: f64) -> f64 {
        let d = up_m - self.low_m;
        let apart = (d - self.radius_m).clamp(0.0, self.middle_m);
        if apart > 0.0 && apart < self.middle_m {
            return 0.0;
        }
        let t = d - apart - self.radius_m;
        2.0 * self.aspect * (self.radius_m * self.radius_m - t * t).max(0.0).sqrt()
    }
}

fn extent(points: &[[f64; 2]], axis: usize) -> f64 {
    let along = points.iter().map(|point| point[axis]);
    along.clone().fold(f64::NEG_INFINITY, f64::max) - along.fold(f64::INFINITY, f64::min)
}
