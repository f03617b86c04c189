//! Curved parts: pressure times normal over the surface itself, along its own angle.

use super::Figure;
use super::plane::ERROR;
use super::profile::Profiles;
use super::quadrature::{integral, stretches};
use crate::tank::{Profile as Meridian, Surface};
use std::f64::consts::{FRAC_PI_2, PI};

/// Places at which tensions are taken along the meridian, beside the apex.
pub(crate) const PLACES: u32 = 12;

/// A surface by one parameter: height above its reference, and the components of `n dA` over it.
pub(super) struct Swept {
    pub(super) ends: Vec<f64>,
    /// From the parameter to the height and the two components.
    pub(super) at: Box<dyn Fn(f64) -> (f64, [f64; 2])>,
    /// What lies level: height, and the two components of `n A`.
    pub(super) level: Vec<(f64, [f64; 2])>,
}

/// Parameters at which a surface crosses heights: where `at` equals one of them, by bisection
/// between quarter turns.
fn crossed(swept: &Swept, heights_m: &[f64]) -> Vec<f64> {
    let mut found = Vec::new();
    for pair in swept.ends.windows(2) {
        let height = |t: f64| (swept.at)(t).0;
        let rises = height(pair[1]) > height(pair[0]);
        for &wanted in heights_m {
            let [mut low, mut high] = if rises { [pair[0], pair[1]] } else { [pair[1], pair[0]] };
            if !(height(low) < wanted && wanted < height(high)) {
                continue;
            }
            for _ in 0..200 {
                let middle = 0.5 * (low + high);
                if height(middle) < wanted { low = middle } else { high = middle }
            }
            found.push(0.5 * (low + high));
        }
    }
    found
}

/// The surface of a part whose reference (axis, centre or rim) stands at a height.
fn swept(surface: &Surface, reference_m: f64) -> Swept {
    match *surface {
        Surface::Arc { radius_m, length_m, from_deg, to_deg, inside } => {
            let side = if inside { 1.0 } else { -1.0 };
            let mut ends = vec![from_deg.to_radians()];
            let quarter = |turn: f64| (turn * 90.0).to_radians();
            let mut turn = (from_deg / 90.0).floor() + 1.0;
            while turn * 90.0 < to_deg - 1e-9 {
                ends.push(quarter(turn));
                turn += 1.0;
            }
            ends.push(to_deg.to_radians());
            let at = move |angle: f64| {
                let n = side * length_m * radius_m;
                let height_m = reference_m + radius_m * angle.sin();
                (height_m, [n * angle.cos(), n * angle.sin()])
            };
            Swept { ends, at: Box::new(at), level: Vec::new() }
        }
        Surface::Dome { radius_m, inside } => {
            let side = if inside { 1.0 } else { -1.0 };
            // Rings about the vertical, half of each: the angle counts from the top.
            let at = move |angle: f64| {
                let ring = side * radius_m * radius_m * angle.sin();
                let height_m = reference_m + radius_m * angle.cos();
                (height_m, [2.0 * ring * angle.sin(), PI * ring * angle.cos()])
            };
            Swept { ends: vec![0.0, FRAC_PI_2, PI], at: Box::new(at), level: Vec::new() }
        }
        Surface::Revolved { profile, base_radius_m, height_m, apex_up } => {
            let meridian = Shell { profile, base_m: base_radius_m, height_m, apex_up };
            let up = if apex_up { 1.0 } else { -1.0 };
            let at = move |t: f64| {
                let here = meridian.at(t);
                let z_m = reference_m + up * (height_m - here.from_apex_m);
                (z_m, [0.0, up * 2.0 * PI * here.radius_m * here.radius_slope])
            };
            Swept { ends: vec![0.0, 1.0], at: Box::new(at), level: Vec::new() }
        }
        Surface::Mesh(ref mesh) => super::mesh::swept(mesh),
    }
}

/// Force along angle 0 and upwards: of the estimate, largest and least. The rows of the first
/// method may be off by so many metres of liquid on all of the surface, and m³ of it together.
pub(super) fn forces(
    surface: &Surface,
    reference_m: f64,
    profiles: &Profiles,
    [rows_m, rows_m3]: [f64; 2],
) -> [[Figure; 3]; 2] {
    let swept = swept(surface, reference_m);
    let (from, to) = (swept.ends.first().copied(), swept.ends.last().copied());
    let (Some(from), Some(to)) = (from, to) else { return [[Figure::NONE; 3]; 2] };
    let inside = swept.ends.iter().copied().chain(crossed(&swept, &profiles.kinks()));
    let ends = stretches(from, to, inside);
    [0, 1].map(|axis| {
        let pressed = |z_m: f64, n: [f64; 2]| {
            let [p, upper, lower] = profiles.all().map(|one| one.at(z_m));
            let (out, back) = if n[axis] > 0.0 { (upper, lower) } else { (lower, upper) };
            let largest = p.abs().max(upper.abs()).max(lower.abs());
            let rows_pa = rows_m * profiles.heaviest_n_m3();
            let off = ERROR * largest + profiles.rounding_pa(z_m) + rows_pa;
            [p * n[axis], out * n[axis], back * n[axis], off * n[axis].abs()]
        };
        let mut sums = integral(&ends, |t| {
            let (z_m, n) = (swept.at)(t);
            pressed(z_m, n)
        });
        for &(z_m, n) in &swept.level {
            sums = sum(sums, pressed(z_m, n));
        }
        let [estimate, most, least, allowed] = sums;
        // In a bound both signs may be off apart.
        let allowed = allowed + 2.0 * rows_m3 * profiles.heaviest_n_m3();
        [estimate, most, least].map(|value| Figure { value, allowed })
    })
}

/// `integral n dA` of what lies below a height: along angle 0 and upwards, m².
pub(crate) fn below(surface: &Surface, reference_m: f64, height_m: f64) -> [f64; 2] {
    let swept = swept(surface, reference_m);
    let (Some(&from), Some(&to)) = (swept.ends.first(), swept.ends.last()) else {
        return [0.0; 2];
    };
    let inside = swept.ends.iter().copied().chain(crossed(&swept, &[height_m]));
    let found = integral(&stretches(from, to, inside), |t| {
        let (z_m, n) = (swept.at)(t);
        if z_m < height_m { n } else { [0.0; 2] }
    });
    let level = swept.level.iter().filter(|(z_m, _)| *z_m < height_m);
    level.fold(found, |found, &(_, n)| sum(found, n))
}

fn sum<const K: usize>(mut one: [f64; K], other: [f64; K]) -> [f64; K] {
    for (sum, more) in one.iter_mut().zip(other) {
        *sum += more;
    }
    one
}

/// A shell of revolution along its meridian.
#[derive(Clone, Copy)]
struct Shell {
    profile: Meridian,
    base_m: f64,
    height_m: f64,
    apex_up: bool,
}

/// A point of the meridian.
struct Point {
    from_apex_m: f64,
    radius_m: f64,
    /// Growth of the radius over the parameter.
    radius_slope: f64,
    /// Sine of the angle between normal and axis.
    sine: f64,
    /// Radius of curvature around the axis, and the curvature along the meridian.
    around_m: f64,
    along_per_m: f64,
}

impl Shell {
    /// `t` runs from 0 at the apex to 1 at the rim.
    fn at(&self, t: f64) -> Point {
        let (a, h) = (self.base_m, self.height_m);
        match self.profile {
            Meridian::Cone => {
                let sine = h / a.hypot(h);
                let radius_m = a * t;
                Point {
                    from_apex_m: h * t,
                    radius_m,
                    radius_slope: a,
                    sine,
                    around_m: radius_m / sine,
                    along_per_m: 0.0,
                }
            }
            Meridian::Sphere => {
                let r = (a * a + h * h) / (2.0 * h);
                let last = (1.0 - h / r).acos();
                let angle = last * t;
                Point {
                    from_apex_m: r * (1.0 - angle.cos()),
                    radius_m: r * angle.sin(),
                    radius_slope: r * angle.cos() * last,
                    sine: angle.sin(),
                    around_m: r,
                    along_per_m: 1.0 / r,
                }
            }
            Meridian::Ellipsoid => {
                let angle = FRAC_PI_2 * t;
                let (x, y) = (angle.sin(), angle.cos());
                // Speed along the curve x = a sin, z = h cos.
                let speed = (a * y).hypot(h * x);
                Point {
                    from_apex_m: h * (1.0 - y),
                    radius_m: a * x,
                    radius_slope: FRAC_PI_2 * a * y,
                    sine: h * x / speed,
                    around_m: a * speed / h,
                    along_per_m: a * h / speed.powi(3),
                }
            }
        }
    }

    /// The parameter at a distance from the apex along the axis.
    fn parameter(&self, from_apex_m: f64) -> f64 {
        let h = self.height_m;
        match self.profile {
            Meridian::Cone => from_apex_m / h,
            Meridian::Sphere => {
                let r = (self.base_m * self.base_m + h * h) / (2.0 * h);
                (1.0 - from_apex_m / r).acos() / (1.0 - h / r).acos()
            }
            Meridian::Ellipsoid => (1.0 - from_apex_m / h).acos() / FRAC_PI_2,
        }
    }
}

/// Tensions of a shell at one place, of the estimate.
#[derive(Clone, Copy, Debug)]
pub(crate) struct At {
    /// Height above the datum, m.
    pub(crate) z_m: f64,
    /// Radius, m.
    pub(crate) radius_m: f64,
    /// Force on what lies between the place and the apex, N.
    pub(crate) force_n: f64,
    /// Tension along the meridian, N/m.
    pub(crate) along_n_m: f64,
    /// Tension around the axis, N/m.
    pub(crate) around_n_m: f64,
}

/// Largest tension and largest compression (as a positive number) of a shell.
pub(crate) struct Tensions {
    pub(super) tension: [Figure; 2],
    /// Of the estimate and of the inward bound.
    pub(super) compression: [Figure; 2],
    pub(crate) places: Vec<At>,
}

/// Tensions by the equilibrium of what lies between a place and the apex (membrane theory).
pub(crate) fn tensions(
    surface: &Surface,
    reference_m: f64,
    profiles: &Profiles,
) -> Option<Tensions> {
    let Surface::Revolved { profile, base_radius_m, height_m, apex_up } = *surface else {
        return None;
    };
    let shell = Shell { profile, base_m: base_radius_m, height_m, apex_up };
    let mut found =
        Tensions { tension: [Figure::NONE; 2], compression: [Figure::NONE; 2], places: Vec::new() };
    for place in 0..=PLACES {
        let from_apex_m = height_m * f64::from(place) / f64::from(PLACES);
        let states = shell.tensions_at(from_apex_m, reference_m, profiles);
        let Membrane { at, most, least, allowed } = states;
        found.places.push(at);
        let put = |slot: &mut Figure, value: f64| {
            *slot = slot.larger(Figure { value: value.max(0.0), allowed });
        };
        put(&mut found.tension[0], at.along_n_m.max(at.around_n_m));
        put(&mut found.tension[1], most);
        put(&mut found.compression[0], -at.along_n_m.min(at.around_n_m));
        put(&mut found.compression[1], -least);
    }
    Some(found)
}

struct Membrane {
    at: At,
    most: f64,
    least: f64,
    allowed: f64,
}

impl Shell {
    fn tensions_at(&self, from_apex_m: f64, reference_m: f64, profiles: &Profiles) -> Membrane {
        let up = if self.apex_up { 1.0 } else { -1.0 };
        let height = |from_apex_m: f64| reference_m + up * (self.height_m - from_apex_m);
        let kinks = profiles.kinks().into_iter();
        let kinks = kinks.map(|z| self.height_m - up * (z - reference_m));
        let inside = kinks.filter(|s| (0.0..=self.height_m).contains(s));
        let parameters = inside.map(|s| self.parameter(s));
        let end = self.parameter(from_apex_m);
        let sums = integral(&stretches(0.0, end, parameters), |t| {
            let here = self.at(t);
            let z_m = height(here.from_apex_m);
            let ring = 2.0 * PI * here.radius_m * here.radius_slope;
            let [p, upper, lower] = profiles.all().map(|one| one.at(z_m));
            let largest = p.abs().max(upper.abs()).max(lower.abs());
            let off = ERROR * largest + profiles.rounding_pa(z_m);
            [p * ring, upper * ring, lower * ring, off * ring, ring]
        });
        let [force, upper, lower, off, area] = sums;
        let here = self.at(end);
        let z_m = height(from_apex_m);
        let [p, p_upper, p_lower] = profiles.all().map(|one| one.at(z_m));
        let off_pa = ERROR * p_upper.abs().max(p_lower.abs()) + profiles.rounding_pa(z_m);
        let at = |along_n_m: f64, around_n_m: f64| At {
            z_m,
            radius_m: here.radius_m,
            force_n: force,
            along_n_m,
            around_n_m,
        };
        if from_apex_m <= 0.0 {
            // Alike in all directions; the tip of a cone carries nothing.
            let half = 0.5 * here.around_m;
            let (most, least) = (p_upper * half, p_lower * half);
            return Membrane { at: at(p * half, p * half), most, least, allowed: off_pa * half };
        }
        let per_force = 1.0 / (2.0 * PI * here.radius_m * here.sine);
        let along = [force, upper, lower].map(|force| force * per_force);
        let taken = here.around_m * here.along_per_m;
        let around = |p: f64, along: f64| here.around_m * p - taken * along;
        let (low, high) = (along[1].min(along[2]), along[1].max(along[2]));
        // Around the axis the gas, alike everywhere, counts by one number, unless a reading that
        // holds it may mean liquid at the shell instead.
        let foot_m = height(0.0).min(height(self.height_m));
        let traded_pa = profiles.traded_pa;
        let tied = traded_pa > 0.0 && profiles.upper.reaches(foot_m, traded_pa);
        let per_gas = around(1.0, area * per_force);
        let gases = [&profiles.upper, &profiles.lower].map(|one| one.gas_pa);
        let of_gas = gases.map(|gas| gas * per_gas);
        let [fuller, emptier] = [0, 1].map(|end| {
            let along = along[end + 1] - gases[end] * area * per_force;
            (here.around_m * ([p_upper, p_lower][end] - gases[end]), -taken * along)
        });
        let apart = [
            of_gas[0].max(of_gas[1]) + fuller.0 + fuller.1.max(emptier.1),
            of_gas[0].min(of_gas[1]) + emptier.0 + fuller.1.min(emptier.1),
        ];
        let together = [around(p_upper, low), around(p_lower, high)];
        let [most, least] = if tied { together } else { apart };
        Membrane {
            at: at(along[0], around(p, along[0])),
            most: high.max(most),
            least: low.min(least),
            allowed: off * per_force * (1.0 + taken) + off_pa * here.around_m,
        }
    }
}
