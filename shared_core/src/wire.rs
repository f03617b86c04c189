//! The link's language: frames on the wire and the messages in them.
//!
//! A **frame** is `COBS( kind u8, body, CRC-32 u32 LE ) 00`. A **body** is one plain struct in
//! postcard's encoding. A **kind** names the struct; [`Kind`] is the one table of them. The host
//! asks, the device answers: the reply to kind `k` is `k | 0x80`, or an [`ErrorReply`].
//!
//! Duty: bytes in, messages out and back. Every byte from the line is untrusted: decoding is total.
//! Encoding writes through [`Writer`], which reports a short buffer and cannot panic.

pub mod cobs;
mod error_code;
mod field;
pub mod frame;
mod identity;
mod journal;
mod kind;
mod orders;
mod plan;
mod status;
#[cfg(test)]
mod tests;
mod text;

pub use error_code::{ErrorCode, ErrorReply};
pub use field::{Field, Writer};
pub use frame::{Frame, FrameError, Receiver};
pub use identity::{Hello, Identity};
pub use journal::{
    Head, HeadRequest, JournalBounds, JournalBoundsRequest, SectorData, SectorEnd, SectorRequest,
};
pub use kind::Kind;
pub use orders::{Acknowledge, ClockSet, Done};
pub use plan::{
    PlanBegin, PlanChunk, PlanCommit, PlanData, PlanEntry, PlanList, PlanListRequest, PlanRead,
    PlanReply,
};
pub use status::{
    FaultStatus, FaultStatusRequest, FillingRequest, FillingStatus, LinkCounters, LoadValue,
    PartStatus, PartStatusRequest, Status, StatusRequest,
};
pub use text::Text;

/// Version of frames and messages. Both sides of a handshake must speak the same.
pub const PROTOCOL_VERSION: u16 = 1;

/// Bytes of a unit, the grain in which parts of a sector are asked for and the least bulk payload.
pub const UNIT_BYTES: u16 = 128;
/// Units of a sector: one bit each in [`SectorRequest::wanted`].
pub const UNITS: u8 = 32;
/// Most units in one frame, for a clean line.
pub const FRAME_UNITS_MAX: u8 = 8;
/// Most bytes of a plan in one [`PlanChunk`].
pub const PLAN_CHUNK_BYTES: usize = 192;
/// Most bytes of a plan in one [`PlanData`].
pub const PLAN_DATA_BYTES: u16 = 512;
/// Sector requests that wait in the device; one more is dropped.
pub const SECTOR_QUEUE: usize = 8;

/// Bytes of a device's receive buffer: the longest encoded request fits.
pub const REQUEST_FRAME_BYTES: usize = 224;
/// Bytes in which the longest reply can be built and encoded.
pub const REPLY_FRAME_BYTES: usize = 1056;

const _: () = assert!(UNIT_BYTES as usize * UNITS as usize == crate::journal::SECTOR_BYTES);
const _: () = assert!(UNITS as u32 == u32::BITS);

/// A message: one plain struct with one kind, in postcard's encoding.
pub trait Message<'a>: Field + serde::Deserialize<'a> {
    /// Its kind.
    const KIND: Kind;
    /// Later versions may append fields; bytes behind the known ones are then no error.
    const APPENDABLE: bool = false;

    /// The message in a body.
    ///
    /// # Errors
    /// [`Malformed`] when the body is not exactly this struct.
    fn decode(body: &'a [u8]) -> Result<Self, Malformed> {
        match postcard::take_from_bytes(body) {
            Ok((message, rest)) if rest.is_empty() || Self::APPENDABLE => Ok(message),
            _ => Err(Malformed),
        }
    }

    /// Builds the whole frame in `out`, which is used as working space too and should be
    /// [`REPLY_FRAME_BYTES`] long. Returns its length with the closing zero, or `None` when `out`
    /// is too short.
    fn encode(&self, out: &mut [u8]) -> Option<usize> {
        frame::build(Self::KIND.number(), out, &mut |body| self.put(body))
    }
}

/// A body that is not the struct its kind names.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Malformed;
