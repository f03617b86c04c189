//! Rows about plane parts.

use crate::cases::problem::{Line, PlaneAsk, Problem};
use crate::cases::row::numbers;
use crate::cases::{Reason, Row};
use crate::liquid::{Layer, Liquid, STANDARD_GRAVITY};
use crate::plane::PlanePart;
use crate::shape::Shape;

use super::shape::{by_depth, by_height, slope_deg};
use super::{UNREAD, first_word, liquid, weight};

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    if row.is("rule", "equal_force_strips") {
        return strips(row);
    }
    if let Some(at_m) = row.quantity().strip_prefix("pressure at ") {
        return pressure_at(row, at_m);
    }
    if row.has("two_sided") {
        return two_sided(row);
    }
    if row.has("layer1_h_m") {
        return layered(row);
    }
    let in_tank_coordinates = ["level_m", "layers", "bottom_m"].iter().any(|key| row.has(key));
    let (part, liquid) = if in_tank_coordinates {
        (by_height(row)?, liquid(row)?)
    } else {
        let (density, gravity_m_s2) = weight(row);
        let (part, surface) = by_depth(row, density * gravity_m_s2)?;
        let gas = row.number_or_zero("gas_gauge_Pa");
        (part, Liquid { gravity_m_s2, ..Liquid::uniform(density, surface) }.with_gas(gas))
    };
    let ask = ask(row, &part)?;
    Ok(Problem::Plane { part, liquid, ask })
}

/// What a row asks of a plane part.
fn ask(row: &Row, part: &PlanePart) -> Result<PlaneAsk, Reason> {
    Ok(match first_word(row) {
        "F" => PlaneAsk::Force,
        "F_horizontal" => PlaneAsk::Horizontal,
        "level_of_force" => PlaneAsk::LevelOfForce(row.number("force_N").ok_or(UNREAD)?),
        "p_mean" => PlaneAsk::MeanPressure,
        "cp_depth" | "cp_depth_below_virtual_surface" => PlaneAsk::CentreDepth,
        "cp_height" | "cp_height_above_base" | "cp_height_above_bottom_edge" => {
            PlaneAsk::CentreHeight
        }
        "cp_below_centroid" | "cp_below_centre" => PlaneAsk::CentreBelowCentroid,
        "cp_slant_below_centre" | "cp_slope" => PlaneAsk::CentreDownSlope,
        "cp_x" | "cp_x_from_vertical_leg" => PlaneAsk::CentreSideways,
        "moment_about_bottom_edge" => {
            PlaneAsk::Moment(Line { s: part.shape.extent().0, upper_out: true })
        }
        "moment_about_top_edge" => {
            PlaneAsk::Moment(Line { s: part.shape.extent().1, upper_out: false })
        }
        _ => return Err(UNREAD),
    })
}

/// A wall that stands in the way of two liquids from the floor up.
fn two_sided(row: &Row) -> Result<Problem, Reason> {
    let (density, gravity_m_s2) = weight(row);
    let width = row.number("b_m").ok_or(UNREAD)?;
    let (inside, outside) = row.number("depth1_m").zip(row.number("depth2_m")).ok_or(UNREAD)?;
    let shape = Shape::Rectangle { width, length: inside };
    let liquid = Liquid { gravity_m_s2, ..Liquid::uniform(density, inside) };
    Ok(Problem::Plane {
        part: PlanePart::new(shape, 0.0, slope_deg(row)),
        liquid: liquid.with_outside(density, outside),
        ask: PlaneAsk::Force,
    })
}

/// A wall wetted over its whole height by one liquid on another.
fn layered(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let (upper, lower) = (number("layer1_h_m")?, number("layer2_h_m")?);
    let layer =
        |surface_m: f64, weight: f64| Layer { surface_m, density_kg_m3: weight / STANDARD_GRAVITY };
    let liquid = Liquid {
        gravity_m_s2: STANDARD_GRAVITY,
        gas_pa: 0.0,
        layers: vec![
            layer(upper + lower, number("layer1_gamma_N_m3")?),
            layer(lower, number("layer2_gamma_N_m3")?),
        ],
        outside: None,
    };
    let shape = Shape::Rectangle { width: number("b_m")?, length: upper + lower };
    let part = PlanePart::new(shape, 0.0, slope_deg(row));
    let ask = ask(row, &part)?;
    Ok(Problem::Plane { part, liquid, ask })
}

fn strips(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let height = number("H_m")?;
    let count = |key: &str| row.get(key).and_then(|text| text.parse::<u32>().ok()).ok_or(UNREAD);
    let (k, n) = (count("k")?, count("n")?);
    let shape = Shape::Rectangle { width: 1.0, length: height };
    let ask = match row.quantity() {
        "strip_bottom_depth" => PlaneAsk::StripBottom(k, n),
        "strip_cp_depth" => PlaneAsk::StripCentre(k, n),
        _ => return Err(UNREAD),
    };
    let part = PlanePart::new(shape, 0.0, 90.0);
    Ok(Problem::Plane { part, liquid: Liquid::uniform(1000.0, height), ask })
}

/// Pressure at a height under layers given as `a over b, entered interface h m`, or as elsewhere.
fn pressure_at(row: &Row, at: &str) -> Result<Problem, Reason> {
    let at_m = *numbers(at).first().ok_or(UNREAD)?;
    let words = row.get("layers").unwrap_or("");
    if words.contains('@') || words.is_empty() {
        return Ok(Problem::Pressure { liquid: liquid(row)?, at_m });
    }
    let [upper, lower, interface] = numbers(words)[..] else { return Err(UNREAD) };
    let level = row.number("level_m").ok_or(UNREAD)?;
    let layers = vec![
        Layer { surface_m: level, density_kg_m3: upper },
        Layer { surface_m: interface, density_kg_m3: lower },
    ];
    let gravity_m_s2 = row.number("g").unwrap_or(STANDARD_GRAVITY);
    let gas_pa = row.number_or_zero("p_gas_Pa");
    Ok(Problem::Pressure { liquid: Liquid { gravity_m_s2, gas_pa, layers, outside: None }, at_m })
}
