//! How long the cell lasts.

use super::Sheet;
use crate::energy::Use;
use crate::page::Page;

/// Columns of a name and of a figure.
const NAME: usize = 26;
const FIGURE: usize = 14;

pub(super) fn battery(sheet: &Sheet<'_>, page: &mut Page) {
    let Some(energy) = &sheet.assessment.document.energy else { return };
    let line = |name: &str, figure: &dyn Fn(&Use) -> String| {
        let [fixed, adaptive] = [&energy.fixed, &energy.adaptive].map(figure);
        format!("  {name:<NAME$}{fixed:>FIGURE$}{adaptive:>FIGURE$}")
    };
    page.blank();
    page.heading(&format!("{:<28}{:>14}{:>14}", "Battery, an estimate", "fixed", "adaptive"));
    page.line(&line("samples a day", &|of| format!("{:.0}", of.samples_per_day)));
    page.line(&line("mAh a day", &|of| format!("{:.2}", of.charge_per_day_c / 3.6)));
    page.line(&line("of it the sensor", &|of| format!("{:.0} %", 100.0 * of.sensor_share)));
    page.line(&line("life, days", &|of| format!("{:.0}", of.life_days)));
    page.paragraph(
        "  ",
        &format!("The adaptive interval gives {:.2} times the life.", energy.life_ratio),
    );
    for note in energy.cautions.iter().chain(&energy.assumptions) {
        page.paragraph("  - ", note);
    }
}
