//! Loading a plan and reading plans back.

use super::Text;
use super::field::{fields, message};
use serde::{Deserialize, Serialize};

/// A plan of this length is about to come. An unfinished one before it is dropped.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanBegin {
    /// Bytes of the plan.
    pub length: u32,
    /// UTC seconds at which it was sealed.
    pub serial: u64,
    /// Fingerprint of its bytes.
    pub fingerprint: u64,
    /// The device it is sealed for; empty: any.
    pub device_id: Text,
}
message!(PlanBegin, PlanBegin { length, serial, fingerprint, device_id });

/// Bytes of the plan, in order. Those that came already are answered and not stored again.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanChunk<'a> {
    /// Place of the first byte in the plan.
    pub offset: u32,
    /// At most [`super::PLAN_CHUNK_BYTES`] bytes.
    pub bytes: &'a [u8],
}
message!(PlanChunk, PlanChunk<'a> { offset, bytes });

/// Check the whole plan and put it into force. Asked again after success it is answered again.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanCommit {
    /// Fingerprint of its bytes.
    pub fingerprint: u64,
}
message!(PlanCommit, PlanCommit { fingerprint });

/// The step of loading a plan is done.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanReply {
    /// Fingerprint of the plan being loaded.
    pub fingerprint: u64,
    /// Bytes of it that the device holds.
    pub received: u32,
    /// It is in force.
    pub in_force: bool,
}
message!(PlanReply, PlanReply { fingerprint, received, in_force });

/// Asks for [`PlanList`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanListRequest {}
message!(PlanListRequest, PlanListRequest {});

/// A plan the device keeps.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanEntry {
    /// UTC seconds at which it was sealed.
    pub serial: u64,
    /// Fingerprint of its bytes.
    pub fingerprint: u64,
    /// Its bytes; zero in an unused place.
    pub length: u32,
}
fields!(PlanEntry { serial, fingerprint, length });

/// The plans the device keeps, the one in force first.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanList {
    /// Unused places have length zero.
    pub plans: [PlanEntry; 4],
}
message!(PlanList, PlanList { plans });

/// Asks for bytes of a stored plan.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanRead {
    /// Which plan.
    pub fingerprint: u64,
    /// Place of the first byte.
    pub offset: u32,
    /// Most bytes to send; the device sends at most [`super::PLAN_DATA_BYTES`].
    pub length: u16,
}
message!(PlanRead, PlanRead { fingerprint, offset, length });

/// Bytes of a stored plan; none at its end.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct PlanData<'a> {
    /// Which plan.
    pub fingerprint: u64,
    /// Place of the first byte.
    pub offset: u32,
    /// The bytes.
    pub bytes: &'a [u8],
}
message!(PlanData, PlanData<'a> { fingerprint, offset, bytes });
