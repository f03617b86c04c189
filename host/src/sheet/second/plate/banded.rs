//! Symmetric equations whose matrix has a band, by Cholesky's method.

/// The lower half of a band: row `i` holds the columns `i - width` to `i`.
pub(super) struct Banded {
    width: usize,
    rows: Vec<Vec<f64>>,
}

impl Banded {
    pub(super) fn new(count: usize, width: usize) -> Self {
        Self { width, rows: vec![vec![0.0; width + 1]; count] }
    }

    /// Adds to an element and to its mirror image.
    pub(super) fn add(&mut self, row: usize, column: usize, value: f64) {
        if column <= row {
            self.rows[row][self.width + column - row] += value;
        }
    }

    /// Makes an unknown zero.
    pub(super) fn hold(&mut self, held: usize) {
        let width = self.width;
        self.rows[held].fill(0.0);
        self.rows[held][width] = 1.0;
        for row in held + 1..self.rows.len().min(held + width + 1) {
            self.rows[row][width + held - row] = 0.0;
        }
    }

    /// The unknowns; `None` when the matrix is not positive.
    pub(super) fn solve(mut self, mut right: Vec<f64>) -> Option<Vec<f64>> {
        let width = self.width;
        for row in 0..self.rows.len() {
            let first = row.saturating_sub(width);
            for column in first..=row {
                let from = first.max(column.saturating_sub(width));
                let (above, here) = self.rows.split_at(row);
                let own = &here[0];
                let other = if column == row { own } else { &above[column] };
                let own_part = &own[width + from - row..width + column - row];
                let other_part = &other[width + from - column..width];
                let shared: f64 = own_part.iter().zip(other_part).map(|(a, b)| a * b).sum();
                let value = own[width + column - row] - shared;
                self.rows[row][width + column - row] = if column < row {
                    value / self.rows[column][width]
                } else if value > 0.0 {
                    value.sqrt()
                } else {
                    return None;
                };
            }
        }
        for row in 0..right.len() {
            let first = row.saturating_sub(width);
            let known: f64 = (first..row).map(|k| self.rows[row][width + k - row] * right[k]).sum();
            right[row] = (right[row] - known) / self.rows[row][width];
        }
        for row in (0..right.len()).rev() {
            right[row] /= self.rows[row][width];
            let value = right[row];
            let first = row.saturating_sub(width);
            let own = &self.rows[row][width + first - row..width];
            for (left, own) in right[first..row].iter_mut().zip(own) {
                *left -= own * value;
            }
        }
        Some(right)
    }
}

#[cfg(test)]
mod tests {
    use super::Banded;

    #[test]
    fn three_equations() {
        let mut matrix = Banded::new(3, 1);
        for (row, column, value) in
            [(0, 0, 4.0), (1, 0, 2.0), (1, 1, 5.0), (2, 1, 1.0), (2, 2, 3.0)]
        {
            matrix.add(row, column, value);
        }
        let found = matrix.solve(vec![8.0, 15.0, 11.0]).unwrap();
        for (found, wanted) in found.iter().zip([1.0, 2.0, 3.0]) {
            assert!((found - wanted).abs() < 1e-14);
        }
        assert!(Banded::new(2, 1).solve(vec![1.0, 1.0]).is_none());
    }
}
