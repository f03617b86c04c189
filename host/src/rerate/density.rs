//! Which density a part bears: the highest at a level, and behind a head sensor the lowest at a
//! reading.

use super::document::{HighestDensity, LowestDensity};
use super::part::Sides;
use crate::assess::Desk;
use crate::compile::{self, Contents};
use crate::inverse::{Criterion, Interval, edge, intervals_on, within};
use strake_core::lane::Lane;
use strake_core::part::{Part, evaluate};
use strake_core::plan::LevelSensor;

/// Lightest and heaviest liquid looked at, kg/m³; a plan holds their bands too.
const LIGHTEST: f32 = 10.0;
const HEAVIEST: f32 = 10e3;
/// Stretches of density looked at.
const STRETCHES: u16 = 64;

/// Height of a head sensor.
pub(super) fn head_height(desk: &Desk) -> Option<f32> {
    match desk.plan().level.sensor {
        LevelSensor::Head { at_m, .. } => Some(at_m),
        LevelSensor::Surface => None,
    }
}

/// The plan with another density of the estimate.
fn desk_at(sides: &Sides<'_>, density_kg_m3: f32) -> Option<Desk> {
    let request = &sides.question.new;
    let mut contents: Contents = request.contents.clone();
    // The estimate's density over that at the reference temperature stays.
    let reference = contents.liquid.density_kg_m3.value;
    let share = reference / contents.density_kg_m3();
    contents.take_density(f64::from(density_kg_m3) * share);
    let compiled = compile::for_desk(sides.file, &contents).ok()?;
    Some(Desk::new(compiled, sides.file))
}

/// A part keeps its outward capacities at every level up to that of the question.
struct AtLevel<'a> {
    sides: &'a Sides<'a>,
    index: usize,
}

impl Criterion for AtLevel<'_> {
    fn holds<const N: usize>(&self, density_kg_m3: Lane<N>) -> [bool; N] {
        density_kg_m3.0.map(|density_kg_m3| {
            let Some(desk) = desk_at(self.sides, density_kg_m3) else { return false };
            let Some(part) = desk.plan().parts.get(self.index) else { return false };
            let range = Interval { low_m: desk.range().low_m, high_m: self.sides.level_m() };
            within(&desk, part, range)
        })
    }
}

/// The highest density.
///
/// At each level a load is linear in the density of the top liquid, so the densities at which all
/// levels keep a capacity are one interval: its upper end is found by bisection.
pub(super) fn highest(sides: &Sides<'_>, index: usize) -> HighestDensity {
    let criterion = AtLevel { sides, index };
    let below = sides.file.below.first().map(|layer| layer.liquid.density_kg_m3.value);
    let (most, by) = match below {
        Some(below) => (single(below), "layer_below"),
        None => (HEAVIEST, "range"),
    };
    let found = |highest_density_kg_m3, highest_density_limited_by| HighestDensity {
        highest_density_kg_m3,
        highest_density_limited_by,
    };
    let [lightest_holds] = criterion.holds(Lane([LIGHTEST]));
    if !lightest_holds {
        return found(None, "capacity");
    }
    let [heaviest_holds] = criterion.holds(Lane([most]));
    if heaviest_holds {
        return found(Some(most), by);
    }
    found(Some(edge(&criterion, LIGHTEST, most)), "capacity")
}

/// A part keeps its outward capacities while the head sensor's reading stays.
struct AtReading<'a> {
    sides: &'a Sides<'a>,
    index: usize,
    sensor_m: f32,
    /// Pressure of the liquid alone at the sensor.
    head_pa: f32,
}

impl AtReading<'_> {
    /// Level at which a liquid gives the reading.
    fn level_m(&self, density_kg_m3: f32) -> f32 {
        self.sensor_m + self.head_pa / (density_kg_m3 * self.sides.new.plan().gravity_m_s2)
    }
}

impl Criterion for AtReading<'_> {
    fn holds<const N: usize>(&self, density_kg_m3: Lane<N>) -> [bool; N] {
        density_kg_m3.0.map(|density_kg_m3| {
            let Some(desk) = desk_at(self.sides, density_kg_m3) else { return false };
            let Some(part) = desk.plan().parts.get(self.index) else { return false };
            let level_m = self.level_m(density_kg_m3);
            let top_m = desk.range().high_m;
            keeps(&desk, part, if level_m < top_m { level_m } else { top_m })
        })
    }
}

fn keeps(desk: &Desk, part: &Part, level_m: f32) -> bool {
    let states = desk.at_true_level(Lane([level_m]));
    evaluate(desk.plan(), part, &states).utilisation.lane(0) <= 1.0
}

/// The lowest density behind a head sensor; `None` without one, with layers (the reading does not
/// tell the level), or when the sensor is dry at the level of the question.
pub(super) fn lowest(sides: &Sides<'_>, index: usize) -> Option<LowestDensity> {
    let sensor_m = head_height(sides.new)?;
    let wetted_m = sides.level_m() - sensor_m;
    if !sides.file.below.is_empty() || wetted_m <= 0.0 {
        return None;
    }
    let plan = sides.new.plan();
    let new = plan.liquid.top.estimate_kg_m3;
    let head_pa = new * plan.gravity_m_s2 * wetted_m;
    let criterion = AtReading { sides, index, sensor_m, head_pa };
    // Lighter than this the tank is full before the reading is reached.
    let full = new * wetted_m / (sides.new.range().high_m - sensor_m);
    let full = if full < new { full } else { new };
    let range = Interval { low_m: full, high_m: new };
    let found = intervals_on(&criterion, range, [], STRETCHES);
    let at_new = found.last().filter(|last| last.high_m >= new);
    let (lowest, by) = match at_new {
        None => (None, "capacity"),
        Some(last) if last.low_m <= full => (Some(full), sides.new.limited_at_top().as_str()),
        Some(last) => (Some(last.low_m), "capacity"),
    };
    Some(LowestDensity { lowest_density_kg_m3: lowest, lowest_density_limited_by: by })
}

#[expect(clippy::cast_possible_truncation, reason = "a density for the core")]
const fn single(value: f64) -> f32 {
    value as f32
}
