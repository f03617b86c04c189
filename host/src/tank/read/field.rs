//! What a key holds: its quantity, the values that are possible, and what to write there.

use crate::units::{Quantity, format_si};

/// The possible values of a number.
#[derive(Clone, Copy)]
pub(crate) struct Range {
    low: f64,
    /// Whether `low` itself is possible.
    low_in: bool,
    high: f64,
}

impl Range {
    /// Above zero.
    pub(crate) const POSITIVE: Self = Self { low: 0.0, low_in: false, high: f64::INFINITY };
    /// Zero and above.
    pub(crate) const NOT_NEGATIVE: Self = Self { low: 0.0, low_in: true, high: f64::INFINITY };
    /// Any sign.
    pub(crate) const ANY: Self = Self { low: f64::NEG_INFINITY, low_in: true, high: f64::INFINITY };
    /// Above 0, 1 at most.
    pub(crate) const SHARE: Self = Self { low: 0.0, low_in: false, high: 1.0 };

    /// From `low` to `high`, both possible.
    pub(crate) const fn between(low: f64, high: f64) -> Self {
        Self { low, low_in: true, high }
    }

    /// Above `low`, to `high` at most.
    pub(crate) const fn above(low: f64, high: f64) -> Self {
        Self { low, low_in: false, high }
    }

    /// What `value` breaks, as the end of a sentence, or nothing.
    pub(crate) fn broken_by(self, value: f64, quantity: Option<Quantity>) -> Option<String> {
        let write = |v: f64| match quantity {
            Some(quantity) if v != 0.0 => format_si(v, quantity),
            _ => v.to_string(),
        };
        let largest = quantity.map_or(f64::MAX, largest);
        let low = self.low.max(-largest);
        let high = self.high.min(largest);
        let too_low = value < low || (!self.low_in && value <= low);
        if too_low && self.low_in {
            Some(format!("it must be at least {}", write(low)))
        } else if too_low {
            Some(format!("it must be above {}", write(low)))
        } else if value > high {
            Some(format!("it must be at most {}", write(high)))
        } else {
            None
        }
    }
}

/// The largest magnitude that any tank has, far above what is usual; it catches a wrong unit and
/// keeps later arithmetic in range.
fn largest(quantity: Quantity) -> f64 {
    match quantity {
        Quantity::Length | Quantity::Ratio | Quantity::Voltage | Quantity::Current => 1e3,
        Quantity::Volume | Quantity::Flow | Quantity::Time => 1e7,
        Quantity::Mass | Quantity::Force | Quantity::LineLoad | Quantity::Moment => 1e9,
        Quantity::Pressure | Quantity::AbsolutePressure => 1e12,
        Quantity::Density => 25e3,
        Quantity::Speed => 10.0,
        Quantity::Acceleration => 100.0,
        Quantity::Temperature | Quantity::TemperatureDifference => 2e3,
        Quantity::PerKelvin => 0.1,
        Quantity::AngleDegrees => 360.0,
        Quantity::Charge => 1e8,
    }
}

/// A key that holds a quantity.
#[derive(Clone, Copy)]
pub(crate) struct Field {
    pub(crate) key: &'static str,
    pub(crate) quantity: Quantity,
    pub(crate) range: Range,
    /// What to write, as it follows `key = `: an example and its meaning.
    pub(crate) write: &'static str,
}

/// A key that holds a quantity.
pub(crate) const fn field(
    key: &'static str,
    quantity: Quantity,
    range: Range,
    write: &'static str,
) -> Field {
    Field { key, quantity, range, write }
}
