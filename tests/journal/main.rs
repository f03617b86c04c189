//! The journal on a flash that loses power anywhere, holds anything, and wears out.
#![allow(missing_docs, reason = "a test binary has no public interface")]

mod bench;
mod controls;
mod cuts;
mod random;
mod restart;
mod ring;
