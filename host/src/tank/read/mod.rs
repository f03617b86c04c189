//! Reads the tables of a tank file. A [`Draft`] holds what could be read; findings hold the rest.

mod alarm;
mod capacity;
mod curved;
pub(super) mod field;
mod level;
mod liquid;
mod outline;
mod part;
mod plate;
pub(super) mod section;
mod secured;
mod service;
mod shape;
mod surroundings;
mod value;
mod vessel;
mod wall;

#[cfg(test)]
pub(super) use self::capacity::offered;

use std::path::Path;
use toml::de::{DeTable, DeValue};

use self::section::{Section, Sink};
use super::finding::{Code, Finding, Findings, Located, Span};
use super::model::{
    Alarms, Fill, Gas, Gravity, Layer, LevelSensor, Liquid, Logging, Outside, Part, Power,
    Strapping, TankFile, TemperatureSignal, Vessel,
};
use super::schema::ROOT;
use super::{MAX_FILE_BYTES, check};
use crate::nearest::nearest;

/// What could be read. A piece is absent when the file lacks it or when it has findings.
pub(super) struct Draft {
    pub(super) name: Option<Located<String>>,
    pub(super) vessel: Option<Vessel>,
    pub(super) strapping: Option<Strapping>,
    pub(super) conditions: Vec<Located<String>>,
    pub(super) fill: Fill,
    pub(super) liquid: Option<Liquid>,
    pub(super) below: Vec<Layer>,
    pub(super) temperature_signal: Option<TemperatureSignal>,
    pub(super) products: Vec<Liquid>,
    pub(super) gas: Option<Gas>,
    pub(super) outside: Vec<Outside>,
    pub(super) gravity: Option<Gravity>,
    pub(super) level: Option<LevelSensor>,
    pub(super) parts: Vec<Part>,
    /// Names of all parts, also of those that could not be read.
    pub(super) part_names: Vec<Located<String>>,
    /// Whether every part could be read.
    pub(super) parts_complete: bool,
    pub(super) alarm: Option<Alarms>,
    pub(super) logging: Option<Logging>,
    pub(super) device_id: Option<Located<String>>,
    pub(super) power: Option<Power>,
}

/// Reads and checks a file.
pub(super) fn file(path: &str, folder: &Path, bytes: &[u8]) -> Result<TankFile, Findings> {
    let text = match decode(bytes) {
        Ok(text) => text,
        Err(finding) => {
            return Err(Findings::new(path, &String::from_utf8_lossy(bytes), vec![finding]));
        }
    };
    let (root, errors) = DeTable::parse_recoverable(text);
    let syntax: Vec<Finding> = errors.iter().map(|error| from_parser(error, text.len())).collect();
    // A repeated key leaves the rest readable; behind a broken line other findings would mislead.
    if syntax.iter().any(|finding| finding.code == Code::Syntax) {
        return Err(Findings::new(path, text, syntax));
    }
    let sink = Sink::default();
    let draft = root_tables(root.get_ref(), text.len(), folder, &sink);
    check::all(&draft, &sink);
    let mut findings = sink.into_inner();
    findings.extend(syntax);
    match complete(draft, path, text) {
        Some(file) if findings.is_empty() => Ok(file),
        _ => Err(Findings::new(path, text, findings)),
    }
}

/// The bytes as text of a size that a tank file has.
fn decode(bytes: &[u8]) -> Result<&str, Finding> {
    let whole = |code, message: String, hint: &str| Finding {
        code,
        span: Span { start: 0, end: 0 },
        message,
        hint: hint.to_owned(),
    };
    if bytes.len() > MAX_FILE_BYTES {
        let message = format!("the file has {} bytes, the limit is {MAX_FILE_BYTES}", bytes.len());
        return Err(whole(Code::FileTooLarge, message, "check that this is a tank file"));
    }
    let text = std::str::from_utf8(bytes).map_err(|error| {
        let at = error.valid_up_to();
        let message = format!("the file is not UTF-8 text from byte {at} on");
        let mut finding = whole(Code::NotUtf8, message, "save the file as UTF-8");
        finding.span = Span { start: at, end: at };
        finding
    })?;
    if text.trim_start_matches('\u{feff}').trim().is_empty() {
        let hint = "write at least [tank], [liquid], [gas] and one part such as [[course]]";
        return Err(whole(Code::EmptyFile, "the file is empty".to_owned(), hint));
    }
    Ok(text)
}

fn from_parser(error: &toml::de::Error, len: usize) -> Finding {
    let span = error.span().map_or(Span { start: len, end: len }, Span::from);
    let duplicate = error.message().starts_with("duplicate key");
    let (code, hint) = if duplicate {
        (Code::DuplicateKey, "keep one of the two")
    } else {
        (Code::Syntax, "correct the line; the rest is checked once the file is valid TOML")
    };
    let message = if duplicate {
        "this key or table stands twice".to_owned()
    } else {
        format!("not valid TOML: {}", error.message())
    };
    Finding { code, span, message, hint: hint.to_owned() }
}

fn root_tables(table: &DeTable<'_>, len: usize, folder: &Path, sink: &Sink) -> Draft {
    let end = Span { start: len, end: len };
    let mut root = Section::new(table, end, "", &ROOT, sink);
    let vessel::Tank { name, vessel, strapping, conditions } = vessel::tank(&mut root);
    let fill = vessel::fill(&mut root);
    let liquid::State { liquid, below, temperature_signal } = liquid::state(&mut root);
    let products = liquid::products(&mut root);
    let gas = surroundings::gas(&mut root);
    let outside = surroundings::outside(&mut root);
    let gravity = surroundings::gravity(&mut root);
    let level = level::level(&mut root);
    let part::Parts { read: parts, names: part_names, complete: parts_complete } =
        part::parts(&mut root, folder);
    let alarm = alarm::alarms(&mut root);
    let logging = service::logging(&mut root);
    let device_id = service::device(&mut root);
    let power = service::power(&mut root);
    unknown_tables(&root);
    Draft {
        name,
        vessel,
        strapping,
        conditions,
        fill,
        liquid,
        below,
        temperature_signal,
        products,
        gas,
        outside,
        gravity,
        level,
        parts,
        part_names,
        parts_complete,
        alarm,
        logging,
        device_id,
        power,
    }
}

/// What practitioners call our tables.
const SYNONYMS: [(&str, &str); 12] = [
    ("strake", "course"),
    ("ring", "course"),
    ("tier", "course"),
    ("shell", "course"),
    ("manhole", "hatch"),
    ("manway", "hatch"),
    ("manlid", "hatch"),
    ("door", "hatch"),
    ("wall", "panel"),
    ("sheet", "panel"),
    ("layer", "liquid.below"),
    ("sensor", "level"),
];

/// Reports tables and keys at the top of the file that no reader asked for.
fn unknown_tables(root: &Section<'_>) {
    for (key, item) in root.unasked() {
        let word = section::shorten(key.value);
        let is_table = matches!(item.get_ref(), DeValue::Table(_) | DeValue::Array(_));
        let (code, what) =
            if is_table { (Code::UnknownTable, "table") } else { (Code::UnknownKey, "key") };
        if ["grain", "powder", "bulk", "silo"].contains(&key.value) {
            let message = format!("table `{word}`: {}", liquid::NOT_HYDROSTATIC);
            root.report(Code::NotHydrostatic, key.span, message, liquid::NOT_HYDROSTATIC_HINT);
            continue;
        }
        let known = root.known().replace("curved, ", "");
        let synonym = SYNONYMS.iter().find(|(theirs, _)| *theirs == key.value);
        let near = synonym.map(|(_, ours)| *ours).or_else(|| nearest(key.value, known.split(", ")));
        let hint = match near {
            Some(near) => format!("write {near}, the nearest known table"),
            None => format!("remove it; known tables: {known}"),
        };
        root.report(code, key.span, format!("{what} `{word}` is not known"), hint);
    }
}

/// The file, when every required piece could be read.
fn complete(draft: Draft, path: &str, text: &str) -> Option<TankFile> {
    Some(TankFile {
        path: path.to_owned(),
        text: text.to_owned(),
        name: draft.name?,
        vessel: draft.vessel?,
        strapping: draft.strapping,
        conditions: draft.conditions,
        fill: draft.fill,
        liquid: draft.liquid?,
        below: draft.below,
        temperature_signal: draft.temperature_signal,
        products: draft.products,
        gas: draft.gas?,
        outside: draft.outside,
        gravity: draft.gravity?,
        level: draft.level,
        parts: draft.parts,
        alarm: draft.alarm,
        logging: draft.logging,
        device_id: draft.device_id,
        power: draft.power,
    })
}
