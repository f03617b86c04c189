//! Legendre polynomials, Gauss quadrature, and polynomials whose second derivatives are Legendre's.

use super::float;
use std::f64::consts::PI;

/// Values of the Legendre polynomials of degree 0 to `degree` at `t`.
pub(super) fn values(degree: usize, t: f64) -> Vec<f64> {
    let mut values = vec![1.0, t];
    for k in 2..=degree {
        let n = float(k);
        values.push(((2.0 * n - 1.0) * t * values[k - 1] - (n - 1.0) * values[k - 2]) / n);
    }
    values.truncate(degree + 1);
    values
}

/// (node, weight) pairs of Gauss quadrature on [-1, 1], exact up to degree `2 count - 1`
/// (Abramowitz and Stegun, Handbook of Mathematical Functions, 25.4.29).
pub(super) fn nodes(count: usize) -> Vec<(f64, f64)> {
    let n = float(count);
    let node = |i: usize| {
        let mut t = (PI * (float(i) + 0.75) / (n + 0.5)).cos();
        let mut slope = 1.0;
        for _ in 0..50 {
            let p = values(count, t);
            slope = n * (t * p[count] - p[count - 1]) / (t * t - 1.0);
            t -= p[count] / slope;
        }
        (t, 2.0 / ((1.0 - t * t) * slope * slope))
    };
    (0..count).map(node).collect()
}

/// One function of a basis at one place: value, first and second derivative.
#[derive(Clone, Copy, Debug)]
pub(super) struct Jet {
    pub(super) value: f64,
    pub(super) first: f64,
    pub(super) second: f64,
}

/// Polynomials `f_k` with `f_k'' = P_k sqrt(k + 1/2)`, so that `integral f_j'' f_k''` is one or
/// zero. From `k = 2` on they and their slopes vanish at both ends; those of 0 and 1 vanish at -1.
#[derive(Clone, Copy, Debug)]
pub(super) struct Basis {
    /// Degree of the first second derivative: 2 clamped at both ends, 0 free at +1.
    pub(super) first: usize,
    /// Distance between degrees: 2 for even functions alone.
    pub(super) step: usize,
    /// Number of functions.
    pub(super) count: usize,
}

impl Basis {
    /// All functions at `t`.
    pub(super) fn at(self, t: f64) -> Vec<Jet> {
        let last = self.first + self.step * self.count;
        let p = values(last + 2, t);
        let slope = |k: usize| (p[k + 1] - p[k - 1]) / (2.0 * float(k) + 1.0);
        let jet = |k: usize| {
            let n = float(k);
            let (value, first) = match k {
                0 => (0.5 * (t + 1.0) * (t + 1.0), t + 1.0),
                1 => ((t * t * t - 3.0 * t - 2.0) / 6.0, 0.5 * (t * t - 1.0)),
                _ => ((slope(k + 1) - slope(k - 1)) / (2.0 * n + 1.0), slope(k)),
            };
            let scale = (n + 0.5).sqrt();
            Jet { value: scale * value, first: scale * first, second: scale * p[k] }
        };
        (0..self.count).map(|i| jet(self.first + self.step * i)).collect()
    }
}

/// Integrals over [-1, 1] of products of a basis' functions; square, row by row.
#[derive(Debug)]
pub(super) struct Products {
    count: usize,
    /// `f_i f_j`, `f_i' f_j'`, `f_i f_j''`.
    cells: Vec<[f64; 3]>,
    /// `integral f_i`.
    pub(super) area: Vec<f64>,
}

impl Products {
    pub(super) fn of(basis: Basis) -> Self {
        let count = basis.count;
        let mut cells = vec![[0.0; 3]; count * count];
        let mut area = vec![0.0; count];
        for (t, weight) in nodes(basis.first + basis.step * count + 4) {
            let jets = basis.at(t);
            for (i, a) in jets.iter().enumerate() {
                area[i] += weight * a.value;
                for (cell, b) in cells[i * count..].iter_mut().zip(&jets) {
                    let terms = [a.value * b.value, a.first * b.first, a.value * b.second];
                    for (cell, term) in cell.iter_mut().zip(terms) {
                        *cell += weight * term;
                    }
                }
            }
        }
        Self { count, cells, area }
    }

    /// `[f_i f_j, f_i' f_j', f_i f_j'']`.
    pub(super) fn at(&self, i: usize, j: usize) -> [f64; 3] {
        self.cells[i * self.count + j]
    }
}
