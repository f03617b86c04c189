//! The known units. Factors: SI Brochure (9th edition), tables 8 and 9; NIST SP 811 (2008),
//! appendix B.8 and B.9. Each is exact and stands as a quotient, so that `"4.6 mm"` gives the
//! `f64` nearest to 0.0046.

use super::{Quantity, UnitError};
use crate::nearest::nearest;

/// One unit: the SI value is `(value + shift) * numerator / denominator`.
pub(super) struct Unit {
    pub(super) quantity: Quantity,
    /// Spellings, the preferred one first.
    pub(super) names: &'static [&'static str],
    pub(super) numerator: f64,
    pub(super) denominator: f64,
    /// Added before the factor; only scales of temperature have one.
    pub(super) shift: f64,
}

const fn unit(
    quantity: Quantity,
    names: &'static [&'static str],
    numerator: f64,
    denominator: f64,
) -> Unit {
    Unit { quantity, names, numerator, denominator, shift: 0.0 }
}

const fn scale(names: &'static [&'static str], shift: f64, num: f64, den: f64) -> Unit {
    Unit { quantity: Quantity::Temperature, names, numerator: num, denominator: den, shift }
}

/// Pound, kg.
const LB: f64 = 0.453_592_37;
/// Pound-force, N.
const LBF: f64 = 4.448_221_615_260_5;
/// Foot, m.
const FT: f64 = 0.3048;
/// Inch, m.
const IN: f64 = 0.0254;
/// Square inch, m².
const IN2: f64 = 0.000_645_16;
/// Square foot, m².
const FT2: f64 = 0.092_903_04;
/// Cubic foot, m³.
const FT3: f64 = 0.028_316_846_592;
/// US gallon, m³.
const US_GAL: f64 = 0.003_785_411_784;
/// Imperial gallon, m³.
const IMP_GAL: f64 = 0.004_546_09;
/// Conventional weight of one metre of water, Pa: 1000 kg/m³ at standard gravity.
const M_H2O: f64 = 9806.65;
/// A year of 365 days, s.
const YEAR: f64 = 31_536_000.0;

use Quantity as Q;

static UNITS: &[Unit] = &[
    unit(Q::Length, &["m"], 1.0, 1.0),
    unit(Q::Length, &["mm"], 1.0, 1e3),
    unit(Q::Length, &["cm"], 1.0, 1e2),
    unit(Q::Length, &["um"], 1.0, 1e6),
    unit(Q::Length, &["km"], 1e3, 1.0),
    unit(Q::Length, &["ft"], 3048.0, 1e4),
    unit(Q::Length, &["in"], 254.0, 1e4),
    unit(Q::Length, &["mil"], 254.0, 1e7),
    unit(Q::Volume, &["m3"], 1.0, 1.0),
    unit(Q::Volume, &["L", "l", "dm3"], 1.0, 1e3),
    unit(Q::Volume, &["hL", "hl"], 1.0, 10.0),
    unit(Q::Volume, &["ft3"], FT3, 1.0),
    unit(Q::Volume, &["US gal", "US gallon", "US gallons"], US_GAL, 1.0),
    unit(Q::Volume, &["imp gal", "imperial gal", "imperial gallons"], IMP_GAL, 1.0),
    unit(Q::Volume, &["bbl"], 42.0 * US_GAL, 1.0),
    unit(Q::Mass, &["kg"], 1.0, 1.0),
    unit(Q::Mass, &["g"], 1.0, 1e3),
    unit(Q::Mass, &["t"], 1e3, 1.0),
    unit(Q::Mass, &["lb"], LB, 1.0),
    unit(Q::Pressure, &["Pa"], 1.0, 1.0),
    unit(Q::Pressure, &["hPa", "mbar"], 1e2, 1.0),
    unit(Q::Pressure, &["kPa", "kN/m2"], 1e3, 1.0),
    unit(Q::Pressure, &["MPa", "N/mm2"], 1e6, 1.0),
    unit(Q::Pressure, &["GPa"], 1e9, 1.0),
    unit(Q::Pressure, &["bar"], 1e5, 1.0),
    unit(Q::Pressure, &["psi", "lbf/in2"], LBF, IN2),
    unit(Q::Pressure, &["ksi"], 1e3 * LBF, IN2),
    unit(Q::Pressure, &["psf", "lbf/ft2"], LBF, FT2),
    unit(Q::Pressure, &["kgf/cm2"], 98_066.5, 1.0),
    unit(Q::Pressure, &["tf/m2", "t/m2"], 9_806.65, 1.0),
    unit(Q::Pressure, &["mH2O", "m H2O", "mWC"], M_H2O, 1.0),
    unit(Q::Pressure, &["mmH2O", "mm H2O", "mmWC"], M_H2O, 1e3),
    unit(Q::Pressure, &["ftH2O", "ft H2O", "ftWC"], M_H2O * 3048.0, 1e4),
    unit(Q::Pressure, &["inH2O", "in H2O", "inWC"], M_H2O * 254.0, 1e4),
    unit(Q::Density, &["kg/m3", "g/L", "g/l"], 1.0, 1.0),
    unit(Q::Density, &["g/cm3", "g/mL", "g/ml", "kg/L", "kg/l", "t/m3"], 1e3, 1.0),
    unit(Q::Density, &["SG", "RD"], 1e3, 1.0),
    unit(Q::Density, &["lb/ft3"], LB, FT3),
    unit(Q::Density, &["lb/US gal", "lb/US gallon"], LB, US_GAL),
    unit(Q::Density, &["lb/imp gal", "lb/imperial gal", "lb/imperial gallon"], LB, IMP_GAL),
    unit(Q::Force, &["N"], 1.0, 1.0),
    unit(Q::Force, &["kN"], 1e3, 1.0),
    unit(Q::Force, &["MN"], 1e6, 1.0),
    unit(Q::Force, &["kgf"], 9.806_65, 1.0),
    unit(Q::Force, &["lbf"], LBF, 1.0),
    unit(Q::Force, &["kip"], 1e3 * LBF, 1.0),
    unit(Q::LineLoad, &["N/m"], 1.0, 1.0),
    unit(Q::LineLoad, &["kN/m", "N/mm"], 1e3, 1.0),
    unit(Q::LineLoad, &["MN/m"], 1e6, 1.0),
    unit(Q::LineLoad, &["lbf/in"], LBF, IN),
    unit(Q::LineLoad, &["lbf/ft"], LBF, FT),
    unit(Q::LineLoad, &["kip/ft"], 1e3 * LBF, FT),
    unit(Q::Moment, &["N m", "Nm"], 1.0, 1.0),
    unit(Q::Moment, &["kN m", "kNm"], 1e3, 1.0),
    unit(Q::Moment, &["N mm", "Nmm"], 1.0, 1e3),
    unit(Q::Moment, &["lbf ft", "ft lbf"], LBF * 3048.0, 1e4),
    unit(Q::Moment, &["lbf in", "in lbf"], LBF * 254.0, 1e4),
    unit(Q::Time, &["s"], 1.0, 1.0),
    unit(Q::Time, &["ms"], 1.0, 1e3),
    unit(Q::Time, &["min"], 60.0, 1.0),
    unit(Q::Time, &["h"], 3600.0, 1.0),
    unit(Q::Time, &["d", "day", "days"], 86_400.0, 1.0),
    unit(Q::Speed, &["m/s"], 1.0, 1.0),
    unit(Q::Speed, &["mm/s"], 1.0, 1e3),
    unit(Q::Speed, &["mm/min"], 1.0, 6e4),
    unit(Q::Speed, &["mm/h"], 1.0, 3.6e6),
    unit(Q::Speed, &["cm/min"], 1.0, 6e3),
    unit(Q::Speed, &["m/min"], 1.0, 60.0),
    unit(Q::Speed, &["m/h"], 1.0, 3600.0),
    unit(Q::Speed, &["mm/year", "mm/a"], 1.0, 1e3 * YEAR),
    unit(Q::Speed, &["um/year", "um/a"], 1.0, 1e6 * YEAR),
    unit(Q::Speed, &["ft/min"], 3048.0, 6e5),
    unit(Q::Speed, &["ft/h"], 3048.0, 3.6e7),
    unit(Q::Speed, &["in/s"], 254.0, 1e4),
    unit(Q::Speed, &["in/min"], 254.0, 6e5),
    unit(Q::Speed, &["in/h"], 254.0, 3.6e7),
    unit(Q::Speed, &["in/year"], 254.0, 1e4 * YEAR),
    unit(Q::Speed, &["mil/year", "mpy"], 254.0, 1e7 * YEAR),
    unit(Q::Flow, &["m3/s"], 1.0, 1.0),
    unit(Q::Flow, &["m3/h"], 1.0, 3600.0),
    unit(Q::Flow, &["L/s", "l/s"], 1.0, 1e3),
    unit(Q::Flow, &["L/min", "l/min"], 1.0, 6e4),
    unit(Q::Flow, &["US gal/min"], US_GAL, 60.0),
    unit(Q::Flow, &["imp gal/min"], IMP_GAL, 60.0),
    unit(Q::Acceleration, &["m/s2"], 1.0, 1.0),
    unit(Q::Acceleration, &["ft/s2"], 3048.0, 1e4),
    scale(&["degC", "C"], 0.0, 1.0, 1.0),
    scale(&["degF", "F"], -32.0, 5.0, 9.0),
    scale(&["K"], -273.15, 1.0, 1.0),
    unit(Q::TemperatureDifference, &["K", "degC"], 1.0, 1.0),
    unit(Q::TemperatureDifference, &["degF"], 5.0, 9.0),
    unit(Q::PerKelvin, &["/K", "1/K", "K-1", "/degC", "1/degC"], 1.0, 1.0),
    unit(Q::PerKelvin, &["/degF", "1/degF"], 9.0, 5.0),
    unit(Q::AngleDegrees, &["deg"], 1.0, 1.0),
    unit(Q::AngleDegrees, &["rad"], 180.0, std::f64::consts::PI),
    unit(Q::Ratio, &["%"], 1.0, 1e2),
    unit(Q::Voltage, &["V"], 1.0, 1.0),
    unit(Q::Voltage, &["mV"], 1.0, 1e3),
    unit(Q::Current, &["A"], 1.0, 1.0),
    unit(Q::Current, &["mA"], 1.0, 1e3),
    unit(Q::Current, &["uA"], 1.0, 1e6),
    unit(Q::Charge, &["Ah", "A h"], 3600.0, 1.0),
    unit(Q::Charge, &["mAh"], 36.0, 10.0),
];

/// Whether a unit of that name is known.
pub(super) fn knows(name: &str) -> bool {
    UNITS.iter().any(|unit| unit.names.contains(&name))
}

/// Whether that name is a unit of pressure.
pub(super) fn is_pressure(name: &str) -> bool {
    UNITS.iter().any(|unit| unit.quantity == Q::Pressure && unit.names.contains(&name))
}

/// The unit of that name for that quantity.
///
/// # Errors
///
/// [`UnitError::WrongDimension`] and [`UnitError::UnknownUnit`].
pub(super) fn find(name: &str, wanted: Quantity) -> Result<&'static Unit, UnitError> {
    let wanted = if wanted == Q::AbsolutePressure { Q::Pressure } else { wanted };
    let mut elsewhere = None;
    for unit in UNITS.iter().filter(|unit| unit.names.contains(&name)) {
        if unit.quantity == wanted {
            return Ok(unit);
        }
        elsewhere = elsewhere.or(Some(unit));
    }
    if let Some(unit) = elsewhere {
        let found = unit.quantity;
        return Err(UnitError::WrongDimension { unit: name.to_owned(), found, wanted });
    }
    // Gallons differ by a fifth from country to country.
    if name.contains("gal") && !name.contains("US") && !name.contains("imp") {
        let us = find(&name.replace("gal", "US gal"), wanted);
        let nearest = us.ok().and_then(|unit| unit.names.first().copied());
        return Err(UnitError::UnknownUnit { unit: name.to_owned(), nearest });
    }
    // A slip is first sought among the units of the quantity asked for.
    let fitting = UNITS.iter().filter(|unit| unit.quantity == wanted);
    let any = UNITS.iter();
    let nearest = nearest(name, fitting.flat_map(|unit| unit.names.iter().copied()))
        .or_else(|| nearest(name, any.flat_map(|unit| unit.names.iter().copied())));
    Err(UnitError::UnknownUnit { unit: name.to_owned(), nearest })
}

#[cfg(test)]
pub(super) fn all() -> &'static [Unit] {
    UNITS
}
