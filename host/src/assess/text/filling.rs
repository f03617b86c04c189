//! The time to limit at the inflow that was given.

use super::Sheet;
use crate::page::Page;
use crate::units::Quantity::{Flow, Length, Time, Volume};

pub(super) fn filling(sheet: &Sheet<'_>, page: &mut Page) {
    let Some(filling) = sheet.assessment.document.filling else { return };
    page.blank();
    let inflow = sheet.show(filling.inflow_m3_s, Flow);
    let from = sheet.show(sheet.request.level_m, Length);
    page.heading(&format!("Time to limit at an inflow of {inflow}, from {from}"));
    let ways = [
        ("limit", filling.to_limit, "the lowest calculated limit level"),
        ("bound", filling.to_bound, "where the first bound reaches its capacity"),
        ("alarm", filling.to_alarm, "where the first bound reaches the alarm threshold"),
        ("overflow", filling.to_overflow, "the overflow"),
    ];
    for (label, way, what) in ways {
        let Some(way) = way else { continue };
        let time = match way.time_s {
            _ if way.volume_m3 <= 0.0 => "reached".to_owned(),
            None => "not filling".to_owned(),
            Some(time_s) => sheet.show(time_s, Time),
        };
        let (level, volume) = (sheet.show(way.level_m, Length), sheet.show(way.volume_m3, Volume));
        let text = format!("{time}: {volume} up to {level}, {what}");
        page.paragraph(&format!("  {label:<10}"), &text);
    }
    if filling.to_limit.is_none() && filling.to_bound.is_none() {
        page.line("  no part reaches its capacity in this tank");
    }
    if let (Some(enough), Some(response_s)) = (filling.enough, filling.response_time_s) {
        let verdict = if enough { "enough" } else { "SHORT" };
        let response = sheet.show(response_s, Time);
        let text = format!(
            "From the alarm to the bound's limit, against a response time of {response}: {verdict}."
        );
        page.paragraph("  ", &text);
    }
}
