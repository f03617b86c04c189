//! Loads against published values, own values and the oracle.

mod cases;
mod core_action;
mod core_cases;
mod core_curved;
mod core_engine;
mod core_error;
mod core_laws;
mod core_mesh;
mod core_shells;
mod covers;
mod meshes;
mod plate_cases;
mod plate_device;
mod plate_series;
mod product;
mod states;
mod traps;
