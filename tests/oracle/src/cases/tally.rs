//! Comparison of answers with expected values, counted by topic.

use std::collections::BTreeMap;
use std::fmt;

use super::{Reason, Row};

/// What an answerer found.
#[derive(Clone, Debug, PartialEq)]
pub enum Answer {
    /// A number in the unit of the row.
    Number(f64),
    /// A class or a list, compared letter by letter.
    Text(String),
}

/// Counts of one topic.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct TopicCount {
    /// Rows of the topic.
    pub rows: usize,
    /// Rows answered within their tolerance.
    pub answered: usize,
    /// Rows answered outside their tolerance.
    pub wrong: usize,
    /// Names of the rows without an answer, by reason.
    pub unanswered: BTreeMap<Reason, Vec<String>>,
}

/// The outcome of a run.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tally {
    /// Counts by topic.
    pub topics: BTreeMap<String, TopicCount>,
    /// One line for each answer outside its tolerance.
    pub disagreements: Vec<String>,
    /// Largest difference met as a share of its tolerance, with the row.
    pub closest: (f64, String),
}

impl Tally {
    /// Rows of a topic answered within their tolerance.
    #[must_use]
    pub fn answered(&self, topic: &str) -> usize {
        self.topics.get(topic).map_or(0, |count| count.answered)
    }

    /// Two runs over different rows as one.
    #[must_use]
    pub fn and(mut self, other: Self) -> Self {
        for (topic, more) in other.topics {
            let count = self.topics.entry(topic).or_default();
            count.rows += more.rows;
            count.answered += more.answered;
            count.wrong += more.wrong;
            for (reason, rows) in more.unanswered {
                count.unanswered.entry(reason).or_default().extend(rows);
            }
        }
        self.disagreements.extend(other.disagreements);
        if other.closest.0 > self.closest.0 {
            self.closest = other.closest;
        }
        self
    }
}

impl fmt::Display for Tally {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (topic, count) in &self.topics {
            write!(f, "{topic:12} {:3} rows {:3} answered", count.rows, count.answered)?;
            if count.wrong > 0 {
                write!(f, " {:3} WRONG", count.wrong)?;
            }
            writeln!(f)?;
            for (reason, rows) in &count.unanswered {
                writeln!(f, "    {reason}: {}", rows.join(" "))?;
            }
        }
        writeln!(f, "largest share of a tolerance: {:.2e} ({})", self.closest.0, self.closest.1)?;
        self.disagreements.iter().try_for_each(|line| writeln!(f, "{line}"))
    }
}

/// Puts every row to `answerer` and compares. `allowance` is the relative error granted on top of
/// a row's own tolerance, for engines that carry fewer digits than a row states.
pub fn run(
    rows: &[Row],
    allowance: f64,
    answerer: &dyn Fn(&Row) -> Result<Answer, Reason>,
) -> Tally {
    let mut tally = Tally::default();
    for row in rows {
        let outcome = answerer(row);
        let count = tally.topics.entry(row.topic.clone()).or_default();
        count.rows += 1;
        let answer = match outcome {
            Ok(answer) => answer,
            Err(reason) => {
                count.unanswered.entry(reason).or_default().push(row.id.clone());
                continue;
            }
        };
        let share = share_of_tolerance(row, &answer, allowance);
        if share <= 1.0 {
            count.answered += 1;
        } else {
            count.wrong += 1;
            tally.disagreements.push(format!(
                "{}: found {answer:?}, stated {} within {} {} ({})",
                row.id, row.expected, row.tolerance, row.unit, row.source
            ));
        }
        if share > tally.closest.0 {
            tally.closest = (share, row.id.clone());
        }
    }
    tally
}

/// Difference over tolerance; infinite where the row and the answer cannot be compared.
fn share_of_tolerance(row: &Row, answer: &Answer, allowance: f64) -> f64 {
    match answer {
        Answer::Text(text) if *text == row.expected => 0.0,
        Answer::Text(_) => f64::INFINITY,
        Answer::Number(found) => {
            let (Ok(expected), Ok(tolerance)) =
                (row.expected.parse::<f64>(), row.tolerance.parse::<f64>())
            else {
                return f64::INFINITY;
            };
            // A value stated without a tolerance still passes when equal to the last bit or two.
            let room = tolerance + (allowance + 1e-15) * expected.abs();
            let share = (found - expected).abs() / room;
            if share.is_nan() { f64::INFINITY } else { share }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_wrong_answer_is_counted_wrong() {
        let mut rows = super::super::own_rows();
        rows.truncate(3);
        let blind = |row: &Row| match row.id.as_str() {
            "own-01a" => Ok(Answer::Number(1183.60)),
            "own-01b" => Ok(Answer::Number(f64::NAN)),
            _ => Err("not asked"),
        };
        let tally = run(&rows, 0.0, &blind);
        let plane = &tally.topics["plane"];
        assert_eq!((plane.rows, plane.answered, plane.wrong), (3, 0, 2));
        assert_eq!(plane.unanswered["not asked"].len(), 1);
        assert_eq!(run(&rows, 1e-3, &blind).answered("plane"), 1);
    }
}
