//! From the words of a row to a [`Problem`].

mod bound;
mod curved;
mod hatch;
mod plane;
mod rule;
mod shape;
mod shell;
mod time;

use crate::liquid::{Layer, Liquid, STANDARD_GRAVITY};

use super::problem::Problem;
use super::row::{leading_number, numbers};
use super::{Reason, Row};

/// A row names a thing this reader does not know.
const UNREAD: Reason = "inputs not understood";

/// The problem a row states.
///
/// # Errors
/// The class of rows that state none, or none about loads.
pub fn problem_of(row: &Row) -> Result<Problem, Reason> {
    if row.quantity().starts_with("TRAP") {
        return Err("a wrong result, not to be reported");
    }
    match row.topic.as_str() {
        "plane" => plane::problem(row),
        "hatch" => hatch::problem(row),
        "curved" => curved::problem(row),
        "shell" => shell::problem(row),
        "bound" => bound::problem(row),
        "density" => bound::density(row),
        "designed_for" => bound::designed_for(row),
        "time" => time::problem(row),
        "signal" => time::signal(row),
        "gravity" => rule::gravity(row),
        "plate" => rule::plate(row),
        _ => Err("another topic than loads"),
    }
}

/// Specific weight of the liquid of a published row as (density, gravity).
fn weight(row: &Row) -> (f64, f64) {
    let gravity = row.number("g").unwrap_or(STANDARD_GRAVITY);
    let density = row.number("rho").or_else(|| row.number("gamma_N_m3").map(|w| w / gravity));
    (density.unwrap_or_else(|| 1000.0 * row.number("SG").unwrap_or(1.0)), gravity)
}

/// The liquids of a row written in tank coordinates: `level_m` and `rho`, or
/// `layers = density@surface over density@surface`; `p_gas_Pa`; `outside = density@surface`.
fn liquid(row: &Row) -> Result<Liquid, Reason> {
    let gravity_m_s2 = row.number("g").unwrap_or(STANDARD_GRAVITY);
    let layers = match row.get("layers") {
        Some(text) => text.split(" over ").map(layer).collect::<Option<_>>().ok_or(UNREAD)?,
        None => match row.number("rho") {
            Some(density_kg_m3) => {
                // Rows that search a level give none; the search sets it.
                let surface_m = row.number_or_zero("level_m");
                vec![Layer { surface_m, density_kg_m3 }]
            }
            None => Vec::new(),
        },
    };
    let outside = row.get("outside").and_then(layer);
    Ok(Liquid { gravity_m_s2, gas_pa: row.number_or_zero("p_gas_Pa"), layers, outside })
}

/// `830@1.30` as a layer of 830 kg/m3 up to 1.30 m.
fn layer(text: &str) -> Option<Layer> {
    let (density, surface) = text.split_once('@')?;
    Some(Layer { surface_m: leading_number(surface)?, density_kg_m3: leading_number(density)? })
}

/// The first word of a quantity.
fn first_word(row: &Row) -> &str {
    row.quantity().split([' ', ',']).next().unwrap_or("")
}

/// Two numbers written as `a..b`.
fn interval(text: &str) -> Option<(f64, f64)> {
    let (low, high) = text.split_once("..")?;
    Some((leading_number(low)?, leading_number(high)?))
}

/// Points written as `(x s)(x s)`.
fn points(text: &str) -> Vec<(f64, f64)> {
    numbers(text).chunks_exact(2).map(|pair| (pair[0], pair[1])).collect()
}
