//! The one formula with numbers put in, and the heights at which `W` and `M` are tabulated.

use super::One;
use crate::sheet::measure::Measure;
use crate::sheet::model::{Words, math};
use crate::sheet::pressure::surfaces;
use strake_core::pressure::Pressure;

/// Measures of `W`, of `M` and of the load.
pub(super) type Measures = [Measure; 3];

/// `R = p_g W + sum step M(h)` for one state.
pub(super) fn substituted(
    one: &One<'_>,
    (name, state): (&str, &Pressure<1>),
    (weight, m): (f64, &dyn Fn(f64) -> f64),
    [of_w, of_m, of_r]: Measures,
    result: f64,
) -> Words {
    let context = one.context;
    let gas = context.number(state.gas_pa.lane(0), Measure::PRESSURE);
    let mut terms = vec![format!("{gas} · {}", context.number(weight, of_w))];
    for (height_m, step_n_m3) in surfaces(state) {
        let step = context.number(step_n_m3, Measure::WEIGHT);
        terms.push(format!("{step} · {}", context.number(m(height_m), of_m)));
    }
    math(&format!("{name} = {} = {}", sum(&terms), context.exact(result, of_r)))
}

/// Terms added, a negative one taken off.
pub(super) fn sum(terms: &[String]) -> String {
    terms.join(" + ").replace("+ -", "− ")
}

/// Heights of a table: four stretches of the part, and where the surfaces of the estimate stand.
pub(super) fn heights(one: &One<'_>, state: &Pressure<1>) -> Vec<f64> {
    let stated = one.stated.heights();
    let (bottom, top) = (stated.bottom_m, stated.top_m);
    let quarters = (0..=4_u8).map(|quarter| bottom + (top - bottom) * f64::from(quarter) / 4.0);
    let surfaces = surfaces(state).into_iter().map(|(height_m, _)| height_m);
    rising(quarters.chain(surfaces))
}

/// Rising, each once.
pub(super) fn rising(heights_m: impl Iterator<Item = f64>) -> Vec<f64> {
    let mut found: Vec<f64> = heights_m.collect();
    found.sort_by(f64::total_cmp);
    found.dedup_by(|a, b| (*a - *b).abs() < 1e-6);
    found
}
