//! Finding the newest sector without reading the whole ring.
//!
//! Sequence numbers rise by one from place to place up to the newest sector, behind which stands an
//! erased place or the oldest sector. So the end is a binary search on "the sequence number here
//! goes on from that at the base". Probes read eight unchecked bytes; the result is checked, and
//! whatever does not fit leads to one pass over all headers.

use super::ring::{Peek, Ring};
use embedded_storage::nor_flash::NorFlash;
use strake_core::journal::SectorHeader;

/// Unreadable neighbours that a probe passes over before the search gives up.
const NEIGHBOURS: u32 = 8;
/// Places behind the newest sector that must not hold a later one.
const LOOK_AHEAD: u32 = 6;

/// What a probe says about where the newest sector stands.
enum Probe {
    /// Here or above.
    From(u32),
    /// Below the probe.
    Below,
    /// Nothing readable around.
    Lost,
}

impl<F: NorFlash> Ring<F> {
    /// Header of the newest sector; `None` when the ring holds none.
    pub(super) fn newest(&mut self) -> Result<Option<SectorHeader>, F::Error> {
        match self.search()? {
            Some(header) => Ok(Some(header)),
            None => self.newest_of_all(),
        }
    }

    fn search(&mut self) -> Result<Option<SectorHeader>, F::Error> {
        let Some((base, base_sequence)) = self.base()? else { return Ok(None) };
        let (mut low, mut high) = (base, self.sectors());
        while high - low > 1 {
            let middle = low + (high - low) / 2;
            match self.probe(middle, high, base, base_sequence)? {
                Probe::From(place) => low = place,
                Probe::Below => high = middle,
                Probe::Lost => return Ok(None),
            }
        }
        let sequence = base_sequence.wrapping_add(low - base);
        for ahead in 1..self.sectors().min(LOOK_AHEAD + 1) {
            let place = self.place(low + ahead);
            if let Peek::Sequence(later) = self.peek(place)?
                && later > sequence
            {
                return Ok(None);
            }
        }
        self.confirm(sequence)
    }

    /// The first of the first places that is readable, with its sequence number.
    fn base(&mut self) -> Result<Option<(u32, u32)>, F::Error> {
        for place in 0..NEIGHBOURS.min(self.sectors()) {
            if let Peek::Sequence(sequence) = self.peek(place)? {
                return Ok(Some((place, sequence)));
            }
        }
        Ok(None)
    }

    fn probe(
        &mut self,
        middle: u32,
        high: u32,
        base: u32,
        base_sequence: u32,
    ) -> Result<Probe, F::Error> {
        for place in middle..high.min(middle + NEIGHBOURS) {
            match self.peek(place)? {
                Peek::Sequence(sequence)
                    if sequence.wrapping_sub(base_sequence) == place - base =>
                {
                    return Ok(Probe::From(place));
                }
                Peek::Sequence(_) | Peek::Blank => return Ok(Probe::Below),
                Peek::Damaged => {}
            }
        }
        Ok(if high - middle < NEIGHBOURS { Probe::Below } else { Probe::Lost })
    }

    /// The header with this sequence number, or the last readable one just before: the newest
    /// header may be torn.
    fn confirm(&mut self, sequence: u32) -> Result<Option<SectorHeader>, F::Error> {
        for back in 0..NEIGHBOURS.min(self.sectors()) {
            let Some(sequence) = sequence.checked_sub(back) else { return Ok(None) };
            let header = self.header(self.place(sequence))?;
            if let Some(header) = header.filter(|header| header.sequence == sequence) {
                return Ok(Some(header));
            }
        }
        Ok(None)
    }

    /// Places that hold something which is no header of this ring.
    pub(super) fn damaged_headers(&mut self) -> Result<u32, F::Error> {
        let mut damaged = 0;
        for place in 0..self.sectors() {
            damaged += u32::from(matches!(self.peek(place)?, Peek::Damaged));
        }
        Ok(damaged)
    }

    fn newest_of_all(&mut self) -> Result<Option<SectorHeader>, F::Error> {
        let mut newest: Option<SectorHeader> = None;
        for place in 0..self.sectors() {
            let Peek::Sequence(sequence) = self.peek(place)? else { continue };
            if newest.as_ref().is_none_or(|newest| newest.sequence < sequence)
                && let Some(header) = self.header(place)?
            {
                newest = Some(header);
            }
        }
        Ok(newest)
    }
}
