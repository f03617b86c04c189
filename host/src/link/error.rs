//! Why the link does not work, each reason for itself.

use crate::journal_file::JournalFileError;
use std::fmt;
use std::time::Duration;
use strake_core::wire::{ErrorCode, Identity, Kind};

/// A port cannot be used, or none was chosen.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PortError {
    /// No port at all, or no device on any of them.
    #[error(
        "no Strake device found{}; connect it and switch it on, or name the port with --port",
        where_tried(.tried)
    )]
    NoneFound {
        /// The ports that were tried.
        tried: Vec<String>,
    },
    /// More than one device answers.
    #[error("several Strake devices found: {}; choose one with --port", .found.join(", "))]
    Several {
        /// Port and device of each.
        found: Vec<String>,
    },
    /// There is no such port.
    #[error("there is no port {port}; list the ports with 'strake ports'")]
    Missing {
        /// The port.
        port: String,
    },
    /// Another program has it.
    #[error("port {port} is in use by another program; close that program and repeat")]
    Busy {
        /// The port.
        port: String,
    },
    /// The user may not open it.
    #[error("no permission to open port {port}; {remedy}")]
    NoPermission {
        /// The port.
        port: String,
        /// What to do, with the group and the command.
        remedy: String,
    },
    /// It broke while in use.
    #[error("port {port} failed: {cause}; check the cable and connect the device again")]
    Failed {
        /// The port.
        port: String,
        /// The system's reason.
        cause: String,
    },
}

fn where_tried(ports: &[String]) -> String {
    if ports.is_empty() {
        " (there is no serial port)".to_owned()
    } else {
        format!(" on {}", ports.join(", "))
    }
}

/// What a version is of.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Versioned {
    /// Frames and messages.
    Protocol,
    /// The journal.
    Journal,
    /// The plan.
    Plan,
}

/// The two sides speak different versions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct VersionMismatch {
    /// Of what.
    pub of: Versioned,
    /// This program's version of it.
    pub ours: u16,
    /// What the device said.
    pub device: Identity,
}

impl fmt::Display for VersionMismatch {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { of, ours, device } = self;
        let (thing, theirs) = match of {
            Versioned::Protocol => ("link protocol", device.protocol),
            Versioned::Journal => ("journal format", u16::from(device.journal_format)),
            Versioned::Plan => ("plan format", u16::from(device.plan_format)),
        };
        let (strake, firmware, id) = (env!("CARGO_PKG_VERSION"), device.firmware, device.device_id);
        write!(
            f,
            "version mismatch: strake {strake} speaks {thing} {ours}, device '{id}' with firmware \
             {firmware} speaks {theirs}; "
        )?;
        if theirs > *ours {
            write!(f, "install strake {firmware} or later")
        } else {
            write!(f, "update the device's firmware to {strake}, or install strake {firmware}")
        }
    }
}

/// An exchange with the device failed.
#[derive(Debug, thiserror::Error)]
pub enum LinkError {
    /// The port.
    #[error(transparent)]
    Port(#[from] PortError),
    /// Not one byte came.
    #[error(
        "nothing answers on {port} within {:.1} s; switch the device on, check the cable and the \
         port", waited.as_secs_f32()
    )]
    Silent {
        /// The port.
        port: String,
        /// How long it was waited, in the port's time.
        waited: Duration,
    },
    /// Bytes come, but never a frame.
    #[error(
        "what answers on {port} is not a Strake device: {bytes} bytes without one sound frame; \
         choose another port with --port"
    )]
    NotStrake {
        /// The port.
        port: String,
        /// How many bytes came.
        bytes: u64,
    },
    /// The device is there, but the line is too bad.
    #[error(
        "the line on {port} is too noisy: {bad} damaged frames of {frames}, given up at '{doing}'; \
         use a shorter or shielded cable and repeat, what was collected is kept"
    )]
    Noisy {
        /// The port.
        port: String,
        /// What was asked.
        doing: &'static str,
        /// Frames that were thrown away.
        bad: u64,
        /// All frames.
        frames: u64,
    },
    /// The two sides speak different versions.
    #[error("{0}")]
    Version(VersionMismatch),
    /// The device does not do it.
    #[error("{doing}: {code}{}", in_words(*.code, *.detail))]
    Refused {
        /// What was asked.
        doing: &'static str,
        /// The reason.
        code: ErrorCode,
        /// A number that belongs to the reason.
        detail: u32,
    },
    /// The device refuses with a reason of a later version.
    #[error("{doing}: the device refuses with code {code} ({detail}), unknown here; update strake")]
    UnknownCode {
        /// What was asked.
        doing: &'static str,
        /// The number.
        code: u8,
        /// A number that belongs to it.
        detail: u32,
    },
    /// A sound frame whose content makes no sense.
    #[error("{doing}: the device's answer makes no sense ({what}); update its firmware")]
    Nonsense {
        /// What was asked.
        doing: &'static str,
        /// What is wrong with it.
        what: &'static str,
    },
    /// The user broke it off.
    #[error("interrupted; what was collected is kept, the same command goes on from there")]
    Interrupted,
    /// The file that is written.
    #[error(transparent)]
    File(#[from] JournalFileError),
}

/// The number of a refusal, in words, where it says something to the user.
fn in_words(code: ErrorCode, detail: u32) -> String {
    match code {
        ErrorCode::UnknownKind | ErrorCode::Malformed => format!(" (kind {detail:#04x})"),
        ErrorCode::NoSuchPart => format!(" (it has {detail})"),
        ErrorCode::OutOfOrder => format!(" ({detail} bytes held)"),
        ErrorCode::PlanTooLong => format!(" (at most {detail} bytes)"),
        ErrorCode::PlanFormat => format!(" (version {detail})"),
        ErrorCode::PlanInvalid => format!(" (byte {detail})"),
        ErrorCode::SectorGone => format!(" (oldest is {detail})"),
        ErrorCode::SectorNotYet => format!(" (newest is {detail})"),
        _ => String::new(),
    }
}

/// What a request is about, in the words of a message.
pub(super) fn doing(kind: Kind) -> &'static str {
    match kind {
        Kind::Hello => "greeting the device",
        Kind::StatusRequest => "reading the status",
        Kind::PartStatusRequest => "reading a part's status",
        Kind::FaultStatusRequest => "reading the faults",
        Kind::FillingRequest => "reading the time to limit",
        Kind::PlanBegin | Kind::PlanChunk => "loading the plan",
        Kind::PlanCommit => "putting the plan into force",
        Kind::PlanListRequest | Kind::PlanRead => "reading a plan back",
        Kind::ClockSet => "setting the clock",
        Kind::Acknowledge => "acknowledging",
        Kind::JournalBoundsRequest | Kind::HeadRequest => "reading the journal's end",
        Kind::SectorRequest => "collecting the journal",
        _ => "talking to the device",
    }
}
