//! A measured level series from a CSV file: columns `time_s`, `level_m`, optional `temp_C`.

use super::story::{Story, between};
use crate::sim::sensor::Level;
use std::fmt;

/// A level series.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    levels: Vec<(u64, f64)>,
    temperatures: Vec<(u64, f64)>,
}

/// Why a text is no series.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum SeriesError {
    /// There is no row.
    Empty,
    /// The first line does not name the columns.
    Header {
        /// What stands there.
        found: String,
    },
    /// A row cannot be read.
    Row {
        /// Line, from one.
        line: usize,
        /// What is wrong.
        what: &'static str,
        /// What stands there.
        found: String,
    },
}

impl fmt::Display for SeriesError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Empty => {
                f.write_str("the series has no row; give a CSV file with measured levels")
            }
            Self::Header { found } => write!(
                f,
                "line 1: the columns are `{found}`; write `time_s,level_m` or \
                 `time_s,level_m,temp_C`"
            ),
            Self::Row { line, what, found } => write!(f, "line {line}: {what}: `{found}`"),
        }
    }
}

impl std::error::Error for SeriesError {}

impl Series {
    /// Reads a CSV text.
    ///
    /// # Errors
    /// The first place that is wrong; nothing is skipped or guessed.
    pub fn parse(text: &str) -> Result<Self, SeriesError> {
        let mut lines = (1..).zip(text.lines()).filter(|(_, line)| !line.trim().is_empty());
        let (_, header) = lines.next().ok_or(SeriesError::Empty)?;
        let columns: Vec<_> =
            header.trim_start_matches('\u{feff}').split(',').map(str::trim).collect();
        let with_temperature = match columns[..] {
            ["time_s", "level_m"] => false,
            ["time_s", "level_m", "temp_C"] => true,
            _ => return Err(SeriesError::Header { found: header.into() }),
        };
        let mut series = Self { levels: Vec::new(), temperatures: Vec::new() };
        for (line, row) in lines {
            let wrong = |what| SeriesError::Row { line, what, found: row.into() };
            let fields: Vec<_> = row.split(',').map(str::trim).collect();
            if fields.len() != columns.len() {
                return Err(wrong("the row has another number of fields than the header"));
            }
            let number = |index: usize, what| {
                let value = fields[index].parse::<f64>().ok().filter(|value| value.is_finite());
                value.ok_or_else(|| wrong(what))
            };
            let time_s = number(0, "the time is no number")?;
            if !(0.0..=1e10).contains(&time_s) {
                return Err(wrong("the time is negative or beyond 1e10 s"));
            }
            #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "checked")]
            let time_ms = (time_s * 1e3).round() as u64;
            if series.levels.last().is_some_and(|&(last_ms, _)| last_ms >= time_ms) {
                return Err(wrong("the time does not rise"));
            }
            series.levels.push((time_ms, number(1, "the level is no number")?));
            if with_temperature && !fields[2].is_empty() {
                series.temperatures.push((time_ms, number(2, "the temperature is no number")?));
            }
        }
        if series.levels.is_empty() {
            return Err(SeriesError::Empty);
        }
        Ok(series)
    }

    /// Rows.
    #[must_use]
    pub fn len(&self) -> usize {
        self.levels.len()
    }

    /// Whether there is no row; never for a parsed series.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.levels.is_empty()
    }

    /// The series as a story that begins with its first row: no noise, quantisation only.
    #[must_use]
    pub fn story(mut self, duration_ms: Option<u64>) -> Story {
        let start_ms = self.levels.first().map_or(0, |&(time_ms, _)| time_ms);
        for (time_ms, _) in self.levels.iter_mut().chain(&mut self.temperatures) {
            *time_ms = time_ms.saturating_sub(start_ms);
        }
        let last_ms = self.levels.last().map_or(0, |&(time_ms, _)| time_ms);
        let end_ms = duration_ms.unwrap_or(last_ms);
        Story { level: Box::new(self), happenings: Vec::new(), end_ms, noise: 0.0 }
    }
}

impl Level for Series {
    fn level_m(&self, now_ms: u64) -> f64 {
        between(&self.levels, now_ms)
    }

    fn temperature_c(&self, now_ms: u64) -> f64 {
        if self.temperatures.is_empty() { 20.0 } else { between(&self.temperatures, now_ms) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rows_are_hit_exactly_and_joined_straight() {
        let series = Series::parse("time_s,level_m\n10,1.5\n20,2.5\n").unwrap();
        let story = series.story(None);
        assert_eq!(story.end_ms, 10_000);
        for (now_ms, level_m) in [(0, 1.5), (2_500, 1.75), (10_000, 2.5), (99_000, 2.5)] {
            assert!((story.level.level_m(now_ms) - level_m).abs() < 1e-12);
        }
    }

    #[test]
    fn what_is_wrong_is_said_with_its_line() {
        let says = |text: &str| Series::parse(text).unwrap_err().to_string();
        assert!(says("").contains("no row"));
        assert!(says("t,h\n1,2\n").contains("time_s,level_m"));
        assert!(says("time_s,level_m\n0,1\n0,1\n").starts_with("line 3: the time does not rise"));
        assert!(says("time_s,level_m\n0,x\n").starts_with("line 2: the level is no number"));
        assert!(says("time_s,level_m\n0,NaN\n").starts_with("line 2: the level is no number"));
        assert!(says("time_s,level_m\n0\n").contains("another number of fields"));
    }
}
