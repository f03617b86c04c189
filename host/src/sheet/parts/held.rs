//! What holds a cover: every reaction as `alpha F + beta M_c`.

use super::One;
use crate::sheet::measure::Measure;
use crate::sheet::model::{Block, Table, math};
use crate::sheet::second::secured::{reactions, weight_n};
use crate::tank::{Capacity, Hatch};

pub(super) fn hatch(one: &One<'_>, hatch: &Hatch, blocks: &mut Vec<Block>) {
    let context = one.context;
    cover_rule(one, blocks);
    if hatch.secured.is_none() {
        blocks
            .push(Block::text("What secures the cover is not stated: no reaction is worked out."));
        return;
    }
    let weight = weight_n(hatch, context.file.gravity.m_s2());
    let formula = match weight {
        None => "R = α · F + β · M_c",
        Some(_) => "R = α · (F + G_n) + β · M_c",
    };
    let mut lines = vec![math(&format!(
        "{formula}: equilibrium of a rigid cover; bolts equal and equally stiff, latches in \
         proportion to their levers. Shares of the load alone, without preload, gasket seating and \
         prying."
    ))];
    if let Some((weight_n, weighed)) = weight {
        let shown = context.exact(weight_n, Measure::FORCE);
        let counts = if weighed {
            "weighed, so it counts also where it relieves"
        } else {
            "not weighed, so it counts only where it adds"
        };
        lines.push(math(&format!("G_n = {shown}: its weight along the outward normal, {counts}")));
    }
    blocks.push(Block::Formula(lines));
    blocks.push(Block::Table(table(one, hatch)));
    let hangs = one.row.loads.moment_n_m.is_some() && !hatch.pivots();
    if hangs {
        blocks.push(Block::text(
            "A cover that the load presses on its seat hangs on nothing: seat and gasket carry it, \
             and latch and hinge are reported as 0.",
        ));
    } else if hatch.seats(true) {
        blocks.push(Block::text(
            "An outward load presses the cover on its seat: the bolts carry an inward one only.",
        ));
    }
}

fn table(one: &One<'_>, hatch: &Hatch) -> Table {
    let context = one.context;
    let titles = ["reaction", "α", "β", "α · F + β · M_c, estimate"];
    let mut table = Table::narrow("lrrr", &titles);
    let force = f64::from(one.row.loads.force_n.unwrap_or(0.0));
    let moment = f64::from(one.row.loads.moment_centroid_n_m.unwrap_or(0.0));
    for reaction in reactions(hatch) {
        let value = reaction.alpha * force + reaction.beta * moment;
        let [of_alpha, of_beta, of_value] = if reaction.is_moment {
            [Measure::LENGTH, Measure::NUMBER, Measure::MOMENT]
        } else {
            [Measure::NUMBER, Measure::PER_LENGTH, Measure::FORCE]
        };
        table.row(vec![
            reaction.label.into(),
            context.exact(reaction.alpha, of_alpha).into(),
            context.exact(reaction.beta, of_beta).into(),
            context.exact(value, of_value).into(),
        ]);
    }
    table
}

/// The rule of a flat cover, where a capacity rests on it.
fn cover_rule(one: &One<'_>, blocks: &mut Vec<Block>) {
    let ratings = one.stated.capacity().iter().chain(one.stated.capacity_inward());
    let mut covers = ratings.filter(|one| matches!(one.capacity.value, Capacity::Cover(_)));
    if covers.next().is_none() {
        return;
    }
    blocks.push(Block::text(
        "Cover plate: formula as in ASME VIII-1 UG-34; other requirements of that document are not \
         checked. The pressure at its lowest edge is held to act on all of the cover.",
    ));
    blocks.push(Block::Formula(vec![math(
        "t = d · √( C · P / (S · E) + 1.9 · W · h_G / (S · E · d^3) ), solved for P; d the mean \
         diameter of the gasket, h_G the arm of the bolts about it (zero where they do not bend the \
         cover), W = P · π · d^2 / 4 or the stated load of the bolts where that is more",
    )]));
}
