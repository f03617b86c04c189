//! `capacity` and `capacity_inward`: which capacities a part may have, and what each says.

pub(in crate::tank) mod offered;

use self::offered::{noun, offered};
use super::field::{Range, field};
use super::plate;
use super::section::{Section, shorten};
use super::wall::{Asked, Wall, wall};
use crate::tank::finding::{Code, Located, Span};
use crate::tank::model::{
    Axis, Basis, BasisKind, Capacity, CoverPlate, Opens, PartKind, Rating, Secured,
};
use crate::units::Quantity::{Density, Force, Length, LineLoad, Moment, Pressure};

/// Every capacity that a file may name, also those for a later version.
const KINDS: [&str; 13] = [
    "plate",
    "hoop_tension",
    "designed_for",
    "bolt",
    "force",
    "pressure",
    "none",
    "latch",
    "hinge",
    "moment",
    "cover",
    "tension",
    "compression",
];

/// The part that carries, as far as it decides which capacities mean something.
#[derive(Clone, Copy)]
pub(super) struct Bearer {
    pub(super) kind: PartKind,
    /// To which side a hatch opens, when that could be read.
    pub(super) opens: Option<Opens>,
    /// What holds a cover.
    pub(super) holding: Holding,
    /// Whether it is a shell of revolution.
    pub(super) shell: bool,
}

/// What holds a cover, as far as it decides which capacities mean something.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Holding {
    /// Not stated.
    Nothing,
    /// Stated and not readable: nothing is concluded.
    Unreadable,
    /// Bolts.
    Bolts,
    /// A hinge beside the opening, and latches.
    Hinge,
    /// A pivot across the opening.
    Pivot {
        /// Whether it has latches.
        latched: bool,
    },
}

impl Holding {
    pub(super) fn of(secured: Option<&Secured>, stated: bool) -> Self {
        match secured {
            None if stated => Self::Unreadable,
            None => Self::Nothing,
            Some(Secured::Bolts(_)) => Self::Bolts,
            Some(Secured::Hinged(hinged)) => match hinged.axis {
                Axis::Pivot { .. } => Self::Pivot { latched: !hinged.latches.is_empty() },
                _ => Self::Hinge,
            },
        }
    }

    /// Whether a capacity of this key has something to be compared with.
    fn has(self, key: &str) -> bool {
        match self {
            Self::Unreadable => true,
            Self::Nothing => false,
            Self::Bolts => key == "bolt",
            Self::Hinge => key != "bolt",
            Self::Pivot { latched } => key != "bolt" && (latched || key != "latch"),
        }
    }
}

impl Bearer {
    /// A part without a cover.
    pub(super) const fn plain(kind: PartKind) -> Self {
        Self { kind, opens: None, holding: Holding::Nothing, shell: false }
    }
}

/// The outward and the inward list; `None` when either could not be read.
pub(super) fn both(
    section: &mut Section<'_>,
    bearer: Bearer,
) -> Option<(Vec<Rating>, Vec<Rating>)> {
    let outward = list(section, "capacity", bearer);
    if outward.as_ref().is_some_and(Vec::is_empty) {
        let message = format!("{} has no capacity, it would never be judged", section.place);
        let example = match bearer.kind {
            PartKind::Course => "hoop_tension = \"419 kN/m\"",
            PartKind::Panel | PartKind::Hatch | PartKind::Curved => "force = \"20 kN\"",
        };
        let hint = format!(
            "write capacity = [ {{ {example}, basis = \"drawing\" }} ], or say why there is none: \
             capacity = [ {{ none = \"rated by others\" }} ]"
        );
        section.report(Code::MissingCapacity, section.span, message, hint);
        return None;
    }
    let inward = list(section, "capacity_inward", bearer);
    Some((outward?, inward?))
}

/// Empty when the key is absent or its list is.
fn list(section: &mut Section<'_>, key: &'static str, bearer: Bearer) -> Option<Vec<Rating>> {
    const WRITE: &str = "[ { force = \"20 kN\", basis = \"drawing\" } ]";
    if section.item(key).is_none() {
        return Some(Vec::new());
    }
    let (items, _) = section.items(key, WRITE)?;
    let entries = section.tables(key, WRITE);
    let inward = key == "capacity_inward";
    let read: Vec<Rating> =
        entries.into_iter().filter_map(|entry| rating(entry, bearer, inward)).collect();
    (read.len() == items.len()).then_some(read)
}

fn rating(mut entry: Section<'_>, bearer: Bearer, inward: bool) -> Option<Rating> {
    const WRITE: &str = "write one kind of capacity in each entry";
    let kind = entry.at_most_one(&KINDS, WRITE);
    if kind.is_none() {
        let message = format!("{} names no capacity", entry.place);
        let hint =
            format!("a {} may have {}", noun(bearer.kind), offered(bearer, inward).join(", "));
        entry.report(Code::MissingKey, entry.span, message, hint);
    }
    let basis = entry.text("basis", WRITE_BASIS);
    let basis_stated = entry.item("basis").is_some();
    let material_stated = entry.item("material").is_some();
    let material = material(&mut entry);
    entry.refuse("valid", "a capacity with a date or a wall temperature is not offered");
    let remaining_stated = entry.item("remaining").is_some();
    let remaining = entry.take_ratio(
        "remaining",
        Range::SHARE,
        "0.9, thickness now as a share of that when new",
    );
    let span = kind.and_then(|kind| entry.key_span(kind)).unwrap_or(entry.span);
    let allowed = kind.is_some_and(|kind| may_have(&entry, kind, span, bearer, inward));
    let capacity = if allowed {
        kind.and_then(|kind| capacity(&mut entry, kind, bearer.kind, remaining))
    } else {
        None
    };
    if let (Some(kind), true) = (kind, remaining_stated && kind != Some("designed_for")) {
        let span = entry.key_span("remaining").unwrap_or(span);
        let message = format!("`remaining` means nothing beside `{kind}`");
        entry.report(Code::ConflictingKeys, span, message, "it goes with designed_for only");
    }
    let checked = check_basis(&entry, kind, basis, basis_stated);
    entry.finish();
    if (material_stated && material.is_none()) || (remaining_stated && remaining.is_none()) {
        return None;
    }
    Some(Rating { capacity: Located::new(capacity?, span), basis: checked?, material })
}

const WRITE_BASIS: &str =
    "\"surveyed 2026-05\", or beginning with drawing, code default or assumed";

/// The outer option is whether it could be read.
#[expect(clippy::option_option, reason = "no basis and an unreadable basis differ")]
fn check_basis(
    entry: &Section<'_>,
    kind: Option<&str>,
    basis: Option<Located<String>>,
    stated: bool,
) -> Option<Option<Located<Basis>>> {
    let Some(basis) = basis else {
        if !stated && kind != Some("none") {
            let message = format!("`basis` is missing in {}", entry.place);
            entry.report(Code::Basis, entry.span, message, format!("write basis = {WRITE_BASIS}"));
        }
        return (!stated && kind == Some("none")).then_some(None);
    };
    let lower = basis.value.to_lowercase();
    let begins = |word: &str| {
        lower.strip_prefix(word).is_some_and(|rest| !rest.starts_with(char::is_alphanumeric))
    };
    if let Some(&(_, kind)) = BasisKind::WORDS.iter().find(|(word, _)| begins(word)) {
        return Some(Some(basis.map(|text| Basis { kind, text })));
    }
    let message = format!(
        "`basis` begins with none of surveyed, drawing, code default and assumed: `{}`",
        shorten(&basis.value)
    );
    entry.report(Code::Basis, basis.span, message, format!("write basis = {WRITE_BASIS}"));
    None
}

/// Reports and returns false when the part cannot have this capacity.
fn may_have(entry: &Section<'_>, key: &str, span: Span, bearer: Bearer, inward: bool) -> bool {
    let part = noun(bearer.kind);
    let offered = offered(bearer, inward);
    let hint = format!("a {part} may have {} here", offered.join(", "));
    if !offered.contains(&key) {
        let side = if inward { "inward" } else { "outward" };
        let message = format!("capacity `{key}` means nothing for the {side} load of a {part}");
        entry.report(Code::CapacityKind, span, message, hint);
        return false;
    }
    !["bolt", "latch", "hinge", "moment"].contains(&key) || held(entry, key, span, bearer, inward)
}

/// What secures a cover carries only the load that pulls it off its seat. Pins of a hinge may be
/// pulled one way by a load the other way.
fn held(entry: &Section<'_>, key: &str, span: Span, bearer: Bearer, inward: bool) -> bool {
    if !bearer.holding.has(key) {
        let (needs, hint) = match key {
            "bolt" => (
                "the bolts of the cover",
                "write secured = { bolts = 28, bolt_circle_diameter = \"0.77 m\" } in the hatch",
            ),
            "latch" => (
                "a latch of the cover",
                "write secured = { hinge = \"top\", offset = \"80 mm\", latch_at = \"0.70 m\" } in \
                 the hatch",
            ),
            _ => (
                "a hinge or pivot of the cover",
                "write secured = { hinge = \"top\", offset = \"80 mm\", latch_at = \"0.70 m\" } in \
                 the hatch",
            ),
        };
        let message = format!("capacity `{key}` needs {needs}");
        entry.report(Code::MissingKey, span, message, hint);
        return false;
    }
    if key == "hinge" || matches!(bearer.holding, Holding::Pivot { .. }) {
        return true;
    }
    let on_seat = match bearer.opens {
        Some(Opens::Outward) => inward,
        Some(Opens::Inward) => !inward,
        None => false,
    };
    if on_seat {
        let (load, side) = if inward { ("inward", "outward") } else { ("outward", "inward") };
        let message = format!("an {load} load presses a cover that opens {side} on its seat");
        let hint = "what secures it carries nothing of it: rate the cover by force or pressure";
        entry.report(Code::CapacityKind, span, message, hint);
    }
    !on_seat
}

fn capacity(
    entry: &mut Section<'_>,
    kind: &'static str,
    part: PartKind,
    remaining: Option<Located<f64>>,
) -> Option<Capacity> {
    let mut single = |quantity, write| {
        entry.need(field(kind, quantity, Range::POSITIVE, write)).map(|value| value.value)
    };
    match kind {
        "hoop_tension" => single(LineLoad, "\"419 kN/m\"").map(|n_m| Capacity::HoopTension { n_m }),
        "bolt" => single(Force, "\"18 kN\", on one bolt").map(|n| Capacity::Bolt { n }),
        "latch" => single(Force, "\"6 kN\", on one latch").map(|n| Capacity::Latch { n }),
        "hinge" => single(Force, "\"8 kN\", on one pin").map(|n| Capacity::Hinge { n }),
        "moment" => {
            single(Moment, "\"4 kN m\", about the hinge").map(|n_m| Capacity::Moment { n_m })
        }
        "cover" => cover(entry).map(Capacity::Cover),
        "force" => single(Force, "\"20 kN\", on the whole part").map(|n| Capacity::Force { n }),
        "pressure" => single(Pressure, "\"60 kPa\"").map(|pa| Capacity::Pressure { pa }),
        "tension" => {
            single(LineLoad, "\"120 kN/m\", in any direction").map(|n_m| Capacity::Tension { n_m })
        }
        "compression" => single(LineLoad, "\"30 kN/m\", in any direction, by a buckling check")
            .map(|n_m| Capacity::Compression { n_m }),
        "plate" if part == PartKind::Panel => plate::panel(entry).map(Capacity::Panel),
        "plate" => course_plate(entry),
        "designed_for" => designed_for(entry, remaining),
        _ => {
            let reason = entry.need_text("none", "\"rated by others\", why there is none")?;
            Some(Capacity::None { reason: reason.value })
        }
    }
}

fn course_plate(entry: &mut Section<'_>) -> Option<Capacity> {
    let mut plate = entry.table("plate", "{ thickness = \"4.6 mm\", .. }")?;
    let asked = Asked {
        thickness: ("\"4.6 mm\", as measured or drawn", 0.2),
        allowance_needed: true,
        stress: "\"137 MPa\", of the plate, by the design code",
    };
    let wall = wall(&mut plate, &asked);
    let joint = plate.need_ratio(
        "joint_efficiency",
        Range::SHARE,
        "0.85, by the design code and the radiographs",
    );
    if plate.item("edges").is_some() {
        let span = plate.key_span("edges").unwrap_or(plate.span);
        let message = "`edges` means nothing for the plate of a course";
        plate.report(Code::UnknownKey, span, message, "remove it: a course is a closed ring");
    }
    plate.finish();
    let Wall { thickness_m, allowance_m, stress_pa } = wall?;
    Some(Capacity::Plate {
        thickness_m,
        corrosion_allowance_m: allowance_m?,
        allowable_stress_pa: stress_pa,
        joint_efficiency: joint?,
    })
}

fn cover(entry: &mut Section<'_>) -> Option<CoverPlate> {
    const WRITE: &str = "{ thickness = \"14 mm\", allowable_stress = \"137 MPa\", \
                         attachment_factor = 0.3 }";
    let mut cover = entry.table("cover", WRITE)?;
    let asked = Asked {
        thickness: ("\"14 mm\", as measured or drawn", 0.5),
        allowance_needed: false,
        stress: "\"137 MPa\", of the plate, by the design code",
    };
    let wall = wall(&mut cover, &asked);
    let joint_stated = cover.item("joint_efficiency").is_some();
    let joint = cover.take_ratio("joint_efficiency", Range::SHARE, "0.85, of a seam in the cover");
    let factor = cover.need_ratio(
        "attachment_factor",
        Range::between(0.1, 0.75),
        "0.3, the rule's factor C for the way in which the cover is attached",
    );
    let load_stated = cover.item("bolt_load").is_some();
    let write = "\"390 kN\", of all bolts, where it exceeds the load of the liquid";
    let load = cover.take(field("bolt_load", Force, Range::POSITIVE, write));
    cover.finish();
    let unread = |stated: bool, value: Option<Located<f64>>| stated && value.is_none();
    if unread(joint_stated, joint) || unread(load_stated, load) {
        return None;
    }
    let Wall { thickness_m, allowance_m, stress_pa } = wall?;
    Some(CoverPlate {
        thickness_m,
        corrosion_allowance_m: allowance_m,
        allowable_stress_pa: stress_pa,
        joint_efficiency: joint,
        attachment_factor: factor?,
        bolt_load_n: load,
    })
}

fn designed_for(entry: &mut Section<'_>, remaining: Option<Located<f64>>) -> Option<Capacity> {
    const WRITE: &str = "{ level = \"9.0 m\", density = \"1000 kg/m3\", gas = \"0 kPa\" }";
    let mut state = entry.table("designed_for", WRITE)?;
    let level = state.need(field(
        "level",
        Length,
        Range::ANY,
        "\"9.0 m\", the level of the design, above the datum",
    ));
    let density = state.need(field("density", Density, Range::POSITIVE, "\"1000 kg/m3\""));
    let gas = state.need(field(
        "gas",
        Pressure,
        Range::above(-101_325.0, 1e7),
        "\"0 kPa\", the gas pressure of the design, gauge",
    ));
    state.finish();
    Some(Capacity::DesignedFor {
        level_m: level?,
        density_kg_m3: density?,
        gas_pa: gas?,
        remaining,
    })
}

/// The metal or concrete that a capacity is for. Plastics are refused by name.
fn material(entry: &mut Section<'_>) -> Option<Located<String>> {
    const SOUND: [&str; 10] = [
        "steel",
        "stainless",
        "iron",
        "aluminium",
        "aluminum",
        "copper",
        "brass",
        "bronze",
        "titanium",
        "concrete",
    ];
    const PLASTICS: [&str; 22] = [
        "plastic",
        "plastics",
        "polyethylene",
        "polythene",
        "polypropylene",
        "pe",
        "pe80",
        "pe100",
        "hdpe",
        "pp",
        "pvc",
        "cpvc",
        "pvdf",
        "grp",
        "frp",
        "fibreglass",
        "fiberglass",
        "nylon",
        "polyester",
        "epoxy",
        "acrylic",
        "polycarbonate",
    ];
    let text = entry.text("material", "\"steel\"")?;
    let lower = text.value.to_lowercase();
    let has = |list: &[&str]| {
        lower.split(|c: char| !c.is_alphanumeric()).any(|word| list.contains(&word))
    };
    if has(&PLASTICS) {
        let message = format!(
            "`{}`: the strength of plastics falls with time and temperature, rules for steel do \
             not hold",
            shorten(&text.value)
        );
        let hint = "not offered by this version: it would have to ask for a date and for the \
                    temperature of the wall";
        entry.report(Code::Plastics, text.span, message, hint);
        return None;
    }
    if has(&SOUND) {
        return Some(text);
    }
    let message = format!("material `{}` is not known", shorten(&text.value));
    let hint = "name a metal, as in material = \"steel\", or concrete; or leave it out";
    entry.report(Code::BadChoice, text.span, message, hint);
    None
}
