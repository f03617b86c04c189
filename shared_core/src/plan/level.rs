//! The level sensor: what it measures, how its counts scale, and how well it is known.

/// What a head sensor's pressure refers to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Reference {
    /// Gauge or absolute: the reading is the pressure at the diaphragm plus an offset, Pa
    /// (`[nominal, lowest, highest]`: zero for a gauge transmitter, the air pressure for an
    /// absolute one).
    Atmosphere {
        /// Offset of the reading over gauge pressure, Pa.
        offset_pa: [f32; 3],
    },
    /// Differential: the gas pressure is already taken off.
    GasSpace,
}

/// What the level sensor measures.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum LevelSensor {
    /// Pressure at a height.
    Head {
        /// Height of the diaphragm above the datum, m; may be negative.
        at_m: f32,
        /// What the pressure refers to.
        reference: Reference,
    },
    /// The height of the surface (innage, or ullage turned into a height by the scale).
    Surface,
}

/// How raw counts arrive.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum SignalKind {
    /// A 4-20 mA loop; a raw count is one microampere, judged by NAMUR NE 43.
    CurrentLoop,
    /// A bus register; a raw count is the register's value.
    Register {
        /// Bus address of the sensor.
        unit: u8,
        /// Modbus function, 3 or 4.
        function: u8,
        /// Register number on the wire.
        register: u16,
        /// Width and coding of the count (see the sensor driver).
        coding: u8,
    },
}

/// The level sensor of a plan.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LevelPlan {
    /// What it measures.
    pub sensor: LevelSensor,
    /// How counts arrive.
    pub signal: SignalKind,
    /// Count (in sixteenths) that stands for `value_at_zero`.
    pub zero_count_16: i32,
    /// Value at that count: Pa for a head sensor, m above the datum for a surface sensor.
    pub value_at_zero: f32,
    /// Value per sixteenth of a count; negative for ullage.
    pub value_per_count_16: f32,
    /// Half-width that the engineer holds never to be exceeded, Pa or m.
    pub uncertainty: f32,
    /// Further half-width per metre of distance below `reference_m` (ullage only).
    pub uncertainty_per_distance: f32,
    /// Height from which an ullage sensor looks down, m above the datum.
    pub reference_m: f32,
    /// Without a valid reading for this long the device cannot see, ms.
    pub failed_after_ms: u32,
}

/// The temperature sensor of a plan.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TemperaturePlan {
    /// Degrees Celsius at count zero.
    pub celsius_at_zero: f32,
    /// Degrees per sixteenth of a count.
    pub celsius_per_count_16: f32,
    /// Half-width never exceeded, K.
    pub uncertainty_k: f32,
}
