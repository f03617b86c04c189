//! Uncertainty budgets: what each source costs for itself, added straight and in quadrature, beside
//! the envelope that the alarms judge.

use super::Context;
use super::model::{Block, Table, Words};
use super::pressure::single;
use crate::assess::{Desk, together};
use crate::units::Quantity::Length;
use strake_core::lane::Lane;
use strake_core::liquid::{Band, Gas};
use strake_core::part::evaluate;
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
    let level = Lane([single(context.request.level_m)]);
    // How far the bound lies above the estimate.
    let over = |desk: &Desk, part: usize| {
        let part = desk.plan().parts.get(part)?;
        let loads = evaluate(desk.plan(), part, &desk.as_seen(level));
        let over = loads.utilisation_bound.lane(0) - loads.utilisation.lane(0);
        part.judged_outward().then_some(f64::from(over))
    };
    for (index, row) in context.assessment.document.parts.iter().enumerate() {
        if !row.plates.is_empty() {
            continue;
        }
        let Some(envelope) = over(desk, index) else { continue };
        let each: Vec<f64> = desks.iter().filter_map(|desk| over(desk, index)).collect();
        let (straight, quadrature) = together(&each);
        let mut cells = vec![row.name.as_str().into()];
        let shown = each.iter().chain([&straight, &quadrature, &envelope]);
        cells.extend(shown.map(|one| format!("{one:.4}").into()));
        table.row(cells);
    }
    table
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
