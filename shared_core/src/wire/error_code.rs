//! Why the device does not do what was asked. Numbered, flat, never reused.

use super::field::message;
use core::fmt;
use serde::{Deserialize, Serialize};

macro_rules! codes {
    ($($(#[$doc:meta])* $name:ident = $number:literal, $text:literal;)*) => {
        /// Why the device refuses. The numbers stand on the wire and are never reused.
        #[derive(Clone, Copy, Debug, PartialEq, Eq)]
        #[cfg_attr(feature = "defmt", derive(defmt::Format))]
        #[repr(u8)]
        pub enum ErrorCode {
            $($(#[$doc])* $name = $number,)*
        }

        impl ErrorCode {
            /// Every code, in the order of the numbers.
            pub const ALL: &[Self] = &[$(Self::$name),*];

            /// The code with this number; `None` for one this version does not know.
            #[must_use]
            pub const fn from_number(number: u8) -> Option<Self> {
                match number {
                    $($number => Some(Self::$name),)*
                    _ => None,
                }
            }
        }

        impl fmt::Display for ErrorCode {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str(match self {
                    $(Self::$name => $text,)*
                })
            }
        }
    };
}

codes! {
    /// Detail: the kind's number.
    UnknownKind = 1, "the device does not know this request; update its firmware";
    /// Detail: the kind's number.
    Malformed = 2, "the device cannot read this request; update its firmware or this program";
    /// Detail: how many parts there are.
    NoSuchPart = 3, "the plan in force has no such part; read the status again";
    /// Detail: unused.
    Busy = 4, "the device is busy; ask again";
    /// Detail: bytes received so far.
    OutOfOrder = 5, "the plan's bytes came out of order; load the plan again";
    /// Detail: the most bytes it can take.
    PlanTooLong = 6, "the plan is longer than the device can store; shorten it and seal it again";
    /// Detail: unused.
    PlanForOther = 7, "the plan is sealed for another device; seal one for this device";
    /// Detail: unused.
    PlanNotLater = 8,
        "the plan is not sealed later than the one in force; seal it again with a right clock";
    /// Detail: unused.
    PlanDamaged = 9, "the plan's fingerprint does not agree with its bytes; load it again";
    /// Detail: unused.
    PlanSignature = 10, "the plan is not sealed by the owner of this device; use the owner's key";
    /// Detail: the version the device takes.
    PlanFormat = 11,
        "the device takes another version of plans; update its firmware, or seal with a matching \
         version of this program";
    /// Detail: place of the first byte that makes no sense.
    PlanInvalid = 12, "the device cannot use the plan; seal it again with this program";
    /// Detail: unused.
    PlanUnknown = 13, "the device does not keep this plan; give the plan file from the desk";
    /// Detail: unused.
    StorageFailed = 14, "the device's memory failed; collect its journal and replace the device";
    /// Detail: sequence of the oldest sector.
    SectorGone = 15, "the sector has been overwritten; collect more often";
    /// Detail: sequence of the newest sector.
    SectorNotYet = 16, "the sector is not written yet; read the journal's bounds again";
    /// Detail: unused.
    ClockImpossible = 17, "the time is impossible; set this computer's clock";
    /// Detail: unused.
    PressButton = 18, "somebody must stand at the device; press its button and repeat this";
    /// Detail: unused.
    NothingToDo = 19, "there is nothing to acknowledge; read the status again";
}

impl ErrorCode {
    /// The number on the wire.
    #[must_use]
    pub const fn number(self) -> u8 {
        self as u8
    }

    /// The reply that carries this code.
    #[must_use]
    pub const fn reply(self, to: u8, detail: u32) -> ErrorReply {
        ErrorReply { to, code: self.number(), detail }
    }
}

/// A request was not done.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct ErrorReply {
    /// Number of the request's kind.
    pub to: u8,
    /// Number of the [`ErrorCode`].
    pub code: u8,
    /// A number that helps to find it; its meaning stands at the code.
    pub detail: u32,
}
message!(ErrorReply, ErrorReply { to, code, detail });
