//! Parts, levels and outside liquid against the tank.

use super::TOGETHER_M;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Capacity, Course, Part, Plane, Vessel};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;
use crate::units::Quantity::{Length, Pressure};
use crate::units::format_si;

fn metres(value: f64) -> String {
    format_si(value, Length)
}

pub(super) fn parts(draft: &Draft, sink: &Sink) {
    for part in &draft.parts {
        if let Some(vessel) = &draft.vessel {
            inside_shell(part, vessel, sink);
            fits_across(part, vessel, sink);
            if let Part::Course(course) = part {
                course_in(course, vessel, sink);
            }
        }
        designed_wet(part, sink);
    }
}

fn inside_shell(part: &Part, vessel: &Vessel, sink: &Sink) {
    let Some(shell_m) = vessel.height_m() else { return };
    let heights = part.heights();
    let (kind, name) = (part.kind().as_str(), part.name());
    if heights.top_m > shell_m + TOGETHER_M {
        let message = format!(
            "{kind} `{name}` reaches up to {}, the shell top is at {}",
            metres(heights.top_m),
            metres(shell_m)
        );
        let hint = "check its height and extent, or the height of the shell";
        sink.report(Code::AboveShell, part.placed_at(), message, hint);
    }
    if heights.bottom_m < -TOGETHER_M {
        let message = format!(
            "{kind} `{name}` reaches down to {}, the floor is at 0 m",
            metres(heights.bottom_m)
        );
        let hint = "check its height and extent; heights count from the inside bottom";
        sink.report(Code::BelowFloor, part.placed_at(), message, hint);
    }
}

/// A flat part is no wider than the tank.
fn fits_across(part: &Part, vessel: &Vessel, sink: &Sink) {
    let plane: &Plane = match part {
        Part::Course(_) | Part::Curved(_) => return,
        Part::Panel(panel) => &panel.plane,
        Part::Hatch(hatch) => &hatch.sealed,
    };
    let across_m = match vessel {
        Vessel::Cylinder { diameter_m, .. } => diameter_m.value,
        Vessel::Box { length_m, width_m, .. } => length_m.value.max(width_m.value),
        Vessel::Lying { diameter_m, length_m } => length_m.value.max(diameter_m.value),
        Vessel::Strapped { .. } | Vessel::Loose => return,
    };
    let mut width_m = plane.shape.width_m();
    if plane.is_level() {
        width_m = width_m.max(plane.shape.length_m());
    }
    if width_m > across_m + TOGETHER_M {
        let message = format!(
            "{} `{}` is {} wide, the tank {} across",
            part.kind().as_str(),
            part.name(),
            metres(width_m),
            metres(across_m)
        );
        let hint = "check its width and the unit of it";
        sink.report(Code::WiderThanTank, part.located_name().span, message, hint);
    }
}

fn course_in(course: &Course, vessel: &Vessel, sink: &Sink) {
    let Vessel::Cylinder { diameter_m, .. } = vessel else {
        let message = format!("course `{}` needs a cylinder", course.name.value);
        let hint =
            "write cylinder = { diameter, height } in [tank], or use [[panel]] for flat walls";
        sink.report(Code::VesselKind, course.name.span, message, hint);
        return;
    };
    one_foot(course, *diameter_m, sink);
    for rating in course.capacity.iter().chain(&course.capacity_inward) {
        if let Capacity::Plate { thickness_m, .. } = &rating.capacity.value {
            // Thin shell: radius at least ten times the thickness.
            let limit_m = diameter_m.value / 20.0;
            if thickness_m.value > limit_m {
                let message = format!(
                    "`thickness` is {}, the thin-shell formula holds up to {} at this diameter",
                    metres(thickness_m.value),
                    metres(limit_m)
                );
                let hint = "check the unit, or give hoop_tension from a thick-shell calculation";
                sink.report(Code::OutOfRange, thickness_m.span, message, hint);
            }
        }
    }
}

/// Limits of the design point above the lower edge. Source: API 653 4.3.3.1.
fn one_foot(course: &Course, diameter_m: Located<f64>, sink: &Sink) {
    const LARGEST_M: f64 = 61.0;
    if course.design_point.above_edge_m <= 0.0 {
        return;
    }
    let at = course.design_point.rule.as_ref().map_or(course.name.span, |rule| rule.span);
    let name = &course.name.value;
    if diameter_m.value > LARGEST_M {
        let message = format!(
            "course `{name}`: a design point above the edge holds up to 61 m of diameter, the \
             tank has {}",
            metres(diameter_m.value)
        );
        let hint = "write design_point = \"0 m\" and remove the rule (API 653 4.3.3.1)";
        sink.report(Code::DesignPoint, at, message, hint);
    }
    if course.height_m.value <= course.design_point.above_edge_m {
        let message = format!(
            "course `{name}` is {} high, its design point lies {} above its edge",
            metres(course.height_m.value),
            metres(course.design_point.above_edge_m)
        );
        let hint = "write design_point = \"0 m\" and remove the rule";
        sink.report(Code::DesignPoint, course.height_m.span, message, hint);
    }
}

/// A part that is dry in its design state got no strength from it.
fn designed_wet(part: &Part, sink: &Sink) {
    for rating in part.capacity() {
        let Capacity::DesignedFor { level_m, .. } = &rating.capacity.value else { continue };
        let bottom_m = part.heights().bottom_m;
        if level_m.value <= bottom_m {
            let message = format!(
                "{} `{}` begins at {}, above the level of its design, {}",
                part.kind().as_str(),
                part.name(),
                metres(bottom_m),
                metres(level_m.value)
            );
            let hint = "no capacity follows from a state in which a part is dry: give another one";
            sink.report(Code::DryDesign, level_m.span, message, hint);
        }
    }
}

/// lowest < maximum <= overflow <= shell top.
pub(super) fn fill(draft: &Draft, sink: &Sink) {
    let fill = &draft.fill;
    let shell = draft.vessel.as_ref().and_then(Vessel::height_m);
    let closed = fill.closed.is_some_and(|closed| closed.value);
    let order = |level: Option<Located<f64>>, key: &str, limit: Option<f64>, of: &str| {
        let (Some(level), Some(limit)) = (level, limit) else { return };
        if level.value > limit + TOGETHER_M {
            let (at, limit) = (metres(level.value), metres(limit));
            let message = format!("`{key}` in [fill] is {at}, above {of}, {limit}");
            sink.report(Code::FillOrder, level.span, message, "correct one of the two");
        }
    };
    let overflow = fill.overflow_m.map(|level| level.value);
    // In a closed tank the overflow pipe may rise above the roof.
    if !closed {
        order(fill.overflow_m, "overflow", shell, "the shell top");
        order(fill.maximum_m, "maximum", shell, "the shell top");
    }
    order(fill.maximum_m, "maximum", overflow, "the overflow");
    let top = fill.maximum_m.map(|level| level.value).or(overflow).or(shell);
    order(fill.lowest_m, "lowest", top, "the highest level");
}

/// A strapping table reaches up to where the tank can be filled.
pub(super) fn strapping(draft: &Draft, sink: &Sink) {
    let Some(strapping) = &draft.strapping else { return };
    let top = draft.vessel.as_ref().and_then(Vessel::height_m);
    let top = draft.fill.overflow_m.map(|level| level.value).or(top);
    let (Some(&(first_m, _)), Some(&(last_m, _)), Some(top_m)) =
        (strapping.rows.first(), strapping.rows.last(), top)
    else {
        return;
    };
    if first_m > TOGETHER_M || last_m < top_m - TOGETHER_M {
        let message = format!(
            "`strapping` in [tank] covers {} to {}, the tank can be filled from 0 m to {}",
            metres(first_m),
            metres(last_m),
            metres(top_m)
        );
        let hint = "add the rows that are missing; volumes are not guessed beyond the table";
        sink.report(Code::StrappingTable, strapping.span, message, hint);
    }
}

pub(super) fn outside(draft: &Draft, sink: &Sink) {
    for outside in &draft.outside {
        let Some(lowest) = outside.lowest_m else { continue };
        if lowest.value > outside.highest_m.value {
            let message = format!(
                "`lowest` in [[outside]] is {}, above `highest`, {}",
                metres(lowest.value),
                metres(outside.highest_m.value)
            );
            sink.report(Code::ReversedRange, lowest.span, message, "correct one of the two");
        }
    }
}

/// A pressure in words, for the checks of gas.
pub(super) fn pascals(value: f64) -> String {
    format_si(value, Pressure)
}
