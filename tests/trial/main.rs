//! The main job through the real binary: trial, replay, and what a changed bit does to them.

mod bench;
mod changed;
mod decayed;
mod measured;
mod story;
mod verified;
