//! How long the cell lasts: an estimate from the tank file's `[power]` and `[logging]`.
//!
//! Energy per sample is what the sensor takes while it is on, `V I t`, and a little for the device;
//! beside it stand the device asleep, an external relay, and the cell's own loss:
//!
//! ```text
//! charge a day = (n (E_sensor + E_device) + E_asleep) / (V_cell efficiency) + relay + own loss
//! life         = capacity / charge a day
//! ```
//!
//! The sensor's figures are the file's. Those of the device are estimates from data sheets of its
//! class of parts, stated with every result; nothing was measured on hardware.

mod text;

pub(crate) use text::battery;

use crate::tank::{Power, TankFile};
use serde::Serialize;
use strake_core::evaluate::REST_MS_MIN;

const DAY_S: f64 = 86_400.0;
/// Share of the day for which the tank rests.
pub const REST_SHARE: f64 = 0.8;
/// Rests that begin in a day; each begins at the short interval, until the level has shown it.
const RESTS_A_DAY: f64 = 2.0;
/// Time of a burst of five readings, s.
const BURST_S: f64 = 0.05;
/// Current of the device while it waits for the sensor and the burst, A.
const WAITING_A: f64 = 0.48e-3;
/// Charge of a cycle's computing: 5 ms at 1.6 mA, C.
const CYCLE_C: f64 = 8e-6;
/// Share of a sample in programming and erasing the journal, C.
const JOURNAL_C: f64 = 2e-6;
/// Current of the device asleep: controller and clock 1.5 uA, memory 1 uA, leakage 3 uA, contact
/// 10 uA, A.
const ASLEEP_A: f64 = 15.5e-6;
/// What the cell loses by itself, share of its capacity in a day: 1 % a year.
const OWN_LOSS_PER_DAY: f64 = 0.01 / 365.0;
/// Life beyond which the cell's age is the limit, days: ten years.
const AGE_DAYS: f64 = 3_652.0;

/// One way to sample, and what it takes.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Use {
    /// Samples in a day.
    pub samples_per_day: f64,
    /// Charge taken from the cell in a day, C; 3.6 C are 1 mAh.
    pub charge_per_day_c: f64,
    /// Share of it that the sensor takes.
    pub sensor_share: f64,
    /// Days until the cell is empty.
    pub life_days: f64,
}

/// The estimate for a tank file.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Energy {
    /// At the fixed interval.
    pub fixed: Use,
    /// With the adaptive interval, where the headroom allows the idle interval in every rest.
    pub adaptive: Use,
    /// Life with the adaptive interval over life without.
    pub life_ratio: f64,
    /// Share of the day for which the tank is taken to rest.
    pub rest_share: f64,
    /// What the figures stand on.
    pub assumptions: Vec<String>,
    /// What the reader must know beside them.
    pub cautions: Vec<String>,
}

/// What a number of samples a day takes.
#[must_use]
pub fn consumption(power: &Power, samples_per_day: f64) -> Use {
    let (cell, sensor) = (&power.cell, &power.sensor);
    let on_s = sensor.warm_up_s.value + BURST_S;
    let sensor_j = sensor.voltage_v.value * sensor.current_a.value * on_s;
    let from_cell = 1.0 / (cell.voltage_v.value * cell.efficiency.value);
    let sensor_c = samples_per_day * sensor_j * from_cell;
    let device_c = samples_per_day * (WAITING_A * on_s + CYCLE_C + JOURNAL_C) + ASLEEP_A * DAY_S;
    let relay_c = relay_per_day_c(power);
    let capacity_c = cell.capacity_c.value;
    let charge_per_day_c =
        sensor_c + device_c / cell.efficiency.value + relay_c + OWN_LOSS_PER_DAY * capacity_c;
    Use {
        samples_per_day,
        charge_per_day_c,
        sensor_share: sensor_c / charge_per_day_c,
        life_days: capacity_c / charge_per_day_c,
    }
}

/// Charge that an external relay takes in a day, C.
fn relay_per_day_c(power: &Power) -> f64 {
    power.relay_current_a.map_or(0.0, |current| current.value * DAY_S / power.cell.efficiency.value)
}

/// The estimate; `None` without `[power]` or `[logging]`.
#[must_use]
pub fn estimate(file: &TankFile) -> Option<Energy> {
    let (power, logging) = (file.power.as_ref()?, file.logging.as_ref()?);
    let interval_s = logging.interval_s.value;
    let longest_s = file.alarm.as_ref().map_or(f64::INFINITY, |alarm| alarm.response_time_s.value);
    let idle_s = logging.idle_interval_s.value;
    // As the device counts it: whole intervals.
    let looks_s =
        ((idle_s.min(longest_s) / interval_s + 1e-9).floor() * interval_s).max(interval_s);
    let rest_s = REST_SHARE * DAY_S;
    let shown_s = (RESTS_A_DAY * idle_s.max(f64::from(REST_MS_MIN) * 1e-3)).min(rest_s);
    let moving = (DAY_S - rest_s + shown_s) / interval_s;
    let fixed = consumption(power, DAY_S / interval_s);
    let adaptive = consumption(power, moving + (rest_s - shown_s) / looks_s);
    Some(Energy {
        fixed,
        adaptive,
        life_ratio: adaptive.life_days / fixed.life_days,
        rest_share: REST_SHARE,
        assumptions: assumptions(power, looks_s),
        cautions: cautions(power, &fixed, &adaptive),
    })
}

fn assumptions(power: &Power, looks_s: f64) -> Vec<String> {
    let sensor = &power.sensor;
    vec![
        format!(
            "the sensor is on for {:.2} s a sample, its warm-up and {BURST_S} s for five readings, \
             at {:.3} V and {:.4} A, as the file says",
            sensor.warm_up_s.value + BURST_S,
            sensor.voltage_v.value,
            sensor.current_a.value,
        ),
        format!(
            "the tank rests for {:.0} % of the day, in {RESTS_A_DAY:.0} rests, and no threshold is \
             within reach in {looks_s:.0} s at the highest rates",
            100.0 * REST_SHARE
        ),
        format!(
            "the device itself is an estimate from data sheets: {:.2} mA while it waits for the \
             sensor, {:.0} uC a cycle and its record, {:.1} uA asleep; nothing was measured on \
             hardware",
            1e3 * WAITING_A,
            1e6 * (CYCLE_C + JOURNAL_C),
            1e6 * ASLEEP_A
        ),
        "the cell gives the stated capacity at every temperature and pulse, and loses 1 % of it a \
         year by itself"
            .to_owned(),
    ]
}

fn cautions(power: &Power, fixed: &Use, adaptive: &Use) -> Vec<String> {
    let mut found = Vec::new();
    let relay_c = relay_per_day_c(power);
    if relay_c > 0.0 {
        found.push(format!(
            "an external relay takes {:.1} mAh a day, {:.0} % of the whole with the adaptive \
             interval; feed it from a supply of its own",
            relay_c / 3.6,
            100.0 * relay_c / adaptive.charge_per_day_c
        ));
    }
    if fixed.life_days.max(adaptive.life_days) > AGE_DAYS {
        found.push("beyond ten years the cell's age is the limit, not its charge".to_owned());
    }
    found
}

#[cfg(test)]
mod tests;
