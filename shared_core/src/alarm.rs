//! Alarm machines with the states and transitions of ISA-18.2 / IEC 62682.
//!
//! One machine per part and threshold (warn, alarm, inward) and one per fault cause. Conditions are
//! judged at samples only; the machines know ticks, never a clock.

mod ids;
mod machine;
mod state;

pub use ids::{FAULT_CAUSES, FaultCause, MACHINES, MachineId, PARTS_MAX, Threshold};
pub use machine::{Condition, Machine, Move, Settings};
pub use state::{AlarmEvent, AlarmState};
