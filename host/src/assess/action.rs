//! Where the force on a curved part acts: its line by its components, in f64 from the surface
//! itself.

use crate::compile::curved::GAUSS;
use crate::mesh::{Mesh, Point, Triangle, normal};
use crate::tank::Surface;
use std::f64::consts::{FRAC_PI_6, PI, TAU};
use strake_core::pressure::Pressure;

/// Where a component acts is not said when it is below this share of the integral of `|p|` over
/// its projection: pressures cancel, and a couple is left.
const LEAST_SHARE: f64 = 1e-3;

/// Force and moment of the estimate. The **reference** is the axis of an arc, the centre of a dome
/// or the origin of a mesh.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Action {
    /// Force along x (angle 0), along y, upwards, N.
    pub force_n: Point,
    /// Moment about the reference, N m.
    pub moment_n_m: Point,
    /// `integral z dF_x` and `integral x dF_z` from the reference, N m.
    pub first_n_m: [f64; 2],
    /// `integral |p|` over the projections along x and upwards, N.
    pub pressed_n: [f64; 2],
    /// Height of the reference above the datum, m.
    pub reference_m: f64,
}

impl Action {
    /// Angle of the resultant above the horizontal, degrees counter-clockwise from angle 0. Of a
    /// mesh that is pressed along y too: above the horizontal, either way.
    #[must_use]
    pub fn angle_deg(&self) -> Option<f64> {
        let [x, y, z] = self.force_n;
        let pressed: f64 = self.pressed_n.iter().sum();
        let across = if y.abs() > 1e-9 * pressed { x.hypot(y) } else { x };
        (x.hypot(y).hypot(z) > LEAST_SHARE * pressed).then(|| z.atan2(across).to_degrees())
    }

    /// Height above the datum at which the force along x acts, m.
    #[must_use]
    pub fn x_acts_at_m(&self) -> Option<f64> {
        let there = self.force_n[0].abs() > LEAST_SHARE * self.pressed_n[0];
        there.then(|| self.reference_m + self.first_n_m[0] / self.force_n[0])
    }

    /// Distance from the reference along x at which the force upwards acts, m.
    #[must_use]
    pub fn z_acts_at_m(&self) -> Option<f64> {
        let there = self.force_n[2].abs() > LEAST_SHARE * self.pressed_n[1];
        there.then(|| self.first_n_m[1] / self.force_n[2])
    }

    /// A piece: its area along the axes out of the liquid, the mean of the pressure on it, and of
    /// pressure times place from the reference.
    fn add(&mut self, [ax, ay, az]: Point, p: f64, [px, py, pz]: Point) {
        for (sum, area) in self.force_n.iter_mut().zip([ax, ay, az]) {
            *sum += area * p;
        }
        let moment = [py * az - pz * ay, pz * ax - px * az, px * ay - py * ax];
        for (sum, more) in self.moment_n_m.iter_mut().zip(moment) {
            *sum += more;
        }
        self.first_n_m[0] += pz * ax;
        self.first_n_m[1] += px * az;
        self.pressed_n[0] += (ax * p).abs();
        self.pressed_n[1] += (az * p).abs();
    }
}

/// The force on a surface; none on a shell of revolution, whose force runs along its axis.
///
/// Exact up to f64: round surfaces by Gauss's rule between the places where the pressure turns,
/// triangles clipped there.
#[must_use]
pub fn action(surface: &Surface, reference_m: f64, pressure: &Pressure<1>) -> Option<Action> {
    let mut kinks: Vec<f64> =
        pressure.surfaces().iter().map(|one| f64::from(one.height_m.lane(0))).collect();
    kinks.sort_by(f64::total_cmp);
    let found = Action { reference_m, ..Action::default() };
    match *surface {
        Surface::Arc { radius_m, length_m, from_deg, to_deg, inside } => {
            let side = if inside { 1.0 } else { -1.0 };
            let range = [from_deg.to_radians(), to_deg.to_radians()];
            Some(round(found, radius_m, range, &kinks, pressure, |[x, z]| {
                let n = side * length_m * radius_m;
                ([n * x, 0.0, n * z], radius_m * x)
            }))
        }
        Surface::Dome { radius_m, inside } => {
            let side = if inside { 1.0 } else { -1.0 };
            let range = [-0.5 * PI, 0.5 * PI];
            Some(round(found, radius_m, range, &kinks, pressure, |[x, z]| {
                // Half a ring: its width, its plan, and the mean of x over that.
                let n = radius_m * radius_m * x;
                ([2.0 * n * x, 0.0, side * PI * n * z], side * radius_m * x * 2.0 / PI)
            }))
        }
        Surface::Revolved { .. } => None,
        Surface::Mesh(ref mesh) => Some(on_mesh(found, mesh, &kinks, pressure)),
    }
}

/// Sums over angles from the horizontal, between those at which the height is a kink. `element`
/// gives, for cosine and sine, the area over the angle and x from the reference.
fn round(
    mut found: Action,
    radius_m: f64,
    [from, to]: [f64; 2],
    kinks: &[f64],
    pressure: &Pressure<1>,
    element: impl Fn([f64; 2]) -> (Point, f64),
) -> Action {
    let mut ends = vec![from, to];
    for kink in kinks {
        let sine = (kink - found.reference_m) / radius_m;
        if sine.abs() < 1.0 {
            for angle in [sine.asin(), PI - sine.asin()] {
                ends.extend((-2..=2).map(|turn| angle + TAU * f64::from(turn)));
            }
        }
    }
    ends.extend((-12..=24).map(|twelfth| f64::from(twelfth) * FRAC_PI_6));
    ends.retain(|end| (from..=to).contains(end));
    ends.sort_by(f64::total_cmp);
    for pair in ends.windows(2) {
        let (start, long) = (pair[0], pair[1] - pair[0]);
        for (node, weight) in GAUSS {
            let (sine, cosine) = (start + node * long).sin_cos();
            let (area, x) = element([cosine, sine]);
            let z = radius_m * sine;
            let p = at(pressure, found.reference_m + z);
            found.add(area.map(|one| one * weight * long), p, [p * x, 0.0, p * z]);
        }
    }
    found
}

fn on_mesh(mut found: Action, mesh: &Mesh, kinks: &[f64], pressure: &Pressure<1>) -> Action {
    let mut ends = vec![f64::NEG_INFINITY];
    ends.extend(kinks);
    ends.push(f64::INFINITY);
    for (triangle, band) in
        mesh.triangles.iter().flat_map(|one| ends.windows(2).map(move |band| (one, band)))
    {
        let piece = clipped(triangle, [band[0], band[1]]);
        for two in piece.get(1..).unwrap_or(&[]).windows(2) {
            let corners = [piece[0], two[0], two[1]];
            let p = corners.map(|corner| at(pressure, corner[2]));
            let all: f64 = p.iter().sum();
            // A straight pressure times a straight place in the mean over a triangle.
            let placed = [0, 1, 2].map(|axis| {
                let from = if axis == 2 { found.reference_m } else { 0.0 };
                let place = corners.map(|corner| corner[axis] - from);
                let each: f64 = p.iter().zip(place).map(|(p, x)| p * x).sum();
                (each + all * place.iter().sum::<f64>()) / 12.0
            });
            let area = normal(&corners).map(|twice| -0.5 * twice);
            found.add(area, all / 3.0, placed);
        }
    }
    found
}

/// The piece of a triangle between two heights (Sutherland and Hodgman's clipping).
fn clipped(triangle: &Triangle, [low, high]: [f64; 2]) -> Vec<Point> {
    let keep = |points: Vec<Point>, inside: &dyn Fn(f64) -> f64| -> Vec<Point> {
        let mut kept = Vec::new();
        for (index, &point) in points.iter().enumerate() {
            let next = points[(index + 1) % points.len()];
            let (here, there) = (inside(point[2]), inside(next[2]));
            if here >= 0.0 {
                kept.push(point);
            }
            if (here > 0.0 && there < 0.0) || (here < 0.0 && there > 0.0) {
                let share = here / (here - there);
                kept.push([0, 1, 2].map(|axis| point[axis] + share * (next[axis] - point[axis])));
            }
        }
        kept
    };
    let mut points = triangle.to_vec();
    if low.is_finite() {
        points = keep(points, &|z| z - low);
    }
    if high.is_finite() {
        points = keep(points, &|z| high - z);
    }
    points
}

fn at(pressure: &Pressure<1>, z_m: f64) -> f64 {
    let gas = f64::from(pressure.gas_pa.lane(0));
    let under = pressure.surfaces().iter().map(|one| {
        let head_m = (f64::from(one.height_m.lane(0)) - z_m).max(0.0);
        f64::from(one.step_n_m3.lane(0)) * head_m
    });
    gas + under.sum::<f64>()
}
