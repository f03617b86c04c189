//! Blocks: entries under one check, and the walk over a page's blocks.
//!
//! | bytes | field | content |
//! | --- | --- | --- |
//! | 1 | length | of the whole block in words; 0xFF erased, 0x00 void; at most 254 |
//! | 1 | form and count | form in the upper 3 bits, count less one in the lower 5 |
//! | .. | payload | as the form says |
//! | .. | pad | 0xFF up to a word |
//! | 4 | check | CRC-32 of sequence, offset and the bytes before; **written last: the commit** |
//!
//! | form | payload |
//! | --- | --- |
//! | 0 | `count` samples in codec 0: read, no longer written; see [`samples`](super::samples) |
//! | 1 | `count` samples in codec 1, likewise |
//! | 2 | `count` events, see [`events`] |
//! | 3 | part `count` less one of the checkpoint, see [`checkpoint`] |
//!
//! No writer makes a void; it reads as damage.
//!
//! Example, a checkpoint of the five bytes "abcde" at offset 104 of sector 7, words of four:
//! `04 60 05 00 61 62 63 64 65 FF FF FF 86 42 B6 62`.

use super::bytes::Sink;
use super::check::{CARELESS, block_check};
use super::entry::{Entry, Sample};
use super::samples::Chain;
use super::{PAGE_BYTES, checkpoint, events, is_blank};
use crate::cursor::{fill, split_last};

/// Most entries in one block.
pub const ENTRIES_MAX: usize = 32;
/// Bytes before the payload.
const HEAD_BYTES: usize = 2;
/// Bytes of the check, the last of a block.
pub const CHECK_BYTES: usize = 4;

/// The bytes that the flash programs at once.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum Word {
    /// Single bytes.
    One,
    /// Groups of four, aligned.
    Four,
}

impl Word {
    /// The word of this many bytes; `None` when the format has no such word.
    #[must_use]
    pub const fn of_bytes(bytes: usize) -> Option<Self> {
        match bytes {
            1 => Some(Self::One),
            4 => Some(Self::Four),
            _ => None,
        }
    }

    /// Bytes of the word.
    #[must_use]
    pub const fn bytes(self) -> usize {
        match self {
            Self::One => 1,
            Self::Four => 4,
        }
    }

    /// Longest block, bytes. 0xFF words would read as erased.
    const fn block_max(self) -> usize {
        match self {
            Self::One => 254,
            Self::Four => PAGE_BYTES,
        }
    }
}

/// What a block holds, and in which codec.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Samples in codec 0.
    Samples,
    /// Samples in codec 1.
    Packed,
    /// Events.
    Events,
    /// A part of the checkpoint.
    State,
    /// A form that this version does not know.
    Unknown(u8),
}

impl Form {
    const fn number(self) -> u8 {
        match self {
            Self::Samples => 0,
            Self::Packed => 1,
            Self::Events => 2,
            Self::State => 3,
            Self::Unknown(number) => number & 7,
        }
    }

    const fn from_number(number: u8) -> Self {
        match number & 7 {
            0 => Self::Samples,
            1 => Self::Packed,
            2 => Self::Events,
            3 => Self::State,
            other => Self::Unknown(other),
        }
    }
}

/// Where a block shall stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Place {
    /// Sequence number of the sector.
    pub sequence: u32,
    /// Offset in the sector, a multiple of the word.
    pub offset: u16,
    /// Word of the flash.
    pub word: Word,
}

impl Place {
    /// Bytes that a payload may have here, up to the end of the page.
    fn room(self) -> usize {
        let to_page_end = PAGE_BYTES - usize::from(self.offset) % PAGE_BYTES;
        let block =
            if to_page_end < self.word.block_max() { to_page_end } else { self.word.block_max() };
        block.saturating_sub(HEAD_BYTES + CHECK_BYTES)
    }
}

/// A finished block: the first `len` bytes of the caller's buffer. All but the last
/// [`CHECK_BYTES`] are to be programmed first, those last.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Encoded {
    /// Bytes of the whole block, a multiple of the word.
    pub len: usize,
    /// Entries in it, or bytes of state for a part of the checkpoint.
    pub taken: usize,
}

/// As many of `samples` as fit, at most [`ENTRIES_MAX`], as one block in codec 1; `chain` steps
/// over those taken. Before the first block of samples in a page it must be the default, or its
/// page [turned](Chain::turn_page). `None` when not even one fits.
pub fn encode_samples(
    place: Place,
    samples: &[Sample],
    chain: &mut Chain,
    out: &mut [u8; PAGE_BYTES],
) -> Option<Encoded> {
    let payload = out.get_mut(HEAD_BYTES..HEAD_BYTES + place.room())?;
    let (len, taken) = chain.write(samples.get(..ENTRIES_MAX).unwrap_or(samples), payload)?;
    Some(Encoded { len: seal(place, Form::Packed, taken, len, out)?, taken })
}

/// As many of `entries` as fit, at most [`ENTRIES_MAX`], as one block of events. Samples have no
/// place among them. `None` when not even one fits.
pub fn encode_events<'a>(
    place: Place,
    entries: impl IntoIterator<Item = &'a Entry>,
    out: &mut [u8; PAGE_BYTES],
) -> Option<Encoded> {
    let no_samples = entries.into_iter().filter(|entry| !matches!(entry, Entry::Sample(_)));
    encode_entries(place, Form::Events, no_samples, out, events::write)
}

/// Part `part` (from 0) of the checkpoint: as many bytes as fit of `rest`, which is what the parts
/// before left of `total` bytes. `None` when nothing fits, or for a part or total out of range.
pub fn encode_state(
    place: Place,
    part: u8,
    total: u16,
    rest: &[u8],
    out: &mut [u8; PAGE_BYTES],
) -> Option<Encoded> {
    let payload = out.get_mut(HEAD_BYTES..HEAD_BYTES + place.room())?;
    let (len, taken) = checkpoint::write_part(part, total, rest, payload)?;
    let count = usize::from(part).checked_add(1)?;
    Some(Encoded { len: seal(place, Form::State, count, len, out)?, taken })
}

fn encode_entries<'a, T: 'a>(
    place: Place,
    form: Form,
    entries: impl IntoIterator<Item = &'a T>,
    out: &mut [u8; PAGE_BYTES],
    mut write: impl FnMut(&T, &mut Sink<'_>),
) -> Option<Encoded> {
    let payload = out.get_mut(HEAD_BYTES..HEAD_BYTES + place.room())?;
    let mut sink = Sink::new(payload);
    let (mut len, mut taken) = (0, 0);
    for entry in entries.into_iter().take(ENTRIES_MAX) {
        write(entry, &mut sink);
        let Some(reached) = sink.finished() else { break };
        (len, taken) = (reached, taken + 1);
    }
    Some(Encoded { len: seal(place, form, taken, len, out)?, taken })
}

/// Pads and closes the block whose payload stands in `out`; gives its length.
fn seal(
    place: Place,
    form: Form,
    count: usize,
    payload_len: usize,
    out: &mut [u8; PAGE_BYTES],
) -> Option<usize> {
    let filled = HEAD_BYTES + payload_len;
    let body = filled.next_multiple_of(place.word.bytes());
    let len = body + CHECK_BYTES;
    let words = u8::try_from(len / place.word.bytes()).ok()?;
    let below_count = u8::try_from(count.checked_sub(1)?).ok().filter(|&below| below < 32)?;
    out.get_mut(filled..body)?.fill(0xFF);
    *out.first_chunk_mut()? = [words, form.number() << 5 | below_count];
    let check = block_check(place.sequence, place.offset, out.get(..body)?);
    fill(out.get_mut(body..len)?, &check.to_le_bytes());
    Some(len)
}

/// A block whose check is right.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Block<'a> {
    /// Offset in the sector.
    pub offset: u16,
    /// What it holds.
    pub form: Form,
    /// Entries in it, 1 to 32; for a part of the checkpoint its number plus one.
    pub count: u8,
    /// Payload, with the padding behind it.
    pub payload: &'a [u8],
}

/// Something stands at this offset of the sector that is no block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Torn {
    /// Offset in the sector.
    pub offset: u16,
}

/// Walks over the blocks of one page; ends at the first blank or unreadable place.
#[derive(Clone, Debug)]
pub struct Blocks<'a> {
    page: &'a [u8],
    at: usize,
    place: Place,
}

impl<'a> Blocks<'a> {
    /// The blocks in `page`, of which the first `skip` bytes hold something else (the header).
    /// `place.offset` is that of the page. A page that is cut short reads as blank behind the cut.
    #[must_use]
    pub const fn new(page: &'a [u8], skip: usize, place: Place) -> Self {
        Self { page, at: skip, place }
    }

    fn block(&self, rest: &'a [u8], offset: u16) -> Option<(usize, Block<'a>)> {
        let (&words, _) = rest.split_first()?;
        let len = usize::from(words) * self.place.word.bytes();
        let (body, check) = split_last::<CHECK_BYTES>(rest.get(..len)?)?;
        let ([_, form_count], payload) = body.split_first_chunk::<HEAD_BYTES>()?;
        let check = u32::from_le_bytes(*check);
        let whole = CARELESS || check == block_check(self.place.sequence, offset, body);
        whole.then_some((
            len,
            Block {
                offset,
                form: Form::from_number(form_count >> 5),
                count: (form_count & 0x1F) + 1,
                payload,
            },
        ))
    }
}

impl<'a> Iterator for Blocks<'a> {
    type Item = Result<Block<'a>, Torn>;

    fn next(&mut self) -> Option<Self::Item> {
        let rest = self.page.get(self.at..)?;
        if is_blank(rest) {
            self.at = self.page.len();
            return None;
        }
        // Below 256, so it fits.
        let offset = self.place.offset.wrapping_add(u16::try_from(self.at).ok()?);
        if let Some((len, block)) = self.block(rest, offset) {
            self.at += len;
            Some(Ok(block))
        } else {
            self.at = self.page.len();
            Some(Err(Torn { offset }))
        }
    }
}
