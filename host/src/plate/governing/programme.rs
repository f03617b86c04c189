//! The shares in which chosen points cover another one: a small linear programme.
//!
//! `min k` with `sum a_j m_j(g) + k f(g) >= m(g)` for every load g, `a >= 0`, `sum a = 1`. Its dual
//! seeks the pressure that a set of points judges worst and starts at no pressure; the simplex
//! method (Dantzig 1963) with Bland's rule ends there.

/// Below this a number of the tableau is none.
const SMALL: f64 = 1e-11;
/// Steps after which the shares are taken as they are; the proof that follows decides.
const STEPS: usize = 400;

/// The numbers `a`. Any with sum one are sound; the best make `k` least.
pub(super) fn shares(target: &[f64], chosen: &[&[f64]], foot: &[f64]) -> Vec<f64> {
    let (rows, loads) = (chosen.len() + 1, target.len());
    // Columns: the loads, plus and minus the level that they are judged at, slacks, right side.
    let width = loads + 2 + rows + 1;
    let mut tableau = vec![vec![0.0; width]; rows + 1];
    let scale = target.iter().fold(0.0, |most: f64, x| most.max(x.abs())).max(f64::MIN_POSITIVE);
    for (row, one) in tableau.iter_mut().enumerate() {
        let values = if row < chosen.len() { chosen[row] } else { foot };
        let values = if row == rows { target } else { values };
        for (cell, x) in one.iter_mut().zip(values) {
            *cell = match row {
                row if row < chosen.len() => x / scale,
                row if row == rows => -x / scale,
                _ => *x,
            };
        }
        if row < chosen.len() {
            (one[loads], one[loads + 1]) = (-1.0, 1.0);
        } else if row == rows {
            (one[loads], one[loads + 1]) = (1.0, -1.0);
        } else {
            one[width - 1] = 1.0;
        }
        if row < rows {
            one[loads + 2 + row] = 1.0;
        }
    }
    let mut basis: Vec<usize> = (loads + 2..loads + 2 + rows).collect();
    for _ in 0..STEPS {
        let Some(column) = (0..width - 1).find(|&column| tableau[rows][column] < -SMALL) else {
            break;
        };
        let ratios = (0..rows).filter(|&row| tableau[row][column] > SMALL);
        let ratios = ratios.map(|row| (tableau[row][width - 1] / tableau[row][column], row));
        let Some((_, row)) = ratios.min_by(|(a, i), (b, j)| {
            let close = (a - b).abs() <= SMALL;
            if close { basis[*i].cmp(&basis[*j]) } else { a.total_cmp(b) }
        }) else {
            break;
        };
        pivot(&mut tableau, row, column);
        basis[row] = column;
    }
    let found: Vec<f64> =
        (0..chosen.len()).map(|row| tableau[rows][loads + 2 + row].max(0.0)).collect();
    let sum: f64 = found.iter().sum();
    if sum > 0.0 {
        found.iter().map(|a| a / sum).collect()
    } else {
        let even = 1.0 / super::float(chosen.len().max(1));
        vec![even; chosen.len()]
    }
}

fn pivot(tableau: &mut [Vec<f64>], row: usize, column: usize) {
    let by = tableau[row][column];
    tableau[row].iter_mut().for_each(|cell| *cell /= by);
    let own = tableau[row].clone();
    for (index, other) in tableau.iter_mut().enumerate() {
        let factor = other[column];
        if index != row && factor != 0.0 {
            for (cell, x) in other.iter_mut().zip(&own) {
                *cell -= factor * x;
            }
        }
    }
}
