//! The trial: the whole job on a simulated device, on the real code paths.
//!
//! A sealed plan is loaded over the link into the unchanged application on a simulated board, a
//! story or a measured series is played into its sensor, the journal is collected over the link and
//! replayed. Virtual time moves only while no byte is in flight; the same seed gives the same
//! journal, byte for byte.

mod run;
mod series;
mod story;

pub use run::{Outcome, Setup, Stage, TrialError, run};
pub use series::{Series, SeriesError};
pub use story::{Filling, Landmarks, Story};
