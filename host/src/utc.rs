//! Times: UTC seconds, as the device and every file count them.

use crate::exit::Exit;
use crate::failure::Failure;
use jiff::Timestamp;

/// UTC seconds now, by the clock of this computer.
///
/// # Errors
/// When that clock stands before 1970.
pub fn now_s() -> Result<u64, Failure> {
    u64::try_from(Timestamp::now().as_second()).map_err(|_| {
        let message = "the clock of this computer stands before 1970";
        Failure::new(Exit::Usage, "clock", message, "set the clock of this computer")
    })
}

/// For people: `2026-01-05 06:00:00 UTC`.
#[must_use]
pub fn text(utc_s: u64) -> String {
    written(utc_s, "%Y-%m-%d %H:%M:%S UTC")
}

/// For names of files: `20260105T060000Z`.
#[must_use]
pub fn stamp(utc_s: u64) -> String {
    written(utc_s, "%Y%m%dT%H%M%SZ")
}

fn written(utc_s: u64, format: &str) -> String {
    let time = i64::try_from(utc_s).ok().and_then(|utc_s| Timestamp::from_second(utc_s).ok());
    time.map_or_else(|| format!("second {utc_s}"), |time| time.strftime(format).to_string())
}

#[cfg(test)]
mod tests {
    use super::{stamp, text};

    #[test]
    fn seconds_as_a_calendar_shows_them() {
        // POSIX.1-2017, 4.16: 86400 seconds a day since 1970, no leap seconds; 20,458 days later.
        assert_eq!(text(20_458 * 86_400 + 6 * 3_600), "2026-01-05 06:00:00 UTC");
        assert_eq!(stamp(20_458 * 86_400 + 6 * 3_600), "20260105T060000Z");
        assert_eq!(text(u64::MAX), "second 18446744073709551615");
    }
}
