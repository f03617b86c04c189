//! Rows about delays, projections and loop currents, as far as arithmetic of a line answers them.

use crate::cases::problem::{Problem, Rule};
use crate::cases::{Reason, Row};
use crate::vessel::Vessel;

use super::{UNREAD, first_word};

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let unbounded = (f64::NEG_INFINITY, f64::INFINITY);
    let rule = match row.get("rule") {
        Some("rise_in_delay") => Rule::Projected {
            start: 0.0,
            rate_per_s: number("rise_m_s")?,
            time_s: number("delay_s")?,
            ends: unbounded,
        },
        Some("inflow") => {
            Rule::Inflow { diameter_m: number("D_m")?, rise_m_s: number("rise_m_s")? }
        }
        Some("projected_pressure") => Rule::Projected {
            start: number("P_Pa")?,
            rate_per_s: number("rho")? * number("g")? * number("rise_m_s")?,
            time_s: number("time_s")?,
            ends: unbounded,
        },
        Some("projected_level") => Rule::Projected {
            start: number("level_m")?,
            rate_per_s: number("rise_m_s")?,
            time_s: number("time_s")?,
            ends: (0.0, number("overflow_m")?),
        },
        Some(_) => return Err(UNREAD),
        None if row.has("tank") => return filling(row),
        None => return alarm_level(row),
    };
    Ok(Problem::Rule(rule))
}

/// A lying drum with hemispherical heads.
fn filling(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let vessel = Vessel::Drum {
        radius: 0.5 * number("D_m")?,
        length: number("L_m")?,
        round_heads: true,
        base_m: 0.0,
    };
    let levels_m = (number("level_m")?, number("limit_m")?);
    Ok(Problem::Filling { vessel, levels_m, inflow_m3_s: number("inflow_m3_h")? / 3600.0 })
}

/// The alarm level that leaves time for every delay and room for the uncertainties.
fn alarm_level(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let area = std::f64::consts::PI * number("D_m")?.powi(2) / 4.0;
    let rate_per_s = number("inflow_m3_h")? / 3600.0 / area;
    let samples = number("sampling_s")? * number("samples_to_confirm")?;
    let time_s = samples + number("on_delay_s")? + number("response_s")?;
    if row.quantity().starts_with("rise of level in the whole delay") {
        let ends = (0.0, f64::INFINITY);
        return Ok(Problem::Rule(Rule::Projected { start: 0.0, rate_per_s, time_s, ends }));
    }
    if first_word(row) != "alarm" {
        return Err("utilisation at a threshold");
    }
    Ok(Problem::Rule(Rule::AlarmLevel {
        limit_m: number("limit_m")?,
        rise_m: rate_per_s * time_s,
        half_widths_m: [number("sensor_m")?, number("datum_m")?, number("density_equivalent_m")?],
        straight: row.quantity().ends_with("straight"),
    }))
}

/// Loop currents: class, or value on the scale of the loop.
pub(super) fn signal(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    match row.get("rule") {
        Some("NE43") => Ok(Problem::LoopClass(number("I_A")?)),
        Some("current_loop") => Ok(Problem::Rule(Rule::LoopLevel {
            current_a: number("I_A")?,
            ends: (number("level_at_4mA_m")?, number("level_at_20mA_m")?),
        })),
        _ => Err("another topic than loads"),
    }
}
