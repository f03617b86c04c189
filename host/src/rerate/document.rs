//! The document `strake.rerate/1`. Names of keys are fixed; all quantities are SI, unrounded.

use super::tested::Tested;
use crate::assess::NotJudged;
use serde::Serialize;

/// The whole document.
#[derive(Clone, Debug, Serialize)]
pub struct Document {
    /// `strake.rerate/1`.
    pub schema: &'static str,
    /// Name of the tank.
    pub tank: String,
    /// Level at which densities and thicknesses are asked for.
    pub level_m: f64,
    /// `command line`, `maximum`, `overflow` or `shell top`.
    pub level_from: &'static str,
    /// Gravity at the site.
    pub gravity_m_s2: f64,
    /// Where layers lie below: the liquid that grows while their surfaces are held.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub grows: Option<String>,
    /// The liquid of the file.
    pub old: Liquid,
    /// The liquid asked about.
    pub new: Liquid,
    /// The water test to compare with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub tested: Option<Tested>,
    /// The parts in the order of the file.
    pub parts: Vec<PartRow>,
    /// Levels between the new limit and overflow or shell top: nothing but an instrument and people
    /// keep the liquid out of them. None when the tank itself ends below its limit.
    pub instrument_only_m: Option<[f32; 2]>,
    /// What is not judged.
    pub not_judged: Vec<NotJudged>,
    /// What the reader must know beside the numbers.
    pub cautions: Vec<String>,
}

/// A liquid in the tank.
#[derive(Clone, Debug, Serialize)]
pub struct Liquid {
    /// Its name in the file.
    pub liquid: String,
    /// Density of the estimate.
    pub density_kg_m3: f64,
    /// Lowest density in service.
    pub density_low_kg_m3: f64,
    /// Highest density in service.
    pub density_high_kg_m3: f64,
    /// Temperature of the estimate.
    pub temperature_c: f64,
    /// Gas pressure of the estimate, gauge.
    pub gas_pressure_pa: f64,
    /// What a head sensor reads at the level of the question, Pa.
    #[serde(rename = "sensor_reads_pa", skip_serializing_if = "Option::is_none")]
    pub sensor_reads: Option<f32>,
    /// The tank's limit; none when no part is judged.
    pub limit: Option<TankLimit>,
}

/// The least of the parts' limits.
#[derive(Clone, Debug, Serialize)]
pub struct TankLimit {
    /// The part that sets it.
    pub governing: String,
    /// None when no level is admissible.
    pub limit_level_m: Option<f32>,
    /// The least of the parts' bounds; none when no level is admissible.
    pub limit_level_bound_m: Option<f32>,
    /// What limits that part.
    pub limited_by: &'static str,
    /// Highest of the parts' lowest levels.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lowest_level_m: Option<Option<f32>>,
}

impl TankLimit {
    /// Of one side of the rows.
    pub(super) fn of(parts: &[PartRow], pick: fn(&PartRow) -> Option<&Side>) -> Option<Self> {
        let level = |level_m: Option<f32>| level_m.unwrap_or(f32::NEG_INFINITY);
        // Where the tank ends the way up, the part whose capacities end first beyond it.
        let rank = |side: &Side| {
            (level(side.limit_level_m), side.capacity_alone_m.unwrap_or(f32::INFINITY))
        };
        let sides: Vec<(&PartRow, &Side)> =
            parts.iter().filter_map(|row| pick(row).map(|side| (row, side))).collect();
        let (row, least) = *sides.iter().min_by(|(_, a), (_, b)| {
            let ((level_a, alone_a), (level_b, alone_b)) = (rank(a), rank(b));
            level_a.total_cmp(&level_b).then(alone_a.total_cmp(&alone_b))
        })?;
        let bounds = sides.iter().map(|(_, side)| level(side.limit_level_bound_m));
        let bound_m = bounds.min_by(f32::total_cmp).filter(|bound_m| bound_m.is_finite());
        let lowest = sides.iter().filter_map(|(_, side)| side.lowest_level_m);
        let lowest_level_m = lowest.reduce(|a, b| Some(if a? < b? { b? } else { a? }));
        Some(Self {
            governing: row.name.clone(),
            limit_level_m: least.limit_level_m,
            limit_level_bound_m: bound_m,
            limited_by: least.limited_by,
            lowest_level_m,
        })
    }
}

/// One part.
#[derive(Clone, Debug, Serialize)]
pub struct PartRow {
    /// Its name.
    pub name: String,
    /// course, panel or hatch.
    pub kind: &'static str,
    /// With the liquid of the file; none of a part that is not judged.
    pub old: Option<Side>,
    /// With the liquid asked about.
    pub new: Option<Side>,
    /// Highest density of the top liquid with which the part keeps its outward capacities up to
    /// the level of the question; none when the gas alone is too much. It is the density of the
    /// estimate.
    #[serde(flatten, skip_serializing_if = "Option::is_none")]
    pub highest_density: Option<HighestDensity>,
    /// With a head sensor: the lowest density with which the part keeps its outward capacities
    /// while the sensor reads what the new liquid gives at the level of the question.
    #[serde(flatten, skip_serializing_if = "Option::is_none")]
    pub lowest_density: Option<LowestDensity>,
    /// Thickness of the plate of a course.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub thickness: Option<Thickness>,
    /// How far the water test covers the new liquid.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub tested: Option<Coverage>,
}

/// A part with one liquid.
#[derive(Clone, Debug, Serialize)]
pub struct Side {
    /// Of the estimate; none when no level is admissible.
    pub limit_level_m: Option<f32>,
    /// With the highest density and gas pressure.
    pub limit_level_bound_m: Option<f32>,
    /// What limits the level of the estimate.
    pub limited_by: &'static str,
    /// Admissible levels, from and to.
    pub limit_intervals_m: Vec<[f32; 2]>,
    /// Where overflow or shell top come first: what the capacities alone give.
    pub capacity_alone_m: Option<f32>,
    /// Lowest level that the inward capacity allows; none when no level is admissible.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lowest_level_m: Option<Option<f32>>,
    /// The limit level by each load for itself.
    pub by: Vec<ByLoad>,
}

/// The limit level by one load.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct ByLoad {
    /// `pressure`, `hoop_tension`, `force`, `moment`, `securing` (bolts), `latch`, `hinge`,
    /// `hinge_moment`, `pivot`, `pivot_moment` or `bending`.
    pub load: &'static str,
    /// `capacity` or `design_state`.
    pub against: &'static str,
    /// None when no level is admissible.
    pub limit_level_m: Option<f32>,
    /// Whether it ends the way up; otherwise overflow or shell top come first.
    pub reached: bool,
    /// Whether the part's limit may rest on it.
    pub decides: bool,
}

/// The highest density.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct HighestDensity {
    /// None when the gas alone is too much.
    pub highest_density_kg_m3: Option<f32>,
    /// `capacity`, `layer_below` (a heavier liquid would sink) or `range` (beyond any liquid).
    pub highest_density_limited_by: &'static str,
}

/// The lowest density.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct LowestDensity {
    /// None when even the new liquid is too much at that reading.
    pub lowest_density_kg_m3: Option<f32>,
    /// `capacity`, or `overflow` or `shell_top`: a lighter liquid would run over before.
    pub lowest_density_limited_by: &'static str,
}

/// Thickness of a course's plate.
#[derive(Clone, Debug, Serialize)]
pub struct Thickness {
    /// As the file has it.
    pub now_m: f64,
    /// Kept for corrosion.
    pub corrosion_allowance_m: f64,
    /// The floor of the rule, and where it stands; none when the file names no rule known here.
    pub floor_m: Option<f64>,
    /// The rule of the floor.
    pub floor_from: Option<&'static str>,
    /// With the liquid of the file, at the level of the question.
    pub old: Required,
    /// With the liquid asked about.
    pub new: Required,
}

/// A required thickness and what is left of the plate's life.
#[derive(Clone, Debug, Serialize)]
pub struct Required {
    /// From the hoop tension alone, without allowance.
    pub calculated_m: f64,
    /// The same, not below the floor: the retirement thickness.
    pub required_m: f64,
    /// With the corrosion allowance: the planned thickness.
    pub required_with_allowance_m: f64,
    /// By the corrosion rate of the file.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub remaining_life: Option<Life>,
}

/// What is left of a plate's life. It replaces no inspection interval.
#[derive(Clone, Debug, Serialize)]
pub struct Life {
    /// Loss of thickness in a year of 365 days.
    pub rate_m_per_year: f64,
    /// Day of the thickness, from the basis of the file; none when that names none.
    pub from: Option<String>,
    /// (thickness - required) / rate; none when the rate is zero.
    pub to_retirement_years: Option<f64>,
    /// That day.
    pub to_retirement_date: Option<String>,
    /// (thickness - allowance - required) / rate.
    pub to_planned_years: Option<f64>,
    /// That day.
    pub to_planned_date: Option<String>,
}

/// How far a water test covers the new liquid.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct Coverage {
    /// Highest level of the new liquid at which no height of the part carries more than in the
    /// test; none when the test left the part dry.
    pub proven_level_m: Option<f32>,
    /// Pressure of the test at the lowest point of the part over that of the new liquid filled to
    /// the overflow, else the shell top; none where that does not reach the part.
    pub share_of_full: Option<f64>,
}
