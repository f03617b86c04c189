//! What can be wrong with a quantity that a person wrote.

use std::fmt;

use super::Quantity;

/// Why a text is not the quantity asked for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum UnitError {
    /// There is no text.
    Empty,
    /// A number without a unit.
    MissingUnit {
        /// What was asked for.
        quantity: Quantity,
    },
    /// The text does not begin with a number.
    NotANumber {
        /// What stands where the number belongs.
        text: String,
    },
    /// A number broken by a comma, which means thousands to one reader and decimals to another.
    Separator {
        /// The number as written.
        text: String,
    },
    /// NaN, infinite, or too large for a floating-point number.
    NotFinite,
    /// A fraction with a zero below the line.
    ZeroDenominator,
    /// After feet, inches run from 0 to below 12 and carry no sign.
    InchesOutOfRange {
        /// The inches as written.
        inches: String,
    },
    /// An absolute pressure where a gauge pressure belongs.
    Absolute {
        /// The unit as written.
        unit: String,
        /// The unit without its mark.
        base: String,
    },
    /// A gauge pressure where an absolute one belongs.
    Gauge {
        /// The unit as written.
        unit: String,
        /// The unit without its mark.
        base: String,
    },
    /// More or fewer degrees than a hydrometer of that scale has.
    OffScale {
        /// The scale.
        scale: &'static str,
        /// Its least degree.
        low: i16,
        /// Its highest degree.
        high: i16,
    },
    /// Degrees Baume of two scales that part at water.
    TwoScales {
        /// The unit as written.
        unit: String,
    },
    /// No unit of this name is known.
    UnknownUnit {
        /// The unit as written.
        unit: String,
        /// The known unit nearest to it.
        nearest: Option<&'static str>,
    },
    /// The unit is known and measures something else.
    WrongDimension {
        /// The unit as written.
        unit: String,
        /// What it measures.
        found: Quantity,
        /// What was asked for.
        wanted: Quantity,
    },
}

impl fmt::Display for UnitError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Empty => f.write_str("there is no text"),
            Self::MissingUnit { quantity } => write!(
                f,
                "the unit is missing; {} is written in {}",
                quantity.name(),
                quantity.usual_units()
            ),
            Self::NotANumber { text } => write!(f, "`{text}` is not a number"),
            Self::Separator { text } => {
                write!(f, "`{text}` is ambiguous; write a decimal point and no separators")
            }
            Self::NotFinite => f.write_str("the number is not finite or too large"),
            Self::ZeroDenominator => f.write_str("the fraction has a zero below the line"),
            Self::InchesOutOfRange { inches } => {
                write!(f, "`{inches}` inches after feet; they run from 0 to below 12")
            }
            Self::Absolute { unit, base } => write!(
                f,
                "`{unit}` is an absolute pressure, a gauge pressure belongs here; subtract the \
                 pressure of the air at the site and write the rest in {base}"
            ),
            Self::Gauge { unit, base } => write!(
                f,
                "`{unit}` is a gauge pressure, an absolute one belongs here; add the pressure of \
                 the air at the site and write the sum in {base}(a)"
            ),
            Self::OffScale { scale, low, high } => {
                write!(f, "degrees of `{scale}` run from {low} to {high}")
            }
            Self::TwoScales { unit } => write!(
                f,
                "`{unit}` has two scales; write `Baume heavy` for a liquid heavier than water, \
                 `Baume light` for a lighter one"
            ),
            Self::UnknownUnit { unit, nearest: Some(nearest) } => {
                write!(f, "unit `{unit}` is not known; the nearest known one is `{nearest}`")
            }
            Self::UnknownUnit { unit, nearest: None } => write!(f, "unit `{unit}` is not known"),
            Self::WrongDimension { unit, found, wanted } => {
                write!(f, "`{unit}` is a unit of {}, not of {}", bare(*found), bare(*wanted))
            }
        }
    }
}

impl std::error::Error for UnitError {}

/// The name of a quantity without its article.
fn bare(quantity: Quantity) -> &'static str {
    let name = quantity.name();
    name.split_once(' ').map_or(name, |(_, rest)| rest)
}
