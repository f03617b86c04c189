//! The handshake.

use super::field::fields;
use super::{Kind, Message, Text};
use serde::{Deserialize, Serialize};

/// First request of every connection. Its fields never change; later versions may append.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Hello {
    /// The host's [`super::PROTOCOL_VERSION`].
    pub protocol: u16,
}
fields!(Hello { protocol });

impl Message<'_> for Hello {
    const KIND: Kind = Kind::Hello;
    const APPENDABLE: bool = true;
}

/// Who the device is and what it speaks: the reply to [`Hello`]. Its fields never change; later
/// versions may append.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct Identity {
    /// The device's [`super::PROTOCOL_VERSION`].
    pub protocol: u16,
    /// Version of the journal it writes.
    pub journal_format: u8,
    /// Version of the plans it takes.
    pub plan_format: u8,
    /// Version text of its firmware.
    pub firmware: Text,
    /// Its own name, unique among an owner's devices.
    pub device_id: Text,
    /// Number of this start.
    pub boot: u16,
    /// Milliseconds since this start.
    pub tick_ms: u64,
    /// Fingerprint of the plan in force; zero without a plan.
    pub plan_fingerprint: u64,
    /// UTC seconds at which that plan was sealed; zero without a plan.
    pub plan_serial: u64,
    /// Bytes the journal's flash programs at once: 1 or 4.
    pub word_bytes: u8,
    /// Sectors of the journal's ring.
    pub sectors: u32,
}
fields!(Identity {
    protocol,
    journal_format,
    plan_format,
    firmware,
    device_id,
    boot,
    tick_ms,
    plan_fingerprint,
    plan_serial,
    word_bytes,
    sectors,
});

impl Message<'_> for Identity {
    const KIND: Kind = Kind::Identity;
    const APPENDABLE: bool = true;
}
