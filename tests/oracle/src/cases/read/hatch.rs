//! Rows about covers and what holds them.

use crate::cases::problem::{DoorAsk, Line, PlaneAsk, Problem, Rule, Securing};
use crate::cases::row::numbers;
use crate::cases::{Reason, Row};
use crate::liquid::Liquid;
use crate::plane::PlanePart;
use crate::securing::Door;

use super::shape::{by_depth, by_height};
use super::{UNREAD, first_word, liquid, weight};

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    if row.has("rule") {
        return rule(row);
    }
    let own = ["centre_m", "bottom_m", "top_m", "apex_height_m"].iter().any(|key| row.has(key));
    if own {
        let part = by_height(row)?;
        let ask = ask(row, &part)?;
        return Ok(Problem::Plane { part, liquid: liquid(row)?, ask });
    }
    let (density, gravity_m_s2) = weight(row);
    let (part, surface) = by_depth(row, density * gravity_m_s2)?;
    let gas = row.number_or_zero("gas_gauge_Pa");
    let liquid = Liquid { gravity_m_s2, ..Liquid::uniform(density, surface) }.with_gas(gas);
    let ask = ask(row, &part)?;
    Ok(Problem::Plane { part, liquid, ask })
}

fn ask(row: &Row, part: &PlanePart) -> Result<PlaneAsk, Reason> {
    if row.get("shape") == Some("rect door") {
        return door(row, part);
    }
    let line = || line(row, part);
    Ok(match first_word(row) {
        "F" => PlaneAsk::Force,
        "moment_about_hinge" | "moment_about_pivot" => PlaneAsk::Moment(line()?),
        "level_of_zero_moment" => PlaneAsk::ZeroMomentLevel(line()?),
        "level_of_extreme_moment" => PlaneAsk::LeastMomentLevel(line()?),
        "extreme_moment" => PlaneAsk::LeastMoment(line()?),
        "permitted_level" => {
            let capacity = row.number("moment_capacity_N_m").ok_or(UNREAD)?;
            PlaneAsk::LimitLevel(line()?, capacity)
        }
        "F_latch" | "F_holding" | "F_stop" => PlaneAsk::Latch(securing(row, part)?),
        "F_hinge" => PlaneAsk::Hinge(securing(row, part)?),
        "F_seat" => PlaneAsk::Seat(securing(row, part)?),
        "pivot_depth" => PlaneAsk::CentreDepth,
        "pivot_height_above_bottom" => PlaneAsk::CentreHeight,
        "F_lift" => PlaneAsk::Lift {
            friction: row.number("friction").ok_or(UNREAD)?,
            weight_n: row.number("weight_N").ok_or(UNREAD)?,
        },
        _ => return Err(UNREAD),
    })
}

/// The hinge or pivot line a row names.
fn line(row: &Row, part: &PlanePart) -> Result<Line, Reason> {
    let (low, high) = part.shape.extent();
    if let Some(height) = row.number("hinge_height_above_bottom_m") {
        return Ok(Line { s: low + height / part.rise(), upper_out: false });
    }
    if let Some(pivot) = row.get("pivot") {
        if pivot == "horizontal diameter" {
            return Ok(Line { s: 0.5 * (low + high), upper_out: false });
        }
        // "horizontal line at 1.95 m": the upper side outward counts positive.
        let height = numbers(pivot).first().copied().ok_or(UNREAD)?;
        return Ok(Line { s: (height - part.bottom_m) / part.rise(), upper_out: true });
    }
    match row.get("hinge").ok_or(UNREAD)? {
        "top tangent" | "top edge" | "upper edge" | "upper end" => {
            Ok(Line { s: high, upper_out: false })
        }
        "bottom edge" => Ok(Line { s: low, upper_out: true }),
        words if words.ends_with("above the top edge") => {
            let above = numbers(words).first().copied().ok_or(UNREAD)?;
            Ok(Line { s: high + above, upper_out: false })
        }
        _ => Err(UNREAD),
    }
}

/// Hinge and latch; a latch without a lever stands at the far end of the cover.
fn securing(row: &Row, part: &PlanePart) -> Result<Securing, Reason> {
    let hinge = line(row, part)?;
    let (low, high) = part.shape.extent();
    let far = if hinge.upper_out { high - hinge.s } else { hinge.s - low };
    let opens_inward = row.get("opens").is_some_and(|words| words.starts_with("inward"));
    let latch_lever_m = row.number("latch_lever_m").unwrap_or(far);
    Ok(Securing { hinge, latch_lever_m, opens_inward })
}

/// A door on a vertical line outside its left edge: `pins at a m and b m`,
/// `latch = d m from the hinge line at height h m`.
fn door(row: &Row, part: &PlanePart) -> Result<PlaneAsk, Reason> {
    let [outside, lower, upper] = numbers(row.get("hinges").ok_or(UNREAD)?)[..] else {
        return Err(UNREAD);
    };
    let [lever, latch_height_m] = numbers(row.get("latch").ok_or(UNREAD)?)[..] else {
        return Err(UNREAD);
    };
    let which = match row.quantity() {
        "F_latch" => DoorAsk::Latch,
        "F_hinge upper pin" => DoorAsk::UpperPin,
        "F_hinge lower pin" => DoorAsk::LowerPin,
        _ => return Err(UNREAD),
    };
    let half_width = 0.5 * part.area() / (part.shape.extent().1 - part.shape.extent().0);
    let door = Door { pins_m: (lower, upper), latch_lever_m: lever, latch_height_m };
    Ok(PlaneAsk::Door(door, -half_width - outside, which))
}

fn rule(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let rule = match row.get("rule").unwrap_or("") {
        "UG34_bolted" => Rule::BoltedCover {
            factor: number("C")?,
            diameter_m: number("d_m")?,
            pressure_pa: number("P_Pa")?,
            stress_pa: number("S_Pa")? * number("E")?,
            bolt_load_n: number("W_bolt_N")?,
            arm_m: number("hG_m")?,
        },
        "end_force_0.785G2P" => {
            Rule::EndForce { diameter_m: number("G_m")?, pressure_pa: number("P_Pa")? }
        }
        "gasket_seating_3.14bGy" => Rule::SeatingLoad {
            width_m: number("b_m")?,
            diameter_m: number("G_m")?,
            seating_pa: number("y_Pa")?,
        },
        _ => return Err(UNREAD),
    };
    Ok(Problem::Rule(rule))
}
