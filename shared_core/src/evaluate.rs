//! The one step that the device, the replay and every what-if take.
//!
//! ```text
//! channels -> resolve (per sample) -> states and loads (in lanes) -> machines (per sample)
//! ```
//!
//! The middle stage is plain arithmetic over lanes and the same for one sample or sixty-four; the
//! outer two go sample by sample. Inputs are the integers, the tick, the plan and the events before
//! it in the order of the journal; nothing else.

mod digest;
mod output;
mod pace;
mod state;
mod step;
mod trend;

pub use digest::Digest;
pub use output::{Output, Rhythm};
pub use pace::{Pace, REST_MS_MIN};
pub use state::{CHECKPOINT_BYTES_MAX, State};
pub use step::{Judged, Moved, judge, step};
pub use trend::{TimeToLimit, Trend};

use crate::lane::Lane;
use crate::liquid::{Readings, States, states};
use crate::part::{Geometry, Part, PartLoads, evaluate_into};
use crate::plan::Plan;
use crate::signal::Resolved;
use core::array;

/// The three pressure states of `N` readings.
#[must_use]
pub fn pressures<const N: usize>(plan: &Plan, resolved: &[Resolved; N]) -> States<N> {
    let lane = |pick: fn(&Resolved) -> f32| {
        let mut values = resolved.iter().map(pick);
        Lane(array::from_fn(|_| values.next().unwrap_or(0.0)))
    };
    let readings = Readings {
        estimate: lane(|r| r.estimate),
        low: lane(|r| r.low),
        high: lane(|r| r.high),
        density: [
            lane(|r| r.density.estimate_kg_m3),
            lane(|r| r.density.low_kg_m3),
            lane(|r| r.density.high_kg_m3),
        ],
    };
    states(plan, &readings)
}

/// Heights of the surface that a reading allows, m above the datum: lowest, estimated, highest. At
/// or below the diaphragm of a head sensor the lowest is the diaphragm's own height: what lies
/// below is not seen.
#[must_use]
#[inline]
pub fn levels_m(plan: &Plan, resolved: &Resolved) -> [f32; 3] {
    let states = pressures(plan, &[*resolved]);
    let top = |pressure: &crate::pressure::Pressure<1>| {
        pressure.surfaces().first().map_or(0.0, |surface| surface.height_m.lane(0))
    };
    [top(&states.lower), states.level_m.lane(0), top(&states.upper)]
}

/// Loads of every part under `N` readings, handed to `part` in the plan's order, and the digest of
/// all their bits per lane.
pub fn loads<const N: usize>(
    plan: &Plan,
    resolved: &[Resolved; N],
    mut part: impl FnMut(usize, &PartLoads<N>),
) -> Digest<N> {
    each_load(plan, resolved, &mut part)
}

/// Loads of one part of the plan under `N` readings; `None` beyond the last part.
#[must_use]
pub fn part_loads<const N: usize>(
    plan: &Plan,
    index: usize,
    resolved: &[Resolved; N],
) -> Option<PartLoads<N>> {
    let states = pressures(plan, resolved);
    let mut loads = PartLoads::NONE;
    evaluate_into(plan, plan.parts.get(index)?, &states, &mut loads);
    Some(loads)
}

/// [`loads`] as one function in every image, whoever takes the loads.
#[inline(never)]
fn each_load<const N: usize>(
    plan: &Plan,
    resolved: &[Resolved; N],
    part: &mut dyn FnMut(usize, &PartLoads<N>),
) -> Digest<N> {
    let states = pressures(plan, resolved);
    let mut digest = Digest::new();
    // One room for each kind of part: what a kind does not have stays zero in its own.
    let [mut of_course, mut of_plane] = [PartLoads::NONE; 2];
    for (index, one) in plan.parts.iter().enumerate() {
        let loads = match one.geometry {
            Geometry::Course { .. } => &mut of_course,
            Geometry::Plane { .. } => &mut of_plane,
            Geometry::Curved(_) => {
                // Rare: its own room is made anew.
                each_curved(plan, (index, one), &states, &mut digest, part);
                continue;
            }
        };
        evaluate_into(plan, one, &states, loads);
        digest.add(one, loads);
        part(index, loads);
    }
    digest
}

/// One part of tables, its loads in a room that only it needs.
#[cold]
#[inline(never)]
fn each_curved<const N: usize>(
    plan: &Plan,
    (index, one): (usize, &Part),
    states: &States<N>,
    digest: &mut Digest<N>,
    part: &mut dyn FnMut(usize, &PartLoads<N>),
) {
    let mut loads = PartLoads::NONE;
    evaluate_into(plan, one, states, &mut loads);
    digest.add(one, &loads);
    part(index, &loads);
}

#[cfg(test)]
mod tests;
