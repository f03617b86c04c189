//! Rows about curved parts.

use crate::cases::problem::{CurvedAsk, CurvedPart, Problem};
use crate::cases::row::numbers;
use crate::cases::{Reason, Row};
use crate::liquid::Liquid;
use crate::patch::Wetted;
use crate::vector::Vec3;

use super::{UNREAD, first_word, liquid, weight};

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    let (part, surface) = part(row)?;
    let ask = ask(row)?;
    let liquid = if row.has("level_m") || row.has("layers") {
        liquid(row)?
    } else {
        let (density, gravity_m_s2) = weight(row);
        let gas = row.number_or_zero("p_gas_Pa");
        Liquid { gravity_m_s2, ..Liquid::uniform(density, surface) }.with_gas(gas)
    };
    Ok(Problem::Curved { part, liquid, ask })
}

/// An arc with the height of its axis and of the surface.
fn arc(
    (radius, length): (f64, f64),
    axis_m: f64,
    angles_deg: (f64, f64),
    wetted: Wetted,
) -> CurvedPart {
    CurvedPart::Arc { radius, length, axis_m, angles_deg, wetted }
}

/// The part and the height of the surface, with the lowest point of published parts at or near
/// the datum.
fn part(row: &Row) -> Result<(CurvedPart, f64), Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let radius =
        row.number("R_m").or_else(|| row.number("r_m")).or_else(|| row.number("base_radius_m"));
    let radius = radius.or_else(|| row.number("d_m").map(|d| 0.5 * d)).unwrap_or(0.0);
    let size = (radius, row.number("length_m").unwrap_or(1.0));
    Ok(match row.get("shape").ok_or(UNREAD)? {
        // The block of liquid below and left of the gate is wetted on the far side of its axis.
        "quadrant_lower_left_of_horizontal_cylinder" => {
            (arc(size, radius, (180.0, 270.0), Wetted::Outside), number("liquid_depth_m")?)
        }
        "quadrant_concave" => {
            (arc(size, 0.0, (90.0, 180.0), Wetted::Outside), radius + number("z_top_m")?)
        }
        "quadrant" => {
            (arc(size, radius, (270.0, 360.0), Wetted::Inside), radius + number("z_top_m")?)
        }
        "quadrant_of_half_full_conduit" => {
            (arc(size, radius, (270.0, 360.0), Wetted::Inside), radius)
        }
        "quarter_circle_arc_on_vertical_chord" => {
            let half_chord = radius * std::f64::consts::FRAC_1_SQRT_2;
            (arc(size, half_chord, (135.0, 225.0), Wetted::Inside), 2.0 * half_chord)
        }
        // The axis stands level with the upper edge.
        "radial_gate" => {
            let axis = number("height_m")?;
            let angles = (180.0, 180.0 + number("angle_deg")?);
            (arc(size, axis, angles, Wetted::Outside), axis + number("z_top_m")?)
        }
        "arc about a horizontal axis" => {
            let outside = row.get("wetted") == Some("outside");
            let wetted = if outside { Wetted::Outside } else { Wetted::Inside };
            let angles = (number("from_deg")?, number("to_deg")?);
            (arc(size, number("axis_m")?, angles, wetted), number("axis_m")?)
        }
        "cubic_profile" => {
            let height = number("y_to_m")?;
            let length = number("length_m")?;
            (CurvedPart::CubicProfile { constant: 12.0, height, length }, height)
        }
        "hemispherical_dome_on_floor" => {
            let hole_diameter = number("standpipe_d_m")?;
            let dome = CurvedPart::FloorDome { radius, base_m: 0.0, hole_diameter };
            (dome, number("liquid_head_above_base_m")?)
        }
        "hemispherical_bulge_in_vertical_wall" | "hemisphere_in_vertical_wall" => {
            let depth = number("z_centre_m")?;
            (CurvedPart::WallDome { radius, centre_m: radius }, radius + depth)
        }
        "hemisphere bulging outward on a vertical wall" => {
            (CurvedPart::WallDome { radius, centre_m: number("centre_m")? }, 0.0)
        }
        "cone bottom apex down" => {
            let height = number("height_m")?;
            let cone = CurvedPart::Cone { base_radius: radius, height, apex_m: 0.0 };
            (cone, height + above(row)?)
        }
        "hemispherical bottom supported at the equator" => {
            (CurvedPart::Bowl { radius, equator_m: radius }, radius + above(row)?)
        }
        "mesh of 4 triangles" => (pyramid(row)?, 0.0),
        _ => return Err(UNREAD),
    })
}

/// `level = at the base rim`, or `0.9 m above ...`.
fn above(row: &Row) -> Result<f64, Reason> {
    let words = row.get("level").ok_or(UNREAD)?;
    Ok(numbers(words).first().copied().unwrap_or(0.0))
}

/// Four triangles from an apex to a square on the wall x = 0, wetted from the wall's side.
fn pyramid(row: &Row) -> Result<CurvedPart, Reason> {
    let [x, y, z] = numbers(row.get("apex").ok_or(UNREAD)?)[..] else { return Err(UNREAD) };
    let apex: Vec3 = [x, y, z];
    // "(0 +-0.4 0.6) (0 +-0.4 1.4)": the doubled sign is no number of its own.
    let words = row.get("base").ok_or(UNREAD)?.replace("+-", " ");
    let [_, half, low, _, _, high, ..] = numbers(&words)[..] else { return Err(UNREAD) };
    let base = [[0.0, -half, low], [0.0, half, low], [0.0, half, high], [0.0, -half, high]];
    let next = |i: usize| base[(i + 1) % 4];
    // Seen from the wall (from smaller x), counter-clockwise is with y running to the left.
    let triangles = (0..4).map(|i| [apex, next(i), base[i]]).collect();
    Ok(CurvedPart::Mesh { triangles })
}

fn ask(row: &Row) -> Result<CurvedAsk, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let angle = || {
        // "angle from the lowest point 60 deg" stands as words of its own.
        let words = row.inputs.iter().find(|(key, _)| key.starts_with("angle from the lowest"));
        words.and_then(|(key, _)| numbers(key).first().copied()).ok_or(UNREAD)
    };
    let words = row.quantity();
    if let Some(tension) = tension(words) {
        return Ok(tension);
    }
    Ok(match (first_word(row), words) {
        ("F_x", _) => CurvedAsk::X,
        ("F_z", _) => CurvedAsk::Z,
        ("F_horizontal", _) => CurvedAsk::Horizontal,
        ("F_vertical", _) | (_, "vertical force on the cone (down)") => CurvedAsk::Vertical,
        ("F_uplift", _) => CurvedAsk::Z,
        ("F_resultant", _) => CurvedAsk::Resultant,
        ("angle_deg" | "angle_rad", _) => CurvedAsk::AngleFromHorizontal,
        (_, w) if w.starts_with("angle of the resultant") => CurvedAsk::AngleFromHorizontal,
        ("angle_from_vertical_deg", _) => CurvedAsk::AngleFromVertical,
        ("F_horizontal_cp_depth", _) => CurvedAsk::HorizontalDepth,
        ("F_horizontal_cp_below_centre", _) => CurvedAsk::HorizontalBelow(number("R_m")?),
        ("F_vertical_line_of_action_from_centre", _) => CurvedAsk::VerticalLine,
        (_, w) if w.starts_with("moment about the y axis") => {
            let [x, y, z] = numbers(row.get("about").ok_or(UNREAD)?)[..] else {
                return Err(UNREAD);
            };
            CurvedAsk::MomentAboutY([x, y, z])
        }
        ("F_per_bolt", _) => {
            CurvedAsk::PerBolt { weight_n: number("dome_weight_N")?, bolts: number("bolts")? }
        }
        ("meridional", _) => CurvedAsk::MeridionalAt(angle()?),
        ("hoop", _) => CurvedAsk::HoopAt(angle()?),
        (_, w) if w.starts_with("largest F_z while filling") => CurvedAsk::LargestZ(1.0),
        (_, "level of zero F_z") => CurvedAsk::ZeroZLevel(1.0, 10.0),
        _ => return Err(UNREAD),
    })
}

fn tension(words: &str) -> Option<CurvedAsk> {
    let starts = |text: &str| words.starts_with(text);
    if starts("largest hoop tension") {
        Some(CurvedAsk::LargestHoop)
    } else if starts("largest meridional tension") {
        Some(CurvedAsk::LargestMeridional)
    } else if starts("radial pull on the rim") {
        Some(CurvedAsk::RimPull)
    } else {
        None
    }
}
