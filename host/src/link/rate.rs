//! Choosing how long frames are, by the losses seen.
//!
//! With a loss rate q per byte on the line a frame of n payload bytes and the overhead o gets
//! through with probability exp(-q (n + o)), so that of the line's rate n / (n + o) times that is
//! payload. The choice is the whole number of units for which this is largest.

use strake_core::wire::{FRAME_UNITS_MAX, UNIT_BYTES};

/// Bytes of a bulk frame that are not payload: kind, ticket, unit, length, check, stuffing, zero.
const OVERHEAD_BYTES: f64 = 12.0;
/// Bytes over which what was seen is forgotten.
const MEMORY_BYTES: f64 = 65_536.0;

/// Frames lost and bytes sent, the older the less.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct FrameSize {
    lost: f64,
    bytes: f64,
}

impl FrameSize {
    /// Frames of `units` each, some of which were lost.
    pub(super) fn record(&mut self, units: u32, arrived: u32, lost: u32) {
        let frames = f64::from(arrived + lost);
        let bytes = frames * (f64::from(units) * f64::from(UNIT_BYTES) + OVERHEAD_BYTES);
        let keep = (-bytes / MEMORY_BYTES).exp();
        self.lost = self.lost * keep + f64::from(lost);
        self.bytes = self.bytes * keep + bytes;
    }

    /// Units for the next frames, 1 to [`FRAME_UNITS_MAX`].
    pub(super) fn units(&self) -> u8 {
        let per_byte = if self.bytes > 0.0 { self.lost / self.bytes } else { 0.0 };
        let worth = |units: u8| {
            let payload = f64::from(units) * f64::from(UNIT_BYTES);
            let length = payload + OVERHEAD_BYTES;
            payload / length * (-per_byte * length).exp()
        };
        let best = (1..=FRAME_UNITS_MAX).max_by(|a, b| worth(*a).total_cmp(&worth(*b)));
        best.unwrap_or(1)
    }
}
