//! Panels judged by the bending of their plates: true moments at the desk, merged into the row that
//! the core's loads gave.

pub(super) mod inward;

use super::desk::Desk;
use super::document::{Limits, PartRow};
use super::part::single;
use crate::compile::{Bending, Bent, Judged};
use crate::inverse::{Criterion, Interval, LimitedBy, intervals};
use crate::plate::{DEFLECTION_PER_THICKNESS_MAX, Direction};
use serde::Serialize;
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{Part, acting};

/// The bending of one plate, as the document shows it.
#[derive(Clone, Debug, Serialize)]
pub struct PlateRow {
    /// outward or inward: what its capacity is for.
    pub side: &'static str,
    /// How the edges are held.
    pub edges: &'static str,
    /// Modulus of elasticity that the deflection is worked out with.
    pub elastic_modulus_pa: f64,
    /// Poisson's ratio.
    pub poisson_ratio: f64,
    /// Neither stated nor known from the material: those of steel.
    pub taken_as_steel: bool,
    /// What cutting the series off costs, as a share of the largest moment.
    pub series_error: f64,
    /// Points at whose true moments the device judges the plate.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub device_points: Option<usize>,
    /// Largest share by which they say more than the largest moment of all points, under one liquid
    /// that wets half of the plate or more, and gas; never less.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub device_excess: Option<f64>,
    /// Pressure at the lowest edge by which the device judges a plate instead, as if it were even:
    /// exact of a level plate, else the conservative substitute.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub device_pressure_pa: Option<f64>,
    /// Of the estimate; none when the theory does not hold at this state and up to the limit.
    #[serde(flatten)]
    pub bent: Option<BentRow>,
    /// Of the estimate, where the series gives them.
    #[serde(flatten)]
    pub edges_carry: Option<EdgeRow>,
    /// Why it is not judged.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub why_not: Option<String>,
}

/// What a plate presses on its supports under the estimate.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct EdgeRow {
    /// At the middle of the base, N/m.
    pub edge_base_n_m: f64,
    /// Largest along a side, N/m.
    pub edge_side_n_m: f64,
    /// At the middle of the top, N/m.
    pub edge_top_n_m: f64,
    /// What holds each lower corner down, N.
    pub corner_lower_n: f64,
    /// What holds each upper corner down, N.
    pub corner_upper_n: f64,
}

/// Where a plate bends most under the estimate.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct BentRow {
    /// Largest moment.
    pub bending_moment_n: f64,
    /// Where, sideways from the middle.
    pub bending_at_x_m: f64,
    /// Where, up the slope from the lowest edge.
    pub bending_at_slope_m: f64,
    /// up, level or twist.
    pub bending_direction: &'static str,
    /// Largest deflection.
    pub deflection_m: f64,
    /// Of the bound.
    pub deflection_bound_m: f64,
}

/// Adds what the plates of a part say to its row.
pub(super) fn judge(
    desk: &Desk,
    (plates, judged): (&[Bending], Option<&Judged>),
    part: &Part,
    all: &States<1>,
    row: &mut PartRow,
) {
    let tables = match judged {
        Some(Judged::Moments { tables, .. }) => Some(tables),
        _ => None,
    };
    let states = acting(desk.plan(), part, all);
    for bending in plates {
        let (now, bound) = (bending.under(&states.estimate, 0), bending.bound(&states, 0));
        let limits = PlateLimits::new(desk, bending, part);
        let why_not = why_not(desk, bending, part, (&now, &bound), &limits);
        row.plates.push(PlateRow {
            device_points: tables.map(|tables| tables.points.len()),
            device_excess: tables.map(|tables| tables.excess),
            device_pressure_pa: match judged {
                Some(Judged::Level(pa) | Judged::Substitute(pa, _)) => Some(*pa),
                Some(Judged::Moments { .. }) | None => None,
            },
            bent: why_not.is_none().then(|| shown(bending, &now, &bound)),
            edges_carry: why_not.is_none().then(|| edges(bending, &states)).flatten(),
            why_not: why_not.clone(),
            ..row_of(bending)
        });
        if why_not.is_none() {
            put(row, bending, (&now, &bound), limits);
        }
    }
}

/// What a plate is, without any number of its bending.
fn row_of(bending: &Bending) -> PlateRow {
    PlateRow {
        side: "outward",
        edges: bending.plate.edges.value.as_str(),
        elastic_modulus_pa: bending.elastic.modulus_pa,
        poisson_ratio: bending.elastic.poisson,
        taken_as_steel: bending.elastic.taken_as_steel,
        series_error: bending.series_error(),
        device_points: None,
        device_excess: None,
        device_pressure_pa: None,
        bent: None,
        edges_carry: None,
        why_not: None,
    }
}

fn edges(bending: &Bending, states: &States<1>) -> Option<EdgeRow> {
    let all = bending.reactions(&states.estimate, 0)?;
    let [edge_base_n_m, edge_side_n_m, edge_top_n_m, corner_lower_n, corner_upper_n] = all;
    Some(EdgeRow { edge_base_n_m, edge_side_n_m, edge_top_n_m, corner_lower_n, corner_upper_n })
}

fn shown(bending: &Bending, now: &Bent, bound: &Bent) -> BentRow {
    BentRow {
        bending_moment_n: now.moment_n,
        bending_at_x_m: now.place.x_m,
        bending_at_slope_m: now.place.s_m,
        bending_direction: match now.direction {
            Direction::Up => "up",
            Direction::Level => "level",
            Direction::Twist => "twist",
        },
        deflection_m: bending.deflection_m(now),
        deflection_bound_m: bending.deflection_m(bound),
    }
}

const fn greater(a: f32, b: f32) -> f32 {
    if a > b { a } else { b }
}

const fn lesser(a: f32, b: f32) -> f32 {
    if a < b { a } else { b }
}

/// Merges the numbers of one plate: the largest load, the least limit.
fn put(row: &mut PartRow, bending: &Bending, (now, bound): (&Bent, &Bent), limits: PlateLimits) {
    let larger = |old: Option<f32>, new: f64| {
        let new = single(new);
        Some(old.map_or(new, |old| greater(old, new)))
    };
    row.loads.stress_pa = larger(row.loads.stress_pa, bending.stress_pa(now));
    let outward = &mut row.loads_outward_bound;
    outward.stress_pa = larger(outward.stress_pa, bending.stress_pa(bound));
    let judged = &mut row.judgement;
    judged.utilisation = larger(judged.utilisation, bending.utilisation(now));
    judged.utilisation_bound = larger(judged.utilisation_bound, bending.utilisation(bound));
    if let Some(thickness_m) = bending.thickness_m(now) {
        let old = judged.thickness_for_state_m.unwrap_or(0.0);
        judged.thickness_for_state_m = Some(old.max(thickness_m));
    }
    judged.limits = Some(match judged.limits.take() {
        None => limits.alone(),
        Some(others) => limits.with(&others),
    });
}

/// Why no number is given for a plate.
fn why_not(
    desk: &Desk,
    bending: &Bending,
    part: &Part,
    (now, bound): (&Bent, &Bent),
    limits: &PlateLimits,
) -> Option<String> {
    if let Some(why) = bending.too_thick() {
        return Some(why);
    }
    let beyond = |bent: &Bent, at: &str| {
        (!bending.is_small(bent)).then(|| {
            format!(
                "thin-plate theory not valid: {at} the plate would sag by {:.2} of its thickness, \
                 the theory holds to {DEFLECTION_PER_THICKNESS_MAX}",
                bending.deflection_m(bent) / bending.plate.sound_m()
            )
        })
    };
    if let Some(why) = beyond(now, "now").or_else(|| beyond(bound, "now, at the bound,")) {
        return Some(why);
    }
    let top_m = desk.range().high_m;
    let at = |level_m: f32| acting(desk.plan(), part, &desk.at_true_level(Lane([level_m])));
    let level_m = limits.estimate.level_m(top_m);
    let estimate = bending.under(&at(level_m).estimate, 0);
    let level_bound_m = limits.bound.level_m(top_m);
    let upper = bending.bound(&at(level_bound_m), 0);
    beyond(&estimate, "filled to its limit")
        .or_else(|| beyond(&upper, "filled to its limit, at the bound,"))
}

/// Up to where the stress stays within the allowable one.
struct PlateLimits {
    estimate: End,
    bound: End,
    intervals: Vec<Interval>,
    limited_at_top: LimitedBy,
    top_m: f32,
    capacity_alone_m: Option<f32>,
}

/// End of the way up.
#[derive(Clone, Copy)]
enum End {
    /// No level is admissible.
    Never,
    /// The stress ends it.
    At(f32),
    /// Overflow or shell top come first.
    Top,
}

impl End {
    fn level_m(self, top_m: f32) -> f32 {
        match self {
            Self::At(level_m) => level_m,
            Self::Never | Self::Top => top_m,
        }
    }

    fn shown(self, top_m: f32) -> Option<f32> {
        match self {
            Self::Never => None,
            _ => Some(self.level_m(top_m)),
        }
    }
}

struct Within<'a> {
    desk: &'a Desk,
    bending: &'a Bending,
    part: &'a Part,
    bound: bool,
}

impl Criterion for Within<'_> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        let all = self.desk.at_true_level(level_m);
        let states = acting(self.desk.plan(), self.part, &all);
        std::array::from_fn(|lane| {
            let bent = if self.bound {
                self.bending.bound(&states, lane)
            } else {
                self.bending.under(&states.estimate, lane)
            };
            self.bending.utilisation(&bent) <= 1.0
        })
    }
}

impl PlateLimits {
    fn new(desk: &Desk, bending: &Bending, part: &Part) -> Self {
        let range = desk.range();
        let kinks = [part.bottom_m, part.top_m];
        let find = |bound: bool, range: Interval| {
            intervals(&Within { desk, bending, part, bound }, range, kinks)
        };
        let end = |found: &[Interval], range: Interval| match found.first() {
            Some(first) if first.low_m > range.low_m => End::Never,
            None => End::Never,
            Some(first) if first.high_m >= range.high_m => End::Top,
            Some(first) => End::At(first.high_m),
        };
        let intervals = find(false, range);
        let estimate = end(&intervals, range);
        let capacity_alone_m = match estimate {
            End::Top => match end(&find(false, desk.beyond()), desk.beyond()) {
                End::At(level_m) => Some(level_m),
                End::Never | End::Top => None,
            },
            End::Never | End::At(_) => None,
        };
        Self {
            estimate,
            bound: end(&find(true, range), range),
            intervals,
            limited_at_top: desk.limited_at_top(),
            top_m: range.high_m,
            capacity_alone_m,
        }
    }

    fn alone(self) -> Limits {
        let limited_by = match self.estimate {
            End::Never => LimitedBy::Gas,
            End::At(_) => LimitedBy::Strength,
            End::Top => self.limited_at_top,
        };
        Limits {
            limited_by: limited_by.as_str(),
            limit_level_m: self.estimate.shown(self.top_m),
            limit_level_bound_m: self.bound.shown(self.top_m),
            limit_intervals_m: self.intervals.iter().map(|one| [one.low_m, one.high_m]).collect(),
            capacity_alone_m: self.capacity_alone_m,
        }
    }

    /// With the limits of the other capacities: the lower of each.
    fn with(self, others: &Limits) -> Limits {
        let own = self.alone();
        let level = |limits: &Limits| limits.limit_level_m.unwrap_or(f32::NEG_INFINITY);
        let alone = |limits: &Limits| limits.capacity_alone_m.unwrap_or(f32::INFINITY);
        let both = |a: Option<f32>, b: Option<f32>| a.zip(b).map(|(a, b)| lesser(a, b));
        let least =
            if (level(&own), alone(&own)) < (level(others), alone(others)) { &own } else { others };
        let mut shared = Vec::new();
        for [a, b] in &own.limit_intervals_m {
            for [c, d] in &others.limit_intervals_m {
                let cut = [greater(*a, *c), lesser(*b, *d)];
                if cut[0] <= cut[1] {
                    shared.push(cut);
                }
            }
        }
        Limits {
            limited_by: least.limited_by,
            limit_level_m: both(own.limit_level_m, others.limit_level_m),
            limit_level_bound_m: both(own.limit_level_bound_m, others.limit_level_bound_m),
            limit_intervals_m: shared,
            capacity_alone_m: least.capacity_alone_m,
        }
    }
}
