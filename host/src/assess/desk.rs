//! The plan on the desk: the core's pressure states at stated levels.

use super::part::single;
use crate::compile::{Compiled, HEIGHT_MAX_M};
use crate::inverse::{Interval, LimitedBy};
use crate::tank::TankFile;
use strake_core::lane::Lane;
use strake_core::liquid::{Band, Readings, States, highest_surface_m, states};
use strake_core::part::{Part, acting};
use strake_core::plan::{LevelSensor, Plan, Reference};
use strake_core::pressure::Pressure;
use strake_core::signal::half_width;

/// A compiled plan and the questions that a desk asks of it.
#[derive(Clone, Debug)]
pub struct Desk {
    plan: Plan,
    /// The same plan with a sensor that sees the surface itself.
    true_level: Plan,
    limited_at_top: LimitedBy,
}

impl Desk {
    /// The plan of a file.
    #[must_use]
    pub fn new(compiled: Compiled, file: &TankFile) -> Self {
        Self::of_plan(compiled.plan, file)
    }

    /// A plan of the file, whatever liquid it has.
    #[must_use]
    pub fn of_plan(plan: Plan, file: &TankFile) -> Self {
        let mut true_level = plan.clone();
        true_level.level.sensor = LevelSensor::Surface;
        // A level stated here is never cut; up to where a tank can be filled, `range` says.
        true_level.closed = true;
        let limited_at_top = match file.fill.overflow_m {
            Some(_) => LimitedBy::Overflow,
            None => LimitedBy::ShellTop,
        };
        Self { plan, true_level, limited_at_top }
    }

    /// The plan.
    #[must_use]
    pub const fn plan(&self) -> &Plan {
        &self.plan
    }

    /// Levels that the tank can have: from the floor to the overflow, else the shell top.
    #[must_use]
    pub const fn range(&self) -> Interval {
        Interval { low_m: self.plan.floor_m, high_m: self.plan.overflow_m }
    }

    /// Levels above the range, up to where a plan ends: for a capacity that outlasts the tank.
    #[must_use]
    pub fn beyond(&self) -> Interval {
        Interval { low_m: self.plan.overflow_m, high_m: single(HEIGHT_MAX_M) }
    }

    /// What ends the range.
    #[must_use]
    pub const fn limited_at_top(&self) -> LimitedBy {
        self.limited_at_top
    }

    /// The states with the surface truly at a level: of the estimate, and of the highest and lowest
    /// density and gas. No sensor comes in.
    #[must_use]
    pub fn at_true_level<const N: usize>(&self, level_m: Lane<N>) -> States<N> {
        states(&self.true_level, &self.readings(level_m, Lane::ZERO))
    }

    /// The states that the plan's sensor allows when it reads what the estimate gives at that
    /// level.
    ///
    /// A head sensor reads the estimate's pressure at its height, and the bounds are its envelope;
    /// to a surface sensor's level its uncertainty is added and taken off.
    #[must_use]
    pub fn as_seen<const N: usize>(&self, level_m: Lane<N>) -> States<N> {
        let exact = self.at_true_level(level_m);
        let sensed = self.sensed(&exact.estimate, level_m);
        let half = Lane(sensed.0.map(|value| half_width(&self.plan, value)));
        let bounds = states(&self.plan, &self.readings(sensed, half));
        // Below the diaphragm a head sensor cannot tell the level that is stated here.
        States { estimate: exact.estimate, level_m: exact.level_m, ..bounds }
    }

    /// Height above which no liquid stands when the sensor reads what the estimate gives at a
    /// level.
    #[must_use]
    pub fn highest_surface_m(&self, level_m: f32) -> f32 {
        let sensed = self.reading(level_m);
        let high = sensed + half_width(&self.plan, sensed);
        let seen = highest_surface_m(&self.plan, high, self.plan.liquid.top.low_kg_m3);
        // Below the diaphragm a head sensor cannot tell; the level is stated here all the same.
        if level_m > seen { level_m } else { seen }
    }

    /// The states at a true level as they act on a part.
    #[must_use]
    pub fn acting(&self, part: &Part, level_m: Lane<1>) -> States<1> {
        acting(&self.plan, part, &self.at_true_level(level_m))
    }

    /// What the sensor reads when the estimate stands at a level: Pa of a head sensor, else m.
    #[must_use]
    pub fn reading(&self, level_m: f32) -> f32 {
        let level_m = Lane([level_m]);
        self.sensed(&self.at_true_level(level_m).estimate, level_m).lane(0)
    }

    /// Half-widths of the level that the estimate has at `level_m`, m, by what they come from: a
    /// head sensor's pressure, density and gas change the level that a reading means; a surface
    /// sensor has its own only.
    #[must_use]
    pub fn half_widths_m(&self, level_m: f32) -> [(&'static str, f64); 3] {
        let reading = self.reading(level_m);
        let half = half_width(&self.plan, reading);
        let mut open = self.plan.clone();
        open.closed = true;
        let level = |plan: &Plan, reading: f32, kg_m3: f32| {
            let density = Band { estimate_kg_m3: kg_m3, ..plan.liquid.top };
            f64::from(strake_core::liquid::level_m(plan, reading, density))
        };
        let top = open.liquid.top;
        let nominal = level(&open, reading, top.estimate_kg_m3);
        let density = [top.low_kg_m3, top.high_kg_m3]
            .map(|kg_m3| (level(&open, reading, kg_m3) - nominal).abs());
        let gas = [open.gas.lowest_pa, open.gas.highest_pa].map(|gas_pa| {
            let mut other = open.clone();
            other.gas.nominal_pa = gas_pa;
            (level(&other, reading, top.estimate_kg_m3) - nominal).abs()
        });
        let sensor = (level(&open, reading + half, top.estimate_kg_m3) - nominal).abs();
        [("sensor", sensor), ("density", density[0].max(density[1])), ("gas", gas[0].max(gas[1]))]
    }

    /// What the sensor reads of a state with its surface at a level.
    fn sensed<const N: usize>(&self, estimate: &Pressure<N>, level_m: Lane<N>) -> Lane<N> {
        let LevelSensor::Head { at_m, reference } = self.plan.level.sensor else { return level_m };
        let pressure_pa = estimate.at(Lane::splat(at_m));
        match reference {
            Reference::Atmosphere { offset_pa: [nominal, ..] } => pressure_pa + nominal,
            Reference::GasSpace => pressure_pa - self.plan.gas.nominal_pa,
        }
    }

    fn readings<const N: usize>(&self, value: Lane<N>, half: Lane<N>) -> Readings<N> {
        let top = self.plan.liquid.top;
        let density = [top.estimate_kg_m3, top.low_kg_m3, top.high_kg_m3];
        let low = value - half;
        let high = value + half;
        Readings { estimate: value, low, high, density: density.map(Lane::splat) }
    }
}
