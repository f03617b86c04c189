//! Gauge or absolute: `psig`, `kPa(g)`, `bar a`, `psia`.

/// What a pressure is counted from, where its unit says so.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Mark {
    /// From the pressure of the air outside.
    Gauge,
    /// From vacuum.
    Absolute,
}

const MARKS: [(&str, Mark); 10] = [
    ("(gauge)", Mark::Gauge),
    ("gauge", Mark::Gauge),
    ("(g)", Mark::Gauge),
    ("g", Mark::Gauge),
    ("(absolute)", Mark::Absolute),
    ("absolute", Mark::Absolute),
    ("(abs)", Mark::Absolute),
    ("abs", Mark::Absolute),
    ("(a)", Mark::Absolute),
    ("a", Mark::Absolute),
];

/// Splits a unit that `known` does not take as it stands into one that it takes and its mark.
pub(super) fn split(unit: &str, known: impl Fn(&str) -> bool) -> Option<(&str, Mark)> {
    if known(unit) {
        return None;
    }
    MARKS.iter().find_map(|&(suffix, mark)| {
        let base = unit.strip_suffix(suffix)?.trim_end();
        known(base).then_some((base, mark))
    })
}
