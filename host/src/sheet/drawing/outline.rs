//! Outlines of parts as they are seen: x sideways from the middle, z above the datum.

use crate::compile::curved::Profile;
use crate::tank::{Part, Plane, Shape, Surface};
use std::f64::consts::TAU;

/// Points along a round edge.
const POINTS: u16 = 48;

/// What is drawn of a part.
pub(super) struct Outline {
    /// Closed lines, or open ones of what is seen edge on.
    pub(super) rings: Vec<Vec<[f64; 2]>>,
    pub(super) holes: Vec<Vec<[f64; 2]>>,
    pub(super) open: bool,
}

/// The outline of a part; none of a course, which is drawn on the vessel.
pub(super) fn outline(part: &Part) -> Option<Outline> {
    match part {
        Part::Course(_) => None,
        Part::Panel(panel) => Some(plane(&panel.plane)),
        Part::Hatch(hatch) => Some(plane(&hatch.sealed)),
        Part::Curved(part) => Some(curved(&part.surface, part.heights.centre_m)),
    }
}

fn shares() -> impl Iterator<Item = f64> {
    (0..=POINTS).map(|point| f64::from(point) / f64::from(POINTS))
}

/// The edge of a flat shape, from its lowest point: x, and up the slope.
fn edge(shape: &Shape) -> Vec<[f64; 2]> {
    if let Shape::Polygon(corners) = shape {
        let points = corners.points();
        let lowest = points.iter().map(|point| point[1]).fold(f64::INFINITY, f64::min);
        return points.iter().map(|point| [point[0], point[1] - lowest]).collect();
    }
    let length = shape.length_m();
    // Dense where a round edge lies level.
    let places: Vec<f64> =
        shares().map(|share| 0.5 * length * (1.0 - (0.5 * TAU * share).cos())).collect();
    let chord = |s: f64| {
        let inside = s.clamp(1e-9 * length, length * (1.0 - 1e-9));
        shape.chords(inside).first().copied().unwrap_or([0.0; 2])
    };
    let right = places.iter().map(|&s| [chord(s)[1], s]);
    let left = places.iter().rev().map(|&s| [chord(s)[0], s]);
    right.chain(left).collect()
}

fn plane(plane: &Plane) -> Outline {
    let bottom = plane.heights.bottom_m;
    let sine = plane.sine();
    let seen = |shape: &Shape, [x, up]: [f64; 2]| -> Vec<[f64; 2]> {
        edge(shape).into_iter().map(|[a, s]| [a + x, bottom + (s + up) * sine]).collect()
    };
    if plane.is_level() {
        let half = 0.5 * plane.shape.width_m();
        let line = vec![[-half, bottom], [half, bottom]];
        return Outline { rings: vec![line], holes: Vec::new(), open: true };
    }
    let mut rings = vec![seen(&plane.shape, [0.0; 2])];
    let hole = plane.hole.as_ref().map(|hole| seen(&hole.shape, hole.at_m));
    let mut holes: Vec<Vec<[f64; 2]>> = hole.into_iter().collect();
    // A polygon keeps the x of its points: move it to the middle.
    let middle = Outline { rings: rings.clone(), holes: Vec::new(), open: false }.middle()[0];
    for ring in rings.iter_mut().chain(&mut holes) {
        for point in ring {
            point[0] -= middle;
        }
    }
    Outline { rings, holes, open: false }
}

fn curved(surface: &Surface, reference_m: f64) -> Outline {
    match *surface {
        Surface::Arc { radius_m, from_deg, to_deg, .. } => {
            let angles =
                shares().map(|share| (from_deg + share * (to_deg - from_deg)).to_radians());
            let points: Vec<[f64; 2]> = angles
                .map(|angle| [radius_m * angle.cos(), reference_m + radius_m * angle.sin()])
                .collect();
            centred(points, true)
        }
        Surface::Dome { radius_m, .. } => {
            let points = shares().map(|share| {
                let (sine, cosine) = (TAU * share).sin_cos();
                [radius_m * cosine, reference_m + radius_m * sine]
            });
            centred(points.collect(), false)
        }
        Surface::Revolved { profile, base_radius_m, height_m, apex_up } => {
            let up = if apex_up { 1.0 } else { -1.0 };
            let radius = |share: f64| match profile {
                Profile::Cone => base_radius_m * (1.0 - share),
                Profile::Ellipsoid => base_radius_m * (1.0 - share * share).max(0.0).sqrt(),
                Profile::Sphere => {
                    let sphere_m = (base_radius_m.powi(2) + height_m.powi(2)) / (2.0 * height_m);
                    let above_m = sphere_m - height_m + share * height_m;
                    (sphere_m.powi(2) - above_m.powi(2)).max(0.0).sqrt()
                }
            };
            let at = |share: f64| reference_m + up * share * height_m;
            let right = shares().map(|share| [radius(share), at(share)]);
            let left: Vec<[f64; 2]> = shares().map(|share| [-radius(share), at(share)]).collect();
            centred(right.chain(left.into_iter().rev()).collect(), false)
        }
        Surface::Mesh(ref mesh) => {
            let corners = mesh.triangles.iter().flatten();
            centred(hull(corners.map(|corner| [corner[0], corner[2]]).collect()), false)
        }
    }
}

/// The convex line around points (Andrew's monotone chain).
fn hull(mut points: Vec<[f64; 2]>) -> Vec<[f64; 2]> {
    points.sort_by(|a, b| a[0].total_cmp(&b[0]).then(a[1].total_cmp(&b[1])));
    let side = |points: &mut dyn Iterator<Item = [f64; 2]>| {
        let mut line: Vec<[f64; 2]> = Vec::new();
        for point in points {
            while let [.., a, b] = line[..]
                && (b[0] - a[0]) * (point[1] - a[1]) <= (b[1] - a[1]) * (point[0] - a[0])
            {
                line.pop();
            }
            line.push(point);
        }
        line.pop();
        line
    };
    let mut around = side(&mut points.iter().copied());
    around.extend(side(&mut points.iter().rev().copied()));
    around
}

fn centred(points: Vec<[f64; 2]>, open: bool) -> Outline {
    let middle = Outline { rings: vec![points.clone()], holes: Vec::new(), open }.middle()[0];
    let points = points.into_iter().map(|[x, z]| [x - middle, z]).collect();
    Outline { rings: vec![points], holes: Vec::new(), open }
}

impl Outline {
    /// A rectangle between two heights.
    pub(super) fn rectangle(width_m: f64, [bottom, top]: [f64; 2]) -> Self {
        let half = 0.5 * width_m;
        let ring = vec![[-half, bottom], [half, bottom], [half, top], [-half, top]];
        Self { rings: vec![ring], holes: Vec::new(), open: false }
    }

    fn extent(&self, axis: usize) -> [f64; 2] {
        let all = self.rings.iter().flatten().map(|point| point[axis]);
        all.fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], one| {
            [low.min(one), high.max(one)]
        })
    }

    pub(super) fn width_m(&self) -> f64 {
        let [low, high] = self.extent(0);
        high - low
    }

    /// Half way between the ends in both directions.
    pub(super) fn middle(&self) -> [f64; 2] {
        [0, 1].map(|axis| {
            let [low, high] = self.extent(axis);
            0.5 * (low + high)
        })
    }
}
