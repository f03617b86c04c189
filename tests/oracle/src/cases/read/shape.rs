//! Outlines and where they stand.

use crate::cases::{Reason, Row};
use crate::plane::{Hole, PlanePart};
use crate::shape::Shape;

use super::{UNREAD, points};

/// The outline a row names.
pub(super) fn outline(row: &Row) -> Result<Shape, Reason> {
    let any = |keys: &[&str]| keys.iter().find_map(|key| row.number(key));
    let along = any(&["h_m", "L_m", "length_m"]);
    let across = any(&["b_m", "base_m", "width_m"]);
    let shape = match row.get("shape").ok_or(UNREAD)? {
        "circle" | "disc_with_hole" => row.number("d_m").map(|diameter| Shape::Circle { diameter }),
        "semicircle" => row.number("r_m").map(|radius| Shape::HalfDisc { radius }),
        "rect" | "rect door" => {
            // A balanced pivot does not ask for the width.
            let width = across.unwrap_or(1.0);
            along.map(|length| Shape::Rectangle { width, length })
        }
        "obround" => across.zip(along).map(|(width, length)| Shape::Obround { width, length }),
        "triangle" => {
            let apex_up =
                !(row.is("apex", "down") || row.has("base_at_surface") || row.has("base_at_top"));
            across.zip(along).map(|(base, height)| Shape::Triangle { base, height, apex_up })
        }
        "right_triangle" => {
            let (up, level) = (row.number("vertical_leg_m"), row.number("horizontal_leg_m"));
            up.zip(level).map(|(up, level)| Shape::Polygon {
                corners: vec![(0.0, 0.0), (level, 0.0), (0.0, up)],
            })
        }
        "trapezoid" => {
            let sides = row.number("b_top_m").zip(row.number("b_bottom_m"));
            sides.zip(along).map(|((top, bottom), length)| Shape::Trapezoid { top, bottom, length })
        }
        "ellipse" => {
            let axes = row.number("semi_axis_horizontal_m").zip(row.number("semi_axis_slope_m"));
            axes.map(|(x, s)| Shape::Ellipse { width: 2.0 * x, length: 2.0 * s })
        }
        "polygon" => row.get("vertices_xs_m").map(|text| Shape::Polygon { corners: points(text) }),
        _ => None,
    };
    shape.ok_or(UNREAD)
}

/// Slope in degrees; a wall when the row is silent.
pub(super) fn slope_deg(row: &Row) -> f64 {
    let from_sine = row.number("sin_theta").map(|sine| sine.asin().to_degrees());
    row.number("theta_deg").or(from_sine).unwrap_or(90.0)
}

/// A part placed by depths below the surface, as books do: its lowest point is put at the datum
/// and the height of the surface is returned with it. `weight` is the specific weight, N/m3.
pub(super) fn by_depth(row: &Row, weight: f64) -> Result<(PlanePart, f64), Reason> {
    let mut part = PlanePart::new(outline(row)?, 0.0, slope_deg(row));
    let (low, high) = part.heights();
    part.bottom_m = -low;
    let middle = part.centroid_height();
    let at_top = ["vertex_at_surface", "base_at_surface", "diameter_at_surface"];
    let head = |key: &str| row.number(key).map(|pressure| pressure / weight);
    let depth_of = |keys: &[&str]| keys.iter().find_map(|key| row.number(key));
    let surface = if let Some(depth) = depth_of(&["z_top_m", "z_hinge_edge_m"]) {
        depth + high - low
    } else if let Some(depth) = depth_of(&["z_centroid_m", "z_centre_m"]) {
        depth + middle
    } else if let Some(head) = head("p_at_centre_Pa").or_else(|| head("p_centre_Pa")) {
        head + middle
    } else if let Some(head) = head("p_bottom_edge_Pa") {
        head
    } else if at_top.iter().any(|key| row.has(key)) {
        high - low
    } else {
        return Err(UNREAD);
    };
    if let (Some(diameter), Some(depth)) = (row.number("hole_d_m"), row.number("hole_z_centre_m")) {
        let lowest = surface - depth - 0.5 * diameter;
        let shape = Shape::Circle { diameter };
        part.holes.push(Hole { shape, origin: (0.0, lowest) });
    }
    Ok((part, surface))
}

/// A part placed by heights above the datum: `bottom_m`, `centre_m`, `top_m` or `apex_height_m`,
/// or the words of a polygon given up the slope from an edge.
pub(super) fn by_height(row: &Row) -> Result<PlanePart, Reason> {
    let (shape, slope) = (outline(row)?, slope_deg(row));
    if let Some(centre) = row.number("centre_m") {
        return Ok(PlanePart::centred_at(shape, centre, slope));
    }
    if let Some(top) = row.number("top_m") {
        return Ok(PlanePart::hung_at(shape, top, slope));
    }
    let bottom = row.number("bottom_m").or_else(|| row.number("apex_height_m"));
    let edge = row.get("s").and_then(|words| super::numbers(words).first().copied());
    let mut part = PlanePart::new(shape, bottom.or(edge).ok_or(UNREAD)?, slope);
    if let Some(hole) = row.get("hole_xs_m") {
        let shape = Shape::Polygon { corners: points(hole) };
        part.holes.push(Hole { shape, origin: (0.0, 0.0) });
    }
    Ok(part)
}
