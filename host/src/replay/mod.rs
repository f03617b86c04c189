//! Replay: the journal's inputs through the same arithmetic, compared with what the device decided.
//!
//! *Inputs* are samples, presses, restarts, plan changes and reported faults, in the order in which
//! they stand; *results* are the moves of the alarm machines and the running hash. The replay
//! applies the inputs and compares the results. One sector is held in memory at a time.

mod batch;
mod document;
mod engine;
mod rainflow;
mod summary;
pub mod text;
mod walk;

pub use document::Document;
pub(crate) use document::utc;
pub use engine::{Difference, Engine, Verdict};
pub use rainflow::Rainflow;
pub use summary::{AlarmLine, BAND_EDGES, Band, FaultLine, Moment, PartSummary, Peak, Summary};
pub use walk::{Replay, replay};
