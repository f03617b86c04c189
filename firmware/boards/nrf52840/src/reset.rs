//! Why the controller started: its own record, and what the last run left in retained memory.

/// What the reset reasons of the chip tell apart (product specification, POWER, RESETREAS). They
/// gather until they are cleared; none is set after power came.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reason {
    /// Power came, or had sunk too low.
    Power,
    /// The watchdog bit.
    Watchdog,
    /// The processor locked up: a fault within the handling of a fault.
    LockUp,
    /// The program asked for it, at the end of a run or on purpose.
    Request,
    /// The reset pin, a debugger, or anything else.
    Other,
}

impl Reason {
    const PIN: u32 = 1 << 0;
    const WATCHDOG: u32 = 1 << 1;
    const REQUEST: u32 = 1 << 2;
    const LOCK_UP: u32 = 1 << 3;

    /// The gravest of the reasons in the register. Beside the reset pin's, others may stand that
    /// never were (errata of the chip: bits in RESETREAS are set when they should not be).
    #[must_use]
    pub const fn of(register: u32) -> Self {
        if register == 0 {
            Self::Power
        } else if register & Self::PIN != 0 {
            Self::Other
        } else if register & Self::WATCHDOG != 0 {
            Self::Watchdog
        } else if register & Self::LOCK_UP != 0 {
            Self::LockUp
        } else if register & Self::REQUEST != 0 {
            Self::Request
        } else {
            Self::Other
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Reason;

    #[test]
    fn reasons_are_told_apart() {
        let cases = [
            (0, Reason::Power),
            (1 << 0, Reason::Other),
            (1 << 1, Reason::Watchdog),
            (1 << 2, Reason::Request),
            (1 << 3, Reason::LockUp),
            (1 << 16, Reason::Other),
            (1 << 18, Reason::Other),
            // Gathered: the gravest is told.
            (0b0110, Reason::Watchdog),
            (0b1100, Reason::LockUp),
            // With the pin's, no other is believed.
            (0b0101, Reason::Other),
            (0b0011, Reason::Other),
            (u32::MAX, Reason::Other),
        ];
        for (register, reason) in cases {
            assert_eq!(Reason::of(register), reason, "{register:#b}");
        }
    }
}
