//! Frames: building one, opening one, and finding them in a stream of bytes.

use super::cobs;
use super::field::Writer;
use crate::cursor::split_last;
use crate::journal::check::CRC32;

/// The check of a frame, over kind and body.
const CHECK_BYTES: usize = 4;

/// An opened frame whose check is right.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Frame<'a> {
    /// Number of the kind; may be one this version does not know.
    pub kind: u8,
    /// The body's bytes, not yet decoded.
    pub body: &'a [u8],
}

/// Why bytes between two zeros are no frame.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FrameError {
    /// The stuffing is broken, or there is not even a kind and a check.
    Framing,
    /// The check does not agree.
    Check,
    /// More bytes than any frame has.
    TooLong,
}

/// Builds a frame in `out`: `write` puts the body. Returns its length with the closing zero, or
/// `None` when `out` is too short. `out` is working space too: a few bytes more than the frame.
// One function for every message, or each has its own copy.
#[inline(never)]
pub fn build(kind: u8, out: &mut [u8], write: &mut dyn FnMut(&mut Writer<'_>)) -> Option<usize> {
    let start = cobs::overhead(out.len());
    let mut writer = Writer::new(out.get_mut(start..)?);
    writer.raw(&[kind]);
    write(&mut writer);
    let check = CRC32.checksum(writer.written()?);
    writer.raw(&check.to_le_bytes());
    let length = writer.written()?.len();
    let encoded = cobs::encode_in_place(out, start, length)?;
    *out.get_mut(encoded)? = 0;
    Some(encoded + 1)
}

/// Opens the bytes of a frame, without the closing zero, in place.
///
/// # Errors
/// [`FrameError`] when they are none.
pub fn open(bytes: &mut [u8]) -> Result<Frame<'_>, FrameError> {
    let length = cobs::decode_in_place(bytes).ok_or(FrameError::Framing)?;
    let raw = bytes.get(..length).ok_or(FrameError::Framing)?;
    let (checked, check) = split_last::<CHECK_BYTES>(raw).ok_or(FrameError::Framing)?;
    let (&kind, body) = checked.split_first().ok_or(FrameError::Framing)?;
    if CRC32.checksum(checked) != u32::from_le_bytes(*check) {
        return Err(FrameError::Check);
    }
    Ok(Frame { kind, body })
}

/// Finds frames in a stream. After garbage the next zero is a fresh start.
#[derive(Debug)]
pub struct Receiver<const N: usize> {
    buffer: [u8; N],
    length: usize,
    too_long: bool,
    /// Bytes of kind and body of the frame that ended last, until the next byte comes.
    opened: usize,
}

impl<const N: usize> Receiver<N> {
    /// An empty receiver for frames of at most `N` encoded bytes, the closing zero not counted.
    #[must_use]
    pub const fn new() -> Self {
        Self { buffer: [0; N], length: 0, too_long: false, opened: 0 }
    }

    /// Takes one byte; a frame or its error when the byte ended one. Zeros in a row are silence.
    pub fn accept(&mut self, byte: u8) -> Option<Result<Frame<'_>, FrameError>> {
        self.opened = 0;
        if byte != 0 {
            match self.buffer.get_mut(self.length) {
                Some(slot) => {
                    *slot = byte;
                    self.length += 1;
                }
                None => self.too_long = true,
            }
            return None;
        }
        let length = core::mem::take(&mut self.length);
        if core::mem::take(&mut self.too_long) {
            return Some(Err(FrameError::TooLong));
        }
        if length == 0 {
            return None;
        }
        let opened = open(self.buffer.get_mut(..length)?);
        if let Ok(frame) = &opened {
            self.opened = 1 + frame.body.len();
        }
        Some(opened)
    }

    /// The frame that the last byte ended, once more.
    #[must_use]
    pub fn last(&self) -> Option<Frame<'_>> {
        let (&kind, body) = self.buffer.get(..self.opened)?.split_first()?;
        Some(Frame { kind, body })
    }

    /// Forgets what has come of an unfinished frame.
    pub fn clear(&mut self) {
        self.length = 0;
        self.too_long = false;
        self.opened = 0;
    }
}

impl<const N: usize> Default for Receiver<N> {
    fn default() -> Self {
        Self::new()
    }
}
