//! Scales of hydrometers: degrees API, Baume and Twaddell.
//!
//! Each is a relative density at 60 degF against water at 60 degF; the density is that times the
//! density of water at 60 degF, 999.016 kg/m³ (ASTM D1250-04; the value agrees with IAPWS-95). So
//! what is read is a density at 60 degF (15.6 degC), whatever the liquid's own temperature was.
//!
//! | scale | relative density at n degrees | source |
//! | --- | --- | --- |
//! | API | 141.5 / (131.5 + n) | API MPMS 9.1, ASTM D287 |
//! | Baume, heavier than water | 145 / (145 - n) | NBS modulus, from memory |
//! | Baume, lighter than water | 140 / (130 + n) | NBS modulus, from memory |
//! | Twaddell | 1 + n / 200 | definition, from memory |

use super::UnitError;

/// Density of water at 60 degF and 101.325 kPa, kg/m³ (ASTM D1250-04).
const WATER_60_DEGF_KG_M3: f64 = 999.016;

/// A scale of a hydrometer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Scale {
    Api,
    BaumeHeavy,
    BaumeLight,
    Twaddell,
}

impl Scale {
    /// Its name as written in messages.
    const fn name(self) -> &'static str {
        match self {
            Self::Api => "degAPI",
            Self::BaumeHeavy => "Baume heavy",
            Self::BaumeLight => "Baume light",
            Self::Twaddell => "degTw",
        }
    }

    /// Degrees that hydrometers have, from and to; each end gives a density of a liquid.
    const fn degrees(self) -> (i16, i16) {
        match self {
            Self::Api => (-20, 150),
            Self::BaumeHeavy => (0, 100),
            Self::BaumeLight => (10, 100),
            Self::Twaddell => (0, 400),
        }
    }

    /// Density at 60 degF, kg/m³.
    ///
    /// # Errors
    /// [`UnitError::OffScale`].
    pub(super) fn density_kg_m3(self, degrees: f64) -> Result<f64, UnitError> {
        let (low, high) = self.degrees();
        if !(f64::from(low)..=f64::from(high)).contains(&degrees) {
            return Err(UnitError::OffScale { scale: self.name(), low, high });
        }
        let relative = match self {
            Self::Api => 141.5 / (131.5 + degrees),
            Self::BaumeHeavy => 145.0 / (145.0 - degrees),
            Self::BaumeLight => 140.0 / (130.0 + degrees),
            Self::Twaddell => 1.0 + degrees / 200.0,
        };
        Ok(relative * WATER_60_DEGF_KG_M3)
    }
}

/// The scale of that name; `None` when it is none.
///
/// # Errors
/// [`UnitError::TwoScales`] for Baume without heavy or light.
pub(super) fn find(unit: &str) -> Result<Option<Scale>, UnitError> {
    let plain = unit.to_lowercase().replace(['(', ')', ','], " ").replace('\u{e9}', "e");
    let mut words: Vec<&str> = plain.split(' ').filter(|word| !word.is_empty()).collect();
    if let Some(first) = words.first_mut() {
        for degrees in ["degrees", "degree", "deg"] {
            if let Some(rest) = first.strip_prefix(degrees) {
                *first = rest;
                break;
            }
        }
    }
    words.retain(|word| !word.is_empty());
    Ok(match words.as_slice() {
        ["api"] => Some(Scale::Api),
        ["tw" | "twaddell" | "twaddle"] => Some(Scale::Twaddell),
        ["be" | "baume", "heavy"] | ["heavy", "be" | "baume"] => Some(Scale::BaumeHeavy),
        ["be" | "baume", "light"] | ["light", "be" | "baume"] => Some(Scale::BaumeLight),
        ["be" | "baume"] => return Err(UnitError::TwoScales { unit: unit.to_owned() }),
        _ => None,
    })
}
