//! The one transmit buffer: a frame on its way out.

use embedded_io::{Write, WriteReady};
use strake_core::wire::{Message, REPLY_FRAME_BYTES, Writer, frame};

/// Holds at most one frame.
#[derive(Debug)]
pub(super) struct Outbox {
    buffer: [u8; REPLY_FRAME_BYTES],
    length: usize,
    sent: usize,
}

impl Outbox {
    pub(super) const fn new() -> Self {
        Self { buffer: [0; REPLY_FRAME_BYTES], length: 0, sent: 0 }
    }

    pub(super) fn is_empty(&self) -> bool {
        self.sent >= self.length
    }

    /// Puts a message in. A frame that does not fit is dropped; every message is shorter.
    pub(super) fn put<'m, M: Message<'m>>(&mut self, message: &M) {
        self.build(M::KIND.number(), &mut |body| message.put(body));
    }

    /// Puts a message in whose body `write` builds.
    pub(super) fn build(&mut self, kind: u8, write: &mut dyn FnMut(&mut Writer<'_>)) {
        self.length = frame::build(kind, &mut self.buffer, write).unwrap_or_default();
        self.sent = 0;
    }

    /// Drops what is in it.
    pub(super) fn clear(&mut self) {
        self.length = 0;
        self.sent = 0;
    }

    /// Hands over what the link takes without waiting; returns the number of bytes.
    pub(super) fn send<L: Write + WriteReady>(&mut self, link: &mut L) -> Result<usize, L::Error> {
        let before = self.sent;
        while !self.is_empty() && link.write_ready()? {
            let rest = self.buffer.get(self.sent..self.length).unwrap_or_default();
            match link.write(rest)? {
                0 => break,
                taken => self.sent = self.sent.saturating_add(taken),
            }
        }
        Ok(self.sent.saturating_sub(before))
    }
}
