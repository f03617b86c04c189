//! From the tank file to the compiled plan.
//!
//! Every derived number is worked out in f64 and rounded once to the f32 that device, replay and
//! desk share. Heights of lowest points are rounded first: the core's shapes take them as exact.
//! What the plan cannot hold comes back as a finding with its place in the file, never as a guess.

mod bending;
mod contents;
mod cover;
mod cover_rule;
pub mod curved;
mod device;
mod faults;
mod filling;
mod level;
mod liquid;
mod number;
mod part;
mod shape;
mod site;

pub(crate) use bending::{Bending, Bent, Inward, Judged, Plates, judged};
pub use contents::Contents;
pub(crate) use cover::{about_centroid, latch_per_moment};
pub(crate) use cover_rule::pressure_pa as cover_pressure_pa;
pub use part::table;
pub(crate) use part::without_plates;
pub use shape::{Numbers, plane_shape};

pub(crate) use filling::each_liquid;
pub use filling::{Curve, curve};
pub(crate) use liquid::table_error;
pub(crate) use site::{HEIGHT_MAX_M, floor_m};
pub use strake_core::plan_slot::fingerprint;

use crate::tank::{Findings, TankFile};
use faults::Faults;
use strake_core::plan::codec::{self, Name, PLAN_BYTES_MAX};
use strake_core::plan::{Plan, PlanError, PlanHeader};

/// A plan and the names that travel with it.
#[derive(Clone, Debug)]
pub struct Compiled {
    /// The plan; it passes [`Plan::check`].
    pub plan: Plan,
    /// Name of the tank.
    pub tank_name: String,
    /// Names of the parts, in the plan's order, which is that of the file.
    pub part_names: Vec<String>,
    /// The one device it is for; empty for any.
    pub device_id: String,
    /// A capacity is assumed.
    pub provisional: bool,
}

impl Compiled {
    /// The plan's bytes as the device takes them; `serial` is in UTC seconds.
    ///
    /// # Errors
    /// [`PlanError`] when the plan does not fit its bytes.
    pub fn encode(&self, serial: u64) -> Result<Vec<u8>, PlanError> {
        let device_id = Name::try_from(self.device_id.as_str()).map_err(|_| PlanError::Names)?;
        let header = PlanHeader { serial, device_id, provisional: self.provisional };
        let names: Vec<&str> = self.part_names.iter().map(String::as_str).collect();
        let mut bytes = vec![0; PLAN_BYTES_MAX];
        let used = codec::encode(&header, &self.plan, &self.tank_name, &names, &mut bytes)?;
        bytes.truncate(used);
        Ok(bytes)
    }

    /// The same, with the reason why a margin that is short was accepted.
    ///
    /// # Errors
    /// [`PlanError`] when the plan does not fit its bytes with it.
    pub fn encode_with_reason(&self, serial: u64, reason: &str) -> Result<Vec<u8>, PlanError> {
        let mut bytes = self.encode(serial)?;
        let used = bytes.len();
        bytes.resize(PLAN_BYTES_MAX, 0);
        let used = codec::append_accepted_margin(&mut bytes, used, reason)?;
        bytes.truncate(used);
        Ok(bytes)
    }
}

/// A plan for a calculation at the desk: what only the device needs may be missing from the file
/// and is filled with values that touch no load at a stated level.
///
/// # Errors
/// [`Findings`] with everything in the file that the plan cannot hold.
pub fn for_desk(file: &TankFile, contents: &Contents) -> Result<Compiled, Findings> {
    let mut faults = Faults::default();
    let plan = build(file, contents, &mut faults);
    finish(file, plan, faults)
}

/// The plan that the device loads, over all products of the file.
///
/// # Errors
/// [`Findings`] with everything that the device needs and the file lacks, and everything that the
/// plan cannot hold.
pub fn for_device(file: &TankFile) -> Result<Compiled, Findings> {
    let mut faults = Faults::default();
    for finding in file.missing_for_seal() {
        faults.push(finding);
    }
    let mut plan = build(file, &Contents::of(file), &mut faults);
    device::complete(file, &mut plan, &mut faults);
    let mut compiled = finish(file, plan, faults)?;
    let mut faults = Faults::default();
    filling::state(file, &mut compiled.plan, &mut faults);
    if faults.is_empty() { Ok(compiled) } else { Err(file.findings(faults.into_list())) }
}

fn build(file: &TankFile, contents: &Contents, faults: &mut Faults) -> Plan {
    let mut plan = Plan::empty();
    site::site(file, contents, &mut plan, faults);
    liquid::liquid(file, contents, &mut plan);
    level::level(file, &mut plan, faults);
    device::alarm(file, &mut plan);
    device::logging(file, &mut plan);
    for (stated, plates) in file.parts.iter().zip(judged(file)) {
        if let Some(part) = part::part(file, stated, &plates, &mut plan.numbers, faults)
            && plan.parts.push(part).is_err()
        {
            faults.too_many(file.name.span, "parts", crate::tank::MAX_PARTS);
        }
    }
    plan
}

fn finish(file: &TankFile, plan: Plan, mut faults: Faults) -> Result<Compiled, Findings> {
    if faults.is_empty()
        && let Err(error) = plan.check()
    {
        faults.not_in_plan(file.name.span, error);
    }
    if !faults.is_empty() {
        return Err(file.findings(faults.into_list()));
    }
    Ok(Compiled {
        plan,
        tank_name: file.name.value.clone(),
        part_names: file.parts.iter().map(|part| part.name().to_owned()).collect(),
        device_id: file.device_id.as_ref().map_or_else(String::new, |id| id.value.clone()),
        provisional: file.is_provisional(),
    })
}

#[cfg(test)]
mod tests;
