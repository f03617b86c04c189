//! The inverse question: at which levels is a part within its capacity?
//!
//! A *limit level* is the highest level up to which the utilisation stays at or below one on the
//! whole way up from the floor. Loads need not grow with the level (a cover that turns about a line
//! inside it, liquid outside, a gas below the air's pressure), so no root is sought from above: the
//! way up is looked at kink by kink and on a fine grid, and each change is narrowed down to two
//! neighbouring f32. The answer is a list of intervals, and may be empty.

mod limits;
mod lines;
mod round;

pub(crate) use limits::within;
pub use limits::{Limit, LimitedBy, PartLimits, first_reached, held_above, of_part};
pub use lines::{Against, By, Line, lines};
pub use round::{Step, density_down, density_up, rounded_down, rounded_up, thickness_up};

use strake_core::lane::Lane;

/// Samples looked at in one go; the bits of each do not depend on their number.
const LANES: usize = 64;
/// Stretches of the grid.
const GRID: u16 = 1024;

/// Levels from one to another, m above the datum, both in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// Lower end.
    pub low_m: f32,
    /// Upper end.
    pub high_m: f32,
}

/// What must hold of a level.
pub(crate) trait Criterion {
    /// Whether it holds at each level.
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N];
}

/// The parts of `range` in which the criterion holds, from the bottom up. `kinks` are levels at
/// which a load may change its course.
pub(crate) fn intervals(
    criterion: &impl Criterion,
    range: Interval,
    kinks: impl IntoIterator<Item = f32>,
) -> Vec<Interval> {
    intervals_on(criterion, range, kinks, GRID)
}

/// [`intervals`] on a grid of that many stretches.
pub(crate) fn intervals_on(
    criterion: &impl Criterion,
    range: Interval,
    kinks: impl IntoIterator<Item = f32>,
    stretches: u16,
) -> Vec<Interval> {
    let levels = places(range, kinks, stretches);
    let mut found: Vec<Interval> = Vec::new();
    let mut before: Option<(f32, bool)> = None;
    for chunk in levels.chunks(LANES) {
        let last = chunk.last().copied().unwrap_or(range.high_m);
        let mut lanes = [last; LANES];
        for (lane, &level) in lanes.iter_mut().zip(chunk) {
            *lane = level;
        }
        for (&level, holds) in chunk.iter().zip(criterion.holds(Lane(lanes))) {
            match (before, holds) {
                (None | Some((_, true)), true) => extend(&mut found, level),
                (Some((below, false)), true) => {
                    let start = edge(criterion, level, below);
                    found.push(Interval { low_m: start, high_m: level });
                }
                (Some((below, true)), false) => {
                    let end = edge(criterion, below, level);
                    extend(&mut found, end);
                }
                (None | Some((_, false)), false) => {}
            }
            before = Some((level, holds));
        }
    }
    found
}

/// Moves the end of the last interval up; begins the first one.
fn extend(found: &mut Vec<Interval>, level_m: f32) {
    match found.last_mut() {
        Some(last) => last.high_m = level_m,
        None => found.push(Interval { low_m: level_m, high_m: level_m }),
    }
}

/// Levels to look at, rising.
fn places(range: Interval, kinks: impl IntoIterator<Item = f32>, stretches: u16) -> Vec<f32> {
    let width = range.high_m - range.low_m;
    let share = |i: u16| f32::from(i) / f32::from(stretches);
    let grid = (0..=stretches).map(|i| range.low_m + width * share(i));
    let mut levels: Vec<f32> = grid.chain(kinks).chain([range.high_m]).collect();
    levels.retain(|level| (range.low_m..=range.high_m).contains(level));
    levels.sort_by(f32::total_cmp);
    levels.dedup_by(|a, b| a.total_cmp(b).is_eq());
    levels
}

/// The last level at which the criterion holds on the way from `good` to `bad`: its neighbour in
/// f32 towards `bad` is one at which it does not.
pub(crate) fn edge(criterion: &impl Criterion, mut good: f32, mut bad: f32) -> f32 {
    loop {
        let middle = good + 0.5 * (bad - good);
        let at_good = middle.total_cmp(&good).is_eq();
        let at_bad = middle.total_cmp(&bad).is_eq();
        if at_good || at_bad {
            return good;
        }
        let [holds] = criterion.holds(Lane([middle]));
        if holds {
            good = middle;
        } else {
            bad = middle;
        }
    }
}

#[cfg(test)]
mod tests;
