//! Courses against each other: from the bottom up, without gaps and overlaps.

use super::TOGETHER_M;
use crate::tank::finding::Code;
use crate::tank::model::{Course, Part, TankFile, Vessel};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;
use crate::units::Quantity::Length;
use crate::units::format_si;

/// The courses from the bottom up.
fn rising(parts: &[Part]) -> Vec<&Course> {
    let courses = parts.iter().filter_map(|part| match part {
        Part::Course(course) => Some(course),
        _ => None,
    });
    let mut courses: Vec<&Course> = courses.collect();
    courses.sort_by(|a, b| a.heights.bottom_m.total_cmp(&b.heights.bottom_m));
    courses
}

pub(super) fn stacked(draft: &Draft, sink: &Sink) {
    // A course that could not be read would look like a gap.
    if !draft.parts_complete {
        return;
    }
    for pair in rising(&draft.parts).windows(2) {
        let [lower, upper] = pair else { continue };
        let apart_m = upper.heights.bottom_m - lower.heights.top_m;
        let (code, what, hint) = if apart_m > TOGETHER_M {
            let hint = "correct its bottom, or write the course between, if need be with \
                        capacity = [ { none = \"why\" } ]";
            (Code::CourseGap, "leaves a gap above", hint)
        } else if apart_m < -TOGETHER_M {
            (Code::CourseOverlap, "overlaps", "correct its bottom or the height of the other one")
        } else {
            continue;
        };
        let message = format!(
            "course `{}` begins at {} and {what} course `{}`, which ends at {}",
            upper.name.value,
            format_si(upper.heights.bottom_m, Length),
            lower.name.value,
            format_si(lower.heights.top_m, Length)
        );
        sink.report(code, upper.bottom_m.span, message, hint);
    }
}

/// Stretches of the shell that no course covers.
pub(crate) fn uncovered(file: &TankFile) -> Vec<(f64, f64)> {
    let Vessel::Cylinder { height_m, .. } = &file.vessel else { return Vec::new() };
    let mut found = Vec::new();
    let mut reached_m = 0.0;
    for course in rising(&file.parts) {
        if course.heights.bottom_m > reached_m + TOGETHER_M {
            found.push((reached_m, course.heights.bottom_m));
        }
        reached_m = course.heights.top_m;
    }
    if height_m.value > reached_m + TOGETHER_M {
        found.push((reached_m, height_m.value));
    }
    found
}
