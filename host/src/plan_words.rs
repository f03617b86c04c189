//! A plan in words that a technician can check against the drawing, and two plans side by side.
//!
//! Every number of the plan stands in exactly one **line**. Lines are compared by the numbers
//! behind them, not by the digits shown, so that no change stays unseen.

mod filling;
mod parts;
mod sensor;
#[cfg(test)]
mod tests;

use crate::plan_file::PlanFile;
use crate::units::Quantity::{Acceleration, Density, Length, Pressure, Speed, Temperature, Time};
use crate::units::{Quantity, UnitSystem, format};
use crate::utc;
use std::fmt::Debug;
use strake_core::liquid::{Band, Gas, Outside};
use strake_core::plan::{AlarmPlan, LiquidPlan, LoggingPlan, Plan, ThresholdPlan};

/// One line of a plan.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Line {
    /// Which part of the plan, or which part of the tank.
    pub section: String,
    /// What it is.
    pub label: String,
    /// Its value in words.
    pub value: String,
    /// The numbers themselves.
    exact: String,
}

/// A line that differs between two plans.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Change {
    /// Which part of the plan, or which part of the tank.
    pub section: String,
    /// What it is.
    pub label: String,
    /// In the old plan; `None` where it has no such line.
    pub old: Option<String>,
    /// In the new plan; `None` where it has no such line.
    pub new: Option<String>,
}

/// What differs, in the order of the new plan; what the new plan no longer has comes last.
#[must_use]
pub fn changes(old: &[Line], new: &[Line]) -> Vec<Change> {
    let find = |lines: &[Line], wanted: &Line| {
        let same = |line: &&Line| line.section == wanted.section && line.label == wanted.label;
        lines.iter().find(same).cloned()
    };
    let change = |line: &Line, old: Option<String>, new: Option<String>| Change {
        section: line.section.clone(),
        label: line.label.clone(),
        old,
        new,
    };
    let mut found = Vec::new();
    for line in new {
        let before = find(old, line);
        if before.as_ref().is_none_or(|before| before.exact != line.exact) {
            found.push(change(line, before.map(|before| before.value), Some(line.value.clone())));
        }
    }
    for line in old.iter().filter(|line| find(new, line).is_none()) {
        found.push(change(line, Some(line.value.clone()), None));
    }
    found
}

/// Every line of a plan.
#[must_use]
pub fn lines(file: &PlanFile, units: UnitSystem) -> Vec<Line> {
    let mut words = Words { units, section: "plan".to_owned(), lines: Vec::new() };
    let (header, plan) = (&file.header, &file.plan);
    words.line("tank", &file.tank_name, file.tank_name.clone());
    let device = if header.device_id.is_empty() { "any" } else { header.device_id.as_str() };
    words.line("for device", &header.device_id, device.to_owned());
    words.line("sealed", &header.serial, utc::text(header.serial));
    words.line("fingerprint", &file.fingerprint, format!("{:016x}", file.fingerprint));
    words.tank(plan);
    words.liquid(&plan.liquid, plan.gas);
    for (number, outside) in (1..).zip(&plan.outside) {
        words.outside(number, outside);
    }
    words.sensor(&plan.level);
    words.alarm(&plan.alarm);
    words.logging(plan.logging);
    words.filling(plan);
    words.accepted_margin(file.accepted_margin.as_ref());
    for (name, part) in file.part_names.iter().zip(&plan.parts) {
        words.section.clone_from(name);
        words.part(part, &plan.numbers);
    }
    words.lines
}

/// Lines in the making.
struct Words {
    units: UnitSystem,
    section: String,
    lines: Vec<Line>,
}

impl Words {
    fn line(&mut self, label: impl Into<String>, exact: &impl Debug, value: String) {
        self.lines.push(Line {
            section: self.section.clone(),
            label: label.into(),
            value,
            exact: format!("{exact:?}"),
        });
    }

    fn section(&mut self, name: &str) {
        name.clone_into(&mut self.section);
    }

    fn show(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        format(value.into(), quantity, self.units)
    }

    fn quantity(&mut self, label: &str, value: f32, quantity: Quantity) {
        self.line(label, &value, self.show(value, quantity));
    }

    fn time(&self, time_ms: u32) -> String {
        self.show(f64::from(time_ms) / 1000.0, Time)
    }

    fn tank(&mut self, plan: &Plan) {
        // What has lines of its own elsewhere is named, so that nothing new is left out.
        let Plan {
            gravity_m_s2,
            shell_top_m,
            overflow_m,
            floor_m,
            closed,
            highest_rise_m_s,
            highest_fall_m_s,
            liquid: _,
            gas: _,
            outside: _,
            level: _,
            alarm: _,
            logging: _,
            parts: _,
            numbers: _,
            filling: _,
        } = plan;
        self.section("tank");
        self.quantity("gravity", *gravity_m_s2, Acceleration);
        self.quantity("shell top", *shell_top_m, Length);
        self.quantity("overflow", *overflow_m, Length);
        self.quantity("floor", *floor_m, Length);
        self.line("roof", closed, (if *closed { "closed" } else { "open" }).to_owned());
        self.quantity("highest rise", *highest_rise_m_s, Speed);
        self.quantity("highest fall", *highest_fall_m_s, Speed);
    }

    fn band(&self, band: Band) -> String {
        format!(
            "{}, from {} to {}",
            self.show(band.estimate_kg_m3, Density),
            self.show(band.low_kg_m3, Density),
            self.show(band.high_kg_m3, Density)
        )
    }

    fn liquid(&mut self, liquid: &LiquidPlan, gas: Gas) {
        let LiquidPlan { top, table, table_uncertainty, temperature, below, products } = liquid;
        self.section("liquid");
        self.line("density", top, self.band(*top));
        if !table.points().is_empty() {
            let point = |&(celsius, density): &(f32, f32)| {
                format!("{} at {}", self.show(density, Density), self.show(celsius, Temperature))
            };
            let points: Vec<String> = table.points().iter().map(point).collect();
            let share = self.show(*table_uncertainty, Quantity::Ratio);
            let value = format!("{}; +-{share}", points.join(", "));
            self.line("over temperature", &(table, table_uncertainty), value);
        }
        if let Some(sensor) = temperature {
            let value = format!(
                "count 0 is {}, one count is {} K, +-{}",
                self.show(sensor.celsius_at_zero, Temperature),
                sensor.celsius_per_count_16 * 16.0,
                self.show(sensor.uncertainty_k, Quantity::TemperatureDifference)
            );
            self.line("temperature sensor", sensor, value);
        }
        for (number, layer) in (1..).zip(below) {
            let value = format!(
                "{}, surface at {}, +-{}",
                self.band(layer.density),
                self.show(layer.surface_m, Length),
                self.show(layer.surface_uncertainty_m, Length)
            );
            self.line(format!("layer {number} below"), layer, value);
        }
        for (number, product) in (1..).zip(products) {
            self.line(format!("other liquid {number}"), product, self.band(*product));
        }
        let value = format!(
            "{}, from {} to {}",
            self.show(gas.nominal_pa, Pressure),
            self.show(gas.lowest_pa, Pressure),
            self.show(gas.highest_pa, Pressure)
        );
        self.line("gas pressure", &gas, value);
    }

    fn outside(&mut self, number: u8, outside: &Outside) {
        let value = format!(
            "{}, up to {}, proven to stand at {}",
            self.band(outside.density),
            self.show(outside.highest_m, Length),
            self.show(outside.lowest_m, Length)
        );
        self.line(format!("outside {number}"), outside, value);
    }

    fn threshold(&mut self, label: &str, threshold: &ThresholdPlan) {
        let ThresholdPlan { utilisation, deadband, on_delay_ms, off_delay_ms, latch } = threshold;
        let value = format!(
            "{utilisation} of a capacity for {}, returns {deadband} below for {}{}",
            self.time(*on_delay_ms),
            self.time(*off_delay_ms),
            if *latch { ", latched" } else { "" }
        );
        self.line(label, threshold, value);
    }

    fn alarm(&mut self, alarm: &AlarmPlan) {
        let AlarmPlan { warn, alarm, inward, response_time_ms, sounds_again_after_ms } = alarm;
        self.section("alarm");
        self.threshold("warn", warn);
        self.threshold("alarm", alarm);
        if let Some(inward) = inward {
            self.threshold("inward", inward);
        }
        self.line("response time", response_time_ms, self.time(*response_time_ms));
        self.line("sounds again", sounds_again_after_ms, self.time(*sounds_again_after_ms));
    }

    fn logging(&mut self, logging: LoggingPlan) {
        let LoggingPlan { interval_ms, idle_interval_ms, flush_after_ms } = logging;
        self.section("logging");
        self.line("while moving", &interval_ms, format!("every {}", self.time(interval_ms)));
        self.line("at rest", &idle_interval_ms, format!("every {}", self.time(idle_interval_ms)));
        self.line("written after", &flush_after_ms, self.time(flush_after_ms));
    }
}
