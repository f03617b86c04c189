//! Every row of the case files, answered and compared within its tolerance.
//!
//! The counts may rise, never fall: a row that loses its answer fails here.

use std::collections::BTreeSet;

use strake_oracle::cases::{Tally, edge_rows, open_rows, oracle_answer, own_rows, run};

/// Rows answered by the oracle, by topic, of the published values.
const OPEN_ANSWERED: &[(&str, usize)] =
    &[("curved", 30), ("gravity", 9), ("hatch", 16), ("plane", 51), ("shell", 39), ("signal", 3)];

/// The same of the own values; two rows state wrong results that must not be reported.
const OWN_ANSWERED: &[(&str, usize)] = &[
    ("bound", 10),
    ("curved", 19),
    ("density", 8),
    ("hatch", 16),
    ("plane", 8),
    ("plate", 2),
    ("shell", 5),
    ("time", 4),
];

/// The same of the edge cases: all of them.
const EDGE_ANSWERED: &[(&str, usize)] = &[
    ("bound", 11),
    ("designed_for", 10),
    ("hatch", 3),
    ("plane", 66),
    ("shell", 6),
    ("signal", 7),
    ("time", 7),
];

/// Prints the tally; nothing in it may disagree, and each topic answers as many rows as stated:
/// topics that are not stated none.
pub(crate) fn holds(tally: &Tally, counts: &[(&str, usize)]) {
    println!("{tally}");
    assert!(tally.disagreements.is_empty(), "{tally}");
    let stated =
        |topic: &str| counts.iter().find(|(name, _)| *name == topic).map_or(0, |(_, count)| *count);
    let found: Vec<(&str, usize)> =
        tally.topics.keys().map(|topic| (topic.as_str(), tally.answered(topic))).collect();
    let due: Vec<(&str, usize)> = found.iter().map(|(topic, _)| (*topic, stated(topic))).collect();
    assert_eq!(found, due, "a row lost or found its answer\n{tally}");
    assert!(counts.iter().all(|(topic, _)| tally.topics.contains_key(*topic)), "{tally}");
}

#[test]
fn the_oracle_reproduces_the_published_values() {
    holds(&run(&open_rows(), 0.0, &oracle_answer), OPEN_ANSWERED);
}

#[test]
fn the_oracle_reproduces_the_own_values() {
    let tally = run(&own_rows(), 0.0, &oracle_answer);
    holds(&tally, OWN_ANSWERED);
    // Nine digits are stated: the two methods agree far inside the tolerance.
    assert!(tally.closest.0 < 1e-3, "{tally}");
}

#[test]
fn the_oracle_reproduces_the_edge_cases() {
    holds(&run(&edge_rows(), 0.0, &oracle_answer), EDGE_ANSWERED);
}

#[test]
fn every_row_has_a_name_of_its_own_and_a_source() {
    let rows = [open_rows(), own_rows(), edge_rows()].concat();
    let names: BTreeSet<_> = rows.iter().map(|row| &row.id).collect();
    assert_eq!(names.len(), rows.len());
    for row in &rows {
        assert!(!row.source.is_empty() && row.mark.starts_with('['), "{}", row.id);
        assert!(row.tolerance == "exact" || row.tolerance.parse::<f64>().is_ok(), "{}", row.id);
    }
}

/// A wrong expected value must be seen: every answered number, moved by four tolerances, fails.
#[test]
fn a_shifted_expectation_is_refused() {
    let mut rows = [own_rows(), edge_rows()].concat();
    rows.retain(|row| row.tolerance.parse::<f64>().is_ok());
    let before: usize = run(&rows, 0.0, &oracle_answer).topics.values().map(|c| c.answered).sum();
    for row in &mut rows {
        let (Ok(value), Ok(room)) = (row.expected.parse::<f64>(), row.tolerance.parse::<f64>())
        else {
            continue;
        };
        row.expected = format!("{:.12e}", value + 4.0 * room);
    }
    let shifted = run(&rows, 0.0, &oracle_answer);
    assert_eq!(shifted.disagreements.len(), before, "{shifted}");
    assert!(shifted.topics.values().all(|count| count.answered == 0));
}
