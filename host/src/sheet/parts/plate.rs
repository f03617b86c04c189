//! The plate of a panel: the bending moment where it is largest, by its influence function.

use super::One;
use super::formula::{Measures, heights, substituted};
use crate::assess::PlateRow;
use crate::compile::{Bending, Bent};
use crate::plate::Table as Influence;
use crate::sheet::measure::{Measure, short};
use crate::sheet::model::{Block, Table, Words, math};
use crate::sheet::pressure::{states_on, surfaces};
use crate::tank::Panel;
use crate::units::Quantity::{Length, Pressure};
use strake_core::pressure::Pressure as State;

const MOMENT: Measures = [Measure::AREA, Measure::VOLUME, Measure::BENDING];

/// `W` and `M` of the moment at one point.
struct Weighting<'a> {
    influence: &'a Influence,
    bottom_m: f64,
    sine: f64,
}

impl Weighting<'_> {
    fn m(&self, height_m: f64) -> f64 {
        let above_m = height_m - self.bottom_m;
        if self.sine > 0.0 {
            self.sine * self.influence.ramp(above_m / self.sine)
        } else {
            above_m.max(0.0) * self.influence.total()
        }
    }

    fn below(&self, height_m: f64) -> f64 {
        let above_m = height_m - self.bottom_m;
        match self.sine > 0.0 {
            true => self.influence.area(above_m / self.sine),
            false if above_m >= 0.0 => self.influence.total(),
            false => 0.0,
        }
    }

    /// The moment with its sign.
    fn under(&self, state: &State<1>) -> f64 {
        let gas = f64::from(state.gas_pa.lane(0)) * self.influence.total();
        let steps = surfaces(state).into_iter();
        gas + steps.map(|(height_m, step_n_m3)| step_n_m3 * self.m(height_m)).sum::<f64>()
    }
}

pub(super) fn plates(one: &One<'_>, panel: &Panel, blocks: &mut Vec<Block>) {
    let each = Bending::of_part(one.stated);
    for (bending, row) in each.iter().zip(&one.row.plates) {
        if let Some(why) = &row.why_not {
            blocks.push(Block::text(format!("Plate, edges {}: not judged, {why}.", row.edges)));
            continue;
        }
        plate(one, panel, (bending, row), blocks);
    }
}

fn plate(
    one: &One<'_>,
    panel: &Panel,
    (bending, row): (&Bending, &PlateRow),
    blocks: &mut Vec<Block>,
) {
    let state = states_on(one.context, one.part).estimate;
    let now = bending.under(&state, 0);
    let Some(influence) = bending.influence(&now) else { return };
    let weighting = Weighting {
        influence: &influence.whole,
        bottom_m: panel.plane.heights.bottom_m,
        sine: panel.plane.sine(),
    };
    let m = |height_m: f64| weighting.m(height_m);
    let moment = weighting.under(&state);
    let mut lines = vec![place(one, row, &now)];
    let weight = weighting.influence.total();
    lines.push(substituted(one, ("m", &state), (weight, &m), MOMENT, moment));
    lines.extend(stress(one, (bending, row), &now));
    blocks.push(Block::Formula(lines));
    blocks.push(Block::Together(vec![
        Block::Minor(math("W and M of the bending moment at that point")),
        Block::Table(table(one, &weighting, &state)),
    ]));
}

fn place(one: &One<'_>, row: &PlateRow, now: &Bent) -> Words {
    let context = one.context;
    math(&format!(
        "Plate, edges {}: m = ∫ p w ds, w the influence function of the point {} up the slope and {} \
         sideways from the middle, where the moment is largest (thin plates, small deflections; \
         series cut off with an error of {} of the largest moment)",
        row.edges,
        context.show(now.place.s_m, Length),
        context.show(now.place.x_m, Length),
        short(row.series_error)
    ))
}

fn stress(one: &One<'_>, (bending, row): (&Bending, &PlateRow), now: &Bent) -> [Words; 2] {
    let context = one.context;
    let bent = row.bent;
    [
        math(&format!(
            "σ = 6 · |m| / t^2 = 6 · {} / ({})^2 = {}, t the sound thickness",
            context.exact(now.moment_n, Measure::BENDING),
            context.exact(bending.plate.sound_m(), Measure::LENGTH),
            context.show(bending.stress_pa(now), Pressure)
        )),
        math(&format!(
            "largest deflection {}, of the bound {}: below half of the sound thickness, with {} and \
             Poisson's ratio {}",
            context.show(bent.map_or(0.0, |bent| bent.deflection_m), Length),
            context.show(bent.map_or(0.0, |bent| bent.deflection_bound_m), Length),
            context.show(row.elastic_modulus_pa, Pressure),
            row.poisson_ratio
        )),
    ]
}

fn table(one: &One<'_>, weighting: &Weighting<'_>, state: &State<1>) -> Table {
    let context = one.context;
    let [length, area, volume] =
        [Measure::LENGTH, Measure::AREA, Measure::VOLUME].map(|one| context.unit(one));
    let titles =
        [&*format!("h, {length}"), &format!("W_{{cum}}(h), {area}"), &format!("M(h), {volume}")];
    let mut table = Table::narrow("rrr", &titles);
    for height_m in heights(one, state) {
        table.row(vec![
            context.number(height_m, Measure::LENGTH).into(),
            context.number(weighting.below(height_m), Measure::AREA).into(),
            context.number(weighting.m(height_m), Measure::VOLUME).into(),
        ]);
    }
    table
}
