//! The compiled plan: everything the device needs, in f32 and SI units.
//!
//! The engineer's tank file is compiled into a plan on the host; device and replay decode the same
//! bytes ([`codec`]) and get the same numbers. A plan that fails [`Plan::check`] is no plan.

#[cfg(test)]
pub(crate) mod builder;
mod check;
pub mod codec;
mod filling;
mod level;

pub use check::PlanError;
pub use codec::{PLAN_BYTES_MAX, PLAN_FORMAT};
pub use filling::{CURVE_ROWS_MAX, Filling, LIMITS_MAX};
pub use level::{LevelPlan, LevelSensor, Reference, SignalKind, TemperaturePlan};

use crate::alarm::PARTS_MAX;
use crate::liquid::{Band, DensityTable, Gas, LAYERS_MAX, Layer, Outside, PRODUCTS_MAX};
use crate::part::Part;
use heapless::Vec;

/// Liquids that can stand against the outside of parts.
pub const OUTSIDE_MAX: usize = 2;
/// Numbers of all parts together whose geometry has many, and of the volume curve.
pub const NUMBERS_MAX: usize = 256;
/// Bytes of a name.
pub const NAME_BYTES_MAX: usize = 24;

/// What is in the tank.
#[derive(Clone, Debug, PartialEq)]
pub struct LiquidPlan {
    /// The top liquid at its reference temperature, with its band over the service temperatures.
    pub top: Band,
    /// Its density over temperature; used when a temperature sensor is stated.
    pub table: DensityTable,
    /// Relative half-width of the table's densities.
    pub table_uncertainty: f32,
    /// Temperature sensor in the liquid.
    pub temperature: Option<TemperaturePlan>,
    /// Heavier layers below, top to bottom.
    pub below: Vec<Layer, { LAYERS_MAX - 1 }>,
    /// Other liquids the tank may hold.
    pub products: Vec<Band, PRODUCTS_MAX>,
}

impl LiquidPlan {
    /// The band of all that stands in the tank with a top liquid of this band: layers always
    /// belong to it.
    #[must_use]
    pub fn with_layers(&self, top: Band) -> Band {
        self.below.iter().fold(top, |band, layer| band.hull(layer.density))
    }

    /// The top liquid's band while it is not confirmed which product is in the tank.
    #[must_use]
    #[inline(never)]
    pub fn any_product(&self) -> Band {
        self.products.iter().fold(self.top, |band, product| band.hull(*product))
    }
}

/// When an alarm is raised and when it returns.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ThresholdPlan {
    /// Raised at or above this utilisation.
    pub utilisation: f32,
    /// Returns below `utilisation - deadband`.
    pub deadband: f32,
    /// The condition must stand this long, ms.
    pub on_delay_ms: u32,
    /// The condition must be gone this long, ms.
    pub off_delay_ms: u32,
    /// Stays until it is reset.
    pub latch: bool,
}

/// The alarm settings.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AlarmPlan {
    /// Early warning on the outward bound.
    pub warn: ThresholdPlan,
    /// Alarm on the outward bound.
    pub alarm: ThresholdPlan,
    /// Alarm on the inward bound; needed where a part has an inward capacity.
    pub inward: Option<ThresholdPlan>,
    /// Time the site needs to act, ms.
    pub response_time_ms: u32,
    /// An acknowledged alarm whose condition still stands sounds again after this, ms.
    pub sounds_again_after_ms: u32,
}

/// How often the device looks and how long a sample may wait in RAM.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct LoggingPlan {
    /// Interval while the level moves or a part is near its threshold, ms.
    pub interval_ms: u32,
    /// Interval at rest, ms.
    pub idle_interval_ms: u32,
    /// How long a sample may wait before it is written, ms.
    pub flush_after_ms: u32,
}

/// The whole plan.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    /// Local gravity, m/s².
    pub gravity_m_s2: f32,
    /// Top of the shell, m above the datum.
    pub shell_top_m: f32,
    /// Level at which the tank runs over, m above the datum.
    pub overflow_m: f32,
    /// Lowest level of an empty tank, m above the datum (negative with a sump).
    pub floor_m: f32,
    /// A closed tank can be over-full: its liquid can stand in a pipe above the roof.
    pub closed: bool,
    /// Fastest rise, m/s.
    pub highest_rise_m_s: f32,
    /// Fastest fall, m/s.
    pub highest_fall_m_s: f32,
    /// What is in the tank.
    pub liquid: LiquidPlan,
    /// What is above it.
    pub gas: Gas,
    /// Liquid against the outside.
    pub outside: Vec<Outside, OUTSIDE_MAX>,
    /// The level sensor.
    pub level: LevelPlan,
    /// The alarm settings.
    pub alarm: AlarmPlan,
    /// The logging settings.
    pub logging: LoggingPlan,
    /// The parts.
    pub parts: Vec<Part, PARTS_MAX>,
    /// Numbers of the parts whose geometry has many: each part knows where its own begin.
    pub numbers: Vec<f32, NUMBERS_MAX>,
    /// Volume curve and limit levels; nothing of it need be stated.
    pub filling: Filling,
}

impl Plan {
    /// A plan to be filled in at the desk: a surface sensor, alarms that never sound, no part. It
    /// fails [`Plan::check`] until it has a site, a liquid and a part.
    #[must_use]
    pub const fn empty() -> Self {
        let mut plan = Self::zeroed();
        plan.level.sensor = LevelSensor::Surface;
        plan.level.failed_after_ms = 1;
        plan.alarm.warn.utilisation = 1.0;
        plan.alarm.alarm.utilisation = 1.0;
        plan.alarm.inward = None;
        plan.alarm.sounds_again_after_ms = u32::MAX;
        plan.logging = LoggingPlan { interval_ms: 1000, idle_interval_ms: 1000, flush_after_ms: 0 };
        plan
    }

    /// Room for a plan with every bit zero, so that a device's static memory for it costs no flash;
    /// it fails [`Plan::check`].
    #[must_use]
    pub const fn zeroed() -> Self {
        let band = Band { estimate_kg_m3: 0.0, low_kg_m3: 0.0, high_kg_m3: 0.0 };
        let never = ThresholdPlan {
            utilisation: 0.0,
            deadband: 0.0,
            on_delay_ms: 0,
            off_delay_ms: 0,
            latch: false,
        };
        let reference = Reference::Atmosphere { offset_pa: [0.0; 3] };
        Self {
            gravity_m_s2: 0.0,
            shell_top_m: 0.0,
            overflow_m: 0.0,
            floor_m: 0.0,
            closed: false,
            highest_rise_m_s: 0.0,
            highest_fall_m_s: 0.0,
            liquid: LiquidPlan {
                top: band,
                table: DensityTable::empty(),
                table_uncertainty: 0.0,
                temperature: None,
                below: Vec::new(),
                products: Vec::new(),
            },
            gas: Gas { lowest_pa: 0.0, nominal_pa: 0.0, highest_pa: 0.0 },
            outside: Vec::new(),
            level: LevelPlan {
                sensor: LevelSensor::Head { at_m: 0.0, reference },
                signal: SignalKind::CurrentLoop,
                zero_count_16: 0,
                value_at_zero: 0.0,
                value_per_count_16: 0.0,
                uncertainty: 0.0,
                uncertainty_per_distance: 0.0,
                reference_m: 0.0,
                failed_after_ms: 0,
            },
            alarm: AlarmPlan {
                warn: never,
                alarm: never,
                // `None` is no zero.
                inward: Some(never),
                response_time_ms: 0,
                sounds_again_after_ms: 0,
            },
            logging: LoggingPlan { interval_ms: 0, idle_interval_ms: 0, flush_after_ms: 0 },
            parts: Vec::new(),
            numbers: Vec::new(),
            filling: Filling::NONE,
        }
    }

    /// Top of an open tank, above which no liquid can stand, m; `None` for a closed one.
    #[must_use]
    pub const fn open_top_m(&self) -> Option<f32> {
        if self.closed { None } else { Some(self.shell_top_m) }
    }
}

/// Who made the plan and for which device: what the seal will sign with the bytes.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct PlanHeader {
    /// UTC seconds at sealing; a device takes a later serial only.
    pub serial: u64,
    /// The one device that may take it; empty for any of this owner's.
    pub device_id: heapless::String<NAME_BYTES_MAX>,
    /// A capacity of the plan is assumed; every output says so.
    pub provisional: bool,
}
