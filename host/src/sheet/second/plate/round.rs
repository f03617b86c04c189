//! A circle: cubic elements along the radius, one circular harmonic after the other.

use super::banded::Banded;
use super::{GAUSS, Influence, Wanted, float, hermite};
use crate::plate::{Direction, Edges};
use crate::sheet::second::quadrature::integral;
use std::f64::consts::PI;

/// Harmonics taken; the moment of a smooth pressure needs a few, a kink some more.
const HARMONICS: u8 = 24;
/// Elements along the radius of the coarser mesh.
const ELEMENTS: usize = 32;

/// The influence surface: value and slope at each node of the radius, for each harmonic.
pub(super) struct Harmonics {
    radius_m: f64,
    nodes: Vec<f64>,
    /// The radius on which the point lies.
    point_m: f64,
    surface: Vec<Vec<f64>>,
}

impl Harmonics {
    /// At `x` level from the middle and `s` above it.
    fn value(&self, x: f64, s: f64) -> f64 {
        let r = x.hypot(s);
        let last = self.nodes.len() - 2;
        let index = self.nodes.partition_point(|node| *node <= r).saturating_sub(1).min(last);
        let h = self.nodes[index + 1] - self.nodes[index];
        let [shape, ..] = hermite((r - self.nodes[index]) / h, h);
        // The angle counts from the lowest point: r cos = -s.
        let (cosine, mut before, mut here) = (if r > 0.0 { -s / r } else { 1.0 }, 0.0, 1.0);
        let mut sum = 0.0;
        for (m, surface) in self.surface.iter().enumerate() {
            let own = &surface[2 * index..2 * index + 4];
            sum += here * own.iter().zip(shape).map(|(value, shape)| value * shape).sum::<f64>();
            let factor = if m == 0 { 1.0 } else { 2.0 };
            (before, here) = (here, factor * cosine * here - before);
        }
        sum
    }
}

impl Influence for Harmonics {
    fn at(&self, s_m: f64) -> f64 {
        let s = s_m - self.radius_m;
        let half = (self.radius_m * self.radius_m - s * s).max(0.0).sqrt();
        let kink = (self.point_m * self.point_m - s * s).max(0.0).sqrt();
        let ends = if kink > 0.0 && kink < half { vec![0.0, kink, half] } else { vec![0.0, half] };
        let [sum] = integral(&ends, |x| [2.0 * self.value(x, s)]);
        sum
    }

    fn turns(&self) -> Vec<f64> {
        let eighths = (0..=16_u8).map(|one| f64::from(one) / 8.0 * self.radius_m);
        eighths.chain([self.radius_m - self.point_m, self.radius_m + self.point_m]).collect()
    }
}

pub(super) fn solve(radius_m: f64, wanted: Wanted, fine: u8) -> Option<Harmonics> {
    let up_m = wanted.place.s_m - radius_m;
    let point_m = up_m.abs();
    let nodes = nodes(radius_m, point_m, ELEMENTS * usize::from(fine));
    let surface = (0..HARMONICS)
        .map(|m| harmonic(&nodes, (f64::from(m), m), up_m, wanted))
        .collect::<Option<Vec<_>>>()?;
    Some(Harmonics { radius_m, nodes, point_m, surface })
}

/// Nodes from the middle to the edge, one of them at the point.
fn nodes(radius_m: f64, point_m: f64, count: usize) -> Vec<f64> {
    let share = point_m / radius_m;
    let inner = (1..count).rev().find(|inner| float(*inner) <= share * float(count));
    let inner = if point_m > 0.0 { inner.unwrap_or(1) } else { 0 };
    let outer = if point_m < radius_m { (count - inner).max(1) } else { 0 };
    let inside = (0..inner).map(|i| point_m * float(i) / float(inner));
    let outside = (0..=outer).map(|i| {
        if outer == 0 { point_m } else { point_m + (radius_m - point_m) * float(i) / float(outer) }
    });
    inside.chain(outside).collect()
}

/// The functions of an element at a place: curvature along the radius, around, and twist.
fn curvatures(r: f64, t: f64, h: f64, m: f64) -> [[f64; 3]; 4] {
    let [w, first, second] = hermite(t, h);
    [0, 1, 2, 3].map(|one| {
        let (slope, height) = (first[one] / r, w[one] / (r * r));
        [second[one], slope - m * m * height, m * (slope - height)]
    })
}

fn harmonic(nodes: &[f64], (m, number): (f64, u8), up_m: f64, wanted: Wanted) -> Option<Vec<f64>> {
    let mut matrix = Banded::new(2 * nodes.len(), 3);
    let turn = if number == 0 { 2.0 * PI } else { PI };
    let nu = wanted.poisson;
    for (element, pair) in nodes.windows(2).enumerate() {
        let h = pair[1] - pair[0];
        for (t, weight) in GAUSS {
            let r = pair[0] + t * h;
            let weight = weight * h * r * turn;
            let bent = curvatures(r, t, h, m);
            for (row, a) in bent.iter().enumerate() {
                for (column, b) in bent.iter().enumerate() {
                    let mean = (a[0] + a[1]) * (b[0] + b[1]);
                    let gauss = a[0] * b[1] + a[1] * b[0] - 2.0 * a[2] * b[2];
                    let value = weight * (mean - (1.0 - nu) * gauss);
                    matrix.add(2 * element + row, 2 * element + column, value);
                }
            }
        }
    }
    let mut right = functional(nodes, (m, number), up_m, wanted);
    let edge = 2 * (nodes.len() - 1);
    let mut held = match number {
        0 => vec![1],
        1 => vec![0],
        _ => vec![0, 1],
    };
    held.push(edge);
    if wanted.edges == Edges::Clamped {
        held.push(edge + 1);
    }
    for one in held {
        matrix.hold(one);
        right[one] = 0.0;
    }
    matrix.solve(right)
}

/// The wanted moment of a unit rigidity as a sum over the unknowns of one harmonic.
fn functional(nodes: &[f64], (m, number): (f64, u8), up_m: f64, wanted: Wanted) -> Vec<f64> {
    let mut right = vec![0.0; 2 * nodes.len()];
    let nu = wanted.poisson;
    let of = |[along, around, _]: [f64; 3]| match wanted.direction {
        Direction::Up => along + nu * around,
        Direction::Level => around + nu * along,
        Direction::Twist => 0.0,
    };
    let point_m = up_m.abs();
    // cos(m f): the lowest point has f = 0, the highest half a turn.
    let side = if up_m > 0.0 && number % 2 == 1 { -1.0 } else { 1.0 };
    if point_m <= 0.0 {
        middle(&mut right, nodes, number, of);
        return right;
    }
    let meeting: Vec<usize> = (0..nodes.len() - 1)
        .filter(|one| {
            let ends = [nodes[*one], nodes[*one + 1]];
            ends.iter().any(|end| (end - point_m).abs() < 1e-9 * nodes[nodes.len() - 1])
        })
        .collect();
    let share = 1.0 / float(meeting.len().max(1));
    for element in meeting {
        let (low, high) = (nodes[element], nodes[element + 1]);
        let t = if (high - point_m).abs() < (low - point_m).abs() { 1.0 } else { 0.0 };
        let bent = curvatures(point_m, t, high - low, m);
        for (one, curvature) in bent.into_iter().enumerate() {
            right[2 * element + one] -= share * side * of(curvature);
        }
    }
    right
}

/// In the middle only two harmonics bend: one alike in all directions, one like a saddle, whose
/// lowest line runs up the slope.
fn middle(right: &mut [f64], nodes: &[f64], number: u8, of: impl Fn([f64; 3]) -> f64) {
    let [_, _, second] = hermite(0.0, nodes[1] - nodes[0]);
    for (slot, second) in right.iter_mut().zip(second) {
        // w = w'' r² / 2: w'/r = w'', w/r² = w''/2.
        let m = f64::from(number);
        let around = second * (1.0 - 0.5 * m * m);
        if number == 0 || number == 2 {
            *slot -= of([second, around, 0.0]);
        }
    }
}
