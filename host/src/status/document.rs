//! The document `strake.status/1`. Its keys are a promise to scripts; quantities are SI, the unit
//! stands in the key.

use super::EnergyRow;
use crate::assess::Opening;
use crate::plan_file::PlanFile;
use serde::Serialize;
use strake_core::wire::{Identity, Status};

/// The whole document.
#[derive(Clone, Debug, Serialize)]
pub struct Document {
    /// `strake.status/1`.
    pub schema: &'static str,
    /// Where the device was asked.
    pub port: String,
    /// Who it is.
    pub device: DeviceRow,
    /// Its plan; null without one, or when it cannot be read.
    pub plan: Option<PlanRow>,
    /// Why there is a plan that cannot be read; else null.
    pub plan_unreadable: Option<String>,
    /// Of the device, never of the tank: `healthy`, `act_now` or `cannot_see`.
    pub health: &'static str,
    /// A load's bound is at or above its alarm threshold, or such an alarm stands: exit status 1.
    pub above_alarm: bool,
    /// Alarms that are not normal, the most pressing first.
    pub alarms: Vec<AlarmRow>,
    /// Fault causes that are not normal or have occurred since the start, standing ones first.
    pub faults: Vec<FaultRow>,
    /// What is known of the level.
    pub level: LevelRow,
    /// How fast the tank fills; null when the plan has no volume curve.
    pub filling: Option<FillingRow>,
    /// The parts, the worst first; none before the first sample.
    pub parts: Vec<PartRow>,
    /// Supply; null when the board cannot tell.
    pub battery_v: Option<f64>,
    /// How long the cell lasts; null unless a tank file was given.
    pub energy: Option<EnergyRow>,
    /// The device's clock.
    pub clock: ClockRow,
    /// The journal.
    pub journal: JournalRow,
    /// What has passed over the link since the start, counted by the device.
    pub link: LinkRow,
    /// What the reader must know beside the numbers.
    pub cautions: Vec<String>,
}

/// Who the device is.
#[derive(Clone, Debug, Serialize)]
pub struct DeviceRow {
    /// Its own name.
    pub id: String,
    /// Version of its firmware.
    pub firmware: String,
    /// Version of the link's language.
    pub protocol: u16,
    /// Version of its journal.
    pub journal_format: u8,
    /// Version of the plans it takes.
    pub plan_format: u8,
    /// Number of this start.
    pub boot: u16,
    /// Since this start.
    pub running_s: f64,
}

impl DeviceRow {
    /// Of an identity.
    #[must_use]
    pub fn of(identity: &Identity) -> Self {
        Self {
            id: identity.device_id.as_str().to_owned(),
            firmware: identity.firmware.as_str().to_owned(),
            protocol: identity.protocol,
            journal_format: identity.journal_format,
            plan_format: identity.plan_format,
            boot: identity.boot,
            running_s: seconds(identity.tick_ms),
        }
    }
}

/// The plan in force.
#[derive(Clone, Debug, Serialize)]
pub struct PlanRow {
    /// The tank's name.
    pub tank: String,
    /// Fingerprint of its bytes, hexadecimal.
    pub fingerprint: String,
    /// UTC seconds at sealing.
    pub serial: u64,
    /// Whether a key has signed it.
    pub signed: bool,
    /// Parts.
    pub parts: usize,
    /// Utilisation of a bound at or above which a part warns.
    pub warn_utilisation: f32,
    /// Utilisation of an outward bound at or above which it alarms.
    pub alarm_utilisation: f32,
    /// The same of an inward bound; null where nothing is judged inward.
    pub inward_utilisation: Option<f32>,
}

impl PlanRow {
    /// Of a plan.
    #[must_use]
    pub fn of(plan: &PlanFile) -> Self {
        Self {
            tank: plan.tank_name.clone(),
            fingerprint: format!("{:016x}", plan.fingerprint),
            serial: plan.header.serial,
            signed: false,
            parts: plan.plan.parts.len(),
            warn_utilisation: plan.plan.alarm.warn.utilisation,
            alarm_utilisation: plan.plan.alarm.alarm.utilisation,
            inward_utilisation: plan.plan.alarm.inward.map(|inward| inward.utilisation),
        }
    }
}

/// An alarm of a part.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AlarmRow {
    /// The part.
    pub part: String,
    /// `warn`, `alarm` or `inward`.
    pub threshold: &'static str,
    /// State of the alarm (ISA-18.2), in lower case with underscores.
    pub state: &'static str,
    #[serde(skip)]
    pub(super) urgency: u8,
}

/// A fault cause.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct FaultRow {
    /// What is wrong.
    pub cause: String,
    /// State of its alarm.
    pub state: &'static str,
    /// Occurrences since the start; stays at 65535.
    pub count: u16,
    #[serde(skip)]
    pub(super) urgency: u8,
}

/// What is known of the level.
#[derive(Clone, Debug, Serialize)]
pub struct LevelRow {
    /// `not_yet_read`, `valid`, `held`, `projected` or `failed`.
    pub reading: &'static str,
    /// Above the datum; null unless valid, held or projected. So are the bounds.
    pub estimate_m: Option<f32>,
    /// Lower bound.
    pub low_m: Option<f32>,
    /// Upper bound.
    pub high_m: Option<f32>,
}

/// How fast the tank fills.
#[derive(Clone, Debug, Serialize)]
pub struct FillingRow {
    /// `not_known`, `not_filling` or `filling`.
    pub state: &'static str,
    /// Until the first part reaches its capacity, at the upper end of the inflow; null unless
    /// filling.
    pub time_to_limit_s: Option<f32>,
    /// Upper end of the inflow; null unless filling.
    pub inflow_m3_s: Option<f32>,
    /// The site needs this long to act; null where the plan cannot be read.
    pub response_time_s: Option<f64>,
}

/// A part.
#[derive(Clone, Debug, Serialize)]
pub struct PartRow {
    /// Its name; its number where the plan cannot be read.
    pub name: String,
    /// Of the estimate, outward.
    pub utilisation: f32,
    /// Of the outward bound.
    pub utilisation_bound: f32,
    /// Of the inward bound; null where no inward capacity is stated: not judged.
    pub utilisation_inward: Option<f32>,
    /// At or above its alarm threshold, outward or inward.
    pub above_alarm: bool,
    /// Whether the opening under a cover must stay shut; of a hatch.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub opening: Option<Opening>,
    /// Estimates of its loads by their names in `strake.assess/1`.
    pub loads: LoadsRow,
    /// Their outward bounds.
    pub loads_outward_bound: LoadsRow,
    #[serde(skip)]
    pub(super) share_of_threshold: f32,
}

/// Loads of a part; only what it has appears.
#[derive(Clone, Debug, Serialize)]
pub struct LoadsRow {
    /// Largest pressure.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pressure_pa: Option<f32>,
    /// Hoop tension of a course at its design point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hoop_tension_n_m: Option<f32>,
    /// Force on a plane part.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_n: Option<f32>,
    /// Largest share of a bolt, or force on a pin or hinge line.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub bolt_n: Option<f32>,
    /// Moment about the hinge or pivot.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub moment_n_m: Option<f32>,
    /// Force on a curved part along angle 0.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_x_n: Option<f32>,
    /// Force on a curved part upwards.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub force_z_n: Option<f32>,
}

/// The device's clock.
#[derive(Clone, Debug, Serialize)]
pub struct ClockRow {
    /// UTC seconds; null while it is not set.
    pub utc_s: Option<u64>,
    /// Ahead of this computer's clock, s; null while it is not set.
    pub ahead_s: Option<i64>,
}

impl ClockRow {
    /// Of a status that came at `utc_s`.
    #[must_use]
    pub fn of(status: &Status, utc_s: u64) -> Self {
        let set = status.clock_set.then_some(status.utc_s);
        let ahead = |device_s: u64| {
            let ahead = i128::from(device_s) - i128::from(utc_s);
            i64::try_from(ahead).unwrap_or(i64::MAX)
        };
        Self { utc_s: set, ahead_s: set.map(ahead) }
    }
}

/// The journal.
#[derive(Clone, Debug, Serialize)]
pub struct JournalRow {
    /// Sequence of the oldest sector; null without any.
    pub oldest_sector: Option<u32>,
    /// Sequence of the newest; null without any.
    pub newest_sector: Option<u32>,
    /// Bytes in use.
    pub bytes: u64,
    /// Bytes of the ring.
    pub capacity_bytes: u64,
    /// Samples since the start.
    pub samples: u32,
}

/// What has passed over the link.
#[derive(Clone, Debug, Serialize)]
pub struct LinkRow {
    /// Bytes received by the device.
    pub bytes_in: u32,
    /// Bytes sent by it.
    pub bytes_out: u32,
    /// Damaged frames received by it.
    pub bad_frames: u32,
}

#[expect(clippy::cast_precision_loss, reason = "a device does not run for 2^53 ms")]
pub(super) fn seconds(tick_ms: u64) -> f64 {
    tick_ms as f64 / 1000.0
}
