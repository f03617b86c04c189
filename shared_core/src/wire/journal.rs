//! Taking the journal home: sectors as stored, in the order asked for.
//!
//! The host decides what is sent. A [`SectorRequest`] is a window of one sector: a bitmap of the
//! units that are still missing, so it acknowledges the others. Requests wait in the device in a
//! short queue and are served first come, first served; each answers with its data frames and one
//! [`SectorEnd`], all under the request's ticket. The line keeps order, so a frame under a later
//! ticket tells the host that the earlier ones are through; what did not come of them is asked for
//! again under a new ticket. The device keeps nothing to repeat: it reads its flash again.

use super::field::{fields, message};
use serde::{Deserialize, Serialize};

/// Asks for [`JournalBounds`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct JournalBoundsRequest {}
message!(JournalBoundsRequest, JournalBoundsRequest {});

/// Which sectors there are. `oldest` is above `newest` while there is none.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct JournalBounds {
    /// Sequence of the oldest sector.
    pub oldest: u32,
    /// Sequence of the newest, the open one.
    pub newest: u32,
    /// Bytes in use in the newest.
    pub newest_used: u16,
}
fields!(JournalBounds { oldest, newest, newest_used });
impl super::Message<'_> for JournalBounds {
    const KIND: super::Kind = super::Kind::JournalBounds;
}

/// Asks for [`Head`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct HeadRequest {}
message!(HeadRequest, HeadRequest {});

/// Where the journal ends now.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct Head {
    /// Sequence of the newest sector.
    pub newest: u32,
    /// Bytes in use in it.
    pub used: u16,
    /// Number of the entry that would be written next.
    pub next_entry: u32,
    /// Running hash of all results up to here.
    pub running_hash: u64,
    /// Number of this start.
    pub boot: u16,
    /// Milliseconds since this start.
    pub tick_ms: u64,
}
message!(Head, Head { newest, used, next_entry, running_hash, boot, tick_ms });

/// Asks for units of one sector.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct SectorRequest {
    /// The host's number of this request; its answers carry it.
    pub ticket: u8,
    /// Which sector.
    pub sequence: u32,
    /// Bit n: the 128 bytes from 128 n are missing. Bits beyond what is in use are passed over.
    pub wanted: u32,
    /// Most units in one frame, 1 to [`super::FRAME_UNITS_MAX`]: few on a bad line.
    pub frame_units: u8,
}
message!(SectorRequest, SectorRequest { ticket, sequence, wanted, frame_units });

/// Bytes of a sector as stored.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct SectorData<'a> {
    /// The request's number.
    pub ticket: u8,
    /// The first unit.
    pub unit: u8,
    /// Whole units; the last one may be short where the sector's used part ends.
    pub bytes: &'a [u8],
}
message!(SectorData, SectorData<'a> { ticket, unit, bytes });

/// All that was asked for under this ticket has been sent.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct SectorEnd {
    /// The request's number.
    pub ticket: u8,
    /// Zero, or the number of the [`super::ErrorCode`] that ended it.
    pub code: u8,
    /// Bytes in use in the sector when it was sent.
    pub used: u16,
}
message!(SectorEnd, SectorEnd { ticket, code, used });
