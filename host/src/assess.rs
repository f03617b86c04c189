//! The load sheet's numbers: loads, capacities, utilisation and limit levels of every part.
//!
//! Loads come from the core's own functions, the ones that the device runs. This room states the
//! level and what is in the tank ([`Request`]), asks ([`Desk`]), and lays the answers out
//! ([`Document`]).

mod action;
mod bending;
mod centre;
mod curved;
mod desk;
mod document;
mod filling;
mod judged;
mod margin;
mod notes;
mod part;
mod request;
mod securing;
mod set_point;
pub mod text;

pub use action::{Action, action};
pub use bending::{BentRow, EdgeRow, PlateRow};
pub use centre::centre;
pub use desk::Desk;
pub use document::{
    Capacity, Centre, Document, Judgement, LineOfAction, Loads, NotJudged, Opening, PartRow,
    PartTable, State,
};
pub use filling::{Filling, Way};
pub use margin::{Margin, PartMargin, Times, margin, together};
pub use notes::{FIELD_CHECK, PROVISIONAL, assumed};
pub(crate) use notes::{cautions, not_judged, plate_cautions, plates_not_judged};
pub use request::{Overrides, Request, RequestError, Source};
pub use set_point::SetPoint;

use crate::compile;
use crate::energy;
use crate::inverse;
use crate::tank::{Findings, TankFile};
use crate::units::UnitSystem;

/// What an assessment gives.
#[derive(Clone, Debug)]
pub struct Assessment {
    /// The document.
    pub document: Document,
    /// Whether a bound is at or above its alarm threshold now; without `[alarm]` the threshold is
    /// the capacity itself.
    pub above_alarm: bool,
    /// The plan that was asked.
    pub desk: Desk,
}

/// Assesses a tank in one state.
///
/// # Errors
/// [`Findings`] when the file holds what a plan cannot.
pub fn assess(file: &TankFile, request: &Request) -> Result<Assessment, Findings> {
    let desk = Desk::new(compile::for_desk(file, &request.contents)?, file);
    let parts = part::rows(file, &desk, request);
    let mut not_judged = not_judged(file, &desk, UnitSystem::Si);
    not_judged.extend(plates_not_judged(&parts));
    let above_alarm = judged::above_alarm(file, &desk, &parts);
    let said = cautions(file, request, &desk, &parts, UnitSystem::Si);
    let thresholds = file.alarm.as_ref().map(|_| &desk.plan().alarm);
    let reached =
        |threshold: Option<f32>| threshold.and_then(|at| inverse::first_reached(&desk, at));
    let (warn, alarm) = (
        reached(thresholds.map(|alarm| alarm.warn.utilisation)),
        reached(thresholds.map(|alarm| alarm.alarm.utilisation)),
    );
    let document = Document {
        schema: "strake.assess/1",
        tank: file.name.value.clone(),
        state: State {
            level_m: request.level_m,
            density_kg_m3: request.contents.density_kg_m3(),
            gas_pressure_pa: request.contents.gas_pa[1],
            temperature_c: request.contents.temperature_c,
            gravity_m_s2: file.gravity.m_s2(),
        },
        governing: judged::governing(&parts),
        not_judged,
        warn_level_m: warn,
        alarm_level_m: alarm,
        margin: margin(file, desk.plan()),
        warn_set_point: warn.and_then(|level_m| set_point::of(&desk, file, level_m)),
        alarm_set_point: alarm.and_then(|level_m| set_point::of(&desk, file, level_m)),
        filling: request.inflow_m3_s.and_then(|inflow_m3_s| {
            filling::filling(file, &desk, &parts, (request.level_m, inflow_m3_s, alarm))
        }),
        energy: energy::estimate(file),
        cautions: said,
        parts,
    };
    Ok(Assessment { document, above_alarm, desk })
}

#[cfg(test)]
mod tests;
