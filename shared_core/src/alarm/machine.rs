//! One alarm machine: condition, delays, latch, acknowledgement.
//!
//! Transitions are those of the ISA-18.2 / IEC 62682 alarm state diagram; delays as in its clause on
//! on-delay, off-delay and deadband. A delay counts from the first sample at which the condition
//! holds; transitions happen at samples (or at a person's press) only.

use super::AlarmState;
use crate::journal::entry::TransitionCause;

/// What a machine needs to know of its settings.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Settings {
    /// The condition must stand this long, ms.
    pub on_delay_ms: u32,
    /// The condition must be gone this long, ms.
    pub off_delay_ms: u32,
    /// Stays until it is reset.
    pub latch: bool,
    /// An acknowledged condition sounds again after this, ms.
    pub sounds_again_after_ms: u32,
}

/// What a sample says of the condition.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Condition {
    /// At or beyond the threshold.
    Stands,
    /// Inside the deadband: neither.
    Between,
    /// Clear of threshold and deadband.
    Gone,
}

impl Condition {
    /// Judges a utilisation: stands at or above `threshold`, gone below `threshold - deadband`. What
    /// is not a number stands.
    #[must_use]
    pub fn of(utilisation: f32, threshold: f32, deadband: f32) -> Self {
        if utilisation < threshold - deadband {
            Self::Gone
        } else if utilisation < threshold {
            Self::Between
        } else {
            Self::Stands
        }
    }
}

/// A move of a machine.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Move {
    /// State before.
    pub from: AlarmState,
    /// State after.
    pub to: AlarmState,
    /// What moved it.
    pub cause: TransitionCause,
}

/// State of one machine. Ticks are the low 32 bits; every delay is below 2^31 ms.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Machine {
    /// Where it stands.
    pub state: AlarmState,
    /// A delay runs since `since_ms`.
    pub pending: bool,
    /// Start of the pending delay.
    pub since_ms: u32,
    /// When the state was entered.
    pub entered_ms: u32,
}

impl Machine {
    /// Whether there is nothing to remember.
    #[must_use]
    pub fn is_normal(&self) -> bool {
        self.state == AlarmState::Normal && !self.pending
    }

    /// Whether the condition counts as standing (raised and not yet returned).
    #[must_use]
    pub const fn is_active(&self) -> bool {
        matches!(self.state, AlarmState::Unacknowledged | AlarmState::Acknowledged)
    }

    /// Applies a sample.
    pub fn sample(
        &mut self,
        settings: &Settings,
        condition: Condition,
        tick_ms: u64,
    ) -> Option<Move> {
        let tick = low_bits(tick_ms);
        match (self.is_active(), condition) {
            (false, Condition::Stands) => {
                if !self.waited(settings.on_delay_ms, tick) {
                    return None;
                }
                Some(self.go(AlarmState::Unacknowledged, TransitionCause::Raised, tick))
            }
            (true, Condition::Gone) => {
                if !self.waited(settings.off_delay_ms, tick) {
                    return self.sound_again(settings, tick);
                }
                let acknowledged = self.state == AlarmState::Acknowledged;
                let to = match (settings.latch, acknowledged) {
                    (true, true) => AlarmState::LatchedAcknowledged,
                    (true, false) => AlarmState::LatchedUnacknowledged,
                    (false, true) => AlarmState::Normal,
                    (false, false) => AlarmState::ReturnedUnacknowledged,
                };
                Some(self.go(to, TransitionCause::Returned, tick))
            }
            (true, _) => {
                self.stop_waiting();
                self.sound_again(settings, tick)
            }
            (false, _) => {
                self.stop_waiting();
                None
            }
        }
    }

    /// Applies a person's press: acknowledges what is unacknowledged; resets a latch whose condition
    /// is gone.
    pub fn acknowledge(&mut self, tick_ms: u64) -> Option<Move> {
        let tick = low_bits(tick_ms);
        let (to, cause) = match self.state {
            AlarmState::Unacknowledged => (AlarmState::Acknowledged, TransitionCause::Acknowledged),
            AlarmState::ReturnedUnacknowledged => {
                (AlarmState::Normal, TransitionCause::Acknowledged)
            }
            AlarmState::LatchedUnacknowledged => {
                (AlarmState::LatchedAcknowledged, TransitionCause::Acknowledged)
            }
            AlarmState::LatchedAcknowledged => (AlarmState::Normal, TransitionCause::Reset),
            AlarmState::Normal
            | AlarmState::Acknowledged
            | AlarmState::Shelved
            | AlarmState::SuppressedByDesign
            | AlarmState::OutOfService => return None,
        };
        Some(self.go(to, cause, tick))
    }

    /// Puts the ticks of a machine on the tick of a new start. States stay; delays start anew.
    pub fn restart(&mut self) {
        self.stop_waiting();
        self.entered_ms = 0;
    }

    /// Milliseconds until a pending delay expires; `None` when none runs.
    #[must_use]
    pub fn expires_in_ms(&self, settings: &Settings, tick_ms: u64) -> Option<u32> {
        if !self.pending {
            return None;
        }
        let delay = if self.is_active() { settings.off_delay_ms } else { settings.on_delay_ms };
        Some(delay.saturating_sub(low_bits(tick_ms).wrapping_sub(self.since_ms)))
    }

    fn waited(&mut self, delay_ms: u32, tick: u32) -> bool {
        if delay_ms == 0 {
            return true;
        }
        if !self.pending {
            self.pending = true;
            self.since_ms = tick;
        }
        tick.wrapping_sub(self.since_ms) >= delay_ms
    }

    fn stop_waiting(&mut self) {
        self.pending = false;
        self.since_ms = 0;
    }

    fn sound_again(&mut self, settings: &Settings, tick: u32) -> Option<Move> {
        if self.state != AlarmState::Acknowledged
            || tick.wrapping_sub(self.entered_ms) < settings.sounds_again_after_ms
        {
            return None;
        }
        Some(self.go(AlarmState::Unacknowledged, TransitionCause::SoundsAgain, tick))
    }

    fn go(&mut self, to: AlarmState, cause: TransitionCause, tick: u32) -> Move {
        let from = self.state;
        *self = Self { state: to, pending: false, since_ms: 0, entered_ms: tick };
        Move { from, to, cause }
    }
}

/// The low 32 bits: differences of ticks wrap rightly below 2^31 ms.
#[expect(clippy::cast_possible_truncation, reason = "the low bits are wanted")]
const fn low_bits(tick_ms: u64) -> u32 {
    tick_ms as u32
}
