//! What a device says of itself, its parts and its sight, as a document and as text.
//!
//! **Health** is the device's, never the tank's: it is healthy, or says that somebody must act now,
//! or that it cannot see. Names come from the plan that is read back from the device.

mod build;
mod document;
mod energy;
mod text;
mod words;

pub use document::{
    AlarmRow, ClockRow, DeviceRow, Document, FaultRow, JournalRow, LevelRow, LinkRow, LoadsRow,
    PartRow, PlanRow,
};
pub use energy::EnergyRow;
pub(crate) use text::ahead_words;
pub use text::render;
pub use words::{cause_words, state_words};

use crate::link::{Client, LinkError, Port};
use crate::plan_file::PlanFile;
use strake_core::wire::{ErrorCode, FaultStatus, FillingStatus, Identity, PartStatus, Status};

/// The plan by which a device works.
#[derive(Debug)]
pub enum InForce {
    /// It has none.
    Nothing,
    /// This one.
    Plan(Box<PlanFile>),
    /// One that cannot be read back or understood here, and why.
    Unreadable(String),
}

impl InForce {
    /// The plan, where it could be read.
    #[must_use]
    pub fn plan(&self) -> Option<&PlanFile> {
        match self {
            Self::Plan(plan) => Some(plan),
            Self::Nothing | Self::Unreadable(_) => None,
        }
    }
}

/// Reads the plan in force back from the device.
///
/// # Errors
/// [`LinkError`]. A plan that makes no sense here is no error.
pub fn in_force<P: Port>(client: &mut Client<P>) -> Result<InForce, LinkError> {
    let fingerprint = client.identity().plan_fingerprint;
    if fingerprint == 0 {
        return Ok(InForce::Nothing);
    }
    match client.read_plan(fingerprint) {
        Ok(bytes) => Ok(match PlanFile::of_plan(&bytes) {
            Ok(plan) if plan.fingerprint == fingerprint => InForce::Plan(Box::new(plan)),
            Ok(_) => InForce::Unreadable("its bytes do not have its fingerprint".to_owned()),
            Err(error) => InForce::Unreadable(error.to_string()),
        }),
        Err(LinkError::Refused { code: ErrorCode::PlanUnknown, .. }) => {
            Ok(InForce::Unreadable("the device does not keep it".to_owned()))
        }
        Err(error) => Err(error),
    }
}

/// Everything that a device says at one visit.
#[derive(Debug)]
pub struct Seen {
    /// Where it was asked.
    pub port: String,
    /// Who it is.
    pub identity: Identity,
    /// The device at one glance.
    pub status: Status,
    /// Its parts, in the plan's order; none before the first sample.
    pub parts: Vec<PartStatus>,
    /// Its fault causes.
    pub faults: FaultStatus,
    /// How fast the tank fills; none from a device too old to say.
    pub filling: Option<FillingStatus>,
    /// Its plan.
    pub in_force: InForce,
    /// This computer's time when the status came, UTC seconds.
    pub utc_s: u64,
}

/// Asks for everything. `now_s` is this computer's clock.
///
/// # Errors
/// [`LinkError`].
pub fn look<P: Port, E: From<LinkError>>(
    client: &mut Client<P>,
    now_s: impl Fn() -> Result<u64, E>,
) -> Result<Seen, E> {
    let identity = *client.hello()?;
    let in_force = in_force(client)?;
    let status = client.status()?;
    let utc_s = now_s()?;
    let parts = (0..status.parts).map(|part| client.part_status(part));
    let parts = parts.collect::<Result<_, _>>()?;
    let faults = client.fault_status()?;
    let filling = client.filling()?;
    let port = client.port_name().to_owned();
    Ok(Seen { port, identity, status, parts, faults, filling, in_force, utc_s })
}
