//! The predictors against sums in f64.

use super::{Predictor, Track};
use crate::journal::samples::scale::Scale;

/// Sixteen counts: the running mean and line are those of all counts so far.
#[test]
fn running_values_are_the_mean_and_the_line_of_least_squares() {
    let counts = [0_i32, 700, 1900, 2500, 4100, 4400, 6600, 6800, 9000, 8100, 9900, 9500];
    let mut track = Track::begin(0, 1, Scale::at(0));
    for n in 2..=counts.len() {
        track.step_to(counts[n - 1].into());
        let points: Vec<_> = (0_i32..).map(f64::from).zip(counts[..n].iter()).collect();
        let number = f64::from(u32::try_from(n).unwrap());
        let mean = |of: &dyn Fn(f64, f64) -> f64| {
            points.iter().map(|&(x, &y)| of(x, y.into())).sum::<f64>() / number
        };
        let (x, y) = (mean(&|x, _| x), mean(&|_, y| y));
        let slope = mean(&|a, b| (a - x) * (b - y)) / mean(&|a, _| (a - x) * (a - x));
        let expected = [y, y + slope * (number - x)];
        for (predictor, expected) in [Predictor::Mean, Predictor::Trend].iter().zip(expected) {
            #[expect(clippy::cast_precision_loss, reason = "places of some thousands")]
            let found = track.expected(*predictor) as f64;
            assert!((found - expected).abs() <= 2.0, "{predictor:?} {n}: {found} {expected}");
        }
    }
}

#[test]
fn a_line_is_followed_exactly() {
    let mut track = Track::begin(100, 16, Scale::at(0));
    for place in 1..40 {
        track.step_to(3 * place);
    }
    assert_eq!(track.expected(Predictor::Trend), 120);
    assert_eq!(track.count(), Some(100 + 16 * 117));
    // In steps half as large the same counts stand at twice the places.
    track.set_step(8);
    assert_eq!(track.expected(Predictor::Trend), 6);
    assert_eq!(track.count(), Some(100 + 16 * 117));
}
