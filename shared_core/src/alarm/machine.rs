//! One alarm machine: condition, delays, latch, acknowledgement.
//!
//! Transitions are those of the ISA-18.2 / IEC 62682 alarm state diagram; delays as in its clause
//! on on-delay, off-delay and deadband. A delay counts from the first sample at which the condition
//! holds; transitions happen at samples (or at a person's press) only.

use super::{AlarmEvent, AlarmState};
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
    /// Judges a utilisation: stands at or above `threshold`, gone below `threshold - deadband`.
    /// What is not a number stands.
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
    /// Nothing to remember.
    pub const NORMAL: Self =
        Self { state: AlarmState::Normal, pending: false, since_ms: 0, entered_ms: 0 };

    /// Whether there is nothing to remember.
    #[must_use]
    pub fn is_normal(&self) -> bool {
        self.state == AlarmState::Normal && !self.pending
    }

    /// Whether the condition counts as standing (raised and not yet returned).
    #[must_use]
    pub const fn is_active(&self) -> bool {
        self.state.is_active()
    }

    /// Applies a sample. Hidden alarms do not move.
    pub fn sample(
        &mut self,
        settings: &Settings,
        condition: Condition,
        tick_ms: u64,
    ) -> Option<Move> {
        let tick = low_bits(tick_ms);
        match (self.is_active(), condition) {
            _ if self.state.is_hidden() => None,
            (false, Condition::Stands) => {
                if !self.waited(settings.on_delay_ms, tick) {
                    return None;
                }
                self.go(AlarmEvent::Raise, TransitionCause::Raised, settings.latch, tick)
            }
            (true, Condition::Gone) => {
                if self.waited(settings.off_delay_ms, tick) {
                    self.go(AlarmEvent::Return, TransitionCause::Returned, settings.latch, tick)
                } else {
                    self.sound_again(settings, tick)
                }
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

    /// Applies a person's press: acknowledges what is unacknowledged; resets a latch whose
    /// condition is gone.
    pub fn acknowledge(&mut self, tick_ms: u64) -> Option<Move> {
        let (event, cause) = if self.state == AlarmState::LatchedAcknowledged {
            (AlarmEvent::Reset, TransitionCause::Reset)
        } else {
            (AlarmEvent::Acknowledge, TransitionCause::Acknowledged)
        };
        self.go(event, cause, false, low_bits(tick_ms))
    }

    /// Puts a machine on the tick of a new start. The state stays; delays start anew.
    pub fn restart(&mut self, tick_ms: u64) {
        self.stop_waiting();
        if self.state != AlarmState::Normal {
            self.entered_ms = low_bits(tick_ms);
        }
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
        self.go(AlarmEvent::SoundAgain, TransitionCause::SoundsAgain, settings.latch, tick)
    }

    /// Follows the table. A delay ends only when the condition's standing changes: a press, or
    /// sounding again, must not start it anew.
    fn go(
        &mut self,
        event: AlarmEvent,
        cause: TransitionCause,
        latch: bool,
        tick: u32,
    ) -> Option<Move> {
        let from = self.state;
        let to = from.after(event, latch)?;
        if from.is_active() != to.is_active() {
            self.stop_waiting();
        }
        self.state = to;
        // The time in "normal" decides nothing and stands in no checkpoint.
        self.entered_ms = if to == AlarmState::Normal { 0 } else { tick };
        Some(Move { from, to, cause })
    }
}

/// The low 32 bits: differences of ticks wrap rightly below 2^31 ms.
#[expect(clippy::cast_possible_truncation, reason = "the low bits are wanted")]
const fn low_bits(tick_ms: u64) -> u32 {
    tick_ms as u32
}

#[cfg(test)]
mod tests;
