//! Classes of NAMUR NE 43 at every limit and a sixteenth of a microampere to both sides.

use super::{LoopClass as C, classify};

const IN: C = C::Measurement { in_specification: true };
const OUT: C = C::Measurement { in_specification: false };

#[test]
fn every_limit_and_its_neighbours() {
    // Limit in microamperes; class just below, at and just above it.
    let limits = [
        (500, [C::WireBreak, C::FailureLow, C::FailureLow]),
        (3_600, [C::FailureLow, C::FailureLow, C::Between]),
        (3_800, [C::Between, OUT, OUT]),
        (4_000, [OUT, IN, IN]),
        (20_000, [IN, IN, OUT]),
        (20_500, [OUT, OUT, C::Between]),
        (21_000, [C::Between, C::FailureHigh, C::FailureHigh]),
    ];
    for (limit_ua, classes) in limits {
        for (step, class) in (-1..).zip(classes) {
            assert_eq!(classify(limit_ua * 16 + step), class, "{limit_ua} uA, step {step}");
        }
    }
    for count_16 in [i32::MIN, -1, 0] {
        assert_eq!(classify(count_16), C::WireBreak);
    }
    assert_eq!(classify(i32::MAX), C::FailureHigh);
}

/// signal-031, signal-034, signal-035: NAMUR NE 43, limits as widely published.
#[test]
fn published_classes() {
    assert_eq!(classify(12_000 * 16), IN);
    assert_eq!(classify(21_000 * 16), C::FailureHigh);
    assert_eq!(classify(22_000 * 16), C::FailureHigh);
}

#[test]
fn each_count_has_the_class_of_its_current() {
    for count_16 in (0..=24_000 * 16).step_by(7) {
        let ma = f64::from(count_16) / 16_000.0;
        let expected = match ma {
            ma if ma < 0.5 => C::WireBreak,
            ma if ma <= 3.6 => C::FailureLow,
            ma if ma >= 21.0 => C::FailureHigh,
            ma if (3.8..=20.5).contains(&ma) => {
                C::Measurement { in_specification: (4.0..=20.0).contains(&ma) }
            }
            _ => C::Between,
        };
        assert_eq!(classify(count_16), expected, "{ma} mA");
    }
}
