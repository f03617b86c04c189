//! A person's press: on the button or over the link.

use super::{Device, Memory};
use crate::board::Board;
use embedded_hal::digital::InputPin;
use strake_core::journal::Entry;
use strake_core::journal::entry::Presser;

impl<B: Board> Device<B> {
    /// Looks at the button; acts on the edge, so that a taped button acknowledges once.
    pub(crate) fn press(&mut self, now_ms: u64) {
        // A button that cannot be read is not pressed.
        let down = self.button.is_low().unwrap_or(false);
        if down && !self.button_down {
            self.acknowledge_by(Presser::Button, now_ms);
            self.look_now();
        }
        self.button_down = down;
    }

    /// Acknowledges what sounds and resets latches whose condition is gone. Gives whether anything
    /// moved; when there is nothing to do, nothing is written.
    pub(super) fn acknowledge_by(&mut self, by: Presser, tick_ms: u64) -> bool {
        if !self.memory.state.awaits_press() {
            return false;
        }
        self.append(&Entry::Acknowledge { tick_ms, by });
        let Memory { state, moves, .. } = &mut *self.memory;
        moves.clear();
        state.acknowledge(tick_ms, |moved| {
            let _ = moves.push(moved);
        });
        self.append_moves(tick_ms);
        self.show();
        true
    }
}
