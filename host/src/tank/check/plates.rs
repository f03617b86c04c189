//! Plates of panels: which of them bend in a way that is solved.

use crate::plate::{ASPECT_MAX, Edges};
use crate::tank::finding::{Code, Span};
use crate::tank::model::{Capacity, Panel, Part, Rating, Shape, outline};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;

pub(super) fn all(draft: &Draft, sink: &Sink) {
    for part in &draft.parts {
        let Part::Panel(panel) = part else { continue };
        for rating in panel.capacity.iter().chain(&panel.capacity_inward) {
            if let Capacity::Panel(plate) = &rating.capacity.value {
                solved(panel, rating.capacity.span, sink);
                free_top(panel, plate.edges.value, plate.edges.span, sink);
                concrete(panel, rating, sink);
            }
        }
    }
}

/// Rectangles up to 1 to 8 and circles, without a hole.
fn solved(panel: &Panel, span: Span, sink: &Sink) {
    let name = &panel.name.value;
    let (message, hint) = match (outline(panel), &panel.plane.shape) {
        (None, _) if panel.plane.hole.is_some() => (
            format!("panel `{name}` has a hole: the bending of a plate around one is not solved"),
            "rate it by force or pressure from a calculation of its own".to_owned(),
        ),
        (None, _) => (
            format!("panel `{name}` is neither rectangle nor circle: its bending is not solved"),
            "rate it by force or pressure from a calculation of its own".to_owned(),
        ),
        (Some(_), Shape::Rectangle { width_m, length_m }) => {
            let ratio = (width_m / length_m).max(length_m / width_m);
            if ratio <= ASPECT_MAX {
                return;
            }
            (
                format!(
                    "the sides of panel `{name}` are as 1 to {ratio:.1}, the series holds to 8"
                ),
                "take it as a strip, and rate it by the pressure that follows".to_owned(),
            )
        }
        (Some(_), _) => return,
    };
    sink.report(Code::Plate, span, message, hint);
}

/// Only an upright or inclined rectangle has an upper edge.
fn free_top(panel: &Panel, edges: Edges, span: Span, sink: &Sink) {
    let upper = matches!(panel.plane.shape, Shape::Rectangle { .. }) && !panel.plane.is_level();
    if edges == Edges::TopFree && !upper {
        let message = format!("panel `{}` has no upper edge that could be free", panel.name.value);
        let hint = "write edges = \"clamped\" or \"supported\"; top free is for rectangles that \
                    are not level";
        sink.report(Code::Plate, span, message, hint);
    }
}

/// Cracks and reinforcement decide there, not the bending of an even plate.
fn concrete(panel: &Panel, rating: &Rating, sink: &Sink) {
    let Some(material) = &rating.material else { return };
    if material.value.to_lowercase().contains("concrete") {
        let message = format!(
            "panel `{}`: cracks and reinforcement decide in concrete, not an allowable stress",
            panel.name.value
        );
        let hint = "rate it by pressure from a calculation by its own code";
        sink.report(Code::Plate, material.span, message, hint);
    }
}
