//! Every input: the state that was assessed, and every key of the tank file as it is written there,
//! with its line, the value that was used, and its basis.

use super::model::{Block, Row, Table, Words};
use super::{Context, line_of};
use crate::assess::text;
use crate::units::{Quantity, parse};
use toml::Spanned;
use toml::de::{DeTable, DeValue};

/// Kinds of quantity, each tried in turn: a unit belongs to one of them.
const QUANTITIES: [Quantity; 21] = [
    Quantity::Length,
    Quantity::Volume,
    Quantity::Mass,
    Quantity::Pressure,
    Quantity::AbsolutePressure,
    Quantity::Density,
    Quantity::Force,
    Quantity::LineLoad,
    Quantity::Moment,
    Quantity::Time,
    Quantity::Speed,
    Quantity::Flow,
    Quantity::Acceleration,
    Quantity::Temperature,
    Quantity::TemperatureDifference,
    Quantity::PerKelvin,
    Quantity::AngleDegrees,
    Quantity::Ratio,
    Quantity::Voltage,
    Quantity::Current,
    Quantity::Charge,
];

pub(super) fn state(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("State assessed".to_owned()));
    let mut state = Table::new("lll", &["quantity", "value", "where it comes from"]);
    for (label, value, note) in text::state_rows(&context.text()) {
        state.row(vec![label.trim().into(), value.into(), note.into()]);
    }
    blocks.push(Block::Table(state));
}

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Inputs of the tank file".to_owned()));
    blocks.push(Block::text(format!(
        "Every key of {}, as it is written there, and the value as it was read. The basis is that \
         of the capacity to which a value belongs; what has none is stated without one.",
        context.file.path()
    )));
    let titles = ["line", "key", "as written", "value used", "basis"];
    let mut table = Table { look: "inputs", ..Table::new("rllll", &titles) };
    if let Ok(root) = DeTable::parse(context.file.text()) {
        let mut walk = Walk { context, table: &mut table };
        for (key, value) in sorted(root.get_ref()) {
            walk.top(key, value);
        }
    }
    blocks.push(Block::Table(table));
}

/// Keys and values in the order of the file.
fn sorted<'t, 'a>(
    table: &'t DeTable<'a>,
) -> Vec<(&'t Spanned<std::borrow::Cow<'a, str>>, &'t Spanned<DeValue<'a>>)> {
    let mut found: Vec<_> = table.iter().collect();
    found.sort_by_key(|(key, _)| key.span().start);
    found
}

struct Walk<'c, 't> {
    context: &'c Context<'c>,
    table: &'t mut Table,
}

impl Walk<'_, '_> {
    /// A table of the file, or each of several.
    fn top(&mut self, key: &Spanned<std::borrow::Cow<'_, str>>, value: &Spanned<DeValue<'_>>) {
        let name = key.get_ref();
        match value.get_ref() {
            DeValue::Table(table) => {
                self.table.rows.push(Row::group(format!("[{name}]")));
                self.inside("", table, None);
            }
            DeValue::Array(list) if list.iter().all(|one| one.get_ref().is_table()) => {
                for one in list {
                    if let DeValue::Table(table) = one.get_ref() {
                        let title = named(table);
                        self.table.rows.push(Row::group(format!("[[{name}]]{title}")));
                        self.inside("", table, None);
                    }
                }
            }
            _ => self.leaf(name, value, None),
        }
    }

    fn inside(&mut self, path: &str, table: &DeTable<'_>, basis: Option<&str>) {
        let own = table.get("basis").and_then(|basis| basis.get_ref().as_str());
        let basis = own.or(basis);
        for (key, value) in sorted(table) {
            let name = key.get_ref();
            if name == "basis" {
                continue;
            }
            let path = if path.is_empty() { name.to_string() } else { format!("{path}.{name}") };
            self.value(&path, value, basis);
        }
    }

    fn value(&mut self, path: &str, value: &Spanned<DeValue<'_>>, basis: Option<&str>) {
        match value.get_ref() {
            DeValue::Table(table) => self.inside(path, table, basis),
            DeValue::Array(list) if list.iter().any(|one| one.get_ref().is_table()) => {
                let several = list.len() > 1;
                for (index, one) in list.iter().enumerate() {
                    let path =
                        if several { format!("{path} {}", index + 1) } else { path.to_owned() };
                    self.value(&path, one, basis);
                }
            }
            _ => self.leaf(path, value, basis),
        }
    }

    fn leaf(&mut self, path: &str, value: &Spanned<DeValue<'_>>, basis: Option<&str>) {
        let span = value.span();
        let text = self.context.file.text();
        let line = line_of(text, span.start).to_string();
        let written = text.get(span).unwrap_or_default();
        let used = self.used(value.get_ref());
        let basis = basis.unwrap_or_default();
        self.table.row(vec![
            line.into(),
            path.into(),
            Words::from(written).into(),
            used.into(),
            basis.into(),
        ]);
    }

    /// A quantity in the units of the sheet; of anything else nothing is to be said.
    fn used(&self, value: &DeValue<'_>) -> String {
        match value {
            DeValue::String(text) => QUANTITIES
                .iter()
                .find_map(|&quantity| parse(text, quantity).ok().map(|value| (value, quantity)))
                .map_or_else(String::new, |(value, quantity)| self.context.show(value, quantity)),
            DeValue::Array(list) => {
                let each: Vec<String> = list.iter().map(|one| self.used(one.get_ref())).collect();
                let known = each.iter().all(|one| !one.is_empty());
                if known { each.join(", ") } else { String::new() }
            }
            _ => String::new(),
        }
    }
}

/// The name of a part or product behind the heading of its table.
fn named(table: &DeTable<'_>) -> String {
    let name = table.get("name").and_then(|name| name.get_ref().as_str());
    name.map_or_else(String::new, |name| format!(" {name}"))
}
