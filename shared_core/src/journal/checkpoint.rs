//! The checkpoint: the caller's state, opaque here, in as many blocks as it needs.
//!
//! Part 0: total length of the state (u16), then its first bytes. Every later part: the bytes that
//! follow. A part ends where its block ends or the state does; only the last one is padded.

use super::STATE_BYTES_MAX;
use crate::cursor::fill;

/// Most parts: the first in the 144 bytes behind the header, the others in a page each.
pub const PARTS_MAX: u8 = 8;

/// Writes a part into `payload`; gives (bytes of payload, bytes of state in it).
pub(super) fn write_part(
    part: u8,
    total: u16,
    rest: &[u8],
    payload: &mut [u8],
) -> Option<(usize, usize)> {
    if part >= PARTS_MAX || usize::from(total) > STATE_BYTES_MAX {
        return None;
    }
    let head = if part == 0 {
        *payload.first_chunk_mut()? = total.to_le_bytes();
        2
    } else {
        0
    };
    let room = payload.get_mut(head..)?;
    let taken = if rest.len() < room.len() { rest.len() } else { room.len() };
    if taken == 0 && !rest.is_empty() {
        return None;
    }
    fill(room.get_mut(..taken)?, rest.get(..taken)?);
    Some((head + taken, taken))
}

/// Puts the parts of one sector together in the caller's buffer.
#[derive(Debug)]
pub struct Collector<'a> {
    state: &'a mut [u8],
    total: usize,
    len: usize,
    next_part: u8,
}

impl<'a> Collector<'a> {
    /// Collects into `state`; a checkpoint that is longer stays incomplete.
    #[must_use]
    pub fn new(state: &'a mut [u8]) -> Self {
        Self { state, total: 0, len: 0, next_part: 0 }
    }

    /// Takes the part with this number. One that does not follow the one before is passed over, so
    /// the checkpoint stays incomplete.
    pub fn take(&mut self, part: u8, payload: &[u8]) {
        if self.take_in_order(part, payload).is_some() {
            self.next_part = self.next_part.saturating_add(1);
        }
    }

    fn take_in_order(&mut self, part: u8, payload: &[u8]) -> Option<()> {
        if part != self.next_part {
            return None;
        }
        let (total, bytes) = if part == 0 {
            let (total, bytes) = payload.split_first_chunk::<2>()?;
            (usize::from(u16::from_le_bytes(*total)), bytes)
        } else {
            (self.total, payload)
        };
        let missing = total.checked_sub(self.len)?;
        let taken = bytes.get(..missing).unwrap_or(bytes);
        fill(self.state.get_mut(self.len..self.len.checked_add(taken.len())?)?, taken);
        self.total = total;
        self.len += taken.len();
        Some(())
    }

    /// The whole state, once every part came.
    #[must_use]
    pub fn finished(&self) -> Option<&[u8]> {
        if self.is_finished() { self.state.get(..self.len) } else { None }
    }

    /// As [`finished`](Self::finished), giving the buffer back.
    #[must_use]
    pub fn into_finished(self) -> Option<&'a [u8]> {
        if self.is_finished() { self.state.get(..self.len) } else { None }
    }

    const fn is_finished(&self) -> bool {
        self.next_part > 0 && self.len == self.total
    }
}
