//! The journal and the plan slots on a flash that loses power anywhere, holds anything, wears out.
#![allow(missing_docs, reason = "a test binary has no public interface")]

mod anchors;
mod bench;
mod chained;
mod controls;
mod cuts;
mod density;
mod half_erased;
mod plans;
mod random;
mod reader;
mod recorded;
mod restart;
mod ring;
mod rot;
mod series;
mod side_by_side;
mod speed;
mod warm;
