//! Limit levels of a part, and the levels at which thresholds are reached.

use super::{Criterion, Interval, intervals};
use crate::assess::Desk;
use strake_core::lane::Lane;
use strake_core::part::{Capacities, Geometry, Held, Part, PartLoads, evaluate};
use strake_core::plan::{LevelSensor, Plan};
use strake_core::shape::Face;

/// What ends the way up.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LimitedBy {
    /// A pressure, hoop tension or force.
    Strength,
    /// What secures the cover.
    Securing,
    /// A state that the part was designed for.
    DesignState,
    /// The least level that the inward load asks for lies above the limit.
    Inward,
    /// The gas alone is too much.
    Gas,
    /// The overflow comes first.
    Overflow,
    /// The shell top comes first.
    ShellTop,
}

impl LimitedBy {
    /// The word that stands in documents.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Strength => "strength",
            Self::Securing => "securing",
            Self::DesignState => "design_state",
            Self::Inward => "inward",
            Self::Gas => "gas",
            Self::Overflow => "overflow",
            Self::ShellTop => "shell_top",
        }
    }
}

/// Highest level of one part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limit {
    /// The level, m; `None` when no level is admissible.
    pub level_m: Option<f32>,
    /// What limits it.
    pub limited_by: LimitedBy,
    /// Where overflow or shell top come first: the level that the capacities alone give, m; `None`
    /// when they are not reached in any tank.
    pub capacity_alone_m: Option<f32>,
}

impl Limit {
    const fn none(limited_by: LimitedBy) -> Self {
        Self { level_m: None, limited_by, capacity_alone_m: None }
    }
}

/// Levels at which a part is within its capacities.
#[derive(Clone, Debug, PartialEq)]
pub struct PartLimits {
    /// Nominal density and gas, interfaces held.
    pub estimate: Limit,
    /// Highest density and gas, interfaces at their highest.
    pub bound: Limit,
    /// Levels at which the estimate keeps the outward and the bound the inward capacity.
    pub intervals: Vec<Interval>,
    /// Level from which upward the inward capacity is kept, of a part that has one: `Some(None)`
    /// when there is none.
    pub lowest_m: Option<Option<f32>>,
}

/// The utilisation that is asked for.
#[derive(Clone, Copy)]
pub(super) enum Which {
    Estimate,
    Bound,
    Inward,
}

/// A utilisation of one part at true levels of the surface, at or below one.
pub(super) struct Within<'a> {
    pub(super) desk: &'a Desk,
    pub(super) part: &'a Part,
    pub(super) which: Which,
}

impl Criterion for Within<'_> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        let states = self.desk.at_true_level(level_m);
        let loads: PartLoads<N> = evaluate(self.desk.plan(), self.part, &states);
        let utilisation = match self.which {
            Which::Estimate => loads.utilisation,
            Which::Bound => loads.utilisation_bound,
            Which::Inward => loads.utilisation_inward,
        };
        utilisation.0.map(|u| u <= 1.0)
    }
}

/// Whether the estimate keeps the outward capacities of a part at every level of a range.
pub(crate) fn within(desk: &Desk, part: &Part, range: Interval) -> bool {
    let criterion = Within { desk, part, which: Which::Estimate };
    let found = intervals(&criterion, range, kinks(desk, part));
    matches!(found.as_slice(), [one] if one.low_m <= range.low_m && one.high_m >= range.high_m)
}

/// Two criteria at once.
struct Both<A, B>(A, B);

impl<A: Criterion, B: Criterion> Criterion for Both<A, B> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        let mut second = self.1.holds(level_m).into_iter();
        self.0.holds(level_m).map(|first| second.next().unwrap_or(false) && first)
    }
}

/// The limits of a part with an outward capacity; `None` for one without.
#[must_use]
pub fn of_part(desk: &Desk, part: &Part) -> Option<PartLimits> {
    if !part.judged_outward() && !part.judged_inward() {
        return None;
    }
    let within = |which| Within { desk, part, which };
    let find = |criterion: &Within<'_>| intervals(criterion, desk.range(), kinks(desk, part));
    let inward =
        part.judged_inward().then(|| Inward::of(desk, part, &find(&within(Which::Inward))));
    let both = Both(within(Which::Estimate), within(Which::Inward));
    let limit = |which| {
        let outward = outward_limit(desk, part, which);
        inward.as_ref().map_or(outward, |inward| inward.cuts(outward))
    };
    Some(PartLimits {
        estimate: limit(Which::Estimate),
        bound: limit(Which::Bound),
        intervals: intervals(&both, desk.range(), kinks(desk, part)),
        lowest_m: inward.as_ref().map(|inward| inward.lowest_m),
    })
}

/// Where the inward capacities are kept on the way up.
struct Inward {
    /// Level from which upward they are; `None` when there is none.
    lowest_m: Option<f32>,
    /// Level at which they end though they hold from the floor on (a reaction whose weighting
    /// changes its sign), and what ends them.
    end: Option<(f32, LimitedBy)>,
}

impl Inward {
    fn of(desk: &Desk, part: &Part, found: &[Interval]) -> Self {
        let range = desk.range();
        let from_floor = found.first().is_some_and(|first| first.low_m <= range.low_m);
        if from_floor {
            let end = least_end(desk, &inward_singles(part), Which::Inward, range).ok().flatten();
            return Self { lowest_m: Some(range.low_m), end };
        }
        let last = found.last().filter(|last| last.high_m >= range.high_m);
        Self { lowest_m: last.map(|last| last.low_m), end: None }
    }

    /// The outward limit, cut where the inward capacities end before it.
    fn cuts(&self, outward: Limit) -> Limit {
        let Some(high_m) = outward.level_m else { return outward };
        match (self.lowest_m, self.end) {
            (None, _) => Limit::none(LimitedBy::Inward),
            (Some(low_m), _) if low_m > high_m => Limit::none(LimitedBy::Inward),
            (_, Some((end_m, limited_by))) if end_m < high_m => {
                Limit { level_m: Some(end_m), limited_by, capacity_alone_m: None }
            }
            _ => outward,
        }
    }
}

/// The least of the limits that each capacity sets for itself, and which one that is.
fn outward_limit(desk: &Desk, part: &Part, which: Which) -> Limit {
    let singles = outward_singles(part);
    let Ok(reached) = least_end(desk, &singles, which, desk.range()) else {
        return Limit::none(LimitedBy::Gas);
    };
    if let Some((level_m, limited_by)) = reached {
        return Limit { level_m: Some(level_m), limited_by, capacity_alone_m: None };
    }
    let beyond = least_end(desk, &singles, which, desk.beyond()).ok().flatten();
    Limit {
        level_m: Some(desk.range().high_m),
        limited_by: desk.limited_at_top(),
        capacity_alone_m: beyond.map(|(level_m, _)| level_m),
    }
}

/// A capacity that does not hold at the lower end of a range.
struct BrokenBelow;

/// The least level in a range up to which each capacity holds for itself; `None` when all hold to
/// its upper end.
fn least_end(
    desk: &Desk,
    singles: &[(LimitedBy, Part)],
    which: Which,
    range: Interval,
) -> Result<Option<(f32, LimitedBy)>, BrokenBelow> {
    let mut least: Option<(f32, LimitedBy)> = None;
    for (kind, alone) in singles {
        let criterion = Within { desk, part: alone, which };
        let found = intervals(&criterion, range, kinks(desk, alone));
        let from_below = found.first().filter(|first| first.low_m <= range.low_m);
        let end_m = from_below.ok_or(BrokenBelow)?.high_m;
        if end_m < range.high_m && least.is_none_or(|(level_m, _)| end_m < level_m) {
            least = Some((end_m, *kind));
        }
    }
    Ok(least)
}

/// The part without any capacity.
fn bare(part: &Part) -> Part {
    Part {
        outward: Capacities::default(),
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        ..part.clone()
    }
}

/// Whether a part's moment is the bending moment of a plate.
pub(super) const fn is_plate(part: &Part) -> bool {
    match &part.geometry {
        Geometry::Plane { cover: Some(cover), .. } => matches!(cover.held(), Held::Plate(_)),
        _ => false,
    }
}

/// Each stated capacity alone, with what a limit by it is called.
fn singles(part: &Part, outward: bool) -> Vec<(LimitedBy, Capacities)> {
    let (capacities, strength, held) = match (outward, is_plate(part)) {
        (true, true) => (&part.outward, LimitedBy::Strength, LimitedBy::Strength),
        (true, false) => (&part.outward, LimitedBy::Strength, LimitedBy::Securing),
        (false, true) => (&part.inward, LimitedBy::Inward, LimitedBy::Inward),
        (false, false) => (&part.inward, LimitedBy::Inward, LimitedBy::Securing),
    };
    let Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m } = *capacities;
    let none = Capacities::default();
    let all = [
        (strength, Capacities { pressure_pa, ..none }),
        (strength, Capacities { hoop_tension_n_m, ..none }),
        (strength, Capacities { force_n, ..none }),
        (held, Capacities { bolt_n, ..none }),
        (held, Capacities { moment_n_m, ..none }),
    ];
    all.into_iter().filter(|(_, one)| !one.is_empty()).collect()
}

/// The part with each of its outward capacities alone.
fn outward_singles(part: &Part) -> Vec<(LimitedBy, Part)> {
    let bare = bare(part);
    let mut all: Vec<(LimitedBy, Part)> = singles(part, true)
        .into_iter()
        .map(|(kind, outward)| (kind, Part { outward, ..bare.clone() }))
        .collect();
    if !part.designed_for.is_empty() {
        let designed_for = part.designed_for.clone();
        all.push((LimitedBy::DesignState, Part { designed_for, ..bare }));
    }
    all
}

/// The part with each of its inward capacities alone.
fn inward_singles(part: &Part) -> Vec<(LimitedBy, Part)> {
    let bare = bare(part);
    singles(part, false)
        .into_iter()
        .map(|(kind, inward)| (kind, Part { inward, ..bare.clone() }))
        .collect()
}

/// Levels at which a load of the part may change its course.
pub(super) fn kinks(desk: &Desk, part: &Part) -> Vec<f32> {
    let plan = desk.plan();
    let designed = part.designed_for.iter().map(|state| state.level_m);
    plan_kinks(plan)
        .into_iter()
        .chain([part.bottom_m, part.top_m])
        .chain(designed)
        .chain(turning_levels(plan, part))
        .collect()
}

/// Levels at which a reaction of the cover turns back while its opening fills: where the integral
/// of its weighting below the surface is zero. Between two of them and the other kinks every
/// reaction rises or falls.
fn turning_levels(plan: &Plan, part: &Part) -> Vec<f32> {
    let Geometry::Plane { shape, cover: Some(cover), .. } = &part.geometry else {
        return Vec::new();
    };
    if let Held::Plate(nodes) = cover.held() {
        // Between two nodes a weighting keeps its sign.
        return nodes.of(&plan.numbers).iter().map(|node| part.bottom_m + node[0]).collect();
    }
    let face = Face { shape, numbers: &plan.numbers, bottom_m: part.bottom_m };
    let mut found = Vec::new();
    for weighting in cover.weightings() {
        for sign in [1.0, -1.0] {
            let load = |y_m: f32| sign * weighting.wetted(&face, y_m);
            // The load has one extreme at most there: the weighting changes its sign once.
            let (mut low_m, mut high_m) = (0.0, shape.rise_m());
            for _ in 0..60 {
                let third = (high_m - low_m) / 3.0;
                let (left_m, right_m) = (low_m + third, high_m - third);
                if load(left_m) < load(right_m) {
                    low_m = left_m;
                } else {
                    high_m = right_m;
                }
            }
            found.push(part.bottom_m + 0.5 * (low_m + high_m));
        }
    }
    found
}

fn plan_kinks(plan: &Plan) -> Vec<f32> {
    let layers = plan.liquid.below.iter().flat_map(|layer| {
        let (at_m, half_m) = (layer.surface_m, layer.surface_uncertainty_m);
        [at_m - half_m, at_m, at_m + half_m]
    });
    let outside = plan.outside.iter().flat_map(|one| [one.lowest_m, one.highest_m]);
    let sensor = match plan.level.sensor {
        LevelSensor::Head { at_m, .. } => Some(at_m),
        LevelSensor::Surface => None,
    };
    layers.chain(outside).chain(sensor).collect()
}

/// The direction in which parts are judged.
#[derive(Clone, Copy)]
enum Direction {
    Outward,
    Inward,
}

/// Every part's bound in a direction, for the sensor at hand, below a threshold.
struct Below<'a> {
    desk: &'a Desk,
    direction: Direction,
    threshold: f32,
}

impl Criterion for Below<'_> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        let plan = self.desk.plan();
        let states = self.desk.as_seen(level_m);
        let mut holds = [true; N];
        for part in &plan.parts {
            let loads = evaluate(plan, part, &states);
            let bound = match self.direction {
                Direction::Outward => loads.utilisation_bound,
                Direction::Inward => loads.utilisation_inward,
            };
            for (holds, u) in holds.iter_mut().zip(bound.0) {
                *holds &= u < self.threshold;
            }
        }
        holds
    }
}

/// The surface level at which the first part's outward bound reaches a threshold, as the sensor at
/// hand sees it; `None` when it is not reached up to the overflow.
#[must_use]
pub fn first_reached(desk: &Desk, threshold: f32) -> Option<f32> {
    let range = desk.range();
    let parts = desk.plan().parts.iter();
    let kinks: Vec<f32> = parts.flat_map(|part| kinks(desk, part)).collect();
    let found = intervals(&Below { desk, direction: Direction::Outward, threshold }, range, kinks);
    match found.first().filter(|first| first.low_m <= range.low_m) {
        None => Some(range.low_m),
        Some(first) if first.high_m >= range.high_m => None,
        Some(first) => Some(first.high_m),
    }
}

/// On the way down from the overflow, the surface level at which the first part's inward bound
/// reaches a threshold, as the sensor at hand sees it; `None` when it is not reached down to the
/// floor.
#[must_use]
pub fn held_above(desk: &Desk, threshold: f32) -> Option<f32> {
    let range = desk.range();
    let parts = desk.plan().parts.iter().flat_map(|part| [part.bottom_m, part.top_m]);
    let kinks = plan_kinks(desk.plan()).into_iter().chain(parts);
    let found = intervals(&Below { desk, direction: Direction::Inward, threshold }, range, kinks);
    match found.last().filter(|last| last.high_m >= range.high_m) {
        None => Some(range.high_m),
        Some(last) if last.low_m <= range.low_m => None,
        Some(last) => Some(last.low_m),
    }
}
