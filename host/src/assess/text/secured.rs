//! What holds a cover, and whether its opening must stay shut.

use super::Sheet;
use crate::page::Page;
use crate::tank::{Axis, BoltLine, Hatch, Hinged, Opens, Secured};
use crate::units::Quantity::{Length, Mass};

/// What holds a cover, as the end of a line.
pub(super) fn secured(sheet: &Sheet<'_>, hatch: &Hatch) -> String {
    let show = |value: f64| sheet.show(value, Length);
    let held = match hatch.secured.as_ref().map(|secured| &secured.value) {
        None => String::new(),
        Some(Secured::Bolts(bolts)) => {
            let line = match bolts.line {
                BoltLine::Circle { diameter_m } => show(diameter_m),
                BoltLine::Rectangle { width_m, length_m } => {
                    format!("{} x {}", show(width_m), show(length_m))
                }
            };
            format!(", {} bolts on {line}", bolts.count)
        }
        Some(Secured::Hinged(hinged)) => self::hinged(sheet, hinged),
    };
    let opens = match hatch.opens.value {
        Opens::Inward => ", opens inward",
        Opens::Outward => "",
    };
    let mass = hatch.mass.map_or_else(String::new, |mass| {
        let measured =
            if mass.value.measured { "weighed" } else { "not weighed, relieves nothing" };
        format!(", cover {} ({measured})", sheet.show(mass.value.kg, Mass))
    });
    format!("{held}{opens}{mass}")
}

fn hinged(sheet: &Sheet<'_>, hinged: &Hinged) -> String {
    let show = |value: f64| sheet.show(value, Length);
    let line = match hinged.axis {
        Axis::Top { offset_m } => format!(", hinge {} above the opening", show(offset_m)),
        Axis::Bottom { offset_m } => format!(", hinge {} below the opening", show(offset_m)),
        Axis::Side { offset_m, pins_m } => {
            let pins = pins_m.map_or_else(String::new, |[lower, upper]| {
                format!(", pins at {} and {}", show(lower), show(upper))
            });
            format!(", hinge {} beside the opening{pins}", show(offset_m))
        }
        Axis::Pivot { height_m } => format!(", pivot at {}", show(height_m.value)),
    };
    let latches: Vec<String> = hinged
        .latches
        .iter()
        .map(|latch| match (latch.lever_m, latch.height_m) {
            (Some(lever), Some(height)) => {
                format!("{} from the hinge line at {}", show(lever), show(height))
            }
            (Some(lever), None) => format!("{} from the hinge line", show(lever)),
            (None, height) => format!("at {}", show(height.unwrap_or(0.0))),
        })
        .collect();
    match latches.as_slice() {
        [] => line,
        [one] => format!("{line}, latch {one}"),
        several => format!(
            "{line}, latches {} (equal and equally stiff, on a rigid cover)",
            several.join(" and ")
        ),
    }
}

/// Openings, by wetting and never by load.
pub(super) fn openings(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = &sheet.assessment.document.parts;
    let openings: Vec<_> =
        rows.iter().filter_map(|row| row.opening.as_ref().map(|one| (&row.name, one))).collect();
    if openings.is_empty() {
        return;
    }
    page.blank();
    page.heading("Openings, judged by wetting and never by load");
    for (name, opening) in openings {
        page.paragraph("  ", &format!("{name}: {}", opening.words(sheet.units)));
    }
}
