//! Rows about gravity and plates.

use crate::cases::problem::{Problem, Rule};
use crate::cases::{Reason, Row};

use super::UNREAD;

/// GRS80 constants (Moritz, Geodetic Reference System 1980).
const GRS80: (f64, f64, f64) = (9.780_326_771_5, 0.001_931_851_353, 0.006_694_380_022_90);
/// WGS84 constants (NIMA TR8350.2).
const WGS84: (f64, f64, f64) = (9.780_325_335_9, 0.001_931_852_652_41, 0.006_694_379_990_14);

pub(super) fn gravity(row: &Row) -> Result<Problem, Reason> {
    let somigliana = |(equator, k, eccentricity_squared), latitude_deg| Rule::NormalGravity {
        equator,
        k,
        eccentricity_squared,
        latitude_deg,
    };
    let latitude = row.number("latitude_deg");
    Ok(Problem::Rule(match (row.get("model"), latitude) {
        (Some("GRS80"), Some(latitude)) => somigliana(GRS80, latitude),
        (Some("WGS84"), Some(latitude)) => somigliana(WGS84, latitude),
        (Some("GRS80_series_9.780327"), Some(latitude_deg)) => Rule::GravitySeries { latitude_deg },
        (Some("standard"), _) => Rule::StandardGravity,
        _ => return Err(UNREAD),
    }))
}

/// Clamped round plates under pressure linear over their height; other plates need a series.
pub(super) fn plate(row: &Row) -> Result<Problem, Reason> {
    let depth = row.number("depth of the centre m");
    let (Some("circle"), Some(depth)) = (row.get("plate"), depth) else {
        return Err("bending of plates");
    };
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let weight = number("rho")? * number("g")?;
    let radius_m = number("a_m")?;
    let centre_pa = weight * depth;
    let rise_pa = weight * radius_m * number("theta_deg")?.to_radians().sin();
    Ok(Problem::Rule(match row.quantity() {
        "largest bending stress" => {
            let thickness_m = number("t_m")?;
            Rule::ClampedDiscStress { radius_m, thickness_m, centre_pa, rise_pa }
        }
        _ => Rule::ClampedDiscMoment { radius_m, centre_pa, rise_pa },
    }))
}
