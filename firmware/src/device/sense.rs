//! One burst of a channel: bounded reads, a few retries, one integer.

use crate::board::{Clock, CountSource};
use strake_core::signal::{Channel, SensorError, burst};

/// Counts of a burst.
const COUNTS: usize = burst::BURST_COUNTS_MIN;
/// Failed reads that are tried again within a cycle.
const RETRIES: u8 = 3;
/// No retry after this long, ms: the reading would not be of this cycle any more.
const RETRY_WITHIN_MS: u64 = 1000;

/// Reads a burst. The sensor is powered only while it is read.
pub(super) fn channel(source: &mut impl CountSource, clock: &impl Clock) -> Channel {
    let started_ms = clock.now_ms();
    source.wake();
    let mut counts = [0_i32; COUNTS];
    let mut taken = 0;
    let mut retries = RETRIES;
    let mut last_error = SensorError::Silent;
    while let Some(slot) = counts.get_mut(taken) {
        match source.read_count() {
            Ok(count) => {
                *slot = count;
                taken += 1;
            }
            Err(error) => {
                last_error = error;
                let late = clock.now_ms().saturating_sub(started_ms) >= RETRY_WITHIN_MS;
                if retries == 0 || late {
                    break;
                }
                retries -= 1;
            }
        }
    }
    source.rest();
    match counts.get_mut(..taken) {
        Some(counts @ [_, ..]) => burst::filter(counts),
        _ => Channel::failed(last_error),
    }
}
