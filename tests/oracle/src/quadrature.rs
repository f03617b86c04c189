//! Composite Gauss-Legendre quadrature.
//!
//! The integrands of this crate are smooth between known breakpoints (liquid surfaces, corners,
//! zeros of a lever arm), so a fixed high order per interval reaches rounding error.

use std::f64::consts::PI;
use std::sync::LazyLock;

/// Points per interval: exact for polynomials of degree 47, and rounding-limited for sines and
/// cosines over half a turn.
const ORDER: usize = 24;

/// (node, weight) pairs on [-1, 1].
static NODES: LazyLock<Vec<(f64, f64)>> = LazyLock::new(|| nodes(ORDER));

/// Roots of the Legendre polynomial by Newton's method, with their weights
/// (Abramowitz and Stegun, Handbook of Mathematical Functions, 25.4.29).
fn nodes(order: usize) -> Vec<(f64, f64)> {
    let n = to_f64(order);
    (1..=order)
        .map(|i| {
            let mut x = (PI * (to_f64(i) - 0.25) / (n + 0.5)).cos();
            let mut slope = 1.0;
            for _ in 0..20 {
                let (value, derivative) = legendre(order, x);
                slope = derivative;
                x -= value / derivative;
            }
            (x, 2.0 / ((1.0 - x * x) * slope * slope))
        })
        .collect()
}

/// Value and derivative of the Legendre polynomial of the given order at `x`, |x| < 1.
fn legendre(order: usize, x: f64) -> (f64, f64) {
    let (mut before, mut now) = (1.0, x);
    for k in 2..=order {
        let k = to_f64(k);
        let next = ((2.0 * k - 1.0) * x * now - (k - 1.0) * before) / k;
        before = now;
        now = next;
    }
    let derivative = to_f64(order) * (x * now - before) / (x * x - 1.0);
    (now, derivative)
}

/// A small count as a float, exact.
#[must_use]
pub fn to_f64(count: usize) -> f64 {
    u32::try_from(count).map_or(f64::INFINITY, f64::from)
}

/// Calls `f(x, weight)` at every quadrature point between `low` and `high`, the range cut at
/// those `breaks` that lie inside it.
pub fn visit(low: f64, high: f64, breaks: &[f64], mut f: impl FnMut(f64, f64)) {
    for pair in cuts(low, high, breaks).windows(2) {
        let (a, b) = (pair[0], pair[1]);
        let (middle, half) = (0.5 * (a + b), 0.5 * (b - a));
        for &(x, w) in NODES.iter() {
            f(middle + half * x, half * w);
        }
    }
}

/// Integral of `f` from `low` to `high`, cut at `breaks`.
pub fn integral(low: f64, high: f64, breaks: &[f64], mut f: impl FnMut(f64) -> f64) -> f64 {
    let mut sum = 0.0;
    visit(low, high, breaks, |x, w| sum += w * f(x));
    sum
}

/// The ends and the inner breaks in ascending order.
fn cuts(low: f64, high: f64, breaks: &[f64]) -> Vec<f64> {
    let mut cuts: Vec<f64> = breaks.iter().copied().filter(|b| low < *b && *b < high).collect();
    cuts.push(low);
    cuts.push(high);
    cuts.sort_by(f64::total_cmp);
    cuts.dedup();
    cuts
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn integrates_kinks_and_half_turns_to_rounding() {
        let ramp = integral(0.0, 2.0, &[0.7], |x| (x - 0.7_f64).max(0.0));
        assert!((ramp - 0.845).abs() < 1e-15);
        let area = integral(-PI / 2.0, PI / 2.0, &[], |a| a.cos().powi(4));
        assert!((area - 3.0 * PI / 8.0).abs() < 1e-14);
        let wrong = integral(0.0, 2.0, &[], |x| (x - 0.7_f64).max(0.0));
        assert!((wrong - 0.845).abs() > 1e-6, "a kink must be named to be integrated exactly");
    }
}
