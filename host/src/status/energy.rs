//! How long the device's cell lasts, by the tank file its plan was sealed from.
//!
//! The plan carries nothing of the cell or of what the sensor takes: the device has no use for it.
//! So the estimate is the file's, and the device adds how often it has really sampled.

use super::Seen;
use super::document::seconds;
use crate::energy::{Energy, Use, consumption};
use crate::tank::TankFile;
use serde::Serialize;

const DAY_S: f64 = 86_400.0;

/// The estimate, and the device's own pace.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct EnergyRow {
    /// From the tank file.
    #[serde(flatten)]
    pub estimate: Energy,
    /// What the samples since the start take, each as the file says; null until a day has passed
    /// since then, for rest and movement are told apart by whole days.
    pub since_start: Option<Use>,
}

impl EnergyRow {
    /// For a visit, by a tank file and its estimate.
    #[must_use]
    pub fn of(file: &TankFile, mut estimate: Energy, seen: &Seen) -> Self {
        estimate.cautions.extend(differences(file, seen));
        let running_s = seconds(seen.status.tick_ms);
        let per_day = f64::from(seen.status.samples) * DAY_S / running_s;
        let since_start = file.power.as_ref().filter(|_| running_s >= DAY_S);
        let since_start = since_start.map(|power| consumption(power, per_day));
        Self { estimate, since_start }
    }
}

/// Where the file is not what the device works by, as far as the estimate is concerned.
fn differences(file: &TankFile, seen: &Seen) -> Vec<String> {
    let Some(plan) = seen.in_force.plan() else { return Vec::new() };
    let mut found = Vec::new();
    let name = &file.name.value;
    if *name != plan.tank_name {
        found.push(format!(
            "the tank file is of {name}, the device's plan of {}: another tank's cell and sensor",
            plan.tank_name
        ));
    }
    let device = [plan.plan.logging.interval_ms, plan.plan.logging.idle_interval_ms];
    let device = device.map(|ms| f64::from(ms) / 1000.0);
    let asked = file.logging.as_ref();
    let asked = asked.map(|it| [it.interval_s.value, it.idle_interval_s.value]);
    if let Some(asked) = asked
        && asked.iter().zip(device).any(|(asked, device)| (asked - device).abs() > 1e-3)
    {
        found.push(format!(
            "the tank file samples every {} s and {} s at rest, the device every {} s and {} s: \
             the columns fixed and adaptive are the file's",
            asked[0], asked[1], device[0], device[1]
        ));
    }
    found
}
