//! Quantities for text output. Rounding here is to the nearest digit shown: a figure that must
//! be rounded to the safe side is rounded before it comes here.

use std::fmt::Write as _;

use super::Quantity;

/// In which units text output shows quantities.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum UnitSystem {
    /// The International System of Units.
    #[default]
    Si,
    /// United States customary units.
    UsCustomary,
}

/// Writes a value, given in the unit that [`Quantity`] names, in the units of `system`.
#[must_use]
pub fn format(value: f64, quantity: Quantity, system: UnitSystem) -> String {
    match system {
        UnitSystem::Si => format_si(value, quantity),
        UnitSystem::UsCustomary => format_us(value, quantity),
    }
}

/// One unit to show a value in: it is taken from `least` upwards.
struct Shown {
    least: f64,
    unit: &'static str,
    si: f64,
    /// Digits behind the point, or four significant digits.
    digits: Digits,
}

enum Digits {
    Behind(usize),
    Significant,
}

use Digits::{Behind, Significant};

const fn shown(least: f64, unit: &'static str, si: f64, digits: Digits) -> Shown {
    Shown { least, unit, si, digits }
}

const YEAR_S: f64 = 31_536_000.0;
const LBF: f64 = 4.448_221_615_260_5;
const PSI: f64 = LBF / 0.000_645_16;

/// Writes a value in SI units: levels to the millimetre, thicknesses below 50 mm in millimetres
/// with two digits behind the point, densities to 0.1 kg/m³, loads with four significant digits.
#[must_use]
pub fn format_si(value: f64, quantity: Quantity) -> String {
    let rows: &[Shown] = match quantity {
        Quantity::Length => {
            &[shown(0.05, "m", 1.0, Behind(3)), shown(f64::MIN_POSITIVE, "mm", 1e-3, Behind(2))]
        }
        Quantity::Volume => &[shown(0.0, "m3", 1.0, Significant)],
        Quantity::Mass => &[shown(0.0, "kg", 1.0, Significant)],
        Quantity::Pressure | Quantity::AbsolutePressure => &[
            shown(1e6, "MPa", 1e6, Significant),
            shown(1e3, "kPa", 1e3, Significant),
            shown(0.0, "Pa", 1.0, Behind(1)),
        ],
        Quantity::Density => &[shown(0.0, "kg/m3", 1.0, Behind(1))],
        Quantity::Force => &[shown(1e3, "kN", 1e3, Significant), shown(0.0, "N", 1.0, Behind(1))],
        Quantity::LineLoad => {
            &[shown(1e3, "kN/m", 1e3, Significant), shown(0.0, "N/m", 1.0, Behind(1))]
        }
        Quantity::Moment => {
            &[shown(1e3, "kN m", 1e3, Significant), shown(0.0, "N m", 1.0, Behind(1))]
        }
        Quantity::Time => &[
            shown(7200.0, "h", 3600.0, Behind(1)),
            shown(120.0, "min", 60.0, Behind(1)),
            shown(0.0, "s", 1.0, Behind(1)),
        ],
        Quantity::Speed => &[
            shown(1e-6, "mm/s", 1e-3, Significant),
            shown(0.0, "mm/year", 1e-3 / YEAR_S, Significant),
        ],
        Quantity::Flow => &[shown(0.0, "m3/h", 1.0 / 3600.0, Significant)],
        Quantity::Acceleration => &[shown(0.0, "m/s2", 1.0, Behind(5))],
        Quantity::Temperature => &[shown(0.0, "degC", 1.0, Behind(1))],
        other => any_system(other),
    };
    pick(value, rows)
}

/// Writes a value in US customary units: lengths from one foot in feet and inches to the nearest
/// eighth of an inch, shorter ones in inches with three digits behind the point.
#[must_use]
pub fn format_us(value: f64, quantity: Quantity) -> String {
    let rows: &[Shown] = match quantity {
        Quantity::Length if value.abs() >= 0.3048 => return feet_and_inches(value),
        Quantity::Length => &[shown(0.0, "in", 0.0254, Behind(3))],
        Quantity::Volume => &[shown(0.0, "US gal", 0.003_785_411_784, Significant)],
        Quantity::Mass => &[shown(0.0, "lb", 0.453_592_37, Significant)],
        Quantity::Pressure | Quantity::AbsolutePressure => {
            &[shown(1e6, "ksi", 1e3 * PSI, Significant), shown(0.0, "psi", PSI, Significant)]
        }
        Quantity::Density => &[shown(0.0, "lb/ft3", 0.453_592_37 / 0.028_316_846_592, Behind(2))],
        Quantity::Force => &[shown(0.0, "lbf", LBF, Significant)],
        Quantity::LineLoad => &[shown(0.0, "lbf/in", LBF / 0.0254, Significant)],
        Quantity::Moment => &[shown(0.0, "lbf ft", LBF * 0.3048, Significant)],
        Quantity::Speed => &[
            shown(1e-6, "in/min", 0.0254 / 60.0, Significant),
            shown(0.0, "in/year", 0.0254 / YEAR_S, Significant),
        ],
        Quantity::Flow => &[shown(0.0, "US gal/min", 0.003_785_411_784 / 60.0, Significant)],
        Quantity::Acceleration => &[shown(0.0, "ft/s2", 0.3048, Behind(4))],
        Quantity::Temperature => {
            return format!("{} degF", behind(value * 9.0 / 5.0 + 32.0, 1));
        }
        Quantity::Time => return format_si(value, quantity),
        other => any_system(other),
    };
    pick(value, rows)
}

/// Quantities that both systems write alike.
fn any_system(quantity: Quantity) -> &'static [Shown] {
    match quantity {
        Quantity::TemperatureDifference => const { &[shown(0.0, "K", 1.0, Behind(1))] },

        Quantity::PerKelvin => const { &[shown(0.0, "/K", 1.0, Significant)] },

        Quantity::AngleDegrees => const { &[shown(0.0, "deg", 1.0, Behind(1))] },

        Quantity::Ratio => const { &[shown(0.0, "%", 0.01, Behind(1))] },

        Quantity::Voltage => const { &[shown(0.0, "V", 1.0, Behind(1))] },

        Quantity::Current => {
            const { &[shown(1.0, "A", 1.0, Behind(2)), shown(0.0, "mA", 1e-3, Behind(2))] }
        }

        Quantity::Charge => const { &[shown(0.0, "Ah", 3600.0, Behind(2))] },

        _ => const { &[shown(0.0, "", 1.0, Significant)] },
    }
}

/// The first row whose `least` the magnitude reaches; zero takes the row that begins there, else
/// the first.
fn pick(value: f64, rows: &[Shown]) -> String {
    let reached = |row: &&Shown| value.abs() >= row.least;
    let otherwise = if value == 0.0 { rows.first() } else { rows.last() };
    let Some(row) = rows.iter().find(reached).or(otherwise) else {
        return value.to_string();
    };
    let in_unit = value / row.si;
    let number = match row.digits {
        Behind(digits) => behind(in_unit, digits),
        Significant => significant(in_unit),
    };
    format!("{number} {}", row.unit)
}

fn behind(value: f64, digits: usize) -> String {
    let text = format!("{value:.digits$}");
    // Minus nothing is nothing.
    match text.strip_prefix('-') {
        Some(rest) if rest.chars().all(|c| matches!(c, '0' | '.')) => rest.to_owned(),
        _ => text,
    }
}

/// Four significant digits, without an exponent between 1e-3 and 1e6.
fn significant(value: f64) -> String {
    // The size after rounding: 0.99999 shows as 1.000.
    let size = format!("{:.3e}", value.abs()).parse().unwrap_or(f64::INFINITY);
    if size != 0.0 && !(1e-3..1e6).contains(&size) {
        return format!("{value:.3e}");
    }
    let digits = match size {
        s if s >= 1000.0 || s == 0.0 => 0,
        s if s >= 100.0 => 1,
        s if s >= 10.0 => 2,
        s if s >= 1.0 => 3,
        s if s >= 0.1 => 4,
        s if s >= 0.01 => 5,
        _ => 6,
    };
    behind(value, digits)
}

fn feet_and_inches(metres: f64) -> String {
    let eighths = (metres.abs() / 0.0254 * 8.0).round();
    let feet = (eighths / 96.0).floor();
    let rest = eighths - feet * 96.0;
    let inches = (rest / 8.0).floor();
    let fraction = match rest - inches * 8.0 {
        f if f < 0.5 => "",
        f if f < 1.5 => " 1/8",
        f if f < 2.5 => " 1/4",
        f if f < 3.5 => " 3/8",
        f if f < 4.5 => " 1/2",
        f if f < 5.5 => " 5/8",
        f if f < 6.5 => " 3/4",
        _ => " 7/8",
    };
    let mut text = if metres < 0.0 { "-".to_owned() } else { String::new() };
    // Writing to a String cannot fail.
    let _ = write!(text, "{feet:.0} ft {inches:.0}{fraction} in");
    text
}
