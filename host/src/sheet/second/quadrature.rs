//! Integrals by Gauss's rule after the substitution `s = middle - half cos(t)`, which makes a root
//! at either end of a stretch smooth. Every stretch ends where the integrand has a kink.

use std::f64::consts::PI;
use std::sync::LazyLock;

/// Nodes of one stretch.
const NODES: u32 = 24;

/// Nodes and weights of Gauss's rule on [-1, 1].
static RULE: LazyLock<Vec<(f64, f64)>> = LazyLock::new(|| (1..=NODES).map(node).collect());

/// The node of that number by Newton's method on Legendre's polynomial.
fn node(number: u32) -> (f64, f64) {
    let n = f64::from(NODES);
    let mut x = (PI * (f64::from(number) - 0.25) / (n + 0.5)).cos();
    let mut slope = 1.0;
    for _ in 0..60 {
        let (mut before, mut here) = (1.0, x);
        for degree in 2..=NODES {
            let k = f64::from(degree);
            (before, here) = (here, ((2.0 * k - 1.0) * x * here - (k - 1.0) * before) / k);
        }
        slope = n * (x * here - before) / (x * x - 1.0);
        let step = here / slope;
        x -= step;
        if step.abs() < 1e-16 {
            break;
        }
    }
    (x, 2.0 / ((1.0 - x * x) * slope * slope))
}

/// Ends of the stretches between two limits: the places inside, rising, and both limits.
pub(super) fn stretches(from: f64, to: f64, places: impl IntoIterator<Item = f64>) -> Vec<f64> {
    let inside = places.into_iter().filter(|place| from < *place && *place < to);
    let mut ends: Vec<f64> = inside.chain([from, to]).collect();
    ends.sort_by(f64::total_cmp);
    ends.dedup();
    ends
}

/// `integral f ds` for several functions at once, from the first end to the last.
pub(super) fn integral<const K: usize>(ends: &[f64], f: impl Fn(f64) -> [f64; K]) -> [f64; K] {
    let mut sums = [0.0; K];
    for pair in ends.windows(2) {
        let (middle, half) = (0.5 * (pair[0] + pair[1]), 0.5 * (pair[1] - pair[0]));
        for (x, weight) in RULE.iter() {
            let t = 0.5 * PI * (x + 1.0);
            let share = weight * 0.5 * PI * half * t.sin();
            let values = f(middle - half * t.cos());
            for (sum, value) in sums.iter_mut().zip(values) {
                *sum += share * value;
            }
        }
    }
    sums
}

#[cfg(test)]
mod tests {
    use super::{integral, stretches};
    use std::f64::consts::PI;

    #[test]
    fn powers_and_half_circles() {
        let [cube] = integral(&[0.0, 2.0], |s| [s * s * s]);
        assert!((cube - 4.0).abs() < 1e-13, "{cube}");
        let [area] = integral(&[-1.0, 1.0], |s: f64| [(1.0 - s * s).sqrt()]);
        assert!((area - 0.5 * PI).abs() < 1e-13, "{area}");
        // A kink that is named costs nothing.
        let ends = stretches(0.0, 1.0, [0.3, 5.0, -1.0]);
        assert_eq!(ends, [0.0, 0.3, 1.0]);
        let [ramp] = integral(&ends, |s: f64| [(0.3 - s).max(0.0)]);
        assert!((ramp - 0.045).abs() < 1e-14, "{ramp}");
    }
}
