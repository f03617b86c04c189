//! Alarm, log and battery: what the device needs beyond the loads.

use crate::tank::finding::{Located, Span};

/// Thresholds and times of the alarm.
#[derive(Clone, Debug, PartialEq)]
pub struct Alarms {
    /// Warning, below the alarm.
    pub warn: Threshold,
    /// Alarm.
    pub alarm: Threshold,
    /// Alarm of the inward load; stands only where a part has an inward capacity.
    pub inward: Option<Threshold>,
    /// Time that people need to stop the filling.
    pub response_time_s: Located<f64>,
    /// Time over which the inflow is taken, for the time to limit; none stated: see
    /// [`TankFile::inflow_window_s`](super::TankFile::inflow_window_s).
    pub inflow_window_s: Option<Located<f64>>,
    /// Time after which an acknowledged alarm sounds again.
    pub sounds_again_after_s: Option<Located<f64>>,
    /// Where the table stands.
    pub span: Span,
}

/// One threshold on the utilisation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Threshold {
    /// Utilisation at which it is reached, above 0, 1 at most.
    pub utilisation: Located<f64>,
    /// How far the utilisation must fall before it has gone; below `utilisation`.
    pub deadband: Located<f64>,
    /// How long it must be reached before it counts.
    pub on_delay_s: Located<f64>,
    /// How long it must have gone before that counts.
    pub off_delay_s: Located<f64>,
    /// Whether it stays until it is reset.
    pub latch: bool,
    /// Where it is written.
    pub span: Span,
}

/// Times of the log.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Logging {
    /// Time between samples while the level moves.
    pub interval_s: Located<f64>,
    /// Time between samples at rest; at least the interval.
    pub idle_interval_s: Located<f64>,
    /// How long a sample may wait in memory that a power cut empties.
    pub flush_after_s: Located<f64>,
}

impl Logging {
    /// Intervals at rest that the window of the inflow has at least: four readings.
    pub const INTERVALS_IN_WINDOW: f64 = 3.0;
}

/// Inputs of the battery model.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Power {
    /// The cell.
    pub cell: Cell,
    /// What the sensor draws.
    pub sensor: SensorSupply,
    /// Current that holds an external relay.
    pub relay_current_a: Option<Located<f64>>,
}

/// A battery cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cell {
    /// Charge.
    pub capacity_c: Located<f64>,
    /// Nominal voltage.
    pub voltage_v: Located<f64>,
    /// Share of its energy that reaches the circuit, above 0, 1 at most.
    pub efficiency: Located<f64>,
}

/// What the sensor draws while it is on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SensorSupply {
    /// Voltage.
    pub voltage_v: Located<f64>,
    /// Current.
    pub current_a: Located<f64>,
    /// Time from switching on to a valid reading.
    pub warm_up_s: Located<f64>,
}
