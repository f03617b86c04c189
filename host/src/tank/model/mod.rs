//! The tank file as values: plain structures, SI units, heights resolved.
//!
//! Heights are above the tank datum, the inside bottom at the shell. Pressures are gauge.

mod capacity;
mod liquid;
mod outline;
mod part;
mod petroleum;
mod plate;
mod secured;
mod service;
mod signal;
mod vessel;

pub use capacity::{Basis, BasisKind, Capacity, CoverPlate, Rating};
pub use liquid::{Layer, Liquid, Thermal};
pub use outline::{CORNERS_MAX, Corners, Disc, Pieces, Shape, Strip};
pub(in crate::tank) use part::sine;
pub use part::{
    Course, Curved, DesignPoint, Hatch, Heights, Hole, Opens, Panel, Part, PartKind, Plane,
    Profile, Surface,
};
pub use petroleum::Petroleum;
pub use plate::{Elastic, PanelPlate, outline};
pub use secured::{Axis, BoltLine, Bolts, CoverMass, FirstBolt, Hinged, Latch, Secured};
pub use service::{Alarms, Cell, Logging, Power, SensorSupply, Threshold};
pub use signal::{
    Count, LevelSensor, Modbus, PressureReference, Sensing, Signal, TemperatureSignal,
    TemperatureSource,
};

pub use vessel::{Strapping, Vessel};

use super::finding::{Finding, Findings, Located};

/// A whole tank file that was found free of contradictions.
#[derive(Clone, Debug)]
pub struct TankFile {
    pub(super) path: String,
    pub(super) text: String,
    /// Name of the tank, 24 bytes at most.
    pub name: Located<String>,
    /// What holds the liquid.
    pub vessel: Vessel,
    /// A measured table of volumes; it goes before the volume of the vessel's shape.
    pub strapping: Option<Strapping>,
    /// Conditions to print on every sheet and report.
    pub conditions: Vec<Located<String>>,
    /// Levels and rates of service.
    pub fill: Fill,
    /// The liquid, or the top layer of it.
    pub liquid: Liquid,
    /// Heavier layers below it, from the top down; three at most.
    pub below: Vec<Layer>,
    /// The sensor of the liquid's temperature.
    pub temperature_signal: Option<TemperatureSignal>,
    /// Other liquids the tank may hold; eight at most.
    pub products: Vec<Liquid>,
    /// Gas above the liquid.
    pub gas: Gas,
    /// Liquid against the outside.
    pub outside: Vec<Outside>,
    /// Gravity at the site.
    pub gravity: Gravity,
    /// The level sensor.
    pub level: Option<LevelSensor>,
    /// The parts in the order of the file; 1 to 32, names all different.
    pub parts: Vec<Part>,
    /// Thresholds and times of the alarm.
    pub alarm: Option<Alarms>,
    /// Times of the log.
    pub logging: Option<Logging>,
    /// The one device that the sealed plan is for; 24 bytes at most.
    pub device_id: Option<Located<String>>,
    /// Inputs of the battery model.
    pub power: Option<Power>,
}

impl TankFile {
    /// The name of the file, as given to [`super::parse`].
    #[must_use]
    pub fn path(&self) -> &str {
        &self.path
    }

    /// The text of the file.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// Findings about this file, ready to be shown.
    #[must_use]
    pub fn findings(&self, list: Vec<Finding>) -> Findings {
        Findings::new(&self.path, &self.text, list)
    }

    /// What the device needs and the file does not say; empty when the plan can be sealed.
    #[must_use]
    pub fn missing_for_seal(&self) -> Vec<Finding> {
        super::check::seal::missing(self)
    }

    /// Volume below a level, m³: of the strapping table, else of the vessel's shape; `None` for
    /// loose parts.
    #[must_use]
    pub fn volume_m3(&self, level_m: f64) -> Option<f64> {
        match &self.strapping {
            Some(strapping) => Some(strapping.volume_m3(level_m)),
            None => self.vessel.volume_m3(level_m),
        }
    }

    /// Time over which the inflow is taken, s: as stated, else a third of the response time, but at
    /// least three intervals at rest and at most four hours. `None` without `[alarm]` and
    /// `[logging]`.
    #[must_use]
    pub fn inflow_window_s(&self) -> Option<f64> {
        let (alarm, logging) = (self.alarm.as_ref()?, self.logging.as_ref()?);
        let least_s = Logging::INTERVALS_IN_WINDOW * logging.idle_interval_s.value;
        let third_s = alarm.response_time_s.value / 3.0;
        let unstated_s = third_s.max(least_s).max(1.0);
        Some(alarm.inflow_window_s.map_or(unstated_s, |window| window.value).min(4.0 * 3600.0))
    }

    /// The part of that name.
    #[must_use]
    pub fn part(&self, name: &str) -> Option<&Part> {
        self.parts.iter().find(|part| part.name() == name)
    }

    /// Whether a capacity is assumed, which makes every output provisional.
    #[must_use]
    pub fn is_provisional(&self) -> bool {
        let mut ratings =
            self.parts.iter().flat_map(|part| part.capacity().iter().chain(part.capacity_inward()));
        ratings.any(Rating::is_assumed)
    }

    /// Stretches of a cylindrical shell that no course covers, from the bottom up, in m. They are
    /// not judged.
    #[must_use]
    pub fn uncovered_shell(&self) -> Vec<(f64, f64)> {
        super::check::courses::uncovered(self)
    }
}

/// Levels and rates of service. What is absent was not stated.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Fill {
    /// Level at which liquid runs over.
    pub overflow_m: Option<Located<f64>>,
    /// Highest level of normal service.
    pub maximum_m: Option<Located<f64>>,
    /// Lowest level of normal service.
    pub lowest_m: Option<Located<f64>>,
    /// Highest speed at which the level rises.
    pub highest_rise_m_s: Option<Located<f64>>,
    /// Highest speed at which the level falls, a positive number.
    pub highest_fall_m_s: Option<Located<f64>>,
    /// Whether the tank is closed, so that its pressure may exceed that of a full tank.
    pub closed: Option<Located<bool>>,
}

/// Gas above the liquid, gauge pressure.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Gas {
    /// Open to the atmosphere.
    Vented,
    /// Held between the settings of the vacuum and the relief valve.
    Held {
        /// Setting of the vacuum valve.
        lowest_pa: Located<f64>,
        /// Pressure in normal service.
        pressure_pa: Located<f64>,
        /// Setting of the relief valve.
        highest_pa: Located<f64>,
    },
}

impl Gas {
    /// Lowest, normal and highest gauge pressure, Pa; all zero when vented.
    #[must_use]
    pub fn range_pa(&self) -> [f64; 3] {
        match self {
            Self::Vented => [0.0; 3],
            Self::Held { lowest_pa, pressure_pa, highest_pa } => {
                [lowest_pa.value, pressure_pa.value, highest_pa.value]
            }
        }
    }
}

/// Liquid against the outside of the tank.
#[derive(Clone, Debug, PartialEq)]
pub struct Outside {
    /// Highest level it may reach; counts fully inwards.
    pub highest_m: Located<f64>,
    /// Level that is proven to stand always; none when nothing is proven, then nothing relieves
    /// the outward load.
    pub lowest_m: Option<Located<f64>>,
    /// Its density.
    pub density_kg_m3: Located<f64>,
    /// Names of the parts it touches; empty for all parts.
    pub parts: Vec<Located<String>>,
}

impl Outside {
    /// Whether this liquid touches the part of that name.
    #[must_use]
    pub fn touches(&self, part: &str) -> bool {
        self.parts.is_empty() || self.parts.iter().any(|name| name.value == part)
    }
}

/// Gravity at the site, and where the number comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Gravity {
    /// Nothing stated: standard gravity, 9.80665 m/s².
    Standard,
    /// Stated in the file.
    Stated {
        /// Acceleration of free fall.
        gravity_m_s2: Located<f64>,
    },
    /// Computed from the place.
    Computed {
        /// Latitude, north positive, degrees.
        latitude_deg: Located<f64>,
        /// Height above the ellipsoid; the height above sea level serves.
        elevation_m: Located<f64>,
    },
}

impl Gravity {
    /// Acceleration of free fall, m/s².
    #[must_use]
    pub fn m_s2(&self) -> f64 {
        match self {
            Self::Standard => 9.806_65,
            Self::Stated { gravity_m_s2 } => gravity_m_s2.value,
            Self::Computed { latitude_deg, elevation_m } => {
                normal_gravity_m_s2(latitude_deg.value, elevation_m.value)
            }
        }
    }
}

/// Normal gravity of the ellipsoid GRS80 by the closed formula of Somigliana, lessened with height
/// by the free-air gradient of 3.086e-6 /s².
///
/// Source: H. Moritz, Geodetic Reference System 1980, Bulletin Géodésique 54 (1980). The true
/// value differs by local anomalies of up to about 0.003 m/s².
///
/// Valid for latitudes from -90 to 90 degrees and heights of some kilometres.
#[must_use]
pub fn normal_gravity_m_s2(latitude_deg: f64, elevation_m: f64) -> f64 {
    const EQUATOR: f64 = 9.780_326_771_5;
    const K: f64 = 0.001_931_851_353;
    const E2: f64 = 0.006_694_380_022_90;
    const FREE_AIR: f64 = 3.086e-6;
    let sine = latitude_deg.to_radians().sin();
    let s2 = sine * sine;
    EQUATOR * (1.0 + K * s2) / (1.0 - E2 * s2).sqrt() - FREE_AIR * elevation_m
}
