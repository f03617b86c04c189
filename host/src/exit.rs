//! Exit statuses. Scripts rely on the numbers.

use std::process::ExitCode;

/// How a run ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[repr(u8)]
pub enum Exit {
    /// Done.
    Done = 0,
    /// Done, and a load's bound is at or above its alarm threshold now.
    AboveAlarm = 1,
    /// The command line cannot be followed.
    Usage = 2,
    /// An input file is missing or invalid.
    InvalidInput = 3,
    /// No device, several, busy, or it took too long.
    NoDevice = 4,
    /// Versions of host and device do not go together.
    VersionMismatch = 5,
    /// The result is partial, or damaged parts were met.
    Partial = 6,
    /// A verification failed: not identical.
    NotIdentical = 7,
    /// Refused: by the device, or because a file exists.
    Refused = 8,
    /// An error of the program itself.
    Bug = 70,
    /// Interrupted.
    Interrupted = 130,
}

impl Exit {
    /// Every status with what it means, in the order of the numbers.
    pub const TABLE: [(Self, &'static str); 11] = [
        (Self::Done, "done"),
        (Self::AboveAlarm, "done, and a load's bound is above its alarm threshold now"),
        (Self::Usage, "the command line cannot be followed"),
        (Self::InvalidInput, "an input file is missing or invalid"),
        (Self::NoDevice, "no device, several, busy, or timed out"),
        (Self::VersionMismatch, "versions do not go together"),
        (Self::Partial, "partial result written, or damaged parts met"),
        (Self::NotIdentical, "verification failed"),
        (Self::Refused, "refused, or the file exists and --force is not given"),
        (Self::Bug, "an error of the program itself"),
        (Self::Interrupted, "interrupted"),
    ];

    /// The number.
    #[must_use]
    pub const fn number(self) -> u8 {
        self as u8
    }
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        Self::from(exit.number())
    }
}

#[cfg(test)]
mod tests {
    use super::Exit;

    #[test]
    fn the_numbers_that_scripts_rely_on() {
        let numbers = Exit::TABLE.map(|(exit, _)| exit.number());
        assert_eq!(numbers, [0, 1, 2, 3, 4, 5, 6, 7, 8, 70, 130]);
    }
}
