//! Finding records in a stream of bytes of any content, with bounded memory.

use super::record::{CHECK, RECORD_CHECK_BYTES, RECORD_HEAD_BYTES, plausible};
use std::fmt;
use std::io::{self, Read};

/// Bytes taken from the source at once.
const CHUNK_BYTES: usize = 64 * 1024;

/// Why a place of the file was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DamageKind {
    /// No record with a right check begins here.
    NoRecord,
    /// The file ends inside a record.
    Truncated,
    /// The check is right, but the content is none this version knows.
    Unknown {
        /// The record's tag.
        tag: u8,
    },
}

/// A place of the file that was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Damage {
    /// Where it begins, bytes from the start of the file.
    pub offset: u64,
    /// How long it is, bytes.
    pub length: u64,
    /// What is wrong.
    pub kind: DamageKind,
}

impl fmt::Display for Damage {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { offset, length, kind } = self;
        match kind {
            DamageKind::NoRecord => {
                write!(f, "at byte {offset}: {length} bytes are damaged and passed over")
            }
            DamageKind::Truncated => {
                write!(f, "at byte {offset}: the file ends inside a record, {length} bytes unused")
            }
            DamageKind::Unknown { tag } => write!(
                f,
                "at byte {offset}: a record of {length} bytes with tag {tag} that this version \
                 does not know"
            ),
        }
    }
}

/// What stands at a place of the file.
#[derive(Debug)]
pub(super) enum Found<'a> {
    /// A record with a right check.
    Record { offset: u64, tag: u8, payload: &'a [u8] },
    /// Something else.
    Damage(Damage),
}

/// Walks through the records of a source that stands behind the magic.
#[derive(Debug)]
pub(super) struct Scanner<R> {
    source: R,
    buffer: Vec<u8>,
    /// Place of `buffer[at]` in the file is `offset`.
    at: usize,
    offset: u64,
    ended: bool,
}

impl<R: Read> Scanner<R> {
    /// A scanner whose source stands at `offset` of the file.
    pub(super) fn new(source: R, offset: u64) -> Self {
        Self { source, buffer: Vec::new(), at: 0, offset, ended: false }
    }

    /// The next record or damaged stretch; `None` at the end.
    pub(super) fn next(&mut self) -> io::Result<Option<Found<'_>>> {
        let start = self.offset;
        let mut cut_short = false;
        while self.have(1)? {
            match self.record_here()? {
                Here::Record(_) if self.offset > start => {
                    return Ok(Some(damage(start, self.offset, DamageKind::NoRecord)));
                }
                Here::Record(length) => return Ok(Some(self.take(length))),
                // Only a beginning at the first place tells of a cut; behind it, bytes are guesses.
                Here::CutShort => cut_short |= self.offset == start,
                Here::Nothing => {}
            }
            self.advance(1);
        }
        let kind = if cut_short { DamageKind::Truncated } else { DamageKind::NoRecord };
        Ok((self.offset > start).then(|| damage(start, self.offset, kind)))
    }

    /// Whether a record begins here, and the length of its payload.
    fn record_here(&mut self) -> io::Result<Here> {
        if !self.have(RECORD_HEAD_BYTES)? {
            return Ok(Here::CutShort);
        }
        let head = &self.buffer[self.at..];
        let (tag, length) = (head[0], [head[1], head[2], head[3], head[4]]);
        let length = usize::try_from(u32::from_le_bytes(length)).unwrap_or(usize::MAX);
        if !plausible(tag, length) {
            return Ok(Here::Nothing);
        }
        let checked = RECORD_HEAD_BYTES + length;
        if !self.have(checked + RECORD_CHECK_BYTES)? {
            return Ok(Here::CutShort);
        }
        let bytes = &self.buffer[self.at..][..checked + RECORD_CHECK_BYTES];
        let (bytes, check) = bytes.split_at(checked);
        let sound = CHECK.checksum(bytes).to_le_bytes() == *check;
        Ok(if sound { Here::Record(length) } else { Here::Nothing })
    }

    fn take(&mut self, length: usize) -> Found<'_> {
        let (start, offset) = (self.at, self.offset);
        self.advance(RECORD_HEAD_BYTES + length + RECORD_CHECK_BYTES);
        let payload = &self.buffer[start + RECORD_HEAD_BYTES..][..length];
        Found::Record { offset, tag: self.buffer[start], payload }
    }

    fn advance(&mut self, bytes: usize) {
        self.at += bytes;
        self.offset += bytes as u64;
    }

    /// Makes `count` bytes available; false when the source ends before.
    fn have(&mut self, count: usize) -> io::Result<bool> {
        while self.buffer.len() - self.at < count && !self.ended {
            if self.at >= CHUNK_BYTES {
                self.buffer.drain(..self.at);
                self.at = 0;
            }
            let more = self.source.by_ref().take(CHUNK_BYTES as u64);
            self.ended = { more }.read_to_end(&mut self.buffer)? == 0;
        }
        Ok(self.buffer.len() - self.at >= count)
    }
}

enum Here {
    Record(usize),
    CutShort,
    Nothing,
}

fn damage<'a>(start: u64, end: u64, kind: DamageKind) -> Found<'a> {
    Found::Damage(Damage { offset: start, length: end - start, kind })
}
