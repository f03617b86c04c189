//! Rows about what sensors allow, and densities found from two of them.

use crate::cases::problem::{BoundAsk, DensityAsk, DesignedForAsk, Problem};
use crate::cases::row::numbers;
use crate::cases::{Reason, Row};
use crate::envelope::{Band, Head};
use crate::liquid::{Liquid, STANDARD_GRAVITY};

use super::{UNREAD, first_word, interval, layer, liquid};

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let at_m = row.number("head_at_m").or_else(|| row.number("at_m")).ok_or(UNREAD)?;
    let head = Head {
        at_m,
        pressure_pa: Band::exactly(number("P_Pa")?),
        density_kg_m3: densities(row)?,
        gas_pa: Band::exactly(row.number_or_zero("p_gas_Pa")),
        gravity_m_s2: row.number("g").unwrap_or(STANDARD_GRAVITY),
        shell_top_m: None,
        surface_m: row.number("surface_m").map(Band::exactly),
    };
    // "wall 0 to 3 m per metre width"
    let wall_m = row.get("part").and_then(|words| numbers(words).get(1).copied()).unwrap_or(0.0);
    let ask = ask(row)?;
    Ok(Problem::Bound { wall_m, head, ask })
}

/// `rho=800..1400`, `layers=850 over 1200`, or words with `900..1300` in them.
fn densities(row: &Row) -> Result<Band, Reason> {
    if let Some(words) = row.get("layers") {
        let [upper, lower] = numbers(words)[..] else { return Err(UNREAD) };
        return Ok(Band::new(upper, lower));
    }
    let words = row.inputs.iter().find(|(key, _)| key.starts_with("rho")).ok_or(UNREAD)?;
    let text = if words.1.is_empty() { &words.0 } else { &words.1 };
    let within = text.split([' ', ',']).find(|word| word.contains("..")).ok_or(UNREAD)?;
    interval(within).map(|(low, high)| Band::new(low, high)).ok_or(UNREAD)
}

fn ask(row: &Row) -> Result<BoundAsk, Reason> {
    let words = row.quantity();
    if words == "force at this corner" {
        return row.number("interface_m").map(BoundAsk::ForceAtInterface).ok_or(UNREAD);
    }
    if words.starts_with("largest force over the interval") {
        let ends = row.get("interface_m").and_then(interval).ok_or(UNREAD)?;
        return Ok(BoundAsk::LargestOverInterfaces(ends.0, ends.1));
    }
    if let Some(density) = words.strip_prefix("force with ") {
        return numbers(density).first().map(|d| BoundAsk::ForceAtDensity(*d)).ok_or(UNREAD);
    }
    if words.starts_with("least force over the density interval") {
        return Ok(BoundAsk::LeastOverDensities);
    }
    if words.starts_with("density of the least force") {
        return Ok(BoundAsk::DensityOfLeast);
    }
    if words.starts_with("largest force over every stable") {
        return Ok(BoundAsk::LargestOverProfiles);
    }
    if let Some(height) = words.strip_prefix("largest pressure at ") {
        return numbers(height).first().map(|z| BoundAsk::LargestPressure(*z)).ok_or(UNREAD);
    }
    if let Some(rest) = words.strip_prefix("pressure with ") {
        // "pressure with 1500 at 3 m"
        let [density, height] = numbers(rest)[..] else { return Err(UNREAD) };
        return Ok(BoundAsk::PressureAtDensity(density, height));
    }
    Err(UNREAD)
}

/// Densities inferred from two sensors, and pressures after a change of temperature.
pub(super) fn density(row: &Row) -> Result<Problem, Reason> {
    if row.has("rho_20degC") {
        return after_temperature(row);
    }
    if !row.has("head_at_m") {
        return Err("density of substances");
    }
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let ask = match (first_word(row), row.quantity()) {
        ("density", _) => DensityAsk::Estimate,
        ("largest", _) => DensityAsk::Largest,
        ("least", _) => DensityAsk::Least,
        ("root-sum-square", _) => DensityAsk::RootSumSquare,
        _ => return Err(UNREAD),
    };
    Ok(Problem::InferredDensity {
        heights_m: (number("head_at_m")?, number("surface_m")?),
        pressure_pa: (number("P_Pa")?, number("u_P_Pa")?),
        gas_pa: (number("p_gas_Pa")?, number("u_gas_Pa")?),
        level_half_width_m: number("u_level_m")?,
        gravity_m_s2: number("g")?,
        ask,
    })
}

/// A wall against the state it was designed for.
pub(super) fn designed_for(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let now = liquid(row)?;
    let layer = row.get("design").and_then(layer).ok_or(UNREAD)?;
    let design =
        Liquid { gas_pa: row.number_or_zero("design_gas_Pa"), layers: vec![layer], ..now.clone() };
    let ask = match row.quantity() {
        "limit level by pressure everywhere" => DesignedForAsk::LimitByPressure,
        "limit level by force" => DesignedForAsk::LimitByForce,
        "limit level by moment about the bottom" => DesignedForAsk::LimitByMoment,
        "largest ratio of pressures" => DesignedForAsk::LargestRatio,
        _ => return Err(UNREAD),
    };
    let edges_m = (number("part_from_m")?, number("part_to_m")?);
    Ok(Problem::DesignedFor { design, now, edges_m, ask })
}

/// `rho = rho_ref / (1 + beta dT)`, at the same level reading or the same pressure reading.
fn after_temperature(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let density = number("rho_20degC")? / (1.0 + number("expansion")? * number("dT_K")?);
    let gravity_m_s2 = number("g")?;
    let at_m = number("element_m")?;
    let surface = match row.get("sensor") {
        Some("innage") => number("level_m")?,
        Some("head") => number("at_m")? + number("P_Pa")? / (density * gravity_m_s2),
        _ => return Err(UNREAD),
    };
    let liquid = Liquid { gravity_m_s2, ..Liquid::uniform(density, surface) };
    Ok(Problem::Pressure { liquid, at_m })
}
