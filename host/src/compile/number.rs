//! The one rounding from f64 to the plan's f32.

use crate::tank::Located;

/// The nearest f32. Source values are bounded by the tank room, so the result is finite.
#[expect(clippy::cast_possible_truncation, reason = "this is the one rounding")]
pub(super) const fn single(value: f64) -> f32 {
    value as f32
}

/// Seconds as whole milliseconds, at most [`u32::MAX`].
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the cast saturates at both ends"
)]
pub(super) fn milliseconds(seconds: f64) -> u32 {
    (seconds * 1e3).round() as u32
}

/// The nearest f32 of a value from the file.
pub(super) const fn located(value: Located<f64>) -> f32 {
    single(value.value)
}
