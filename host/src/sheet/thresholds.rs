//! The thresholds of the file as levels and set-points, and the margin that they give.

use super::Context;
use super::model::{Block, Table};
use crate::assess::{Margin, SetPoint, Times, text};
use crate::tank::Alarms;
use crate::units::Quantity::{Current, Length, Pressure, Speed, Time};

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    let Some(alarms) = &context.file.alarm else { return };
    blocks.push(Block::Section("Thresholds and margin".to_owned()));
    blocks.push(Block::Table(thresholds(context, alarms)));
    if let Some(points) = set_points(context) {
        blocks.push(Block::text(
            "Set-points of the head sensor, with the surface level that the same reading means for \
             the lightest, the nominal and the densest liquid:",
        ));
        blocks.push(Block::Table(points));
    }
    if let Some(margin) = &context.assessment.document.margin {
        self::margin(context, alarms, margin, blocks);
    }
}

fn thresholds(context: &Context<'_>, alarms: &Alarms) -> Table {
    let titles = ["threshold", "a bound at", "first reached at", "the sensor then reads"];
    let mut table = Table::new("lrrl", &titles);
    let document = &context.assessment.document;
    let pairs = [
        ("warn", &alarms.warn, document.warn_level_m),
        ("alarm", &alarms.alarm, document.alarm_level_m),
    ];
    for (name, threshold, level_m) in pairs {
        let (level, read) = level_m.map_or_else(
            || ("not reached".to_owned(), "-".to_owned()),
            |level_m| {
                let read = text::reading(&context.text(), level_m.into());
                (context.show(level_m, Length), read)
            },
        );
        let at = threshold.utilisation.value.to_string();
        table.row(vec![name.into(), at.into(), level.into(), read.into()]);
    }
    table
}

fn set_points(context: &Context<'_>) -> Option<Table> {
    let document = &context.assessment.document;
    let titles = ["set-point", "pressure", "current", "lightest", "nominal", "densest"];
    let mut table = Table::new("lrrrrr", &titles);
    for (name, point) in [("warn", document.warn_set_point), ("alarm", document.alarm_set_point)] {
        let Some(SetPoint { pressure_pa, current_a, .. }) = point else { continue };
        let current = current_a.map_or_else(|| "-".to_owned(), |one| context.show(one, Current));
        let levels = point.map(|one| {
            [one.level_lightest_m, one.level_nominal_m, one.level_densest_m]
                .map(|level_m| context.show(level_m, Length))
        });
        let [lightest, nominal, densest] = levels?;
        table.row(vec![
            name.into(),
            context.show(pressure_pa, Pressure).into(),
            current.into(),
            lightest.into(),
            nominal.into(),
            densest.into(),
        ]);
    }
    (!table.rows.is_empty()).then_some(table)
}

fn margin(context: &Context<'_>, alarms: &Alarms, margin: &Margin, blocks: &mut Vec<Block>) {
    let titles = ["margin of", "side", "alarm level", "limit level", "given", "needed", ""];
    let mut table = Table::new("llrrrrl", &titles);
    let show = |level_m: f64| context.show(level_m, Length);
    for part in &margin.per_part {
        let verdict = if part.enough { "enough" } else { "SHORT" };
        table.row(vec![
            part.name.as_str().into(),
            part.side.into(),
            show(part.alarm_level_m).into(),
            show(part.limit_level_m).into(),
            show(part.given_m).into(),
            show(part.needed_m).into(),
            verdict.into(),
        ]);
    }
    if table.rows.is_empty() {
        blocks.push(Block::text("Margin: no part reaches its capacity in this tank."));
    } else {
        blocks.push(Block::text(
            "Margin from the alarm to the limit, both as levels at which the bound, as the sensor \
             sees it, reaches the threshold and the capacity:",
        ));
        blocks.push(Block::Table(table));
    }
    times(context, alarms, blocks);
}

fn times(context: &Context<'_>, alarms: &Alarms, blocks: &mut Vec<Block>) {
    let Some(times) = Times::of(context.file, &alarms.alarm) else { return };
    let mut inside = Vec::new();
    let mut table = Table::narrow("lr", &["time that the level may go on", ""]);
    let rows = [
        ("interval at rest", times.idle_s),
        ("a reading and its retries", times.reading_s),
        ("on-delay of the alarm", times.on_delay_s),
        ("a sensor that fails just then", times.failed_after_s),
        ("response of the site", times.response_s),
        ("together", times.sum_s()),
    ];
    for (label, time_s) in rows {
        table.row(vec![label.into(), context.show(time_s, Time).into()]);
    }
    inside.push(Block::Table(table));
    if let Some(rise) = context.file.fill.highest_rise_m_s {
        inside.push(Block::text(format!(
            "Needed, outward: {} at the highest rise of {} = {}. The bound has the uncertainties in \
             it already; they are not deducted a second time.",
            context.show(times.sum_s(), Time),
            context.show(rise.value, Speed),
            context.show(times.sum_s() * rise.value, Length)
        )));
    }
    blocks.push(Block::Together(inside));
}
