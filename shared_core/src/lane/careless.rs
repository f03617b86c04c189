//! Negative controls: arithmetic that reads just as well and must not pass for the core's own.
//!
//! The comparison of device and host is only worth something if it sees these. Each stands in for
//! its counterpart in a build for a board with the private feature `_careless_max` or
//! `_careless_root`; the device's application does not compile with either, and on a host they are
//! without effect.
#![expect(clippy::disallowed_methods, reason = "what is banned elsewhere is the purpose here")]
#![expect(clippy::inline_always, reason = "as their counterparts")]

/// Whether `f32::max` and `f32::min` stand in the place of the comparisons.
pub const MAX: bool = cfg!(all(feature = "_careless_max", target_os = "none"));

/// Whether micromath's approximation stands in the place of the square root.
pub const ROOT: bool = cfg!(all(feature = "_careless_root", target_os = "none"));

#[inline(always)]
pub(super) fn at_least(value: f32, floor: f32) -> f32 {
    value.max(floor)
}

#[inline(always)]
pub(super) fn at_most(value: f32, ceiling: f32) -> f32 {
    value.min(ceiling)
}

#[inline(always)]
pub(super) fn root(value: f32) -> f32 {
    micromath::F32Ext::sqrt(value)
}
