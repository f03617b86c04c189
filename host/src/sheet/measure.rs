//! Numbers for a checker: seven digits in units that fit each other, so that a formula can be
//! redone as it stands. In US customary units these are pound-force and foot.

use crate::units::UnitSystem;

/// Foot and pound-force, exact (NIST SP 811).
const FOOT_M: f64 = 0.3048;
const LBF_N: f64 = 4.448_221_615_260_5;

/// What is measured, by its powers of force and length.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Measure {
    force: i32,
    length: i32,
    si: &'static str,
    us: &'static str,
}

const fn measure(force: i32, length: i32, si: &'static str, us: &'static str) -> Measure {
    Measure { force, length, si, us }
}

impl Measure {
    pub(super) const LENGTH: Self = measure(0, 1, "m", "ft");
    pub(super) const AREA: Self = measure(0, 2, "m²", "ft²");
    pub(super) const VOLUME: Self = measure(0, 3, "m³", "ft³");
    pub(super) const FOURTH: Self = measure(0, 4, "m⁴", "ft⁴");
    pub(super) const PER_LENGTH: Self = measure(0, -1, "1/m", "1/ft");
    pub(super) const WEIGHT: Self = measure(1, -3, "N/m³", "lbf/ft³");
    pub(super) const PRESSURE: Self = measure(1, -2, "Pa", "lbf/ft²");
    pub(super) const FORCE: Self = measure(1, 0, "N", "lbf");
    pub(super) const LINE: Self = measure(1, -1, "N/m", "lbf/ft");
    pub(super) const MOMENT: Self = measure(1, 1, "N m", "lbf ft");
    /// A moment per width.
    pub(super) const BENDING: Self = measure(1, 0, "N m/m", "lbf ft/ft");
    pub(super) const NUMBER: Self = measure(0, 0, "", "");

    /// What one of it is in SI.
    pub(super) fn factor(self, units: UnitSystem) -> f64 {
        match units {
            UnitSystem::Si => 1.0,
            UnitSystem::UsCustomary => LBF_N.powi(self.force) * FOOT_M.powi(self.length),
        }
    }

    /// The number alone.
    pub(super) fn number(self, value: f64, units: UnitSystem) -> String {
        digits(value / self.factor(units))
    }

    /// The unit alone.
    pub(super) const fn unit(self, units: UnitSystem) -> &'static str {
        match units {
            UnitSystem::Si => self.si,
            UnitSystem::UsCustomary => self.us,
        }
    }

    /// Number and unit.
    pub(super) fn show(self, value: f64, units: UnitSystem) -> String {
        format!("{} {}", self.number(value, units), self.unit(units)).trim_end().to_owned()
    }
}

/// Seven significant digits, without an exponent between 1e-3 and 1e9.
pub(super) fn digits(value: f64) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let scientific = format!("{value:.6e}");
    let exponent = scientific.split_once('e').and_then(|(_, power)| power.parse::<i32>().ok());
    match exponent {
        Some(power) if (-3..9).contains(&power) => {
            let behind = usize::try_from(6 - power).unwrap_or(0);
            format!("{value:.behind$}")
        }
        _ => scientific,
    }
}

/// Two digits: differences and errors.
pub(super) fn short(value: f64) -> String {
    if value == 0.0 { "0".to_owned() } else { format!("{value:.1e}") }
}

#[cfg(test)]
mod tests {
    use super::{Measure, digits};
    use crate::units::UnitSystem;

    #[test]
    fn seven_digits() {
        let shown = [0.0, 9.3, -451_927.062, 0.001_234_567_8, 1.0e-5, 2.0e9].map(digits);
        let wanted = ["0", "9.300000", "-451927.1", "0.001234568", "1.000000e-5", "2.000000e9"];
        assert_eq!(shown, wanted);
    }

    #[test]
    fn pound_force_and_foot() {
        // One pound-force on one square foot.
        let shown = Measure::PRESSURE.show(47.880_258_980_336, UnitSystem::UsCustomary);
        assert_eq!(shown, "1.000000 lbf/ft²");
    }
}
