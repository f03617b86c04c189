//! Round plates: Ritz's method for each circular harmonic.
//!
//! With the angle `f` from the lowest point, `w = sum c_mj u_mj(r) cos(m f)` on the unit circle,
//! `u_mj = (1 - r²)^q r^m P_j(2 r² - 1)`, `q = 2` clamped and 1 supported. The harmonics do not
//! mix. The deflection under a pressure linear over the whole plate is among these functions, so
//! plates wetted to the top are exact but for the quadrature, 1e-7 (Timoshenko and
//! Woinowsky-Krieger, art. 16, 62 and 63).

use super::legendre::nodes;
use super::linear::Factor;
use super::{
    DeflectionAt, Direction, MomentAt, POINT_STRETCHES, Place, PlateError, STRETCHES, Solution,
    Table, difference, float,
};
use std::f64::consts::PI;

/// Harmonics beside the zeroth, and functions of each; the coarser shows what the cut costs.
const ORDERS: [(usize, usize); 2] = [(20, 10), (16, 8)];

pub(super) fn solve(radius_m: f64, clamped: bool, poisson: f64) -> Result<Solution, PlateError> {
    let [fine, coarse] = ORDERS.map(|order| Disc::new(clamped, poisson, order));
    let (fine, coarse) = (fine?, coarse?);
    let moments = fine.moments(radius_m);
    let series_error = difference(&moments, &coarse.moments(radius_m), 2.0 * radius_m);
    let deflections = fine.deflections(radius_m);
    Ok(Solution { moments, deflections, reactions: Vec::new(), series_error })
}

/// One function at one radius: value, curvatures along and across the radius, twist.
#[derive(Clone, Copy, Debug)]
struct Bent {
    value: f64,
    along: f64,
    across: f64,
    twist: f64,
}

struct Disc {
    clamped: bool,
    poisson: f64,
    harmonics: usize,
    count: usize,
    factors: Vec<Factor>,
    /// For each row the integrals of all functions against its hat function.
    hats: Vec<Vec<f64>>,
}

impl Disc {
    fn new(clamped: bool, poisson: f64, (last, count): (usize, usize)) -> Result<Self, PlateError> {
        let harmonics = last + 1;
        let factors: Option<Vec<Factor>> =
            (0..harmonics).map(|m| stiffness(m, count, clamped, poisson)).collect();
        let factors = factors.ok_or(PlateError::Singular)?;
        let hats = hats(harmonics, count, clamped);
        Ok(Self { clamped, poisson, harmonics, count, factors, hats })
    }

    fn moments(&self, radius_m: f64) -> Vec<MomentAt> {
        let nu = self.poisson;
        let mut found = Vec::new();
        for place in places(radius_m) {
            let at_edge = (place.s_m - radius_m).abs() >= radius_m * (1.0 - 1e-12);
            let mut put = |direction, pick: &dyn Fn(Bent) -> f64| {
                let weight = self.table(radius_m, place.s_m, 2, pick);
                found.push(MomentAt { place, direction, weight });
            };
            if self.clamped || !at_edge {
                put(Direction::Up, &|bent| -(bent.along + nu * bent.across));
            }
            if !self.clamped || !at_edge {
                put(Direction::Level, &|bent| -(bent.across + nu * bent.along));
            }
        }
        found
    }

    fn deflections(&self, radius_m: f64) -> Vec<DeflectionAt> {
        let at = |place: Place| {
            let weight = self.table(radius_m, place.s_m, 4, &|bent| bent.value);
            DeflectionAt { place, weight }
        };
        places(radius_m).map(at).collect()
    }

    /// Table of what `pick` takes at a point of the upright diameter; on a plate of another radius
    /// it grows with the given power.
    fn table(&self, radius_m: f64, s_m: f64, power: i32, pick: &dyn Fn(Bent) -> f64) -> Table {
        let up = s_m / radius_m - 1.0;
        let mut surface = Vec::with_capacity(self.harmonics * self.count);
        for (m, factor) in self.factors.iter().enumerate() {
            let sign = if up > 0.0 && m % 2 == 1 { -1.0 } else { 1.0 };
            let mut b: Vec<f64> = functions(m, self.count, self.clamped, up.abs())
                .into_iter()
                .map(|bent| sign * pick(bent))
                .collect();
            factor.solve(&mut b);
            surface.extend(b);
        }
        let scale = radius_m.powi(power);
        let against: Vec<f64> = self
            .hats
            .iter()
            .map(|hat| scale * hat.iter().zip(&surface).map(|(a, b)| a * b).sum::<f64>())
            .collect();
        Table::fitted(2.0 * radius_m, &against)
    }
}

/// Points of the upright diameter.
fn places(radius_m: f64) -> impl Iterator<Item = Place> {
    (0..=POINT_STRETCHES).map(move |i| {
        let s_m = 2.0 * radius_m * float(i) / float(POINT_STRETCHES);
        Place { x_m: 0.0, s_m }
    })
}

/// Legendre polynomials and their two derivatives at `t`.
fn legendre_jets(count: usize, t: f64) -> Vec<[f64; 3]> {
    let mut jets = vec![[1.0, 0.0, 0.0], [t, 1.0, 0.0]];
    for k in 2..count {
        let n = float(k);
        let ([a, a1, a2], [b, b1, b2]) = (jets[k - 1], jets[k - 2]);
        let (c, d) = ((2.0 * n - 1.0) / n, (n - 1.0) / n);
        jets.push([c * t * a - d * b, c * (a + t * a1) - d * b1, c * (2.0 * a1 + t * a2) - d * b2]);
    }
    jets.truncate(count);
    jets
}

/// `(1 - rho)^q P_j(2 rho - 1)` with two derivatives by `rho = r²`.
fn radial(count: usize, clamped: bool, rho: f64) -> Vec<[f64; 3]> {
    let gap = 1.0 - rho;
    let [e, e1, e2] = if clamped { [gap * gap, -2.0 * gap, 2.0] } else { [gap, -1.0, 0.0] };
    let jets = legendre_jets(count, 2.0 * rho - 1.0).into_iter();
    // The inner derivative is two.
    jets.map(|[p, p1, p2]| {
        let (p1, p2) = (2.0 * p1, 4.0 * p2);
        [e * p, e1 * p + e * p1, e2 * p + 2.0 * e1 * p1 + e * p2]
    })
    .collect()
}

/// The functions of one harmonic at one radius. Curvatures as in Theory of Plates and Shells,
/// art. 62.
fn functions(m: usize, count: usize, clamped: bool, r: f64) -> Vec<Bent> {
    let n = float(m);
    let power = |exponent: usize| (0..exponent).fold(1.0, |product, _| product * r);
    let rho = r * r;
    let main = power(m);
    // r^(m - 2); its factor is zero below.
    let inner = if m >= 2 { power(m - 2) } else { 0.0 };
    let bent = |[g, g1, g2]: [f64; 3]| Bent {
        value: main * g,
        along: main * (4.0 * rho * g2 + (2.0 + 4.0 * n) * g1) + n * (n - 1.0) * inner * g,
        across: 2.0 * main * g1 - n * (n - 1.0) * inner * g,
        twist: n * (2.0 * main * g1 + (n - 1.0) * inner * g),
    };
    radial(count, clamped, rho).into_iter().map(bent).collect()
}

/// Energy of bending of one harmonic for rigidity one, factorised.
fn stiffness(m: usize, count: usize, clamped: bool, nu: f64) -> Option<Factor> {
    let mut cells = vec![0.0; count * count];
    let turn = if m == 0 { 2.0 * PI } else { PI };
    for (t, weight) in nodes(2 * count + m + 8) {
        let r = 0.5 * (t + 1.0);
        let weight = 0.5 * weight * r * turn;
        let bent = functions(m, count, clamped, r);
        for (i, a) in bent.iter().enumerate() {
            for (cell, b) in cells[i * count..].iter_mut().zip(&bent) {
                let mean = (a.along + a.across) * (b.along + b.across);
                let gauss = a.along * b.across + a.across * b.along - 2.0 * a.twist * b.twist;
                *cell += weight * (mean - (1.0 - nu) * gauss);
            }
        }
    }
    Factor::new(count, |i, j| cells[i * count + j])
}

/// Integrals of all functions over the unit circle against the hat function of each row.
fn hats(harmonics: usize, count: usize, clamped: bool) -> Vec<Vec<f64>> {
    let mut hats = vec![vec![0.0; harmonics * count]; STRETCHES + 1];
    let step = 2.0 / float(STRETCHES);
    let (up_nodes, chord_nodes) = (nodes(3), nodes(20));
    for stretch in 0..STRETCHES {
        for &(t, weight) in &up_nodes {
            let share = 0.5 * (t + 1.0);
            let s = -1.0 + step * (float(stretch) + share);
            let half_chord = (1.0 - s * s).sqrt();
            let mut sums = vec![0.0; harmonics * count];
            for &(t, chord_weight) in &chord_nodes {
                // Half the chord, counted twice.
                let x = 0.5 * half_chord * (t + 1.0);
                harmonics_at(
                    &mut sums,
                    (harmonics, count, clamped),
                    x,
                    s,
                    half_chord * chord_weight,
                );
            }
            let weight = 0.5 * step * weight;
            for (row, part) in [(stretch, 1.0 - share), (stretch + 1, share)] {
                for (hat, sum) in hats[row].iter_mut().zip(&sums) {
                    *hat += weight * part * sum;
                }
            }
        }
    }
    hats
}

/// Adds `weight u_mj cos(m f)` at a point to the sums of all functions.
fn harmonics_at(
    sums: &mut [f64],
    (harmonics, count, clamped): (usize, usize, bool),
    x: f64,
    s: f64,
    weight: f64,
) {
    let radial = radial(count, clamped, x * x + s * s);
    // r^m cos(m f), with r cos f = -s and r sin f = x.
    let (mut real, mut imaginary) = (1.0, 0.0);
    for sums in sums.chunks_mut(count).take(harmonics) {
        for (sum, [g, ..]) in sums.iter_mut().zip(&radial) {
            *sum += weight * real * g;
        }
        (real, imaginary) = (-s * real - x * imaginary, x * real - s * imaginary);
    }
}
