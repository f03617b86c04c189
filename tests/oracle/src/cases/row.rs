//! One row of a case file.

use super::csv::records;

/// A check case as written in its file.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Name, unique over all files.
    pub id: String,
    /// Field of the case, such as plane, curved, hatch, shell.
    pub topic: String,
    /// `key=value` pairs in their order; words without `=` have an empty value.
    pub inputs: Vec<(String, String)>,
    /// Expected value as written.
    pub expected: String,
    /// Unit of the expected value.
    pub unit: String,
    /// Largest difference allowed, in the same unit, or `exact`.
    pub tolerance: String,
    /// Where the value comes from.
    pub source: String,
    /// How it was obtained: read on a page, from memory, from a library, own.
    pub mark: String,
}

impl Row {
    fn from_record(record: Vec<String>) -> Self {
        let mut columns = record.into_iter();
        let mut next = || columns.next().unwrap_or_default();
        let (id, topic, inputs) = (next(), next(), next());
        let inputs = inputs
            .split(';')
            .map(|pair| pair.split_once('=').unwrap_or((pair, "")))
            .map(|(key, value)| (key.trim().to_owned(), value.trim().to_owned()))
            .collect();
        let (expected, unit, tolerance, source, mark) = (next(), next(), next(), next(), next());
        Self { id, topic, inputs, expected, unit, tolerance, source, mark }
    }

    /// The value of a key; a later one stands for an earlier one.
    #[must_use]
    pub fn get(&self, key: &str) -> Option<&str> {
        let found = self.inputs.iter().rev().find(|(name, _)| name == key);
        found.map(|(_, value)| value.as_str())
    }

    /// The number that a value begins with.
    #[must_use]
    pub fn number(&self, key: &str) -> Option<f64> {
        leading_number(self.get(key)?)
    }

    /// The number of a key, or 0.
    #[must_use]
    pub fn number_or_zero(&self, key: &str) -> f64 {
        self.number(key).unwrap_or(0.0)
    }

    /// Whether the value of a key is exactly `text`.
    #[must_use]
    pub fn is(&self, key: &str, text: &str) -> bool {
        self.get(key) == Some(text)
    }

    /// Whether a word stands among the inputs without a value, or as a key.
    #[must_use]
    pub fn has(&self, key: &str) -> bool {
        self.get(key).is_some()
    }

    /// The quantity asked for, empty when the row names none.
    #[must_use]
    pub fn quantity(&self) -> &str {
        self.get("quantity").unwrap_or("")
    }
}

/// The number at the beginning of a text, up to the first character that cannot belong to it.
#[must_use]
pub(super) fn leading_number(text: &str) -> Option<f64> {
    let text = text.trim();
    let end =
        text.find(|c: char| !(c.is_ascii_digit() || "+-.eE".contains(c))).unwrap_or(text.len());
    (0..=end).rev().find_map(|cut| text.get(..cut)?.parse().ok())
}

/// All numbers of a text in their order.
#[must_use]
pub(super) fn numbers(text: &str) -> Vec<f64> {
    text.split(|c: char| !(c.is_ascii_digit() || "+-.eE".contains(c)))
        .filter_map(|word| word.parse().ok())
        .collect()
}

fn rows(text: &str) -> Vec<Row> {
    records(text).into_iter().map(Row::from_record).collect()
}

/// Values published in books, standards and libraries.
#[must_use]
pub fn open_rows() -> Vec<Row> {
    rows(include_str!("../../../cases/open_cases.csv"))
}

/// Values found by two methods of our own.
#[must_use]
pub fn own_rows() -> Vec<Row> {
    rows(include_str!("../../../cases/own_cases.csv"))
}

/// Edge cases and wrong rules that look right, found by two methods of our own.
#[must_use]
pub fn edge_rows() -> Vec<Row> {
    rows(include_str!("../../../cases/edge_cases.csv"))
}
