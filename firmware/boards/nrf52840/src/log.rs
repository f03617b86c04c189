//! The log: defmt frames through the debug probe, by memory that the probe reads (RTT).
//!
//! Without a probe the buffer fills and what is new is dropped; nothing waits for a reader.

use defmt_rtt as _;
use strake_firmware::board::Clock as _;

use crate::timer::MonotonicClock;

defmt::timestamp!("{=u64:ms}", MonotonicClock::new().now_ms());

#[expect(unsafe_code, reason = "the end of a run finds it by its name")]
mod ending {
    /// The reader finds the next frame by itself: a frame ends with a zero or with the buffer.
    #[unsafe(no_mangle)]
    extern "Rust" fn _strake_abandon_frame() {}
}
