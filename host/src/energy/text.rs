//! How long the cell lasts, as text.

use super::{Energy, Use};
use crate::page::Page;

/// Columns of a name and of a figure.
const NAME: usize = 26;
const FIGURE: usize = 14;

/// Prints the estimate; beside it a device's own pace, where it has shown one.
pub(crate) fn battery(energy: &Energy, since_start: Option<&Use>, page: &mut Page) {
    let columns = [("fixed", &energy.fixed), ("adaptive", &energy.adaptive)];
    let columns = columns.into_iter().chain(since_start.map(|shown| ("since start", shown)));
    let columns: Vec<(&str, &Use)> = columns.collect();
    let line = |name: &str, figure: &dyn Fn(&Use) -> String| {
        let figures = columns.iter().map(|(_, of)| format!("{:>FIGURE$}", figure(of)));
        format!("  {name:<NAME$}{}", figures.collect::<String>())
    };
    let heads = columns.iter().map(|(head, _)| format!("{head:>FIGURE$}"));
    page.blank();
    page.heading(&format!("{:<28}{}", "Battery, an estimate", heads.collect::<String>()));
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
