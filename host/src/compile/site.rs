//! Heights, rates, gravity, gas and liquid outside.

use super::Contents;
use super::faults::Faults;
use super::number::{located, single};
use crate::tank::{Gravity, Located, TankFile};
use crate::units::Quantity::{Acceleration, Length, Speed};
use strake_core::liquid::{Band, Gas, Outside};
use strake_core::plan::{OUTSIDE_MAX, Plan};

/// Largest height a plan holds, m. A tank without shell top and overflow ends here.
pub(crate) const HEIGHT_MAX_M: f64 = 200.0;
/// Heights of a plan.
pub(super) const HEIGHTS_M: (f64, f64) = (-HEIGHT_MAX_M, HEIGHT_MAX_M);

pub(super) fn site(file: &TankFile, contents: &Contents, plan: &mut Plan, faults: &mut Faults) {
    check(file, faults);
    let fill = &file.fill;
    let overflow_m = fill.overflow_m.map(|level| level.value);
    let shell_top_m = file.vessel.height_m().or(overflow_m).unwrap_or(HEIGHT_MAX_M);
    plan.gravity_m_s2 = single(file.gravity.m_s2());
    plan.shell_top_m = single(shell_top_m);
    plan.overflow_m = single(overflow_m.unwrap_or(shell_top_m));
    plan.floor_m = single(floor_m(file));
    // Not stated: nothing may be concluded from an open top, so bounds are not cut there.
    plan.closed = fill.closed.is_none_or(|closed| closed.value);
    plan.highest_rise_m_s = fill.highest_rise_m_s.map_or(0.0, located);
    plan.highest_fall_m_s = fill.highest_fall_m_s.map_or(0.0, located);
    let [lowest, nominal, highest] = contents.gas_pa.map(single);
    plan.gas = Gas { lowest_pa: lowest, nominal_pa: nominal, highest_pa: highest };
    for outside in &file.outside {
        let density = located(outside.density_kg_m3);
        let highest_m = located(outside.highest_m);
        // Nothing proven: a level below every part relieves nothing.
        let unproven_m = if highest_m < plan.floor_m { highest_m } else { plan.floor_m };
        let one = Outside {
            highest_m,
            lowest_m: outside.lowest_m.map_or(unproven_m, located),
            density: Band { estimate_kg_m3: density, low_kg_m3: density, high_kg_m3: density },
        };
        if plan.outside.push(one).is_err() {
            faults.too_many(outside.highest_m.span, "liquids outside", OUTSIDE_MAX);
        }
    }
}

/// Lowest level: the datum, or the lowest part where that lies deeper.
pub(crate) fn floor_m(file: &TankFile) -> f64 {
    file.parts.iter().map(|part| part.heights().bottom_m).fold(0.0, f64::min)
}

fn check(file: &TankFile, faults: &mut Faults) {
    let fill = &file.fill;
    if let Some(height_m) = file.vessel.height_m() {
        faults.within(
            Located::new(height_m, file.name.span),
            HEIGHTS_M,
            Length,
            "the shell height",
        );
    }
    for (level, what) in [(fill.overflow_m, "`overflow`"), (fill.maximum_m, "`maximum`")] {
        if let Some(level) = level {
            faults.within(level, HEIGHTS_M, Length, what);
        }
    }
    for (rate, what) in
        [(fill.highest_rise_m_s, "`highest_rise`"), (fill.highest_fall_m_s, "`highest_fall`")]
    {
        if let Some(rate) = rate {
            faults.within(rate, (0.0, 1.0), Speed, what);
        }
    }
    for outside in &file.outside {
        faults.within(outside.highest_m, HEIGHTS_M, Length, "`highest` in [[outside]]");
        if let Some(lowest_m) = outside.lowest_m {
            faults.within(lowest_m, HEIGHTS_M, Length, "`lowest` in [[outside]]");
        }
    }
    let place = match file.gravity {
        Gravity::Standard => return,
        Gravity::Stated { gravity_m_s2 } => gravity_m_s2.span,
        Gravity::Computed { elevation_m, .. } => elevation_m.span,
    };
    let gravity = Located::new(file.gravity.m_s2(), place);
    faults.within(gravity, (9.7, 9.9), Acceleration, "gravity at the site");
}
