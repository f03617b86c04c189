//! Findings: what is wrong with a tank file, where, and what to do about it.
//!
//! One run collects every finding. A [`Code`] is stable: scripts may rely on it, wording may
//! change.

use serde::Serialize;

use super::{MAX_FINDINGS, render};

/// A range of bytes in the tank file.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Span {
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

impl From<std::ops::Range<usize>> for Span {
    fn from(range: std::ops::Range<usize>) -> Self {
        Self { start: range.start, end: range.end }
    }
}

/// A value of the tank file with the place where it stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Located<T> {
    /// The value, in the unit that the field's name ends with.
    pub value: T,
    /// Where it is written.
    pub span: Span,
}

impl<T> Located<T> {
    /// A value at a place.
    pub const fn new(value: T, span: Span) -> Self {
        Self { value, span }
    }

    /// Another value made from this one, at the same place.
    pub fn map<U>(self, make: impl FnOnce(T) -> U) -> Located<U> {
        Located { value: make(self.value), span: self.span }
    }
}

macro_rules! codes {
    ($($(#[$doc:meta])* $name:ident = $text:literal,)*) => {
        /// The class of a finding.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Code { $($(#[$doc])* $name,)* }

        impl Code {
            /// Every class there is.
            pub const ALL: &[Self] = &[$(Self::$name,)*];

            /// The stable name of the class.
            #[must_use]
            pub const fn as_str(self) -> &'static str {
                match self { $(Self::$name => $text,)* }
            }
        }
    };
}

codes! {
    /// The file is not UTF-8 text.
    NotUtf8 = "not-utf8",
    /// The file is empty.
    EmptyFile = "empty-file",
    /// The file is larger than any tank file.
    FileTooLarge = "file-too-large",
    /// The file is not TOML.
    Syntax = "syntax",
    /// A key or table stands twice.
    DuplicateKey = "duplicate-key",
    /// A table that is not known.
    UnknownTable = "unknown-table",
    /// A key that is not known.
    UnknownKey = "unknown-key",
    /// Known and meaningful, but not offered by this version.
    NotOffered = "not-offered",
    /// A table, list, text, number or truth value stands where another belongs.
    WrongType = "wrong-type",
    /// A number stands where a quantity with its unit belongs.
    BareNumber = "bare-number",
    /// A text with a number but without a unit.
    MissingUnit = "missing-unit",
    /// The unit measures something else.
    WrongDimension = "wrong-dimension",
    /// The unit is not known.
    UnknownUnit = "unknown-unit",
    /// Not a number, not finite, or ambiguous.
    BadNumber = "bad-number",
    /// Outside what is possible.
    OutOfRange = "out-of-range",
    /// Not one of the words offered.
    BadChoice = "bad-choice",
    /// A required table is missing.
    MissingTable = "missing-table",
    /// A required key is missing.
    MissingKey = "missing-key",
    /// Two keys of which only one may stand.
    ConflictingKeys = "conflicting-keys",
    /// A text that must say something is empty.
    EmptyText = "empty-text",
    /// A name longer than the device can hold.
    NameTooLong = "name-too-long",
    /// Two parts or two liquids with one name.
    DuplicateName = "duplicate-name",
    /// More of something than the device can hold.
    TooMany = "too-many",
    /// The file describes no part.
    NoPart = "no-part",
    /// A part without a capacity.
    MissingCapacity = "missing-capacity",
    /// The basis of a capacity is missing or does not begin with one of its four words.
    Basis = "basis",
    /// A capacity that means nothing on this kind of part.
    CapacityKind = "capacity-kind",
    /// A capacity that leaves nothing to carry load with.
    NoStrength = "no-strength",
    /// A design state in which the part is dry.
    DryDesign = "dry-design",
    /// Rules for steel used on plastics.
    Plastics = "plastics",
    /// Grain, powder and the like, which do not press as a liquid does.
    NotHydrostatic = "not-hydrostatic",
    /// A part reaches above the shell.
    AboveShell = "above-shell",
    /// A part reaches below the floor.
    BelowFloor = "below-floor",
    /// A part is wider than the tank.
    WiderThanTank = "wider-than-tank",
    /// An outline that encloses nothing, crosses itself, or has a hole that it cannot have.
    Outline = "outline",
    /// A mesh that cannot be read, is no surface, or takes more than a table.
    Mesh = "mesh",
    /// A plate whose bending is not solved.
    Plate = "plate",
    /// Two courses cover the same height.
    CourseOverlap = "course-overlap",
    /// Courses leave a height between them uncovered.
    CourseGap = "course-gap",
    /// A part that this kind of tank does not have.
    VesselKind = "vessel-kind",
    /// A design point other than the lower edge, without the rule or outside its limits.
    DesignPoint = "design-point",
    /// An angle that is neither level nor an honest slope.
    Slope = "slope",
    /// A gasket line inside the opening it seals.
    GasketInside = "gasket-inside",
    /// A bolt circle that passes through the opening.
    BoltCircle = "bolt-circle",
    /// A hinge, pivot, latch or pin where it cannot hold the cover.
    Securing = "securing",
    /// A range written from high to low.
    ReversedRange = "reversed-range",
    /// A temperature outside the range of the liquid.
    OutsideRange = "outside-range",
    /// A table of densities that contradicts itself or the density.
    DensityTable = "density-table",
    /// A strapping table that is out of order or ends too early.
    StrappingTable = "strapping-table",
    /// A lighter liquid below a heavier one.
    DensityOrder = "density-order",
    /// Layers whose surfaces are not in falling order.
    LayerOrder = "layer-order",
    /// Levels of `[fill]` in an impossible order.
    FillOrder = "fill-order",
    /// Alarm thresholds that cannot work.
    AlarmOrder = "alarm-order",
    /// Times of `[logging]` that contradict each other.
    Interval = "interval",
    /// A name that no part has.
    UnknownPart = "unknown-part",
    /// Needed for the device, not for a calculation at the desk.
    NeededForSeal = "needed-for-seal",
}

/// One thing wrong with the file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Finding {
    /// Its class.
    pub code: Code,
    /// The bytes it points at; they begin and end at character boundaries.
    pub span: Span,
    /// What is wrong, the value against the limit.
    pub message: String,
    /// What to do.
    pub hint: String,
}

/// All findings of one file, in the order of the file; never empty when returned as an error.
#[derive(Clone, Debug)]
pub struct Findings {
    path: String,
    text: String,
    list: Vec<Finding>,
    omitted: usize,
}

/// A finding as JSON shows it.
#[derive(Serialize)]
struct Row<'a> {
    code: &'static str,
    file: &'a str,
    line: usize,
    column: usize,
    message: &'a str,
    hint: &'a str,
}

impl Findings {
    /// Findings about `text`, which was read from `path`; they are put in the order of the file.
    #[must_use]
    pub fn new(path: &str, text: &str, mut list: Vec<Finding>) -> Self {
        for finding in &mut list {
            let Span { start, end } = finding.span;
            finding.span.start = text.floor_char_boundary(start);
            finding.span.end = text.floor_char_boundary(end.max(start));
        }
        list.sort_by_key(|finding| (finding.span, finding.code));
        list.dedup();
        let omitted = list.len().saturating_sub(MAX_FINDINGS);
        list.truncate(MAX_FINDINGS);
        Self { path: path.to_owned(), text: text.to_owned(), list, omitted }
    }

    /// The findings, in the order of the file.
    #[must_use]
    pub fn list(&self) -> &[Finding] {
        &self.list
    }

    /// How many further findings were left out, beyond [`MAX_FINDINGS`].
    #[must_use]
    pub const fn omitted(&self) -> usize {
        self.omitted
    }

    /// The name of the file, as given to [`super::parse`].
    #[must_use]
    pub fn path(&self) -> &str {
        &self.path
    }

    /// The text of the file.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// Line and column of a finding, both counted from one, the column in characters.
    #[must_use]
    pub fn position(&self, finding: &Finding) -> (usize, usize) {
        let before = self.text.get(..finding.span.start).unwrap_or(&self.text);
        let line_start = before.rfind('\n').map_or(0, |at| at + 1);
        let line = before.bytes().filter(|&b| b == b'\n').count() + 1;
        (line, before[line_start..].chars().count() + 1)
    }

    /// The findings for a person: message, place with caret, what to do.
    #[must_use]
    pub fn to_text(&self, coloured: bool) -> String {
        render::text(self, coloured)
    }

    /// The findings as a JSON array of {code, file, line, column, message, hint}.
    #[must_use]
    pub fn to_json(&self) -> serde_json::Value {
        let rows = self.list.iter().map(|finding| {
            let (line, column) = self.position(finding);
            let Finding { code, message, hint, .. } = finding;
            serde_json::json!(Row {
                code: code.as_str(),
                file: &self.path,
                line,
                column,
                message,
                hint
            })
        });
        serde_json::Value::Array(rows.collect())
    }
}

impl std::fmt::Display for Findings {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.to_text(false))
    }
}

impl std::error::Error for Findings {}
