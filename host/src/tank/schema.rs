//! What a tank file may hold: every table, its keys, what each key holds and what it is for.
//!
//! The readers look a key up here before they ask for it, so that none can be read that is not
//! described; the tests show that every key described is read. [`document`] writes the same as JSON
//! Schema, for editors.

mod document;
mod liquid;
mod outline;
mod part;
mod rating;
mod root;
mod sensor;
mod service;

pub use self::document::document;
pub(crate) use self::root::ROOT;

use crate::units::Quantity;

/// A table of the file.
#[derive(Debug)]
pub(crate) struct Table {
    /// Its name in the schema; no two tables have the same.
    pub(crate) name: &'static str,
    pub(crate) about: &'static str,
    /// Keys, in groups that several tables share.
    pub(crate) keys: &'static [&'static [Key]],
    /// Keys that the reader knows in order to refuse them with a reason.
    pub(crate) refused: &'static [&'static str],
    pub(crate) rules: &'static [Rule],
}

/// A key of a table.
#[derive(Debug)]
pub(crate) struct Key {
    pub(crate) name: &'static str,
    pub(crate) holds: Holds,
    /// Whether it must stand in every such table.
    pub(crate) needed: bool,
    pub(crate) about: &'static str,
}

/// What a key holds.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Holds {
    /// A text with a number and a unit of one of these quantities.
    Quantity(&'static [Quantity]),
    /// The same, or a list of such texts.
    Several(Quantity),
    /// Two such texts.
    Pair(&'static [Quantity]),
    /// Rows of two such texts.
    Rows(Quantity, Quantity),
    /// A number without a unit, or a percentage as text.
    Ratio,
    /// A whole number between these, both possible.
    Integer(u32, u32),
    /// True or false.
    Flag,
    /// A text that says something.
    Text,
    /// A list of that many such texts at least.
    Texts(u8),
    /// One of these words.
    Words(&'static [&'static str]),
    /// A table.
    Table(&'static Table),
    /// A list of tables.
    Tables(&'static Table),
    /// A quantity, this word, or a table that says more.
    QuantityWordOrTable(&'static [Quantity], &'static str, &'static Table),
    /// A quantity, or a table that says more.
    QuantityOrTable(Quantity, &'static Table),
}

/// What the keys of a table ask of each other.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Rule {
    /// Exactly one of these stands.
    OneOf(&'static [&'static str]),
    /// Exactly one of the others stands where the first does.
    OneOfWith(&'static str, &'static [&'static str]),
    /// One of these at most stands.
    AtMostOne(&'static [&'static str]),
    /// At least one of these stands.
    AnyOf(&'static [&'static str]),
    /// What follows from a key.
    When(When),
}

/// A condition on one key, and what follows where it holds and where it does not.
#[derive(Clone, Copy, Debug)]
pub(crate) struct When {
    pub(crate) key: &'static str,
    pub(crate) is: Is,
    pub(crate) needs: &'static [&'static str],
    pub(crate) forbids: &'static [&'static str],
    pub(crate) else_needs: &'static [&'static str],
    pub(crate) else_forbids: &'static [&'static str],
}

impl When {
    /// A condition from which nothing follows yet.
    const fn new(key: &'static str, is: Is) -> Self {
        Self { key, is, needs: &[], forbids: &[], else_needs: &[], else_forbids: &[] }
    }
}

/// What a condition asks of its key.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Is {
    /// That it stands.
    There,
    /// That it is true.
    True,
    /// That it is one of these words.
    Word(&'static [&'static str]),
}

/// A key that must stand.
const fn need(name: &'static str, holds: Holds, about: &'static str) -> Key {
    Key { name, holds, needed: true, about }
}

/// A key that may be left out, or that a rule asks for.
const fn may(name: &'static str, holds: Holds, about: &'static str) -> Key {
    Key { name, holds, needed: false, about }
}

/// A table without refused keys and rules.
const fn plain(name: &'static str, about: &'static str, keys: &'static [&'static [Key]]) -> Table {
    Table { name, about, keys, refused: &[], rules: &[] }
}

const LENGTH: Holds = Holds::Quantity(&[Quantity::Length]);
const PRESSURE: Holds = Holds::Quantity(&[Quantity::Pressure]);
const DENSITY: Holds = Holds::Quantity(&[Quantity::Density]);
const FORCE: Holds = Holds::Quantity(&[Quantity::Force]);
const LINE_LOAD: Holds = Holds::Quantity(&[Quantity::LineLoad]);
const MOMENT: Holds = Holds::Quantity(&[Quantity::Moment]);
const SPEED: Holds = Holds::Quantity(&[Quantity::Speed]);
const TIME: Holds = Holds::Quantity(&[Quantity::Time]);
const ANGLE: Holds = Holds::Quantity(&[Quantity::AngleDegrees]);
const VOLTAGE: Holds = Holds::Quantity(&[Quantity::Voltage]);
const CURRENT: Holds = Holds::Quantity(&[Quantity::Current]);

/// Stands for a table that is not described, which the tests rule out.
static NOT_DESCRIBED: Table = plain("", "", &[]);

impl Table {
    pub(crate) fn key(&self, name: &str) -> Option<&'static Key> {
        self.all().find(|key| key.name == name)
    }

    /// Whether the reader may ask for a key.
    pub(crate) fn knows(&self, name: &str) -> bool {
        self.key(name).is_some() || self.refused.contains(&name)
    }

    /// The table below a key.
    pub(crate) fn below(&self, name: &str) -> &'static Self {
        let below = self.key(name).and_then(|key| key.holds.table());
        debug_assert!(below.is_some(), "no table `{name}` is described in {}", self.name);
        below.unwrap_or(&NOT_DESCRIBED)
    }

    pub(crate) fn all(&self) -> impl Iterator<Item = &'static Key> {
        self.keys.iter().copied().flatten()
    }
}

impl Holds {
    pub(crate) const fn table(self) -> Option<&'static Table> {
        match self {
            Self::Table(table)
            | Self::Tables(table)
            | Self::QuantityOrTable(_, table)
            | Self::QuantityWordOrTable(_, _, table) => Some(table),
            _ => None,
        }
    }

    /// Whether a text may hold this quantity.
    pub(crate) fn quantity(self, asked: Quantity) -> bool {
        match self {
            Self::Quantity(all) | Self::QuantityWordOrTable(all, ..) | Self::Pair(all) => {
                all.contains(&asked)
            }
            Self::Several(one) | Self::QuantityOrTable(one, _) => one == asked,
            Self::Rows(first, second) => [first, second].contains(&asked),
            _ => false,
        }
    }
}
