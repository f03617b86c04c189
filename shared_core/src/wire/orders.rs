//! Orders: requests that change something and must be done once, however often a frame is lost.

use super::field::message;
use serde::{Deserialize, Serialize};

/// Sets the clock. Ticks and delays are never touched.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct ClockSet {
    /// The host's number of this order; the same number again is answered and not done again.
    pub token: u32,
    /// UTC, seconds since 1970-01-01.
    pub utc_s: u64,
}
message!(ClockSet, ClockSet { token, utc_s });

/// Acknowledges what sounds; resets latches whose condition has gone.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Acknowledge {
    /// The host's number of this order; the same number again is answered and not done again.
    pub token: u32,
}
message!(Acknowledge, Acknowledge { token });

/// The order with this number is done.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Done {
    /// The order's number.
    pub token: u32,
}
message!(Done, Done { token });
