//! Rounding to the safe side.

/// The step to which a level is rounded.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Step {
    /// 10 mm.
    TenMillimetres,
    /// 1/8 in.
    EighthInch,
}

impl Step {
    /// The step as it is written.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::TenMillimetres => "10 mm",
            Self::EighthInch => "1/8 in",
        }
    }

    /// `count` steps in m: a quotient of whole numbers, so that 454 steps of 10 mm are 4.54 m.
    fn metres(self, count: f64) -> f64 {
        match self {
            Self::TenMillimetres => count / 100.0,
            Self::EighthInch => count * 25.4 / 8000.0,
        }
    }
}

/// The highest whole step at or below a level, m.
///
/// A step counts as at the level when its f32 is: it is the very number that the level was judged
/// at. Nothing above the level is ever given.
#[must_use]
pub fn rounded_down(level_m: f32, step: Step) -> f64 {
    let near = (f64::from(level_m) / step.metres(1.0)).round();
    let found = [near + 1.0, near, near - 1.0];
    let fits = found.into_iter().find(|&count| single(step.metres(count)) <= level_m);
    step.metres(fits.unwrap_or(near - 2.0))
}

/// The lowest whole step at or above a level, m; see [`rounded_down`].
#[must_use]
pub fn rounded_up(level_m: f32, step: Step) -> f64 {
    let up = -rounded_down(-level_m, step);
    // Minus nothing is nothing.
    if up == 0.0 { 0.0 } else { up }
}

#[expect(clippy::cast_possible_truncation, reason = "the f32 of a step is what is compared")]
fn single(value: f64) -> f32 {
    value as f32
}

#[cfg(test)]
mod tests {
    use super::{Step, rounded_down, rounded_up};

    fn near(a: f64, b: f64) -> bool {
        (a - b).abs() < 1e-9
    }

    #[test]
    fn down_never_gives_more_than_the_level() {
        let ten = Step::TenMillimetres;
        assert!(near(rounded_down(4.545_454_5, ten), 4.54), "4.55 would be 0.1 % over");
        assert!(near(rounded_down(4.549_999_7, ten), 4.54));
        assert!(near(rounded_down(4.55, ten), 4.55));
        assert!(near(rounded_down(6.0, ten), 6.0));
        assert!(near(rounded_down(f32::next_down(6.0), ten), 5.99));
        assert!(near(rounded_down(-0.004, ten), -0.01));
        assert!(near(rounded_down(0.0, ten), 0.0));
    }

    #[test]
    fn up_never_gives_less_than_the_level() {
        let ten = Step::TenMillimetres;
        assert!(near(rounded_up(1.409_1, ten), 1.41));
        assert!(near(rounded_up(1.41, ten), 1.41));
        assert!(near(rounded_up(f32::next_up(1.41), ten), 1.42));
        assert!(near(rounded_up(0.0, ten), 0.0));
    }

    #[test]
    fn an_eighth_of_an_inch() {
        // 25.79 ft are 2475.84 eighths of an inch.
        let level_m = 25.79 * 0.3048;
        let down = rounded_down(level_m, Step::EighthInch);
        assert!(near(down, 2475.0 * 0.003_175), "{down}");
    }
}
