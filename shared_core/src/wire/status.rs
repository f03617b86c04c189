//! How the device, its parts and its sight are.

use super::JournalBounds;
use super::field::{fields, message};
use crate::alarm::FAULT_CAUSES;
use serde::{Deserialize, Serialize};

/// Asks for [`Status`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct StatusRequest {}
message!(StatusRequest, StatusRequest {});

/// What has passed over the link since the start, counted by the device.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct LinkCounters {
    /// Bytes received; wraps.
    pub bytes_in: u32,
    /// Bytes sent; wraps.
    pub bytes_out: u32,
    /// Received frames that were thrown away; wraps.
    pub bad_frames: u32,
}
fields!(LinkCounters { bytes_in, bytes_out, bad_frames });

/// The device at one glance.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Status {
    /// What the output says: 0 healthy, 1 cannot see, 2 act now.
    pub output: u8,
    /// What is known of the level: 0 not yet read, 1 valid, 2 held, 3 projected, 4 failed.
    pub level_reading: u8,
    /// Surface above the datum, m; meaningless unless valid, held or projected.
    pub level_m: f32,
    /// Lower bound of it, m.
    pub level_low_m: f32,
    /// Upper bound of it, m.
    pub level_high_m: f32,
    /// Index of the part with the highest utilisation bound; 255 without one.
    pub governing_part: u8,
    /// That bound, dimensionless.
    pub utilisation_bound: f32,
    /// Parts of the plan; zero without a plan.
    pub parts: u8,
    /// Machines of parts that are not normal.
    pub alarms: u8,
    /// Machines of fault causes that are not normal.
    pub faults: u8,
    /// Supply voltage, mV; zero when the board cannot tell.
    pub battery_mv: u16,
    /// The clock has been set since this start.
    pub clock_set: bool,
    /// UTC seconds; zero while the clock is not set.
    pub utc_s: u64,
    /// Number of this start.
    pub boot: u16,
    /// Milliseconds since this start.
    pub tick_ms: u64,
    /// Samples taken since this start.
    pub samples: u32,
    /// The journal's bounds.
    pub journal: JournalBounds,
    /// Filled by the link itself.
    pub link: LinkCounters,
}
message!(
    Status,
    Status {
        output,
        level_reading,
        level_m,
        level_low_m,
        level_high_m,
        governing_part,
        utilisation_bound,
        parts,
        alarms,
        faults,
        battery_mv,
        clock_set,
        utc_s,
        boot,
        tick_ms,
        samples,
        journal,
        link,
    }
);

/// Asks for [`PartStatus`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PartStatusRequest {
    /// Index of the part in the plan, from zero.
    pub part: u8,
}
message!(PartStatusRequest, PartStatusRequest { part });

/// One load of a part, in the load's own unit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct LoadValue {
    /// Number of the load kind in the plan format, plus one; zero in an unused place.
    pub load: u8,
    /// Estimate.
    pub estimate: f32,
    /// Outward bound.
    pub bound: f32,
}
fields!(LoadValue { load, estimate, bound });

/// One part of the plan.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct PartStatus {
    /// Index of the part in the plan.
    pub part: u8,
    /// Utilisation of the estimate, outward.
    pub utilisation: f32,
    /// Utilisation of the outward bound.
    pub utilisation_bound: f32,
    /// Utilisation of the inward bound; meaningless unless judged.
    pub utilisation_inward: f32,
    /// The part has an inward capacity, so that the inward bound is judged.
    pub inward_judged: bool,
    /// States of its machines (warn, alarm, inward), by journal number.
    pub alarms: [u8; 3],
    /// Its first loads.
    pub loads: [LoadValue; 4],
    /// Zero of what is no opening; else [`PartStatus::OPENING`] and the reasons to keep it shut.
    pub opening: u8,
}

impl PartStatus {
    /// The part is an opening with a cover.
    pub const OPENING: u8 = 0x80;
}

message!(
    PartStatus,
    PartStatus {
        part,
        utilisation,
        utilisation_bound,
        utilisation_inward,
        inward_judged,
        alarms,
        loads,
        opening,
    }
);

/// Asks for [`FillingStatus`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct FillingRequest {}
message!(FillingRequest, FillingRequest {});

/// How fast the tank fills, and how long until the first part reaches its capacity.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct FillingStatus {
    /// 0 the plan has no volume curve, 1 not known, 2 not filling, 3 filling.
    pub state: u8,
    /// State of the machine of the time to limit, by journal number.
    pub alarm: u8,
    /// Time to limit at the upper end of the inflow, s; only while filling.
    pub time_s: f32,
    /// Upper end of the inflow, m³/s; only while filling.
    pub inflow_m3_s: f32,
}
message!(FillingStatus, FillingStatus { state, alarm, time_s, inflow_m3_s });

/// Asks for [`FaultStatus`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct FaultStatusRequest {}
message!(FaultStatusRequest, FaultStatusRequest {});

/// Every fault cause, by its journal number.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct FaultStatus {
    /// State of the cause's machine, by journal number.
    pub states: [u8; FAULT_CAUSES],
    /// Occurrences since this start; stays at its highest value.
    pub counts: [u16; FAULT_CAUSES],
}
message!(FaultStatus, FaultStatus { states, counts });
