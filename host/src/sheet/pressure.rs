//! The pressure: what stands in the tank, as surfaces with their steps, and the diagram.

use super::Context;
use super::diagram;
use super::measure::Measure;
use super::model::{Block, Table, math};
use super::second::Profiles;
use crate::assess::Desk;
use crate::tank::{PressureReference, Sensing};
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{Part, acting};
use strake_core::pressure::Pressure;

/// The states that the sensor allows at the level assessed.
pub(super) fn states(context: &Context<'_>) -> States<1> {
    context.assessment.desk.as_seen(Lane([single(context.request.level_m)]))
}

/// The same as they act on a part.
pub(super) fn states_on(context: &Context<'_>, part: &Part) -> States<1> {
    let desk: &Desk = &context.assessment.desk;
    acting(desk.plan(), part, &states(context))
}

#[expect(clippy::cast_possible_truncation, reason = "a level for the core")]
pub(super) const fn single(value: f64) -> f32 {
    value as f32
}

/// Surfaces that weigh something: height, and step in specific weight.
pub(super) fn surfaces(pressure: &Pressure<1>) -> Vec<(f64, f64)> {
    let all = pressure.surfaces().iter();
    let all = all.map(|one| (one.height_m.lane(0).into(), one.step_n_m3.lane(0).into()));
    all.filter(|&(_, step): &(f64, f64)| step != 0.0).collect()
}

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Pressure".to_owned()));
    blocks.push(Block::text(math(
        "z points up from the datum, pressures are gauge. With gas pressure p_g and liquid surfaces \
         at h_i, each with its step Δγ_i in specific weight (density times gravity, less that of \
         what lies above):",
    )));
    blocks.push(Block::Formula(vec![
        math("p(z) = p_g + Σ_i Δγ_i · max(0, h_i − z)"),
        math(
            "R = p_g · W + Σ_i Δγ_i · M(h_i),  W = ∫ w dz,  W_{cum}(h) = ∫_{z<h} w dz,  \
              M(h) = ∫_{z<h} (h − z) w dz",
        ),
    ]));
    blocks.push(Block::text(
        "Every load R is the integral of the pressure with a weighting w of the part. W and M are \
         tabulated with each part, so that any line below can be redone by hand.",
    ));
    blocks.push(Block::text(envelope(context)));
    let all = states(context);
    let mut blocks_together = vec![Block::Table(table(context, &all))];
    let profiles = Profiles::of(context.file, context.request, None);
    blocks_together.push(Block::Figure {
        svg: diagram::pressure(context, &profiles),
        caption: math(
            "Left: pressure over height, the estimate (full line) between its upper and lower bound \
             (dashed). Right: how far the bounds lie from the estimate, on a scale of its own.",
        ),
    });
    blocks.push(Block::Together(blocks_together));
}

/// Gas and surfaces of the three states.
pub(super) fn table(context: &Context<'_>, states: &States<1>) -> Table {
    let (length, weight) = (context.unit(Measure::LENGTH), context.unit(Measure::WEIGHT));
    let gas = format!("p_g, {}", context.unit(Measure::PRESSURE));
    let titles = ["state", gas.as_str(), &format!("h_i, {length}"), &format!("Δγ_i, {weight}")];
    let mut table = Table::new("lrrr", &titles);
    let three = [
        ("estimate", &states.estimate),
        ("upper bound", &states.upper),
        ("lower bound", &states.lower),
    ];
    for (name, state) in three {
        let gas = context.number(state.gas_pa.lane(0), Measure::PRESSURE);
        let surfaces = surfaces(state);
        if surfaces.is_empty() {
            table.row(vec![name.into(), gas.into(), "-".into(), "-".into()]);
            continue;
        }
        for (index, (height_m, step_n_m3)) in surfaces.into_iter().enumerate() {
            let first = index == 0;
            table.row(vec![
                if first { name.into() } else { "".into() },
                if first { gas.as_str().into() } else { "".into() },
                context.number(height_m, Measure::LENGTH).into(),
                context.number(step_n_m3, Measure::WEIGHT).into(),
            ]);
        }
    }
    table
}

/// Which envelope follows from the sensor, in words.
fn envelope(context: &Context<'_>) -> String {
    let common = "Where a weighting changes its sign, a bound takes the upper pressure where it is \
                  positive and the lower one elsewhere (for the inward bound the other way round).";
    let own = match context.file.level.as_ref().map(|level| level.sensing) {
        None => {
            "No level sensor is stated: the bounds hold the densities and the gas only.".to_owned()
        }
        Some(Sensing::Head { reference, .. }) => {
            let reads = match reference.value {
                PressureReference::Atmosphere => "against the air",
                PressureReference::GasSpace => "against the gas space",
                PressureReference::Absolute { .. } => "absolute",
            };
            format!(
                "The level sensor reads a pressure ({reads}). It is taken to read what the estimate \
                 gives at its height. Upper bound: the highest reading, the lightest liquid above \
                 the sensor and the densest below it, never above a brimful open tank; lower bound \
                 the two swapped. That holds for every layering in the density band."
            )
        }
        Some(Sensing::Innage { .. } | Sensing::Ullage { .. }) => {
            "The level sensor sees the surface. Upper bound: level, densities, interfaces and gas \
             all at their high ends; lower bound all at their low ends."
                .to_owned()
        }
    };
    format!("{own} {common}")
}
