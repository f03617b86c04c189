//! Statics of what holds a cover: latches, hinges, pins, bolts.

/// Reactions of a cover hinged along one line and latched opposite it, N, positive in tension
/// against outward motion.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Held {
    /// At the latch.
    pub latch_n: f64,
    /// At the hinge line, both pins together.
    pub hinge_n: f64,
}

/// Latch and hinge of a cover under `force_n` whose moment about the hinge line, positive when it
/// opens the cover, is `opening_nm`; the latch acts at `lever_m` from that line.
#[must_use]
pub fn held(force_n: f64, opening_nm: f64, lever_m: f64) -> Held {
    let latch_n = opening_nm / lever_m;
    Held { latch_n, hinge_n: force_n - latch_n }
}

/// A door on two pins of a vertical hinge line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Door {
    /// Heights of the lower and the upper pin, m.
    pub pins_m: (f64, f64),
    /// Distance of the latch from the hinge line, m.
    pub latch_lever_m: f64,
    /// Height of the latch, m.
    pub latch_height_m: f64,
}

/// Reactions of a [`Door`], N, positive in tension against outward motion.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DoorHeld {
    /// At the latch.
    pub latch_n: f64,
    /// At the lower pin.
    pub lower_pin_n: f64,
    /// At the upper pin.
    pub upper_pin_n: f64,
}

impl Door {
    /// Reactions under a force whose moment about the hinge line is `opening_nm` and whose moment
    /// about the level line at the height of the lower pin is `tilting_nm` (upper side outward).
    #[must_use]
    pub fn held(&self, force_n: f64, opening_nm: f64, tilting_nm: f64) -> DoorHeld {
        let (lower, upper) = self.pins_m;
        let latch_n = opening_nm / self.latch_lever_m;
        let at_upper = tilting_nm - latch_n * (self.latch_height_m - lower);
        let upper_pin_n = at_upper / (upper - lower);
        DoorHeld { latch_n, upper_pin_n, lower_pin_n: force_n - latch_n - upper_pin_n }
    }
}

/// Shares of equal bolts at (x, s) holding a rigid cover under `force_n` with the moments
/// integral p s dA and integral p x dA about the axes of those coordinates, N. None when the
/// bolts stand on one line.
///
/// A rigid cover moves by a + b x + c s at each bolt and every bolt pulls in proportion: three
/// equations of equilibrium give a, b and c.
#[must_use]
pub fn bolt_shares(
    bolts: &[(f64, f64)],
    force_n: f64,
    sideways_nm: f64,
    upward_nm: f64,
) -> Option<Vec<f64>> {
    let mut matrix = [[0.0_f64; 4]; 3];
    for &(x, s) in bolts {
        let row = [1.0, x, s];
        for (i, equation) in matrix.iter_mut().enumerate() {
            for (j, value) in row.iter().enumerate() {
                equation[j] += row[i] * value;
            }
        }
    }
    matrix[0][3] = force_n;
    matrix[1][3] = sideways_nm;
    matrix[2][3] = upward_nm;
    let [a, b, c] = solve(matrix)?;
    Some(bolts.iter().map(|&(x, s)| a + b * x + c * s).collect())
}

/// Bolts evenly spaced on a circle about (`centre_x`, `centre_s`); the first at the lowest point
/// or the lowest two astride it.
#[must_use]
pub fn bolt_circle(
    count: u32,
    diameter_m: f64,
    (centre_x, centre_s): (f64, f64),
    astride: bool,
) -> Vec<(f64, f64)> {
    let step = std::f64::consts::TAU / f64::from(count);
    let start = if astride { 0.5 * step } else { 0.0 };
    (0..count)
        .map(|i| {
            let (sine, cosine) = (start + f64::from(i) * step).sin_cos();
            (centre_x + 0.5 * diameter_m * sine, centre_s - 0.5 * diameter_m * cosine)
        })
        .collect()
}

/// Elimination with the largest pivot; none when the equations are dependent.
fn solve(mut m: [[f64; 4]; 3]) -> Option<[f64; 3]> {
    let scale = m.iter().flat_map(|row| row[..3].iter()).fold(0.0_f64, |a, b| a.max(b.abs()));
    for column in 0..3 {
        let pivot =
            (column..3).max_by(|i, j| m[*i][column].abs().total_cmp(&m[*j][column].abs()))?;
        m.swap(column, pivot);
        if m[column][column].abs() <= 1e-12 * scale {
            return None;
        }
        for row in 0..3 {
            if row != column {
                let factor = m[row][column] / m[column][column];
                let pivot_row = m[column];
                for (value, pivot_value) in m[row].iter_mut().zip(pivot_row) {
                    *value -= factor * pivot_value;
                }
            }
        }
    }
    Some([m[0][3] / m[0][0], m[1][3] / m[1][1], m[2][3] / m[2][2]])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bolts_balance_the_load_and_the_lowest_carries_most() {
        let bolts = bolt_circle(8, 0.77, (0.0, 0.0), false);
        let (force, up) = (10_000.0, -180.0);
        let shares = bolt_shares(&bolts, force, 0.0, up).expect("eight bolts on a circle");
        let sum: f64 = shares.iter().sum();
        let moment: f64 = shares.iter().zip(&bolts).map(|(n, bolt)| n * bolt.1).sum();
        assert!((sum - force).abs() < 1e-9 && (moment - up).abs() < 1e-9);
        // Closed form for a bolt circle: F/n + 2 M y_i / (n R^2).
        let lowest = force / 8.0 + 2.0 * up * (-0.385) / (8.0 * 0.385 * 0.385);
        assert!((shares[0] - lowest).abs() < 1e-9);
        assert!(shares.iter().all(|share| *share <= shares[0]));
        let in_line = [(0.0, -0.3), (0.0, 0.0), (0.0, 0.3)];
        assert_eq!(bolt_shares(&in_line, force, 0.0, up), None);
    }
}
