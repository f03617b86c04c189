//! Small systems of linear equations, symmetric and positive definite.

/// Cholesky factor of a dense matrix, row by row below the diagonal.
#[derive(Debug)]
pub(super) struct Factor {
    n: usize,
    rows: Vec<f64>,
}

impl Factor {
    /// Factorises the `n` by `n` matrix given by its lower half; `None` when it is not positive
    /// definite.
    pub(super) fn new(n: usize, at: impl Fn(usize, usize) -> f64) -> Option<Self> {
        let mut rows = vec![0.0; n * n];
        for i in 0..n {
            for j in 0..=i {
                let (head, tail) = rows.split_at_mut(i * n);
                let upper = if i == j { &tail[..j] } else { &head[j * n..j * n + j] };
                let sum: f64 = tail[..j].iter().zip(upper).map(|(a, b)| a * b).sum();
                let value = at(i, j) - sum;
                tail[j] = if i == j {
                    if value.is_nan() || value <= 0.0 {
                        return None;
                    }
                    value.sqrt()
                } else {
                    value / head[j * n + j]
                };
            }
        }
        Some(Self { n, rows })
    }

    /// Solves for one right-hand side in place.
    pub(super) fn solve(&self, b: &mut [f64]) {
        let n = self.n;
        for i in 0..n {
            let row = &self.rows[i * n..=i * n + i];
            let sum: f64 = row[..i].iter().zip(&b[..i]).map(|(a, b)| a * b).sum();
            b[i] = (b[i] - sum) / row[i];
        }
        for i in (0..n).rev() {
            let value = b[i] / self.rows[i * n + i];
            b[i] = value;
            let row = &self.rows[i * n..i * n + i];
            for (b, a) in b[..i].iter_mut().zip(row) {
                *b -= a * value;
            }
        }
    }
}

/// Solves a symmetric tridiagonal system with one value beside the diagonal.
pub(super) fn tridiagonal(diagonal: impl Fn(usize) -> f64, beside: f64, right: &[f64]) -> Vec<f64> {
    let mut pivots: Vec<f64> = Vec::with_capacity(right.len());
    let mut values: Vec<f64> = Vec::with_capacity(right.len());
    for (i, &right) in right.iter().enumerate() {
        let (pivot, value) = match (pivots.last(), values.last()) {
            (Some(&pivot), Some(&value)) => {
                let factor = beside / pivot;
                (diagonal(i) - factor * beside, right - factor * value)
            }
            _ => (diagonal(i), right),
        };
        pivots.push(pivot);
        values.push(value);
    }
    let mut above = 0.0;
    for (value, pivot) in values.iter_mut().zip(&pivots).rev() {
        *value = (*value - beside * above) / pivot;
        above = *value;
    }
    values
}
