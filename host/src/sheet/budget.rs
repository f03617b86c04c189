//! Uncertainty budgets: what each source costs for itself, added straight and in quadrature, beside
//! the envelope that the alarms judge.

use super::Context;
use super::model::{Block, Table, Words};
use super::pressure::single;
use crate::assess::{Desk, together};
use crate::compile::{Bending, without_plates};
use crate::tank::Part as Stated;
use crate::units::Quantity::Length;
use strake_core::lane::Lane;
use strake_core::liquid::{Band, Gas};
use strake_core::part::{acting, evaluate};
use strake_core::plan::Plan;

/// What a bound is made of.
const SOURCES: [&str; 4] = ["sensor", "density", "gas", "interfaces"];

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Uncertainty budgets".to_owned()));
    blocks.push(Block::text(
        "Half-widths are limits that are never exceeded. Straight: their sum. In quadrature: the \
         root of the sum of squares (JCGM 100, 5.1.2, for quantities that do not depend on each \
         other). Judged is neither but the envelope, a rigorous bound.",
    ));
    blocks.push(Block::Table(utilisations(context)));
    blocks.push(Block::text(
        "By how much the utilisation of the bound lies above that of the estimate at the level \
         assessed: with one source at its limits and all others at their estimates, and of the \
         envelope with all of them.",
    ));
    let levels = levels(context);
    if !levels.rows.is_empty() {
        blocks.push(Block::Together(vec![
            Block::Table(levels),
            Block::Text(Words::from(
                "Half-width of the surface level that a reading means, by what it comes from.",
            )),
        ]));
    }
}

/// The plan with all uncertainty taken out but one source.
fn alone(plan: &Plan, source: usize) -> Plan {
    let mut found = plan.clone();
    let exact = |band: Band| Band {
        low_kg_m3: band.estimate_kg_m3,
        high_kg_m3: band.estimate_kg_m3,
        ..band
    };
    if source != 0 {
        found.level.uncertainty = 0.0;
        found.level.uncertainty_per_distance = 0.0;
    }
    if source != 1 {
        found.liquid.top = exact(found.liquid.top);
        for layer in &mut found.liquid.below {
            layer.density = exact(layer.density);
        }
    }
    if source != 2 {
        let nominal_pa = found.gas.nominal_pa;
        found.gas = Gas { lowest_pa: nominal_pa, nominal_pa, highest_pa: nominal_pa };
    }
    if source != 3 {
        for layer in &mut found.liquid.below {
            layer.surface_uncertainty_m = 0.0;
        }
    }
    found
}

fn utilisations(context: &Context<'_>) -> Table {
    let mut titles = vec!["utilisation of"];
    titles.extend(SOURCES);
    titles.extend(["straight", "in quadrature", "envelope"]);
    let mut table = Table::new("lrrrrrrr", &titles);
    let desk = &context.assessment.desk;
    let desks: Vec<Desk> = (0..SOURCES.len())
        .map(|source| Desk::of_plan(alone(desk.plan(), source), context.file))
        .collect();
    for (index, stated) in context.file.parts.iter().enumerate() {
        let over = |desk: &Desk| over(context, desk, (index, stated));
        let Some(envelope) = over(desk) else { continue };
        let each: Vec<f64> = desks.iter().filter_map(over).collect();
        let (straight, quadrature) = together(&each);
        let mut cells = vec![stated.name().into()];
        let shown = each.iter().chain([&straight, &quadrature, &envelope]);
        cells.extend(shown.map(|one| format!("{one:.4}").into()));
        table.row(cells);
    }
    table
}

/// How far the utilisation of the bound lies above that of the estimate; none of a part that is not
/// judged outward.
fn over(context: &Context<'_>, desk: &Desk, (index, stated): (usize, &Stated)) -> Option<f64> {
    let row = context.assessment.document.parts.get(index)?;
    row.judgement.utilisation?;
    let all = desk.as_seen(Lane([single(context.request.level_m)]));
    // Plates by their moments, not by what stands for them on the device.
    let part = without_plates(stated, desk.plan().parts.get(index)?);
    let loads = evaluate(desk.plan(), &part, &all);
    let mut pair = [loads.utilisation.lane(0), loads.utilisation_bound.lane(0)].map(f64::from);
    let states = acting(desk.plan(), &part, &all);
    for (plate, row) in Bending::of_part(stated).iter().zip(&row.plates) {
        if row.bent.is_some() {
            let used = [plate.under(&states.estimate, 0), plate.bound(&states, 0)];
            let used = used.map(|bent| plate.utilisation(&bent));
            pair = [pair[0].max(used[0]), pair[1].max(used[1])];
        }
    }
    Some(pair[1] - pair[0])
}

fn levels(context: &Context<'_>) -> Table {
    let titles = ["level", "sensor", "density", "gas", "straight", "in quadrature"];
    let mut table = Table::new("lrrrrr", &titles);
    let document = &context.assessment.document;
    let all = [
        ("assessed", Some(single(context.request.level_m))),
        ("of the warning", document.warn_level_m),
        ("of the alarm", document.alarm_level_m),
    ];
    if context.file.level.is_none() {
        return table;
    }
    for (name, level_m) in all {
        let Some(level_m) = level_m else { continue };
        let widths = context.assessment.desk.half_widths_m(level_m).map(|(_, width_m)| width_m);
        let (straight, quadrature) = together(&widths);
        let mut cells = vec![format!("{name}, {}", context.show(level_m, Length)).into()];
        let shown = widths.into_iter().chain([straight, quadrature]);
        cells.extend(shown.map(|width_m| context.show(width_m, Length).into()));
        table.row(cells);
    }
    table
}
