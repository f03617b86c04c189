//! What a loop current means.

/// Class of a 4-20 mA current by NAMUR NE 43 (limits as widely published: measurement 3.8 to
/// 20.5 mA, failure at or below 3.6 and at or above 21.0 mA; wire break below 0.5 mA is common
/// practice).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LoopClass {
    /// Below 0.5 mA.
    WireBreak,
    /// At or below 3.6 mA.
    FailureLow,
    /// Between failure and measurement: no meaning is defined, the last status is held.
    Between,
    /// 3.8 to 20.5 mA.
    Measurement {
        /// Within 4 to 20 mA; outside is "out of specification" in the words of NAMUR NE 107.
        in_specification: bool,
    },
    /// At or above 21.0 mA.
    FailureHigh,
}

/// Class of a current given in sixteenths of a microampere.
#[must_use]
pub const fn classify(count_16: i32) -> LoopClass {
    const UA: i32 = 16;
    if count_16 < 500 * UA {
        LoopClass::WireBreak
    } else if count_16 <= 3_600 * UA {
        LoopClass::FailureLow
    } else if count_16 >= 21_000 * UA {
        LoopClass::FailureHigh
    } else if count_16 < 3_800 * UA || count_16 > 20_500 * UA {
        LoopClass::Between
    } else {
        let in_specification = 4_000 * UA <= count_16 && count_16 <= 20_000 * UA;
        LoopClass::Measurement { in_specification }
    }
}

#[cfg(test)]
mod tests;
