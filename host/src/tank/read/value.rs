//! Single values: quantities, numbers, words, names, switches.

use toml::de::DeValue;

use super::field::{Field, Range};
use super::section::{Item, Section, listed, shorten};
use crate::nearest::nearest;
use crate::tank::NAME_BYTES;
use crate::tank::finding::{Code, Located, Span};
use crate::tank::schema::Holds;
use crate::units::{Quantity, UnitError, format_si, parse};

impl Section<'_> {
    /// A quantity that may be absent.
    pub(crate) fn take(&mut self, field: Field) -> Option<Located<f64>> {
        let item = self.item(field.key)?;
        self.quantity(field, item)
    }

    /// A quantity that must be there.
    pub(crate) fn need(&mut self, field: Field) -> Option<Located<f64>> {
        let Some(item) = self.item(field.key) else {
            self.missing(field.key, field.write);
            return None;
        };
        self.quantity(field, item)
    }

    /// Reads an item as the quantity that `field` describes.
    pub(crate) fn quantity(&self, field: Field, item: Item<'_>) -> Option<Located<f64>> {
        let Field { key, quantity, range, write } = field;
        self.expect(key, |holds| holds.quantity(quantity));
        let span = item.span().into();
        let text = match item.get_ref() {
            DeValue::String(text) => text,
            DeValue::Integer(_) | DeValue::Float(_) => {
                let message = format!("`{key}` in {} is a bare number", self.place);
                let hint = format!("write the number with its unit in quotes: {key} = {write}");
                self.report(Code::BareNumber, span, message, hint);
                return None;
            }
            _ => {
                self.wrong_type(key, item, "a quantity in quotes", write);
                return None;
            }
        };
        let value = match parse(text, quantity) {
            Ok(value) => value,
            Err(error) => {
                let message = format!("`{key}` in {}: {error}", self.place);
                self.report(code_of(&error), span, message, format!("write {key} = {write}"));
                return None;
            }
        };
        if let Some(limit) = range.broken_by(value, Some(quantity)) {
            let shown = format_si(value, quantity);
            let message = format!("`{key}` in {} is {shown}, {limit}", self.place);
            self.report(Code::OutOfRange, span, message, format!("write {key} = {write}"));
            return None;
        }
        Some(Located::new(value, span))
    }

    /// A list of exactly two quantities.
    pub(crate) fn pair(&mut self, field: Field) -> Option<[Located<f64>; 2]> {
        let (items, span) = self.items(field.key, field.write)?;
        let [low, high] = items else {
            let count = items.len();
            let message =
                format!("`{}` in {} has {count} values, it must have 2", field.key, self.place);
            self.report(Code::WrongType, span, message, hint_for(field));
            return None;
        };
        let (low, high) = (self.quantity(field, low), self.quantity(field, high));
        Some([low?, high?])
    }

    /// A list of rows of two quantities; `None` when one of them could not be read.
    pub(crate) fn rows_of_two(
        &mut self,
        first: Field,
        second: Field,
    ) -> Option<(Vec<(f64, f64)>, Span)> {
        let Field { key, write, .. } = first;
        let (items, span) = self.items(key, write)?;
        let mut rows = Vec::new();
        for item in items {
            let pair = item.get_ref().as_array().map(|array| array.iter().as_slice());
            let Some([one, other]) = pair else {
                self.wrong_type(key, item, "rows of two quantities", write);
                continue;
            };
            if let (Some(one), Some(other)) =
                (self.quantity(first, one), self.quantity(second, other))
            {
                rows.push((one.value, other.value));
            }
        }
        (rows.len() == items.len()).then_some((rows, span))
    }

    /// Two quantities, the first below the second, that must be there.
    pub(crate) fn need_rising_pair(&mut self, field: Field) -> Option<[Located<f64>; 2]> {
        if self.item(field.key).is_none() {
            self.missing(field.key, field.write);
            return None;
        }
        let [low, high] = self.pair(field)?;
        if low.value < high.value {
            return Some([low, high]);
        }
        let span = Span { start: low.span.start, end: high.span.end };
        let (a, b) = (format_si(low.value, field.quantity), format_si(high.value, field.quantity));
        let message = format!("`{}` in {} runs from {a} to {b}", field.key, self.place);
        let hint =
            format!("write the lower value first, the two apart: {} = {}", field.key, field.write);
        self.report(Code::ReversedRange, span, message, hint);
        None
    }

    /// A plain number, or a percentage in quotes, that must be there.
    pub(crate) fn need_ratio(
        &mut self,
        key: &'static str,
        range: Range,
        write: &str,
    ) -> Option<Located<f64>> {
        if self.item(key).is_none() {
            self.missing(key, write);
            return None;
        }
        self.take_ratio(key, range, write)
    }

    /// A plain number, or a percentage in quotes.
    pub(crate) fn take_ratio(
        &mut self,
        key: &'static str,
        range: Range,
        write: &str,
    ) -> Option<Located<f64>> {
        let item = self.item(key)?;
        self.expect(key, |holds| matches!(holds, Holds::Ratio));
        let number = match item.get_ref() {
            DeValue::Float(float) => float.as_str().replace('_', "").parse::<f64>().ok(),
            DeValue::Integer(_) => {
                integer(item).and_then(|value| i32::try_from(value).ok()).map(f64::from)
            }
            DeValue::String(text) => parse(text, Quantity::Ratio).ok(),
            _ => {
                self.wrong_type(key, item, "a number", write);
                return None;
            }
        };
        let span = item.span().into();
        let Some(value) = number.filter(|value| value.is_finite()) else {
            let message = format!("`{key}` in {} is not a finite number", self.place);
            self.report(Code::BadNumber, span, message, format!("write {key} = {write}"));
            return None;
        };
        if let Some(limit) = range.broken_by(value, None) {
            let message = format!("`{key}` in {} is {value}, {limit}", self.place);
            self.report(Code::OutOfRange, span, message, format!("write {key} = {write}"));
            return None;
        }
        Some(Located::new(value, span))
    }

    /// A whole number from `low` to `high` that must be there.
    pub(crate) fn need_integer(
        &mut self,
        key: &'static str,
        low: u32,
        high: u32,
        write: &str,
    ) -> Option<Located<u32>> {
        let Some(item) = self.item(key) else {
            self.missing(key, write);
            return None;
        };
        self.expect(key, |holds| matches!(holds, Holds::Integer(a, b) if (a, b) == (low, high)));
        let DeValue::Integer(number) = item.get_ref() else {
            self.wrong_type(key, item, "a whole number", write);
            return None;
        };
        let value = integer(item).and_then(|value| u32::try_from(value).ok());
        if let Some(value) = value.filter(|value| (low..=high).contains(value)) {
            return Some(Located::new(value, item.span().into()));
        }
        let shown = shorten(&number.to_string());
        let between = if high - low == 1 { "or" } else { "to" };
        let message =
            format!("`{key}` in {} is {shown}, it must be {low} {between} {high}", self.place);
        self.report(
            Code::OutOfRange,
            item.span().into(),
            message,
            format!("write {key} = {write}"),
        );
        None
    }

    /// `true` or `false`.
    pub(crate) fn flag(&mut self, key: &'static str) -> Option<Located<bool>> {
        let item = self.item(key)?;
        self.expect(key, |holds| matches!(holds, Holds::Flag));
        if let DeValue::Boolean(value) = item.get_ref() {
            return Some(Located::new(*value, item.span().into()));
        }
        self.wrong_type(key, item, "true or false", "true or false, without quotes");
        None
    }

    /// A text that says something.
    pub(crate) fn text(&mut self, key: &'static str, write: &str) -> Option<Located<String>> {
        let item = self.item(key)?;
        self.text_of(key, item, write)
    }

    /// A text that must be there.
    pub(crate) fn need_text(&mut self, key: &'static str, write: &str) -> Option<Located<String>> {
        if self.item(key).is_none() {
            self.missing(key, write);
            return None;
        }
        self.text(key, write)
    }

    /// Reads an item as a text that says something.
    pub(crate) fn text_of(
        &self,
        key: &str,
        item: Item<'_>,
        write: &str,
    ) -> Option<Located<String>> {
        let DeValue::String(text) = item.get_ref() else {
            self.wrong_type(key, item, "a text", write);
            return None;
        };
        let trimmed = text.trim();
        if trimmed.is_empty() {
            let message = format!("`{key}` in {} is empty", self.place);
            self.report(
                Code::EmptyText,
                item.span().into(),
                message,
                format!("write {key} = {write}"),
            );
            return None;
        }
        Some(Located::new(trimmed.to_owned(), item.span().into()))
    }

    /// A name, which the device stores.
    pub(crate) fn need_name(&mut self, key: &'static str, write: &str) -> Option<Located<String>> {
        let name = self.need_text(key, write)?;
        let bytes = name.value.len();
        if bytes > NAME_BYTES {
            let message = format!(
                "`{key}` in {} takes {bytes} bytes, the device holds {NAME_BYTES}",
                self.place
            );
            let hint = "shorten it; a letter beyond plain ASCII takes two bytes or more";
            self.report(Code::NameTooLong, name.span, message, hint);
            return None;
        }
        Some(name)
    }

    /// One word of a few that must be there.
    pub(crate) fn need_choice<T: Copy>(
        &mut self,
        key: &'static str,
        words: &[(&'static str, T)],
        write: &str,
    ) -> Option<Located<T>> {
        if self.item(key).is_none() {
            self.missing(key, write);
            return None;
        }
        self.take_choice(key, words, write)
    }

    /// One word of a few.
    pub(crate) fn take_choice<T: Copy>(
        &mut self,
        key: &'static str,
        words: &[(&'static str, T)],
        write: &str,
    ) -> Option<Located<T>> {
        let item = self.item(key)?;
        let same = |all: &[&str]| all.iter().eq(words.iter().map(|(word, _)| word));
        self.expect(key, |holds| matches!(holds, Holds::Words(all) if same(all)));
        let text = self.text_of(key, item, write)?;
        if let Some((_, value)) = words.iter().find(|(word, _)| *word == text.value) {
            return Some(Located::new(*value, text.span));
        }
        let offered: Vec<&str> = words.iter().map(|(word, _)| *word).collect();
        let shown = shorten(&text.value);
        let message =
            format!("`{key}` in {} is `{shown}`, it must be {}", self.place, listed(&offered));
        let hint = match nearest(&text.value, offered) {
            Some(near) => format!("write {key} = \"{near}\", the nearest known word"),
            None => format!("write {key} = {write}"),
        };
        self.report(Code::BadChoice, text.span, message, hint);
        None
    }
}

fn hint_for(field: Field) -> String {
    format!("write {} = {}", field.key, field.write)
}

fn integer(item: Item<'_>) -> Option<i64> {
    let number = item.get_ref().as_integer()?;
    i64::from_str_radix(&number.as_str().replace('_', ""), number.radix()).ok()
}

fn code_of(error: &UnitError) -> Code {
    match error {
        UnitError::MissingUnit { .. } => Code::MissingUnit,
        UnitError::UnknownUnit { .. } | UnitError::TwoScales { .. } => Code::UnknownUnit,
        UnitError::WrongDimension { .. } | UnitError::Absolute { .. } | UnitError::Gauge { .. } => {
            Code::WrongDimension
        }
        UnitError::Empty => Code::EmptyText,
        UnitError::NotANumber { .. }
        | UnitError::NotFinite
        | UnitError::Separator { .. }
        | UnitError::ZeroDenominator
        | UnitError::OffScale { .. }
        | UnitError::InchesOutOfRange { .. } => Code::BadNumber,
    }
}
