//! Set-points of a head sensor, margins, and the budget of the governing part.

use super::Sheet;
use crate::assess::{SetPoint, Times, together};
use crate::page::Page;
use crate::units::Quantity::{Current, Length, Pressure, Time, Volume};

pub(super) fn set_points(sheet: &Sheet<'_>, page: &mut Page) {
    let document = &sheet.assessment.document;
    let points = [("warn", document.warn_set_point), ("alarm", document.alarm_set_point)];
    for (name, point) in points {
        let Some(point) = point else { continue };
        let SetPoint { pressure_pa, current_a, .. } = point;
        let current = current_a.map_or_else(String::new, |current_a| {
            format!(" or {}", sheet.show(current_a, Current))
        });
        let text = format!(
            "set at {}{current}: {} of the lightest, {} of the nominal, {} of the densest liquid",
            sheet.show(pressure_pa, Pressure),
            sheet.show(point.level_lightest_m, Length),
            sheet.show(point.level_nominal_m, Length),
            sheet.show(point.level_densest_m, Length)
        );
        page.paragraph(&format!("  {name:<7}"), &text);
    }
}

pub(super) fn margin(sheet: &Sheet<'_>, page: &mut Page) {
    let Some(margin) = &sheet.assessment.document.margin else { return };
    page.blank();
    page.heading("Margin from the alarm to the limit, as the sensor sees them");
    for part in &margin.per_part {
        let verdict = if part.enough { "enough" } else { "SHORT" };
        let text = format!(
            "{} {}: {} given, {} needed, {verdict}",
            part.name,
            part.side,
            sheet.show(part.given_m, Length),
            sheet.show(part.needed_m, Length)
        );
        page.paragraph("  ", &text);
    }
    if margin.per_part.is_empty() {
        page.line("  no part reaches its capacity in this tank");
    }
    times(sheet, page);
    budget(sheet, page);
    volume(sheet, page);
}

fn times(sheet: &Sheet<'_>, page: &mut Page) {
    let alarm = sheet.file.alarm.as_ref();
    let Some(times) = alarm.and_then(|alarm| Times::of(sheet.file, &alarm.alarm)) else { return };
    let show = |time_s: f64| sheet.show(time_s, Time);
    let text = format!(
        "Needed at the highest rise for {} = {} at rest + {} reading and retries + {} on-delay + {} \
         failed sensor + {} response. The bound has the uncertainties in it already.",
        show(times.sum_s()),
        show(times.idle_s),
        show(times.reading_s),
        show(times.on_delay_s),
        show(times.failed_after_s),
        show(times.response_s)
    );
    page.paragraph("  ", &text);
}

/// What the uncertainties cost in level at the alarm.
fn budget(sheet: &Sheet<'_>, page: &mut Page) {
    let document = &sheet.assessment.document;
    let Some(level_m) = document.alarm_level_m else { return };
    let widths = sheet.assessment.desk.half_widths_m(level_m);
    let (straight, quadrature) = together(&widths.map(|(_, width_m)| width_m));
    let each: Vec<String> = widths
        .iter()
        .filter(|(_, width_m)| *width_m > 0.0)
        .map(|(what, width_m)| format!("{what} {}", sheet.show(*width_m, Length)))
        .collect();
    if each.is_empty() {
        return;
    }
    let text = format!(
        "Uncertainty of the level at the alarm: {}; together {} straight, {} in quadrature.",
        each.join(", "),
        sheet.show(straight, Length),
        sheet.show(quadrature, Length)
    );
    page.paragraph("  ", &text);
}

/// What the time to limit on the device rests on.
fn volume(sheet: &Sheet<'_>, page: &mut Page) {
    let (Some(curve), Some(window_s)) =
        (crate::compile::curve(sheet.file), sheet.file.inflow_window_s())
    else {
        return;
    };
    let Some((_, full_m3)) = curve.rows.last() else { return };
    let error = if curve.error_m3 > 0.0 {
        format!(", within {}", sheet.show(curve.error_m3, Volume))
    } else {
        String::new()
    };
    let text = format!(
        "Time to limit on the device: volume by {} rows up to {}{error}; the inflow is taken over \
         {} and lags by as much.",
        curve.rows.len(),
        sheet.show(*full_m3, Volume),
        sheet.show(window_s, Time)
    );
    page.paragraph("  ", &text);
}
