//! The one table of message kinds.

macro_rules! kinds {
    ($($(#[$doc:meta])* $name:ident = $number:literal,)*) => {
        /// Kind of a message. Requests are below 0x80; the reply to kind `k` is `k | 0x80`, so a
        /// reply names what it answers. Numbers are never reused; a dropped kind stays reserved.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
        #[repr(u8)]
        pub enum Kind {
            $($(#[$doc])* $name = $number,)*
        }

        impl Kind {
            /// Every kind, in the order of the table.
            pub const ALL: &[Self] = &[$(Self::$name),*];

            /// The kind with this number; `None` for one this version does not know.
            #[must_use]
            pub const fn from_number(number: u8) -> Option<Self> {
                match number {
                    $($number => Some(Self::$name),)*
                    _ => None,
                }
            }
        }
    };
}

kinds! {
    /// [`super::Hello`]: who are you? May be asked at any time, in every version.
    Hello = 0x01,
    /// [`super::StatusRequest`]
    StatusRequest = 0x02,
    /// [`super::PartStatusRequest`]
    PartStatusRequest = 0x03,
    /// [`super::FaultStatusRequest`]
    FaultStatusRequest = 0x04,
    /// [`super::FillingRequest`]
    FillingRequest = 0x05,
    /// [`super::PlanBegin`]: a plan is about to come.
    PlanBegin = 0x10,
    /// [`super::PlanChunk`]: the next bytes of it.
    PlanChunk = 0x11,
    /// [`super::PlanCommit`]: check it and put it into force.
    PlanCommit = 0x12,
    /// [`super::PlanListRequest`]
    PlanListRequest = 0x13,
    /// [`super::PlanRead`]: bytes of a stored plan.
    PlanRead = 0x14,
    /// [`super::ClockSet`]
    ClockSet = 0x20,
    /// [`super::Acknowledge`]
    Acknowledge = 0x21,
    // 0x22 product change, 0x23 dip, 0x24 proof test: kept free for these.
    /// [`super::JournalBoundsRequest`]
    JournalBoundsRequest = 0x30,
    /// [`super::HeadRequest`]
    HeadRequest = 0x31,
    /// [`super::SectorRequest`]: answered by many [`super::SectorData`] and one end.
    SectorRequest = 0x32,

    /// [`super::Identity`]
    Identity = 0x81,
    /// [`super::Status`]
    Status = 0x82,
    /// [`super::PartStatus`]
    PartStatus = 0x83,
    /// [`super::FaultStatus`]
    FaultStatus = 0x84,
    /// [`super::FillingStatus`]
    FillingStatus = 0x85,
    /// [`super::PlanReply`], to begin, chunk and commit alike.
    PlanReply = 0x90,
    /// [`super::PlanList`]
    PlanList = 0x93,
    /// [`super::PlanData`]
    PlanData = 0x94,
    /// [`super::Done`], to every order.
    Done = 0xA0,
    /// [`super::JournalBounds`]
    JournalBounds = 0xB0,
    /// [`super::Head`]
    Head = 0xB1,
    /// [`super::SectorData`]
    SectorData = 0xB2,
    /// [`super::SectorEnd`]
    SectorEnd = 0xB3,
    /// [`super::ErrorReply`]: the request was understood or not, but is not done.
    ErrorReply = 0xFF,
}

impl Kind {
    /// The number on the wire.
    #[must_use]
    pub const fn number(self) -> u8 {
        self as u8
    }
}
