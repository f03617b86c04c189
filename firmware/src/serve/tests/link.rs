//! A link that holds bytes both ways.

use std::collections::VecDeque;
use std::convert::Infallible;
use strake_core::wire::{Message, Receiver, frame};

#[derive(Default)]
pub(super) struct Link {
    pub(super) incoming: VecDeque<u8>,
    pub(super) outgoing: Vec<u8>,
    /// Takes nothing.
    pub(super) full: bool,
    taken: u32,
    last_frames: u32,
}

impl Link {
    pub(super) fn push<'m>(&mut self, message: &impl Message<'m>) {
        let mut out = [0; 300];
        let length = message.encode(&mut out).unwrap();
        self.incoming.extend(&out[..length]);
    }

    pub(super) fn push_raw(&mut self, kind: u8, body: &[u8]) {
        let mut out = [0; 300];
        let length = frame::build(kind, &mut out, &mut |writer| writer.raw(body)).unwrap();
        self.incoming.extend(&out[..length]);
    }

    /// Kind and body of every frame that came out; empties the link.
    pub(super) fn frames(&mut self) -> Vec<(u8, Vec<u8>)> {
        let mut receiver = Receiver::<1100>::new();
        let mut frames = Vec::new();
        self.last_frames = u32::try_from(self.outgoing.len()).unwrap();
        for byte in std::mem::take(&mut self.outgoing) {
            if let Some(frame) = receiver.accept(byte) {
                let frame = frame.unwrap();
                frames.push((frame.kind, frame.body.to_vec()));
            }
        }
        frames
    }

    /// Bytes taken before those of the last call of [`Self::frames`].
    pub(super) fn taken_before_last(&self) -> u32 {
        self.taken - self.last_frames
    }
}

impl embedded_io::ErrorType for Link {
    type Error = Infallible;
}

impl embedded_io::Read for Link {
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Infallible> {
        let count = out.len().min(self.incoming.len());
        out.iter_mut().zip(self.incoming.drain(..count)).for_each(|(slot, byte)| *slot = byte);
        Ok(count)
    }
}

impl embedded_io::ReadReady for Link {
    fn read_ready(&mut self) -> Result<bool, Infallible> {
        Ok(!self.incoming.is_empty())
    }
}

impl embedded_io::Write for Link {
    /// Takes seven bytes at a time, so that frames go out in pieces.
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Infallible> {
        let count = bytes.len().min(7);
        self.outgoing.extend(&bytes[..count]);
        self.taken += u32::try_from(count).unwrap();
        Ok(count)
    }

    fn flush(&mut self) -> Result<(), Infallible> {
        Ok(())
    }
}

impl embedded_io::WriteReady for Link {
    fn write_ready(&mut self) -> Result<bool, Infallible> {
        Ok(!self.full)
    }
}
