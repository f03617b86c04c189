//! The parts; `[[course]]`, `[[panel]]` and `[[hatch]]`.

use super::capacity::{self, Bearer, Holding};
use super::curved;
use super::field::{Range, field};
use super::section::{Item, Section};
use super::secured;
use super::shape::{self, Cut, Placed};
use crate::tank::finding::{Code, Located};
use crate::tank::model::{
    Course, DesignPoint, Hatch, Heights, Opens, Panel, Part, PartKind, Plane, Shape,
};
use crate::units::Quantity::{Length, Speed};
use std::path::Path;

/// The parts in the order of the file.
pub(super) struct Parts {
    pub(super) read: Vec<Part>,
    /// Names, also of parts that could not be read.
    pub(super) names: Vec<Located<String>>,
    /// Whether all parts could be read.
    pub(super) complete: bool,
}

/// `folder` is that of the file.
pub(super) fn parts(root: &mut Section<'_>, folder: &Path) -> Parts {
    let mut sections = Vec::new();
    let mut stated = false;
    for (key, write) in [
        ("course", "[[course]] at the head of each course"),
        ("panel", "[[panel]] at the head of each panel"),
        ("hatch", "[[hatch]] at the head of each hatch"),
        ("curved", "[[curved]] at the head of each curved part"),
    ] {
        let empty = |item: Item<'_>| item.get_ref().as_array().is_some_and(|list| list.is_empty());
        stated |= root.item(key).is_some_and(|item| !empty(item));
        sections.extend(root.tables(key, write).into_iter().map(|section| (key, section)));
    }
    if !stated {
        let message = "the file describes no part: nothing would be judged";
        let hint = "write at least one [[course]], [[panel]], [[hatch]] or [[curved]]";
        root.report(Code::NoPart, root.span, message, hint);
    }
    sections.sort_by_key(|(_, section)| section.span);
    let count = sections.len();
    let mut names = Vec::new();
    let mut parts = Vec::new();
    for (kind, mut section) in sections {
        let name = name(&mut section, kind);
        names.extend(name.clone());
        let part = match kind {
            "course" => course(section, name).map(Part::Course),
            "panel" => panel(section, name).map(Part::Panel),
            "hatch" => hatch(section, name).map(Part::Hatch),
            _ => curved::curved(section, name, folder).map(Part::Curved),
        };
        parts.extend(part);
    }
    let complete = parts.len() == count;
    Parts { read: parts, names, complete }
}

fn name(section: &mut Section<'_>, kind: &str) -> Option<Located<String>> {
    let name = section.need_name("name", "\"ground hatch\", a name that no other part has")?;
    section.place = format!("{kind} `{}`", name.value);
    Some(name)
}

fn course(mut section: Section<'_>, name: Option<Located<String>>) -> Option<Course> {
    let bottom = section.need(field(
        "bottom",
        Length,
        Range::ANY,
        "\"2.4 m\", the height of its lower edge",
    ));
    let height = section.need(field(
        "height",
        Length,
        Range::POSITIVE,
        "\"2.4 m\", from its lower to its upper edge",
    ));
    let design_point = design_point(&mut section);
    let ratings = capacity::both(&mut section, Bearer::plain(PartKind::Course));
    let rate = section.take(field(
        "corrosion_rate",
        Speed,
        Range::NOT_NEGATIVE,
        "\"0.05 mm/year\", the loss of thickness",
    ));
    let span = section.span;
    section.finish();
    let (bottom_m, height_m, (capacity, capacity_inward)) = (bottom?, height?, ratings?);
    let heights = Heights {
        bottom_m: bottom_m.value,
        centre_m: bottom_m.value + 0.5 * height_m.value,
        top_m: bottom_m.value + height_m.value,
    };
    Some(Course {
        name: name?,
        bottom_m,
        height_m,
        heights,
        design_point: design_point?,
        capacity,
        capacity_inward,
        corrosion_rate_m_s: rate,
        span,
    })
}

/// The lower edge when not stated, which is the safe side.
fn design_point(section: &mut Section<'_>) -> Option<DesignPoint> {
    const WRITE: &str = "\"0 m\" for the lower edge, or \"0.3 m\" or \"1 ft\" with a rule";
    let rule = section.text("rule", "\"API 653 4.3.3.1\", the rule that allows the design point");
    if section.item("design_point").is_none() {
        return Some(DesignPoint { above_edge_m: 0.0, rule });
    }
    let point = section.take(field("design_point", Length, Range::ANY, WRITE))?;
    let is = |metres: f64| (point.value - metres).abs() < 1e-9;
    if is(0.0) {
        return Some(DesignPoint { above_edge_m: 0.0, rule });
    }
    let message = if !is(0.3) && !is(0.3048) {
        "`design_point` must be \"0 m\", \"0.3 m\" or \"1 ft\""
    } else if rule.is_none() {
        "`design_point` above the lower edge lowers the load and needs the rule that allows it"
    } else {
        return Some(DesignPoint { above_edge_m: point.value, rule });
    };
    let message = format!("{message}, in {}", section.place);
    let hint = "write design_point = \"0 m\", or name the rule: rule = \"API 653 4.3.3.1\"";
    section.report(Code::DesignPoint, point.span, message, hint);
    None
}

fn panel(mut section: Section<'_>, name: Option<Located<String>>) -> Option<Panel> {
    let cut = shape::need_cut(&mut section);
    let placed = shape::place(&mut section, cut.map(|cut| cut.value));
    let ratings = capacity::both(&mut section, Bearer::plain(PartKind::Panel));
    let span = section.span;
    section.finish();
    let (Placed { plane, placed_at }, (capacity, capacity_inward)) = (placed?, ratings?);
    Some(Panel { name: name?, plane, placed_at, capacity, capacity_inward, span })
}

fn hatch(mut section: Section<'_>, name: Option<Located<String>>) -> Option<Hatch> {
    const OPENS: [(&str, Opens); 2] = [("outward", Opens::Outward), ("inward", Opens::Inward)];
    let shape = shape::need(&mut section, "shape");
    let sealed = shape::need(&mut section, "sealed_to");
    let cut = shape.as_ref().map(|shape| Cut { shape: shape.value.clone(), hole: None });
    let placed = shape::place(&mut section, cut);
    let opens = section.need_choice(
        "opens",
        &OPENS,
        "\"outward\", or \"inward\" when the liquid presses the cover on its seat",
    );
    let mass = secured::cover_mass(&mut section);
    let secured_stated = section.item("secured").is_some();
    let secured = secured::secured(&mut section);
    let holding = Holding::of(secured.as_ref().map(|secured| &secured.value), secured_stated);
    let bearer =
        Bearer { opens: opens.map(|o| o.value), holding, ..Bearer::plain(PartKind::Hatch) };
    let ratings = capacity::both(&mut section, bearer);
    gasket(&section, shape.as_ref(), sealed.as_ref());
    let works = match (&secured, &placed, &sealed) {
        (Some(secured), Some(placed), Some(sealed)) => {
            secured::works(&section, secured, &placed.plane, sealed)
        }
        _ => true,
    };
    let span = section.span;
    section.finish();
    if !works || (secured_stated && secured.is_none()) {
        return None;
    }
    let (Placed { plane, placed_at }, (capacity, capacity_inward)) = (placed?, ratings?);
    let sealed = Plane::centred(sealed?.value, plane.slope_deg, plane.heights.centre_m);
    Some(Hatch {
        name: name?,
        opening: plane,
        sealed,
        placed_at,
        opens: opens?,
        secured,
        mass: mass?,
        capacity,
        capacity_inward,
        span,
    })
}

/// The gasket encloses the opening.
fn gasket(section: &Section<'_>, shape: Option<&Located<Shape>>, sealed: Option<&Located<Shape>>) {
    let Some(shape) = shape else { return };
    if let Some(sealed) = sealed.filter(|sealed| !sealed.value.encloses(&shape.value)) {
        let message = format!(
            "`sealed_to` in {} is {}, smaller than the opening, {}",
            section.place,
            shape::describe(&sealed.value),
            shape::describe(&shape.value)
        );
        let hint = "give the mean line of the gasket; it runs around the clear opening";
        section.report(Code::GasketInside, sealed.span, message, hint);
    }
}
