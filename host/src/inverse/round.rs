//! Rounding to the safe side, in the units that are shown.

use crate::units::UnitSystem;

/// The step to which a level is rounded.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Step {
    /// 10 mm.
    TenMillimetres,
    /// 1/8 in.
    EighthInch,
}

impl Step {
    /// The step of a system of units.
    #[must_use]
    pub const fn of(units: UnitSystem) -> Self {
        match units {
            UnitSystem::Si => Self::TenMillimetres,
            UnitSystem::UsCustomary => Self::EighthInch,
        }
    }

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

/// Whole steps of a density: 1 kg/m³, or 0.1 lb/ft³.
const fn density_step_kg_m3(units: UnitSystem) -> f64 {
    match units {
        UnitSystem::Si => 1.0,
        UnitSystem::UsCustomary => 0.1 * 0.453_592_37 / 0.028_316_846_592,
    }
}

/// The highest whole step of density at or below one, kg/m³; a step counts as at it when its f32
/// is.
#[must_use]
pub fn density_down(density_kg_m3: f32, units: UnitSystem) -> f64 {
    let step = density_step_kg_m3(units);
    let near = (f64::from(density_kg_m3) / step).round();
    let fits = [near + 1.0, near, near - 1.0].into_iter();
    let fits = fits.map(|count| count * step).find(|&value| single(value) <= density_kg_m3);
    fits.unwrap_or((near - 2.0) * step)
}

/// The lowest whole step of density at or above one, kg/m³.
#[must_use]
pub fn density_up(density_kg_m3: f32, units: UnitSystem) -> f64 {
    -density_down(-density_kg_m3, units)
}

/// The least whole step of thickness at or above one, m: 0.01 mm, or 0.001 in.
///
/// A step within 1e-9 of the thickness counts as at it: a required thickness comes from a load with
/// an error of 2e-6 and stands in a formula with it.
#[must_use]
pub fn thickness_up(thickness_m: f64, units: UnitSystem) -> f64 {
    let per_m = match units {
        UnitSystem::Si => 1e5,
        UnitSystem::UsCustomary => 1e3 / 0.0254,
    };
    (thickness_m * per_m * (1.0 - 1e-9)).ceil() / per_m
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
