//! Sector requests that wait, and the frames that answer them.

use super::outbox::Outbox;
use super::served::{Refusal, Served};
use heapless::Deque;
use strake_core::wire::{
    ErrorCode, FRAME_UNITS_MAX, Field, Kind, SECTOR_QUEUE, SectorEnd, SectorRequest, UNIT_BYTES,
};

/// First come, first served.
#[derive(Debug)]
pub(super) struct Sectors {
    queue: Deque<SectorRequest, SECTOR_QUEUE>,
}

/// Units of one frame: which, and how many bytes they are.
struct Run {
    unit: u8,
    offset: u16,
    units_mask: u32,
    bytes: usize,
}

impl Sectors {
    pub(super) const fn new() -> Self {
        Self { queue: Deque::new() }
    }

    pub(super) fn is_empty(&self) -> bool {
        self.queue.is_empty()
    }

    /// One more request; dropped when too many wait, which the host sees by the next ticket.
    pub(super) fn push(&mut self, request: SectorRequest) {
        let _full = self.queue.push_back(request);
    }

    /// The host has turned to something else.
    pub(super) fn clear(&mut self) {
        self.queue.clear();
    }

    /// Puts the next frame of the oldest request into the outbox.
    pub(super) fn next_frame<S: Served>(&mut self, served: &mut S, outbox: &mut Outbox) {
        let Some(request) = self.queue.front_mut() else { return };
        let ended = match served.sector_used(request.sequence) {
            None => Some((absent(served, request.sequence).number(), 0)),
            Some(used) => match next_run(request, used) {
                None => Some((0, used)),
                Some(run) => match put_data(request, &run, served, outbox) {
                    Ok(()) => {
                        request.wanted &= !run.units_mask;
                        None
                    }
                    Err(refusal) => Some((refusal.code.number(), used)),
                },
            },
        };
        if let Some((code, used)) = ended {
            outbox.put(&SectorEnd { ticket: request.ticket, code, used });
            self.queue.pop_front();
        }
    }
}

/// Why a sector is not stored.
fn absent<S: Served>(served: &mut S, sequence: u32) -> ErrorCode {
    if sequence > served.journal_bounds().newest {
        ErrorCode::SectorNotYet
    } else {
        ErrorCode::SectorGone
    }
}

/// The next neighbouring units that are wanted, as many as a frame may hold.
fn next_run(request: &SectorRequest, used: u16) -> Option<Run> {
    let unit = request.wanted.trailing_zeros();
    let start = usize::try_from(unit).ok()?.checked_mul(usize::from(UNIT_BYTES))?;
    let left = usize::from(used).checked_sub(start).filter(|left| *left > 0)?;
    let together = request.wanted.checked_shr(unit)?.trailing_ones();
    let units = together.min(u32::from(request.frame_units.clamp(1, FRAME_UNITS_MAX)));
    let units_mask = 1_u32.checked_shl(units)?.wrapping_sub(1).checked_shl(unit)?;
    let bytes = usize::try_from(units).ok()?.saturating_mul(usize::from(UNIT_BYTES)).min(left);
    Some(Run {
        unit: u8::try_from(unit).ok()?,
        offset: u16::try_from(start).ok()?,
        units_mask,
        bytes,
    })
}

/// The same bytes as [`strake_core::wire::SectorData`], read straight into the frame.
fn put_data<S: Served>(
    request: &SectorRequest,
    run: &Run,
    served: &mut S,
    outbox: &mut Outbox,
) -> Result<(), Refusal> {
    let mut result = Ok(());
    outbox.build(Kind::SectorData.number(), &mut |body| {
        request.ticket.put(body);
        run.unit.put(body);
        body.length(run.bytes);
        result = served.read_sector(request.sequence, run.offset, body.reserve(run.bytes));
    });
    result
}
