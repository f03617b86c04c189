//! What is asked for, what has come, what is missing: the bookkeeping of a bulk transfer.
//!
//! No port, no time, no file: requests out, frames in, whole sectors out.

use super::rate::FrameSize;
use std::collections::VecDeque;
use strake_core::journal::SECTOR_BYTES;
use strake_core::wire::{
    ErrorCode, SECTOR_QUEUE, SectorData, SectorEnd, SectorRequest, UNIT_BYTES, UNITS,
};

/// Bytes of a unit.
const UNIT: usize = UNIT_BYTES as usize;
/// Bytes in use in a full sector.
const SECTOR_USED_MAX: u16 = UNIT_BYTES * UNITS as u16;
/// Sectors in hand at once.
const WINDOW: usize = 8;
/// Bytes asked for and not yet come, at least: what the line carries while a request travels.
const AHEAD_BYTES: u32 = 8192;
/// Requests given up whose answers may still come.
const LATE_MAX: usize = 2 * SECTOR_QUEUE;

/// A sector that is being put together.
#[derive(Debug)]
struct Filling {
    sequence: u32,
    bytes: Box<[u8; SECTOR_BYTES]>,
    /// Bytes that came of each unit.
    come: [u8; UNITS as usize],
    /// Bytes in use, once the device has said it.
    used: Option<u16>,
    /// Number of the error code with which the device gave up on it.
    given_up: Option<u8>,
}

/// A request on its way or being served.
#[derive(Debug)]
struct Issued {
    ticket: u8,
    sequence: u32,
    /// Units that have neither come nor been passed over.
    pending: u32,
    frame_units: u8,
    /// It was given up; what comes of it all the same is welcome.
    late: bool,
}

/// A sector is through.
#[derive(Debug, PartialEq, Eq)]
pub(super) enum Finished {
    /// Its used part.
    Sector { sequence: u32, bytes: Vec<u8> },
    /// The device no longer has it, or cannot read it; what came of it without a hole.
    Lost { sequence: u32, code: u8, bytes: Vec<u8> },
}

/// A transfer of a list of sectors, finished in the order of the list.
#[derive(Debug)]
pub(super) struct Transfer {
    to_come: VecDeque<u32>,
    filling: VecDeque<Filling>,
    issued: VecDeque<Issued>,
    ticket: u8,
    size: FrameSize,
    lost_frames: u64,
}

impl Transfer {
    /// A transfer of these sectors. `begun` holds what is already there of the first of them.
    pub(super) fn new(sequences: Vec<u32>, begun: Option<&[u8]>) -> Self {
        let mut transfer = Self {
            to_come: sequences.into(),
            filling: VecDeque::new(),
            issued: VecDeque::new(),
            ticket: 0,
            size: FrameSize::default(),
            lost_frames: 0,
        };
        if let (Some(begun), Some(sequence)) = (begun, transfer.to_come.front().copied()) {
            transfer.to_come.pop_front();
            let mut first = Filling::new(sequence);
            first.put(0, begun);
            transfer.filling.push_back(first);
        }
        transfer
    }

    /// Nothing more to come.
    pub(super) fn is_done(&self) -> bool {
        self.to_come.is_empty() && self.filling.is_empty()
    }

    /// Frames that did not come, as far as the order of the others tells.
    pub(super) fn lost_frames(&self) -> u64 {
        self.lost_frames
    }

    /// The next request to send; `None` while enough is on its way.
    pub(super) fn next_request(&mut self) -> Option<SectorRequest> {
        let awaited = self.issued.iter().filter(|issued| !issued.late);
        let units: u32 = awaited.clone().map(|issued| issued.pending.count_ones()).sum();
        if awaited.count() >= SECTOR_QUEUE || units * u32::from(UNIT_BYTES) >= AHEAD_BYTES {
            return None;
        }
        let (sequence, wanted) = self.next_wanted()?;
        self.ticket = self.ticket.wrapping_add(1);
        let (ticket, frame_units) = (self.ticket, self.size.units());
        let issued = Issued { ticket, sequence, pending: wanted, frame_units, late: false };
        self.issued.push_back(issued);
        Some(SectorRequest { ticket, sequence, wanted, frame_units })
    }

    /// The oldest sector of which something is missing that nobody has been asked for.
    fn next_wanted(&mut self) -> Option<(u32, u32)> {
        for filling in self.filling.iter().filter(|filling| !filling.is_finished()) {
            let sequence = filling.sequence;
            let mut awaited = self.issued.iter().filter(|issued| !issued.late);
            if !awaited.any(|issued| issued.sequence == sequence) {
                return Some((sequence, filling.missing()));
            }
        }
        if self.filling.len() >= WINDOW {
            return None;
        }
        let next = Filling::new(self.to_come.pop_front()?);
        let wanted = (next.sequence, next.missing());
        self.filling.push_back(next);
        Some(wanted)
    }

    /// A data frame came. False when it brings nothing new.
    pub(super) fn data(&mut self, data: &SectorData<'_>) -> bool {
        let unit = u32::from(data.unit);
        let units = u32::try_from(data.bytes.len().div_ceil(UNIT)).unwrap_or(u32::MAX);
        let fits = units > 0 && unit.saturating_add(units) <= u32::from(UNITS);
        if !fits || !self.reach(data.ticket) {
            return false;
        }
        let Some(issued) = self.issued.front_mut() else { return false };
        let before = (1_u32 << unit) - 1;
        let through = u32::MAX >> (u32::from(UNITS) - unit - units);
        let lost = frames(issued.pending & before, issued.frame_units);
        issued.pending &= !through;
        self.size.record(u32::from(issued.frame_units).min(units), 1, lost);
        self.lost_frames += u64::from(lost);
        let sequence = issued.sequence;
        self.find(sequence).is_some_and(|filling| filling.put(usize::from(data.unit), data.bytes))
    }

    /// A request is through. False when that brings nothing new.
    pub(super) fn end(&mut self, end: SectorEnd) -> bool {
        if usize::from(end.used) > SECTOR_BYTES || !self.reach(end.ticket) {
            return false;
        }
        let Some(issued) = self.issued.pop_front() else { return false };
        let mut fresh = false;
        if let Some(filling) = self.find(issued.sequence) {
            if end.code == 0 {
                fresh = filling.used.is_none_or(|used| used < end.used);
                // What is in use only grows.
                filling.used = filling.used.max(Some(end.used));
            } else if end.code != ErrorCode::Busy.number() {
                fresh = true;
                filling.given_up = Some(end.code);
            }
        }
        let lost = frames(issued.pending & in_use(end.used), issued.frame_units);
        self.size.record(u32::from(issued.frame_units), 0, lost);
        self.lost_frames += u64::from(lost);
        fresh
    }

    /// Nothing comes any more: what was asked for must be asked for again.
    pub(super) fn give_up_issued(&mut self) {
        for issued in &mut self.issued {
            issued.late = true;
        }
        // A ticket is a byte: the old ones must not meet the new.
        let surplus = self.issued.len().saturating_sub(LATE_MAX);
        self.issued.drain(..surplus);
    }

    /// Sectors that are through, in the order of the list.
    pub(super) fn take_finished(&mut self) -> Option<Finished> {
        if !self.filling.front()?.is_finished() {
            return None;
        }
        let first = self.filling.pop_front()?;
        let sequence = first.sequence;
        if let Some(code) = first.given_up {
            return Some(Finished::Lost { sequence, code, bytes: first.without_hole() });
        }
        let used = usize::from(first.used.unwrap_or_default());
        Some(Finished::Sector { sequence, bytes: first.bytes[..used].to_vec() })
    }

    /// What has come without a hole of the sector that is next in the list.
    pub(super) fn begun(&self) -> Option<(u32, Vec<u8>)> {
        let first = self.filling.front()?;
        Some((first.sequence, first.without_hole())).filter(|(_, bytes)| !bytes.is_empty())
    }

    /// Drops the requests before this one: the line keeps order, so they are through.
    fn reach(&mut self, ticket: u8) -> bool {
        let Some(place) = self.issued.iter().position(|issued| issued.ticket == ticket) else {
            return false;
        };
        for issued in self.issued.drain(..place).collect::<Vec<_>>() {
            let used = self.find(issued.sequence).and_then(|filling| filling.used);
            let lost = match used {
                Some(used) => frames(issued.pending & in_use(used), issued.frame_units),
                None => 1,
            };
            self.size.record(u32::from(issued.frame_units), 0, lost);
            self.lost_frames += u64::from(lost);
        }
        true
    }

    fn find(&mut self, sequence: u32) -> Option<&mut Filling> {
        self.filling.iter_mut().find(|filling| filling.sequence == sequence)
    }
}

impl Filling {
    fn new(sequence: u32) -> Self {
        let bytes = Box::new([0xFF; SECTOR_BYTES]);
        Self { sequence, bytes, come: [0; UNITS as usize], used: None, given_up: None }
    }

    /// Stores units. False when all of it was here already.
    fn put(&mut self, unit: usize, bytes: &[u8]) -> bool {
        let mut fresh = false;
        for (place, piece) in bytes.chunks(UNIT).enumerate() {
            let unit = unit + place;
            let Some(come) = self.come.get_mut(unit) else { break };
            if piece.len() > usize::from(*come) {
                fresh = true;
                self.bytes[unit * UNIT..][..piece.len()].copy_from_slice(piece);
                *come = u8::try_from(piece.len()).unwrap_or(u8::MAX);
            }
        }
        fresh
    }

    /// The whole units from the first one on that came without a hole.
    fn without_hole(&self) -> Vec<u8> {
        let whole = self.come.iter().take_while(|come| usize::from(**come) == UNIT).count();
        self.bytes[..whole * UNIT].to_vec()
    }

    /// Units that are not here, or not as long as they are in the sector.
    fn missing(&self) -> u32 {
        let used = usize::from(self.used.unwrap_or(SECTOR_USED_MAX));
        let mut missing = 0;
        for (unit, come) in self.come.iter().enumerate() {
            let length = used.saturating_sub(unit * UNIT).min(UNIT);
            missing |= u32::from(usize::from(*come) < length) << unit;
        }
        missing
    }

    fn is_finished(&self) -> bool {
        self.given_up.is_some() || (self.used.is_some() && self.missing() == 0)
    }
}

/// Units that are at least partly in use.
fn in_use(used: u16) -> u32 {
    let units = u32::from(used).div_ceil(u32::from(UNIT_BYTES));
    u32::MAX.checked_shr(u32::from(UNITS) - units).unwrap_or_default()
}

/// Frames in which the device sends these units.
fn frames(units: u32, frame_units: u8) -> u32 {
    let (mut rest, mut frames) = (u64::from(units), 0);
    while rest != 0 {
        rest >>= rest.trailing_zeros();
        let run = rest.trailing_ones();
        frames += run.div_ceil(u32::from(frame_units.max(1)));
        rest >>= run;
    }
    frames
}
