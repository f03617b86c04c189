//! Is a journal what it claims to be? Everything is checked that needs no judgement of loads.
//!
//! - **Place**: a part of the file that cannot be read. It is damage.
//! - **Contradiction**: two readable statements of the file that cannot both be true, such as a
//!   plan and its fingerprint. No damage makes one; the device or a hand did.
//! - **Stretch**: what lies between two entry numbers that are stated, in sector headers and in the
//!   head. From the numbers at its ends follows how many entries its damaged places took along.
//!
//! **Complete** means that the file holds everything that the device held when it was collected, as
//! stored there. A place that is damaged on the device itself (a write torn by a loss of power,
//! worn flash) is counted apart: no collection can mend it.
//!
//! What the numbers cannot tell: how much a place took along that was damaged before the device
//! started again in the same sector. The device counts on from what it can read, as it must after a
//! torn write. That such a block was whole once, what was written behind it shows.

mod contradiction;
mod damage;
mod document;
mod ledger;
mod machines;
mod report;
pub mod text;
mod torn;
mod walk;

pub use contradiction::Contradiction;
pub use damage::{Damage, Missing, Place, What};
pub use document::Document;
pub(crate) use ledger::Ledger;
pub use report::Report;
pub(crate) use torn::of_block;
pub use walk::verify;
pub(crate) use walk::{misplaced, stated_as_lost};
