//! Level and temperature sensors and how their readings arrive.

use crate::tank::finding::{Located, Span};

/// The level sensor. `full` quantities are in the unit that the sensor senses: Pa for a head
/// sensor, m for the others.
#[derive(Clone, Debug, PartialEq)]
pub struct LevelSensor {
    /// What it senses and from where.
    pub sensing: Sensing,
    /// Half-width of a reading, never exceeded, in the unit sensed.
    pub uncertainty: Located<f64>,
    /// How the reading arrives.
    pub signal: Option<Located<Signal>>,
    /// Time without a valid reading after which the device says that it cannot see.
    pub failed_after_s: Option<Located<f64>>,
    /// Where the table stands.
    pub span: Span,
}

/// What a level sensor senses.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Sensing {
    /// Pressure at a height.
    Head {
        /// Height of the diaphragm; may be below the datum.
        at_m: Located<f64>,
        /// What the pressure is measured against.
        reference: Located<PressureReference>,
    },
    /// Height of the surface above a zero.
    Innage {
        /// Height of the zero.
        zero_m: Located<f64>,
    },
    /// Distance of the surface below a reference.
    Ullage {
        /// Height of the reference.
        reference_m: Located<f64>,
        /// Part of the uncertainty that grows with the distance, as a share of it.
        uncertainty_of_distance: Located<f64>,
    },
}

/// What a pressure is measured against.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PressureReference {
    /// The air outside the tank.
    Atmosphere,
    /// The gas above the liquid: its pressure is not in the reading.
    GasSpace,
    /// Vacuum: the weather is in the reading.
    Absolute {
        /// Lowest pressure of the air, absolute.
        lowest_pa: f64,
        /// Highest pressure of the air, absolute.
        highest_pa: f64,
    },
}

/// How a reading arrives.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Signal {
    /// A current loop.
    CurrentLoop {
        /// Value at 4 mA, in the unit sensed.
        at_4_ma: f64,
        /// Value at 20 mA, in the unit sensed; above the other.
        at_20_ma: f64,
    },
    /// A register on a Modbus line.
    Modbus(Modbus),
}

/// A register on a Modbus line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Modbus {
    /// Address of the unit, 1 to 247.
    pub unit: u8,
    /// Function code: 3 holding registers, 4 input registers.
    pub function: u8,
    /// Number of the first register, counted from zero.
    pub register: u16,
    /// How the count is stored.
    pub count: Count,
    /// Value of one count, in the unit sensed.
    pub scale: f64,
}

/// How a Modbus register holds its count.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Count {
    /// One register, unsigned.
    U16,
    /// One register, two's complement.
    I16,
    /// Two registers, unsigned, high word first.
    U32,
    /// Two registers, IEEE 754 single precision, high word first.
    F32,
}

/// The sensor of the liquid's temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TemperatureSignal {
    /// Where the reading comes from.
    pub source: TemperatureSource,
    /// Half-width of a reading, never exceeded.
    pub uncertainty_k: Located<f64>,
    /// Where it is written.
    pub span: Span,
}

/// Where a temperature reading comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum TemperatureSource {
    /// A register on a Modbus line; the scale is in kelvin, count zero is 0 °C.
    Modbus(Modbus),
    /// The board's own sensor; count zero is 0 °C.
    Board {
        /// Value of one count.
        scale_k: f64,
    },
}
