//! Quantities as people write them: a number and a unit, `"8.0 m"`, `"26 ft 3 1/2 in"`.
//!
//! [`parse`] turns such a text into one `f64` in the unit that [`Quantity`] names, or says what is
//! wrong with it. Conversion factors are the exact ones of the SI Brochure (9th edition, tables 8
//! and 9) and NIST SP 811 (2008), appendix B; [`format()`] goes the other way, for text output.
//!
//! Pressures are gauge unless the key asks for an absolute one; a unit may say which it is (`psig`,
//! `kPa(a)`), and one that says the other is an error. Densities may also be read from a hydrometer
//! (`35 degAPI`, `50 Baume heavy`, `60 degTw`), which means at 60 degF.
//!
//! A unit is needed on every quantity. Unit symbols keep their case, since `mPa` and `MPa` differ
//! by nine powers of ten.

mod error;
mod gauge;
mod hydrometer;
mod number;
mod table;
mod write;

pub use error::UnitError;
pub use write::{UnitSystem, format, format_si, format_us};

/// What is measured, and with it the unit of the `f64` that [`parse`] returns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// Length, level, thickness; m.
    Length,
    /// Volume; m³.
    Volume,
    /// Mass; kg.
    Mass,
    /// Pressure or stress; Pa. Pressures are gauge unless the key says otherwise.
    Pressure,
    /// Pressure counted from vacuum; Pa.
    AbsolutePressure,
    /// Density; kg/m³. Relative density (`SG`, `RD`) is taken against 1000 kg/m³.
    Density,
    /// Force; N.
    Force,
    /// Force per length, such as hoop tension; N/m.
    LineLoad,
    /// Moment of a force; N m.
    Moment,
    /// Duration; s.
    Time,
    /// Speed of a level or of corrosion; m/s. A year is 365 days (NIST SP 811).
    Speed,
    /// Volume flow; m³/s.
    Flow,
    /// Acceleration; m/s².
    Acceleration,
    /// Temperature on a scale; °C.
    Temperature,
    /// Difference of two temperatures; K.
    TemperatureDifference,
    /// Coefficient of expansion; 1/K.
    PerKelvin,
    /// Angle; degrees.
    AngleDegrees,
    /// Part of a whole; 1.
    Ratio,
    /// Voltage; V.
    Voltage,
    /// Electric current; A.
    Current,
    /// Electric charge, the capacity of a cell; C.
    Charge,
}

impl Quantity {
    /// Its name with an article, for messages.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Length => "a length",
            Self::Volume => "a volume",
            Self::Mass => "a mass",
            Self::Pressure => "a pressure",
            Self::AbsolutePressure => "an absolute pressure",
            Self::Density => "a density",
            Self::Force => "a force",
            Self::LineLoad => "a force per length",
            Self::Moment => "a moment",
            Self::Time => "a time",
            Self::Speed => "a speed",
            Self::Flow => "a flow",
            Self::Acceleration => "an acceleration",
            Self::Temperature => "a temperature",
            Self::TemperatureDifference => "a temperature difference",
            Self::PerKelvin => "a coefficient per kelvin",
            Self::AngleDegrees => "an angle",
            Self::Ratio => "a percentage",
            Self::Voltage => "a voltage",
            Self::Current => "a current",
            Self::Charge => "an electric charge",
        }
    }

    /// A few units in which it may be written, for messages.
    #[must_use]
    pub const fn usual_units(self) -> &'static str {
        match self {
            Self::Length => "m, mm, ft or in",
            Self::Volume => "m3, L, US gal or imp gal",
            Self::Mass => "kg, t or lb",
            Self::Pressure => "kPa, MPa, mbar or psi",
            Self::AbsolutePressure => "kPa(a), mbar(a) or psia",
            Self::Density => "kg/m3, SG or lb/ft3",
            Self::Force => "N, kN or lbf",
            Self::LineLoad => "N/m, kN/m or lbf/in",
            Self::Moment => "N m, kN m or lbf ft",
            Self::Time => "s, min or h",
            Self::Speed => "mm/s, m/h, mm/year or in/min",
            Self::Flow => "m3/h, L/s or US gal/min",
            Self::Acceleration => "m/s2 or ft/s2",
            Self::Temperature => "degC or degF",
            Self::TemperatureDifference => "K",
            Self::PerKelvin => "/K or /degF",
            Self::AngleDegrees => "deg or rad",
            Self::Ratio => "%",
            Self::Voltage => "V or mV",
            Self::Current => "A or mA",
            Self::Charge => "Ah or mAh",
        }
    }
}

/// Reads a number with its unit; the result is in the unit [`Quantity`] names.
///
/// Feet and inches may stand together (`"26 ft 3 in"`, `26' 3"`), a number may be a common or mixed
/// fraction (`"3/8 in"`, `"5 1/2 in"`), and relative density may lead (`"SG 1.2"`).
///
/// # Errors
///
/// [`UnitError`] when there is no number or no unit, when the unit is not known or belongs to
/// another quantity, or when the result is not a finite number.
///
/// ```
/// use strake::units::{Quantity, parse};
/// assert_eq!(parse("26 ft 3 in", Quantity::Length), Ok(8.001));
/// assert_eq!(parse("137 MPa", Quantity::Pressure), Ok(137e6));
/// ```
pub fn parse(text: &str, quantity: Quantity) -> Result<f64, UnitError> {
    let clean = feet_in_words(normalise(text));
    if clean.is_empty() {
        return Err(UnitError::Empty);
    }
    if let Some(rest) = clean.strip_prefix("SG ").or_else(|| clean.strip_prefix("RD ")) {
        return parse_plain(&format!("{rest} SG"), quantity);
    }
    if let Some((feet, inches)) = number::split_feet(&clean) {
        return parse_feet(feet, inches, quantity);
    }
    parse_plain(&clean, quantity)
}

/// One number and one unit.
fn parse_plain(text: &str, quantity: Quantity) -> Result<f64, UnitError> {
    let (number, unit) = number::split(text)?;
    let value = number::value(number)?;
    if unit.is_empty() {
        return Err(UnitError::MissingUnit { quantity });
    }
    if let Some(scale) = hydrometer::find(unit)? {
        if quantity == Quantity::Density {
            return scale.density_kg_m3(value);
        }
        let (unit, found) = (unit.to_owned(), Quantity::Density);
        return Err(UnitError::WrongDimension { unit, found, wanted: quantity });
    }
    let unit = table::find(unmarked(unit, quantity)?, quantity)?;
    let si = (value + unit.shift) * unit.numerator / unit.denominator;
    if si.is_finite() { Ok(si) } else { Err(UnitError::NotFinite) }
}

/// The unit of a pressure without its mark, which must not contradict the quantity.
fn unmarked(unit: &str, quantity: Quantity) -> Result<&str, UnitError> {
    let Some((base, mark)) = gauge::split(unit, table::knows) else { return Ok(unit) };
    if !table::is_pressure(base) {
        return Ok(unit);
    }
    match (quantity, mark) {
        (Quantity::Pressure, gauge::Mark::Absolute) => {
            Err(UnitError::Absolute { unit: unit.to_owned(), base: base.to_owned() })
        }
        (Quantity::AbsolutePressure, gauge::Mark::Gauge) => {
            Err(UnitError::Gauge { unit: unit.to_owned(), base: base.to_owned() })
        }
        _ => Ok(base),
    }
}

/// `26' 3"` as `26 ft 3 in`, when the text ends with such a mark: in the middle of a number it is
/// a separator, which [`number::split`] refuses.
fn feet_in_words(clean: String) -> String {
    if clean.ends_with(['\'', '"']) {
        clean.replace('\'', " ft ").replace('"', " in").replace("  ", " ").trim_end().to_owned()
    } else {
        clean
    }
}

/// `feet` and `inches` are texts of numbers; a sign before the feet holds for both.
fn parse_feet(feet: &str, inches: &str, quantity: Quantity) -> Result<f64, UnitError> {
    if quantity != Quantity::Length {
        let unit = "ft".to_owned();
        return Err(UnitError::WrongDimension { unit, found: Quantity::Length, wanted: quantity });
    }
    let whole = number::value(feet)?;
    let part = number::value(inches)?;
    if inches.starts_with(['-', '+']) || part >= 12.0 {
        return Err(UnitError::InchesOutOfRange { inches: inches.to_owned() });
    }
    let signed = if feet.starts_with('-') { -part } else { part };
    let metres = (whole * 12.0 + signed) * 254.0 / 10_000.0;
    if metres.is_finite() { Ok(metres) } else { Err(UnitError::NotFinite) }
}

/// One spelling for what people and word processors write in several.
fn normalise(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '\u{b2}' => out.push('2'),
            '\u{b3}' => out.push('3'),
            '\u{b5}' | '\u{3bc}' => out.push('u'),
            '\u{2212}' => out.push('-'),
            '\u{2032}' | '\u{2019}' => out.push('\''),
            '\u{2033}' | '\u{201d}' => out.push('"'),
            '\u{b0}' => out.push_str("deg"),
            '^' => {}
            '\u{b7}' | '\u{22c5}' | '*' => out.push(' '),
            c if c.is_whitespace() => out.push(' '),
            c => out.push(c),
        }
    }
    let mut words = out.split(' ').filter(|word| !word.is_empty());
    let mut joined = words.next().unwrap_or_default().to_owned();
    for word in words {
        // No blank around the slash of a unit: "kg / m3" is "kg/m3"; but "5 /K" keeps its blank.
        let after_unit = joined.ends_with(|c: char| c.is_alphabetic() || c == '/');
        if !(after_unit && word.starts_with('/') || joined.ends_with('/')) {
            joined.push(' ');
        }
        joined.push_str(word);
    }
    joined
}

#[cfg(test)]
mod tests;
