//! A table of the file as a reader sees it: it is asked for keys by name, collects findings, and
//! in the end reports every key that nobody asked for.
//!
//! A key that is asked for and wrong gives a finding and no value. Readers ask for all keys first
//! and give up afterwards, so one run shows every finding.

use std::cell::RefCell;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use crate::nearest::nearest;
use crate::tank::finding::{Code, Finding, Located, Span};
use crate::tank::schema::{Holds, Table};

/// A value with its place, as the parser gives it.
pub(crate) type Item<'a> = &'a Spanned<DeValue<'a>>;

/// Where findings gather.
#[derive(Default)]
pub(crate) struct Sink(RefCell<Vec<Finding>>);

impl Sink {
    /// Adds a finding.
    pub(crate) fn report(
        &self,
        code: Code,
        span: Span,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) {
        let finding = Finding { code, span, message: message.into(), hint: hint.into() };
        self.0.borrow_mut().push(finding);
    }

    /// Takes back the findings about a key missing at `span`.
    fn withdraw(&self, span: Span, message: &str) {
        let stays = |f: &Finding| f.span != span || f.message != message;
        self.0.borrow_mut().retain(stays);
    }

    /// All findings so far.
    pub(crate) fn into_inner(self) -> Vec<Finding> {
        self.0.into_inner()
    }
}

/// One table with the keys that were asked for.
pub(crate) struct Section<'a> {
    table: &'a DeTable<'a>,
    /// Where findings about the table as a whole point.
    pub(crate) span: Span,
    /// Its name for messages, such as `[liquid]`.
    pub(crate) place: String,
    asked: Vec<&'static str>,
    /// What is described of it.
    described: &'static Table,
    pub(crate) sink: &'a Sink,
}

impl<'a> Section<'a> {
    pub(crate) fn new(
        table: &'a DeTable<'a>,
        span: Span,
        place: impl Into<String>,
        described: &'static Table,
        sink: &'a Sink,
    ) -> Self {
        Self { table, span, place: place.into(), asked: Vec::new(), described, sink }
    }

    /// Takes note of a key that is asked for, which must be described.
    fn ask(&mut self, key: &'static str) {
        debug_assert!(
            self.described.knows(key),
            "`{key}` is not described in table `{}`",
            self.described.name
        );
        #[cfg(test)]
        asked::note(self.described.name, key);
        self.asked.push(key);
    }

    /// Holds what is asked of a key against what is described.
    pub(crate) fn expect(&self, key: &str, fits: impl Fn(Holds) -> bool) {
        let described = self.described.key(key);
        debug_assert!(
            described.is_none_or(|key| fits(key.holds)),
            "`{key}` of table `{}` is described otherwise",
            self.described.name
        );
    }

    /// The value of a key, which is known from now on.
    pub(crate) fn item(&mut self, key: &'static str) -> Option<Item<'a>> {
        self.ask(key);
        self.table.get(key)
    }

    /// Whether a key stands, which was asked for before.
    pub(crate) fn item_is_there(&self, key: &str) -> bool {
        self.table.contains_key(key)
    }

    /// Where a key stands, if it does; the key is known from now on.
    pub(crate) fn key_span(&mut self, key: &'static str) -> Option<Span> {
        self.ask(key);
        self.table.get_key_value(key).map(|(key, _)| key.span().into())
    }

    /// Adds a finding.
    pub(crate) fn report(
        &self,
        code: Code,
        span: Span,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) {
        self.sink.report(code, span, message, hint);
    }

    /// Reports a required key that is missing. `write` follows `key = ` in the hint.
    pub(crate) fn missing(&self, key: &str, write: &str) {
        self.report(Code::MissingKey, self.span, self.lacks(key), format!("write {key} = {write}"));
    }

    fn lacks(&self, key: &str) -> String {
        format!("`{key}` is missing in {}", self.place)
    }

    /// Reports a value of the wrong TOML type.
    pub(crate) fn wrong_type(&self, key: &str, item: Item<'_>, wanted: &str, write: &str) {
        let found = article(item.get_ref().type_str());
        let place = if self.place.is_empty() { "the file" } else { &self.place };
        let message = format!("`{key}` in {place} is {found}, it must be {wanted}");
        // What to write is a table header, or what follows the key.
        let header = write.trim_start_matches('[').starts_with(char::is_alphabetic);
        let hint = if header && write.starts_with('[') {
            format!("write {write}")
        } else {
            format!("write {key} = {write}")
        };
        self.report(Code::WrongType, item.span().into(), message, hint);
    }

    /// Refuses a key that is known and not offered.
    pub(crate) fn refuse(&mut self, key: &'static str, instead: &str) {
        if let Some(span) = self.key_span(key) {
            let message = format!("`{key}` in {} is not offered by this version", self.place);
            self.report(Code::NotOffered, span, message, instead);
        }
    }

    /// A table below this one.
    pub(crate) fn table(&mut self, key: &'static str, write: &str) -> Option<Section<'a>> {
        let item = self.item(key)?;
        let DeValue::Table(table) = item.get_ref() else {
            self.wrong_type(key, item, "a table", write);
            return None;
        };
        let place = if self.place.is_empty() { format!("[{key}]") } else { self.place_of(key) };
        let below = self.described.below(key);
        Some(Section::new(table, item.span().into(), place, below, self.sink))
    }

    /// A table below this one that must be there.
    pub(crate) fn need_table(&mut self, key: &'static str, write: &str) -> Option<Section<'a>> {
        if self.item(key).is_none() {
            self.missing(key, write);
            return None;
        }
        self.table(key, write)
    }

    /// A list of tables below this one; empty when absent.
    pub(crate) fn tables(&mut self, key: &'static str, write: &str) -> Vec<Section<'a>> {
        let Some(item) = self.item(key) else { return Vec::new() };
        let DeValue::Array(array) = item.get_ref() else {
            self.wrong_type(key, item, "a list of tables", write);
            return Vec::new();
        };
        let mut found = Vec::new();
        for entry in array {
            if let DeValue::Table(table) = entry.get_ref() {
                let root = self.place.is_empty();
                let place = if root { format!("[[{key}]]") } else { self.place_of(key) };
                let below = self.described.below(key);
                found.push(Section::new(table, entry.span().into(), place, below, self.sink));
            } else {
                self.wrong_type(key, entry, "a list of tables", write);
            }
        }
        found
    }

    /// The items of a list.
    pub(crate) fn items(
        &mut self,
        key: &'static str,
        write: &str,
    ) -> Option<(&'a [Spanned<DeValue<'a>>], Span)> {
        let item = self.item(key)?;
        if let DeValue::Array(array) = item.get_ref() {
            return Some((array, item.span().into()));
        }
        self.wrong_type(key, item, "a list", write);
        None
    }

    /// Of several keys one at most may stand; gives the one that does. `write` is a full hint.
    pub(crate) fn at_most_one(
        &mut self,
        keys: &[&'static str],
        write: &str,
    ) -> Option<&'static str> {
        let mut first = None;
        for &key in keys {
            let Some(span) = self.key_span(key) else { continue };
            if let Some(first) = first {
                let message = format!("`{key}` stands beside `{first}` in {}", self.place);
                self.report(Code::ConflictingKeys, span, message, write);
            } else {
                first = Some(key);
            }
        }
        first
    }

    /// Of several keys exactly one must stand; gives the one that does. `write` is a full hint.
    pub(crate) fn one_of(&mut self, keys: &[&'static str], write: &str) -> Option<&'static str> {
        let found = self.at_most_one(keys, write);
        if found.is_none() {
            let message = format!("{} needs {}", self.place, listed(keys));
            self.report(Code::MissingKey, self.span, message, write);
        }
        found
    }

    /// Reports every key that was not asked for.
    pub(crate) fn finish(self) {
        for key in self.table.keys() {
            let word = key.get_ref().as_ref();
            if !self.asked.contains(&word) {
                let hint = match nearest(word, self.asked.iter().copied()) {
                    Some(near) => {
                        // One slip is one finding.
                        self.sink.withdraw(self.span, &self.lacks(near));
                        format!("write {near}, the nearest known key, or remove it")
                    }
                    None => format!("remove it; known here: {}", self.known()),
                };
                let message = format!("key `{}` is not known in {}", shorten(word), self.place);
                self.report(Code::UnknownKey, key.span().into(), message, hint);
            }
        }
    }

    /// The keys of the table, for a reader that reports unknown ones in its own words.
    pub(crate) fn unasked(&self) -> Vec<(Located<&'a str>, Item<'a>)> {
        let rest =
            self.table.iter().filter(|(key, _)| !self.asked.contains(&key.get_ref().as_ref()));
        rest.map(|(key, item)| (Located::new(key.get_ref().as_ref(), key.span().into()), item))
            .collect()
    }

    /// The keys asked for so far, each once.
    pub(crate) fn known(&self) -> String {
        let mut keys = self.asked.clone();
        keys.sort_unstable();
        keys.dedup();
        keys.join(", ")
    }

    fn place_of(&self, key: &str) -> String {
        format!("`{key}` of {}", self.place)
    }
}

/// `` `a`, `b` or `c` ``.
pub(crate) fn listed(words: &[&str]) -> String {
    let quoted: Vec<String> = words.iter().map(|word| format!("`{word}`")).collect();
    match quoted.split_last() {
        Some((last, [])) => last.clone(),
        Some((last, rest)) => format!("{} or {last}", rest.join(", ")),
        None => String::new(),
    }
}

/// A word from the file, cut to what a message can hold.
pub(crate) fn shorten(word: &str) -> String {
    const LONGEST: usize = 40;
    if word.chars().count() <= LONGEST {
        return word.to_owned();
    }
    word.chars().take(LONGEST).chain(std::iter::once('\u{2026}')).collect()
}

fn article(type_name: &str) -> String {
    match type_name {
        "string" => "a text".to_owned(),
        "array" => "a list".to_owned(),
        "boolean" => "a truth value".to_owned(),
        "integer" => "a whole number".to_owned(),
        "float" => "a number".to_owned(),
        "datetime" => "a date".to_owned(),
        other => format!("a {other}"),
    }
}

/// What the readers asked for, for the test of the description.
#[cfg(test)]
pub(crate) mod asked {
    use std::cell::RefCell;
    use std::collections::BTreeSet;

    thread_local! {
        static ASKED: RefCell<BTreeSet<(&'static str, &'static str)>> = RefCell::default();
    }

    pub(super) fn note(table: &'static str, key: &'static str) {
        ASKED.with_borrow_mut(|asked| asked.insert((table, key)));
    }

    /// Table and key of all that was asked for on this thread.
    pub(crate) fn all() -> BTreeSet<(&'static str, &'static str)> {
        ASKED.with_borrow(Clone::clone)
    }
}
