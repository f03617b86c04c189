//! The journal and the plan slots on a flash that loses power anywhere, holds anything, wears out.
#![allow(missing_docs, reason = "a test binary has no public interface")]

mod bench;
mod controls;
mod cuts;
mod density;
mod plans;
mod random;
mod reader;
mod recorded;
mod restart;
mod ring;
mod series;
mod speed;
