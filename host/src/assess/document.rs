//! The document `strake.assess/1`. Names of keys are fixed; all quantities are SI, unrounded.
//!
//! Numbers of the load path stay f32 and are written with the fewest digits that give them back.

use super::bending::PlateRow;
use super::filling::Filling;
use super::margin::Margin;
use super::set_point::SetPoint;
use crate::energy::Energy;
use serde::Serialize;
use strake_core::part::Shut;

/// The whole document.
#[derive(Clone, Debug, Serialize)]
pub struct Document {
    /// `strake.assess/1`.
    pub schema: &'static str,
    /// Name of the tank.
    pub tank: String,
    /// The state that was assessed.
    pub state: State,
    /// The parts in the order of the file.
    pub parts: Vec<PartRow>,
    /// Name of the part with the lowest limit level; none when no part is judged.
    pub governing: Option<String>,
    /// What is not judged.
    pub not_judged: Vec<NotJudged>,
    /// Level at which the first bound reaches the warn threshold; none when it is not reached, or
    /// the file has no `[alarm]`.
    pub warn_level_m: Option<f32>,
    /// The same for the alarm threshold.
    pub alarm_level_m: Option<f32>,
    /// What the warn level is for a head sensor.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub warn_set_point: Option<SetPoint>,
    /// What the alarm level is for a head sensor.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub alarm_set_point: Option<SetPoint>,
    /// Margin of the alarm thresholds, given and needed; none while times or rates are not stated.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub margin: Option<Margin>,
    /// How long the tank takes to its limits at a given inflow; none when no inflow is given.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub filling: Option<Filling>,
    /// How long the cell lasts; none without `[power]` or `[logging]`.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub energy: Option<Energy>,
    /// What the reader must know beside the numbers.
    pub cautions: Vec<String>,
}

/// The state of the estimate.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct State {
    /// Surface above the datum.
    pub level_m: f64,
    /// Density of the top liquid.
    pub density_kg_m3: f64,
    /// Gas above it, gauge.
    pub gas_pressure_pa: f64,
    /// Its temperature.
    pub temperature_c: f64,
    /// Gravity at the site.
    pub gravity_m_s2: f64,
}

/// One part.
#[derive(Clone, Debug, Serialize)]
pub struct PartRow {
    /// Its name.
    pub name: String,
    /// course, panel, hatch or curved.
    pub kind: &'static str,
    /// Of the estimate.
    pub loads: Loads,
    /// Largest signed loads that the reading allows.
    pub loads_outward_bound: Loads,
    /// Least signed loads that the reading allows.
    pub loads_inward_bound: Loads,
    /// What it may carry outwards.
    pub capacity: Vec<Capacity>,
    /// What it may carry inwards, as a positive number.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub capacity_inward: Vec<Capacity>,
    /// The plates among its capacities.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub plates: Vec<PlateRow>,
    /// The table that stands for a curved part.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub table: Option<PartTable>,
    /// Whether the opening under a cover must stay shut; of a hatch.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub opening: Option<Opening>,
    /// Where the force on a curved part acts; of the estimate only.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub line_of_action: Option<LineOfAction>,
    /// How the loads compare; empty of a part without capacities.
    #[serde(flatten)]
    pub judgement: Judgement,
}

/// A weighting compiled to rows.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct PartTable {
    /// Rows of both forces together, or places at which a shell's tensions are looked at.
    pub rows: usize,
    /// Largest error of a force, over what the surface at the highest point gives when all weights
    /// count as positive; zero where the rows are exact. It adds to that of f32.
    pub error: f64,
}

/// Loads under one state. Only what the part has.
#[derive(Clone, Debug, Serialize)]
pub struct Loads {
    /// At the design point of a course, else the largest on the part; of the inward bound the
    /// least.
    pub pressure_pa: f32,
    /// Hoop tension of a course.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hoop_tension_n_m: Option<f32>,
    /// Largest tension of a shell of revolution, in any direction and place.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub tension_n_m: Option<f32>,
    /// Its largest compression, as a positive number; of the outward bound none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub compression_n_m: Option<f32>,
    /// Force on a plane part, positive from the liquid outwards; of a curved part its size.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_n: Option<f32>,
    /// Force on a curved part along angle 0.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_x_n: Option<f32>,
    /// Force on a curved part, positive up.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_z_n: Option<f32>,
    /// Centre of pressure of a plane part; of the estimate only.
    #[serde(flatten)]
    pub centre: Option<Centre>,
    /// About the level line through the centroid, positive when it pushes the upper side outward.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub moment_centroid_n_m: Option<f32>,
    /// Largest bolt share; of the inward bound the least.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub bolt_n: Option<f32>,
    /// Largest bending stress in the plate of a panel, of the estimate and of the outward bound.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stress_pa: Option<f32>,
    /// About the hinge or pivot, positive when it turns the cover outward (about a pivot: when it
    /// opens the side of the latch, without one the upper side).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub moment_n_m: Option<f32>,
    /// Of the latch that carries most, positive in tension against outward motion; zero while the
    /// load presses the cover on its seat.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub latch_n: Option<f32>,
    /// Of each pin, the lower first, or of the whole hinge line; signed likewise.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub hinge_n: Vec<f32>,
}

/// Whether an opening must stay shut, judged by wetting, never by load. There is no state "safe to
/// open".
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Opening {
    /// `do_not_open` or `no_liquid_computed`.
    pub state: &'static str,
    /// The reasons to keep it shut.
    pub why: Vec<String>,
    /// What is said to a person.
    pub says: String,
    /// The verdict as the core gives it.
    #[serde(skip)]
    pub shut: Shut,
}

/// Where the force acts; none when the pressures nearly cancel and only a couple is left.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct Centre {
    /// Height above the datum; may lie outside the part.
    pub centre_of_pressure_m: Option<f64>,
    /// From the centroid down the slope.
    pub centre_of_pressure_slope_m: Option<f64>,
    /// Sideways, in the coordinates of the part's outline; only where its sides may differ.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub centre_of_pressure_sideways_m: Option<f64>,
}

/// Where the force on a curved part acts. A member is none when pressures nearly cancel.
#[derive(Clone, Debug, Serialize)]
pub struct LineOfAction {
    /// Of the resultant above the horizontal, counter-clockwise from angle 0.
    pub angle_deg: Option<f64>,
    /// Height above the datum at which the force along angle 0 acts.
    pub force_x_at_m: Option<f64>,
    /// Distance along angle 0 at which the force upwards acts: from the axis of an arc, the centre
    /// of a dome, the origin of a mesh.
    pub force_z_at_m: Option<f64>,
    /// Force along the y axis; of a mesh only.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_y_n: Option<f64>,
    /// Moment about the three axes through the origin of a mesh.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub moment_n_m: Option<[f64; 3]>,
}

/// One capacity.
#[derive(Clone, Debug, Serialize)]
pub struct Capacity {
    /// The load that it is compared with, by its name in [`Loads`].
    pub load: &'static str,
    /// Its value; of a design state the pressure at the part's lowest point.
    pub value: f32,
    /// Where it comes from.
    pub basis: String,
    /// Its place in the file's list.
    #[serde(skip)]
    pub place: usize,
}

/// Loads against capacities.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Judgement {
    /// Of the estimate, outward.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub utilisation: Option<f32>,
    /// Of the outward bound.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub utilisation_bound: Option<f32>,
    /// Of the inward bound.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub utilisation_inward: Option<f32>,
    /// What limits the level.
    #[serde(flatten)]
    pub limits: Option<Limits>,
    /// The lowest level that the inward capacity allows.
    #[serde(flatten)]
    pub lowest: Option<Lowest>,
    /// Thickness of a plate that brings the utilisation of the estimate to one in this state,
    /// corrosion allowance included.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub thickness_for_state_m: Option<f64>,
}

/// Limit levels.
#[derive(Clone, Debug, Serialize)]
pub struct Limits {
    /// What limits the level of the estimate.
    pub limited_by: &'static str,
    /// For the estimate; none when no level is admissible.
    pub limit_level_m: Option<f32>,
    /// For the highest density and gas.
    pub limit_level_bound_m: Option<f32>,
    /// Admissible levels, from and to.
    pub limit_intervals_m: Vec<[f32; 2]>,
    /// Where overflow or shell top come first: what the capacities alone give. Text only.
    #[serde(skip)]
    pub capacity_alone_m: Option<f32>,
}

/// The lowest level.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct Lowest {
    /// None when no level is admissible.
    pub lowest_level_m: Option<f32>,
}

/// What is not judged.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct NotJudged {
    /// Name of the part, or the stretch of the shell.
    pub name: String,
    /// Why.
    pub why: String,
}
