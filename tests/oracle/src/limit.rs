//! Levels at which a load meets a value: bisection and search on the oracle itself.

/// The point between `low` and `high` at which `f` changes sign, to the last bit; none when it
/// has the same sign at both ends.
pub fn root(low: f64, high: f64, f: impl Fn(f64) -> f64) -> Option<f64> {
    let (mut low, mut high) = (low, high);
    let (at_low, at_high) = (f(low), f(high));
    if at_low == 0.0 {
        return Some(low);
    }
    if (at_low > 0.0) == (at_high > 0.0) {
        return None;
    }
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if (f(middle) > 0.0) == (at_low > 0.0) {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(0.5 * (low + high))
}

/// The place of the largest value of `f` between `low` and `high`, by golden section inside the
/// best of `steps` equal intervals.
pub fn place_of_largest(low: f64, high: f64, steps: u32, f: impl Fn(f64) -> f64) -> f64 {
    let at = |i: u32| low + (high - low) * f64::from(i) / f64::from(steps);
    let best = (0..=steps).max_by(|i, j| f(at(*i)).total_cmp(&f(at(*j)))).unwrap_or(0);
    let (mut a, mut b) = (at(best.saturating_sub(1)), at((best + 1).min(steps)));
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    for _ in 0..90 {
        let (left, right) = (b - golden * (b - a), a + golden * (b - a));
        if f(left) > f(right) {
            b = right;
        } else {
            a = left;
        }
    }
    0.5 * (a + b)
}

/// What filling from the lowest level upwards meets.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Limit {
    /// Passed already at the lowest level.
    None,
    /// The highest level up to which the utilisation stays at or below 1 on the whole way, m.
    Level(f64),
    /// Not passed up to the highest level asked.
    Beyond,
}

/// The calculated limit level of a utilisation between two levels, looked at in `steps` places and
/// refined by bisection; a passing shorter than one step is not seen.
pub fn limit_level(
    lowest_m: f64,
    highest_m: f64,
    steps: u32,
    utilisation: impl Fn(f64) -> f64,
) -> Limit {
    if utilisation(lowest_m) > 1.0 {
        return Limit::None;
    }
    let at = |i: u32| lowest_m + (highest_m - lowest_m) * f64::from(i) / f64::from(steps);
    let Some(passed) = (1..=steps).find(|i| utilisation(at(*i)) > 1.0) else {
        return Limit::Beyond;
    };
    let (mut kept, mut over) = (at(passed - 1), at(passed));
    for _ in 0..100 {
        let middle = 0.5 * (kept + over);
        if utilisation(middle) > 1.0 {
            over = middle;
        } else {
            kept = middle;
        }
    }
    Limit::Level(kept)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_passing_counts_and_a_flat_stretch_at_one_does_not() {
        // Rises to 1 at 2, stays there to 3, passes at 3, falls below again at 4.
        let use_of = |h: f64| match h {
            h if h < 2.0 => 0.5 * h,
            h if h <= 3.0 => 1.0,
            h if h < 4.0 => 1.5,
            _ => 0.5,
        };
        let Limit::Level(level) = limit_level(0.0, 10.0, 1000, use_of) else {
            panic!("a limit exists");
        };
        assert!((level - 3.0).abs() < 1e-9);
        assert_eq!(limit_level(3.5, 10.0, 1000, use_of), Limit::None);
        assert_eq!(limit_level(4.0, 10.0, 1000, use_of), Limit::Beyond);
        let place = place_of_largest(-1.0, 4.0, 20, |x| -(x - 1.25) * (x - 1.25));
        assert!((place - 1.25).abs() < 1e-6);
        assert_eq!(root(0.0, 1.0, |x| x + 1.0), None);
    }
}
