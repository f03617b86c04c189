//! A course: hoop tension at its design point.

use super::One;
use super::formula::{heights, rising, sum};
use crate::sheet::measure::Measure;
use crate::sheet::model::{Block, Table, Words, math};
use crate::sheet::pressure::{states_on, surfaces};
use crate::tank::Course;
use strake_core::part::Geometry;
use strake_core::pressure::Pressure;

pub(super) fn course(one: &One<'_>, course: &Course, blocks: &mut Vec<Block>) {
    let Geometry::Course { half_diameter_m, design_point_m, .. } = one.part.geometry else {
        return;
    };
    let (half_m, point_m) = (f64::from(half_diameter_m), f64::from(design_point_m));
    let context = one.context;
    let states = states_on(context, one.part);
    let point = context.exact(point_m, Measure::LENGTH);
    let above = context.exact(course.design_point.above_edge_m, Measure::LENGTH);
    let mut lines = vec![math(&format!(
        "N = p(z_d) · D/2, thin cylinder; z_d = lower edge + {above} = {point}"
    ))];
    let three = [
        ("estimate", &states.estimate, &one.row.loads),
        ("outward bound", &states.upper, &one.row.loads_outward_bound),
        ("inward bound", &states.lower, &one.row.loads_inward_bound),
    ];
    for (name, state, loads) in three {
        let tension = loads.hoop_tension_n_m.unwrap_or(0.0);
        lines.push(line(one, (name, state), (half_m, point_m), (loads.pressure_pa, tension)));
    }
    blocks.push(Block::Formula(lines));
    blocks.push(Block::Together(vec![
        Block::Minor(math("W and M of the hoop tension: w = D/2 at z_d alone")),
        Block::Table(table(one, &states.estimate, (half_m, point_m))),
    ]));
}

fn line(
    one: &One<'_>,
    (name, state): (&str, &Pressure<1>),
    (half_m, point_m): (f64, f64),
    (pressure_pa, tension_n_m): (f32, f32),
) -> Words {
    let context = one.context;
    let mut terms = vec![context.number(state.gas_pa.lane(0), Measure::PRESSURE)];
    for (height_m, step_n_m3) in surfaces(state) {
        let step = context.number(step_n_m3, Measure::WEIGHT);
        let depth = context.number((height_m - point_m).max(0.0), Measure::LENGTH);
        terms.push(format!("{step} · {depth}"));
    }
    let pressure = context.exact(pressure_pa, Measure::PRESSURE);
    let half = context.exact(half_m, Measure::LENGTH);
    let tension = context.exact(tension_n_m, Measure::LINE);
    let added = sum(&terms);
    math(&format!("{name}: p(z_d) = {added} = {pressure};  N = p · {half} = {tension}"))
}

fn table(one: &One<'_>, state: &Pressure<1>, (half_m, point_m): (f64, f64)) -> Table {
    let context = one.context;
    let (length, area) = (context.unit(Measure::LENGTH), context.unit(Measure::AREA));
    let titles =
        [&*format!("h, {length}"), &format!("W_{{cum}}(h), {length}"), &format!("M(h), {area}")];
    let mut table = Table::narrow("rrr", &titles);
    for height_m in rising(heights(one, state).into_iter().chain([point_m])) {
        let above_m = height_m - point_m;
        let weight = if above_m > 0.0 { half_m } else { 0.0 };
        table.row(vec![
            context.number(height_m, Measure::LENGTH).into(),
            context.number(weight, Measure::LENGTH).into(),
            context.number(half_m * above_m.max(0.0), Measure::AREA).into(),
        ]);
    }
    table
}
