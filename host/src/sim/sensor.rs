//! A simulated level sensor: the true level, what it makes of it, and how it fails.

use std::f64::consts::TAU;
use strake_core::plan::{LevelPlan, LevelSensor, Plan, Reference, SignalKind};
use strake_firmware::board::SensorError;

/// The true level over virtual time.
pub trait Level: std::fmt::Debug + Send {
    /// Level, m above the datum, at a virtual time in milliseconds.
    fn level_m(&self, now_ms: u64) -> f64;
    /// Liquid temperature, degrees Celsius.
    fn temperature_c(&self, now_ms: u64) -> f64 {
        let _ = now_ms;
        20.0
    }
}

/// How the sensor can fail.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Failure {
    /// The loop is broken.
    WireBreak,
    /// The transmitter signals a fault with this current, mA.
    FaultCurrent(f64),
    /// Nothing answers.
    Silent,
    /// The reading stays where it was at the beginning.
    Frozen,
}

/// The sensor of a plan, looking at a level.
#[derive(Debug)]
pub struct Sensor {
    level: Box<dyn Level>,
    wiring: Wiring,
    /// Standard deviation of the noise of one count; zero for quantisation alone.
    noise_counts: f64,
    random: u64,
    failure: Option<Failure>,
    frozen: Option<i32>,
}

/// The plan's numbers that turn a level into a count.
#[derive(Clone, Debug)]
struct Wiring {
    plan: LevelPlan,
    weight_n_m3: f64,
    gas_pa: f64,
    temperature: Option<(f64, f64)>,
}

impl Wiring {
    fn of(plan: &Plan) -> Self {
        let temperature = plan.liquid.temperature.map(|sensor| {
            (f64::from(sensor.celsius_at_zero), f64::from(sensor.celsius_per_count_16))
        });
        Self {
            plan: plan.level,
            weight_n_m3: f64::from(plan.liquid.top.estimate_kg_m3) * f64::from(plan.gravity_m_s2),
            gas_pa: f64::from(plan.gas.nominal_pa),
            temperature,
        }
    }

    /// What the sensor senses at a level: Pa or m.
    fn sensed(&self, level_m: f64) -> f64 {
        match self.plan.sensor {
            LevelSensor::Surface => level_m,
            LevelSensor::Head { at_m, reference } => {
                let column = self.weight_n_m3 * (level_m - f64::from(at_m)).max(0.0);
                match reference {
                    Reference::GasSpace => column,
                    Reference::Atmosphere { offset_pa: [nominal, ..] } => {
                        column + self.gas_pa + f64::from(nominal)
                    }
                }
            }
        }
    }

    /// The raw count for a sensed quantity, before noise and rounding.
    fn count(&self, sensed: f64) -> f64 {
        let sixteenths = (sensed - f64::from(self.plan.value_at_zero))
            / f64::from(self.plan.value_per_count_16)
            + f64::from(self.plan.zero_count_16);
        sixteenths / 16.0
    }
}

impl Sensor {
    /// The sensor of `plan` on `level`. `noise` is the standard deviation of one reading in the
    /// sensor's own quantity (Pa or m).
    #[must_use]
    pub fn new(plan: &Plan, level: Box<dyn Level>, noise: f64, seed: u64) -> Self {
        let wiring = Wiring::of(plan);
        let per_count = f64::from(wiring.plan.value_per_count_16).abs() * 16.0;
        let noise_counts = noise / per_count;
        Self { level, wiring, noise_counts, random: seed, failure: None, frozen: None }
    }

    /// Begins or ends a failure.
    pub fn fail(&mut self, failure: Option<Failure>) {
        self.failure = failure;
        self.frozen = None;
    }

    /// The true level, m.
    #[must_use]
    pub fn true_level_m(&self, now_ms: u64) -> f64 {
        self.level.level_m(now_ms)
    }

    /// One raw count of the level channel.
    ///
    /// # Errors
    /// When the sensor does not answer.
    pub fn level_count(&mut self, now_ms: u64) -> Result<i32, SensorError> {
        let current_loop = self.wiring.plan.signal == SignalKind::CurrentLoop;
        match self.failure {
            // A bus sensor without its wire is silent; a loop reads no current.
            Some(Failure::WireBreak) if current_loop => return Ok(0),
            Some(Failure::WireBreak | Failure::Silent) => return Err(SensorError::Silent),
            Some(Failure::FaultCurrent(ma)) if current_loop => return Ok(whole(ma * 1000.0)),
            Some(Failure::FaultCurrent(_)) => return Err(SensorError::Exception),
            Some(Failure::Frozen) | None => {}
        }
        if let Some(count) = self.frozen {
            return Ok(count);
        }
        let sensed = self.wiring.sensed(self.level.level_m(now_ms));
        let noise = if self.noise_counts > 0.0 { self.noise_counts * self.gauss() } else { 0.0 };
        let mut count = self.wiring.count(sensed) + noise;
        if current_loop {
            // A transmitter saturates before its fault currents.
            count = count.clamp(3_800.0, 20_500.0);
        }
        let count = whole(count);
        if self.failure == Some(Failure::Frozen) {
            self.frozen = Some(count);
        }
        Ok(count)
    }

    /// One raw count of the temperature channel.
    ///
    /// # Errors
    /// When the plan has none.
    pub fn temperature_count(&mut self, now_ms: u64) -> Result<i32, SensorError> {
        let (zero_c, per_count_16) = self.wiring.temperature.ok_or(SensorError::Silent)?;
        let celsius = self.level.temperature_c(now_ms);
        Ok(whole((celsius - zero_c) / per_count_16 / 16.0))
    }

    /// A number of the standard normal distribution (Box and Muller 1958).
    fn gauss(&mut self) -> f64 {
        let radius = (-2.0 * self.uniform().ln()).sqrt();
        radius * (TAU * self.uniform()).cos()
    }

    /// A number in (0, 1] (Marsaglia 2003, xorshift with 64 bits).
    fn uniform(&mut self) -> f64 {
        let mut x = self.random | 1;
        x ^= x << 13;
        x ^= x >> 7;
        x ^= x << 17;
        self.random = x;
        #[expect(clippy::cast_precision_loss, reason = "53 bits are kept")]
        let share = ((x >> 11) + 1) as f64 / (1_u64 << 53) as f64;
        share
    }
}

#[expect(clippy::cast_possible_truncation, reason = "counts are far inside the range")]
fn whole(count: f64) -> i32 {
    count.round() as i32
}
