//! A curved part: force along angle 0 and upwards, and the tensions of a shell.

use super::One;
use super::formula::{Measures, heights, substituted};
use crate::sheet::measure::Measure;
use crate::sheet::model::{Block, Table, math};
use crate::sheet::pressure::{single, states_on};
use crate::sheet::second::Profiles;
use crate::sheet::second::curved::{below, tensions};
use crate::tank::{Curved, Surface};
use strake_core::lane::Lane;
use strake_core::part::Geometry;
use strake_core::part::curved::{Curved as Rows, prism, weight};
use strake_core::pressure::Pressure;

const FORCE: Measures = [Measure::AREA, Measure::VOLUME, Measure::FORCE];

/// `W` and `M` of a force, as the core has them.
struct Weighting<'a> {
    rows: &'a Rows,
    numbers: &'a [f32],
    bottom_m: f32,
}

impl Weighting<'_> {
    fn weight(&self, force: usize) -> f64 {
        let rows = self.rows.rows_of(force, self.numbers);
        rows.map(|(kind, row)| f64::from(weight(kind, row))).sum()
    }

    fn m(&self, force: usize, height_m: f64) -> f64 {
        let y_m = Lane([single(height_m) - self.bottom_m]);
        if y_m.none_positive() {
            return 0.0;
        }
        let rows = self.rows.rows_of(force, self.numbers);
        rows.map(|(kind, row)| f64::from(prism(kind, row, y_m).lane(0))).sum()
    }
}

pub(super) fn curved(one: &One<'_>, part: &Curved, blocks: &mut Vec<Block>) {
    let Geometry::Curved(rows) = &one.part.geometry else { return };
    let numbers = &one.context.assessment.desk.plan().numbers;
    let weighting = Weighting { rows, numbers, bottom_m: one.part.bottom_m };
    let states = states_on(one.context, one.part);
    let mut lines = vec![math(
        "F_x = p_g · W_x + Σ_i Δγ_i · M_x(h_i), F_z likewise; w_x = dA_x/dz and w_z = dA_z/dz, the \
         projections of the surface, signed by its outward normal",
    )];
    let x = one.row.loads.force_x_n.map(|value| (0, "F_x, estimate", value));
    let z = one.row.loads.force_z_n.map(|value| (1, "F_z, estimate", value));
    for (force, name, value) in x.into_iter().chain(z) {
        let m = |height_m: f64| weighting.m(force, height_m);
        let state = (name, &states.estimate);
        let weight = weighting.weight(force);
        lines.push(substituted(one, state, (weight, &m), FORCE, value.into()));
    }
    blocks.push(Block::Formula(lines));
    blocks.push(Block::Together(vec![
        Block::Minor(math("W and M of both forces (W_{cum} by the second method)")),
        Block::Table(table(one, part, &weighting, &states.estimate)),
    ]));
    shell(one, part, blocks);
}

fn table(one: &One<'_>, part: &Curved, weighting: &Weighting<'_>, state: &Pressure<1>) -> Table {
    let context = one.context;
    let [length, area, volume] =
        [Measure::LENGTH, Measure::AREA, Measure::VOLUME].map(|one| context.unit(one));
    let titles = [
        &*format!("h, {length}"),
        &format!("W_{{x,cum}}(h), {area}"),
        &format!("M_x(h), {volume}"),
        &format!("W_{{z,cum}}(h), {area}"),
        &format!("M_z(h), {volume}"),
    ];
    let mut table = Table::narrow("rrrrr", &titles);
    for height_m in heights(one, state) {
        let [x, z] = below(&part.surface, part.heights.centre_m, height_m);
        table.row(vec![
            context.number(height_m, Measure::LENGTH).into(),
            context.number(x, Measure::AREA).into(),
            context.number(weighting.m(0, height_m), Measure::VOLUME).into(),
            context.number(z, Measure::AREA).into(),
            context.number(weighting.m(1, height_m), Measure::VOLUME).into(),
        ]);
    }
    table
}

/// Tensions place by place, by the second method.
fn shell(one: &One<'_>, part: &Curved, blocks: &mut Vec<Block>) {
    let Surface::Revolved { .. } = part.surface else { return };
    let context = one.context;
    let profiles = Profiles::of(context.file, context.request, Some(one.stated.name()));
    let Some(found) = tensions(&part.surface, part.heights.centre_m, &profiles) else { return };
    blocks.push(Block::Formula(vec![
        math(
            "N_φ = V / (2π · r · sin φ), N_θ = r_2 · (p − N_φ / r_1): membrane theory, V the force on \
             what lies between the place and the apex, r_1 and r_2 the radii of curvature along the \
             meridian and around the axis",
        ),
        math(
            "Tensions are taken at the places below; between two of them a peak is missed by 1/144 of \
             itself at most, which is taken off the capacity. The ring at the rim is another part.",
        ),
    ]));
    let [length, force, line] =
        [Measure::LENGTH, Measure::FORCE, Measure::LINE].map(|one| context.unit(one));
    let titles = [
        &*format!("z, {length}"),
        &format!("r, {length}"),
        &format!("V, {force}"),
        &format!("N_φ, {line}"),
        &format!("N_θ, {line}"),
    ];
    let mut table = Table::narrow("rrrrr", &titles);
    for place in found.places {
        table.row(vec![
            context.number(place.z_m, Measure::LENGTH).into(),
            context.number(place.radius_m, Measure::LENGTH).into(),
            context.number(place.force_n, Measure::FORCE).into(),
            context.number(place.along_n_m, Measure::LINE).into(),
            context.number(place.around_n_m, Measure::LINE).into(),
        ]);
    }
    blocks.push(Block::Together(vec![
        Block::Minor("Tensions of the estimate along the meridian, by the second method".into()),
        Block::Table(table),
    ]));
}
