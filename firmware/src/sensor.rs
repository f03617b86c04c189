//! Sensors that deliver raw counts.

pub mod modbus;
