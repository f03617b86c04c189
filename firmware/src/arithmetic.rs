//! The arithmetic of every cycle, apart from the rest.
//!
//! The core's functions over lanes are compiled where they are called with a number of lanes: here,
//! with one. So the boards' profile can build this package for speed and all else for size. Nobody
//! else on a device calls them.

use strake_core::evaluate::{self, Moved, Pace, State};
use strake_core::journal::Sample;
use strake_core::part::PartLoads;
use strake_core::plan::Plan;
use strake_core::signal::Resolved;

/// One sample through the state: [`evaluate::step`].
#[inline(never)]
pub fn step(
    plan: &Plan,
    state: &mut State,
    sample: &Sample,
    moved: &mut dyn FnMut(Moved),
) -> Resolved {
    evaluate::step(plan, state, sample, moved)
}

/// Time until the next sample, ms: [`Pace::next_ms`].
#[inline(never)]
pub fn next_ms(pace: &mut Pace, plan: &Plan, resolved: &Resolved, tick_ms: u64) -> u32 {
    pace.next_ms(plan, resolved, tick_ms)
}

/// Loads of every part under one reading: [`evaluate::loads`].
#[inline(never)]
pub fn loads(plan: &Plan, resolved: &Resolved, part: &mut dyn FnMut(usize, &PartLoads<1>)) {
    evaluate::loads(plan, &[*resolved], part);
}

/// Heights of the surface that a reading allows: [`evaluate::levels_m`].
#[must_use]
#[inline(never)]
pub fn levels_m(plan: &Plan, resolved: &Resolved) -> [f32; 3] {
    evaluate::levels_m(plan, resolved)
}
