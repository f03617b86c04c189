//! A flat part: force, and moment about its centroid.

use super::One;
use super::formula::{Measures, heights, substituted};
use crate::sheet::measure::Measure;
use crate::sheet::model::{Block, Table, Words, math};
use crate::sheet::pressure::{single, states_on};
use crate::tank::Plane;
use strake_core::lane::Lane;
use strake_core::part::Geometry;
use strake_core::pressure::Pressure;
use strake_core::shape::Face;

/// Measures of a force and of a moment.
const FORCE: Measures = [Measure::AREA, Measure::VOLUME, Measure::FORCE];
const MOMENT: Measures = [Measure::VOLUME, Measure::FOURTH, Measure::MOMENT];

/// `M` of the force and of the moment about the centroid, as the core has them.
fn integrals(face: &Face<'_>, height_m: f64) -> [f64; 2] {
    let above = Lane([single(height_m) - face.bottom_m]);
    if above.none_positive() {
        return [0.0; 2];
    }
    let wetted = face.wetted(above);
    [wetted.q0, wetted.q1].map(|one| one.lane(0).into())
}

pub(super) fn plane(one: &One<'_>, plane: &Plane, blocks: &mut Vec<Block>) {
    let Geometry::Plane { shape, .. } = &one.part.geometry else { return };
    let numbers = &one.context.assessment.desk.plan().numbers;
    let face = Face { shape, numbers, bottom_m: one.part.bottom_m };
    let states = states_on(one.context, one.part);
    let area: f64 = shape.area_m2().into();
    let mut lines = vec![if plane.is_level() {
        math("F = p_g · A + Σ_i Δγ_i · M_F(h_i),  M_F(h) = A · max(0, h − z)")
    } else {
        math(
            "F = p_g · A + Σ_i Δγ_i · M_F(h_i),  M_F(h) = ∫ (h − z) dA over the wetted part; \
             s up the slope from the centroid, z = z_c + s · sin(slope)",
        )
    }];
    let three = [
        ("F, estimate", &states.estimate, one.row.loads.force_n),
        ("F, outward bound", &states.upper, one.row.loads_outward_bound.force_n),
        ("F, inward bound", &states.lower, one.row.loads_inward_bound.force_n),
    ];
    let of_force = |height_m: f64| integrals(&face, height_m)[0];
    for (name, state, result) in three {
        let result = f64::from(result.unwrap_or(0.0));
        lines.push(substituted(one, (name, state), (area, &of_force), FORCE, result));
    }
    if !plane.is_level() {
        lines
            .push(math("M_c = Σ_i Δγ_i · M_s(h_i),  M_s(h) = ∫ (h − z) s dA over the wetted part"));
        let of_moment = |height_m: f64| integrals(&face, height_m)[1];
        let result = f64::from(one.row.loads.moment_centroid_n_m.unwrap_or(0.0));
        let state = ("M_c, estimate", &states.estimate);
        lines.push(substituted(one, state, (0.0, &of_moment), MOMENT, result));
    }
    lines.extend(centre(one, plane));
    blocks.push(Block::Formula(lines));
    blocks.push(Block::Together(vec![
        Block::Minor(math("W and M of the force and of the moment about the centroid")),
        Block::Table(table(one, plane, &face, &states.estimate)),
    ]));
}

fn centre(one: &One<'_>, plane: &Plane) -> Option<Words> {
    let context = one.context;
    let centre = one.row.loads.centre?;
    let pair = centre.centre_of_pressure_m.zip(centre.centre_of_pressure_slope_m);
    let Some((height_m, down_m)) = pair else {
        return Some(math(
            "No centre of pressure: the pressures cancel (force below 1e-3 of the integral of |p|), \
             at most a couple is left.",
        ));
    };
    let middle = context.number(plane.heights.centre_m, Measure::LENGTH);
    let up = context.number(-down_m, Measure::LENGTH);
    let sine = context.number(plane.sine(), Measure::NUMBER);
    let height = context.exact(height_m, Measure::LENGTH);
    Some(math(&format!(
        "centre of pressure: z_c + (M_c / F) · sin(slope) = {middle} + ({up}) · {sine} = {height}"
    )))
}

fn table(one: &One<'_>, plane: &Plane, face: &Face<'_>, state: &Pressure<1>) -> Table {
    let context = one.context;
    let [length, area, volume, fourth] =
        [Measure::LENGTH, Measure::AREA, Measure::VOLUME, Measure::FOURTH]
            .map(|one| context.unit(one));
    let titles = [
        &*format!("h, {length}"),
        &format!("W_{{F,cum}}(h), {area}"),
        &format!("M_F(h), {volume}"),
        &format!("W_{{s,cum}}(h), {volume}"),
        &format!("M_s(h), {fourth}"),
    ];
    let mut table = Table::narrow("rrrrr", &titles);
    for height_m in heights(one, state) {
        let [wetted, about] = wetted(plane, height_m);
        let [force, moment] = integrals(face, height_m);
        table.row(vec![
            context.number(height_m, Measure::LENGTH).into(),
            context.number(wetted, Measure::AREA).into(),
            context.number(force, Measure::VOLUME).into(),
            context.number(about, Measure::VOLUME).into(),
            context.number(moment, Measure::FOURTH).into(),
        ]);
    }
    table
}

/// Area below a height and its first moment about the level line through the centroid.
fn wetted(plane: &Plane, height_m: f64) -> [f64; 2] {
    let above_m = height_m - plane.heights.bottom_m;
    if plane.is_level() {
        return [if above_m >= 0.0 { plane.area_m2() } else { 0.0 }, 0.0];
    }
    let [area, first] = plane.pieces().below(above_m / plane.sine());
    let about = first - plane.centroid_up_m() * area;
    // Rounding leaves a trace where the whole surface is wetted.
    let trace = 1e-12 * area * plane.shape.length_m();
    [area, if about.abs() <= trace.max(1e-9 * first.abs()) { 0.0 } else { about }]
}
