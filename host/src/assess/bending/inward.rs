//! Inward plates of a panel: the largest inward moment of the bound, and from where up it is kept.

use super::super::desk::Desk;
use super::super::document::{Lowest, PartRow};
use super::super::part::single;
use super::{PlateRow, greater, lesser, row_of, shown};
use crate::compile::{Bending, Inward};
use crate::inverse::{Criterion, Interval, LimitedBy, intervals};
use crate::plate::DEFLECTION_PER_THICKNESS_MAX;
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{Part, acting};

/// Adds what the inward plates of a part say to its row.
pub(in crate::assess) fn judge(
    desk: &Desk,
    (plates, judged): (&[Bending], Option<Inward>),
    part: &Part,
    all: &States<1>,
    row: &mut PartRow,
) {
    let states = acting(desk.plan(), part, all);
    for bending in plates {
        let bound = bending.inward_bound(&states, 0);
        let estimate = bending.inward(&states.estimate, 0);
        let why_not = bending.too_thick().or_else(|| {
            (!bending.is_small(&bound)).then(|| {
                format!(
                    "thin-plate theory not valid: now, at the bound, the plate would sag by {:.2} \
                     of its thickness, the theory holds to {DEFLECTION_PER_THICKNESS_MAX}",
                    bending.deflection_m(&bound) / bending.plate.sound_m()
                )
            })
        });
        row.plates.push(PlateRow {
            side: "inward",
            device_pressure_pa: match judged {
                Some(Inward::Suction(pressure_pa)) => Some(pressure_pa),
                _ => None,
            },
            bent: why_not.is_none().then(|| shown(bending, &estimate, &bound)),
            why_not: why_not.clone(),
            ..row_of(bending)
        });
        if why_not.is_some() {
            continue;
        }
        let stress_pa = single(-bending.stress_pa(&bound));
        let inward = &mut row.loads_inward_bound;
        inward.stress_pa = Some(inward.stress_pa.map_or(stress_pa, |old| lesser(old, stress_pa)));
        let utilisation = single(bending.utilisation(&bound));
        let judged = &mut row.judgement;
        let old = judged.utilisation_inward.unwrap_or(0.0);
        judged.utilisation_inward = Some(greater(old, utilisation));
        cut(desk, bending, part, row);
    }
}

struct Within<'a> {
    desk: &'a Desk,
    bending: &'a Bending,
    part: &'a Part,
}

impl Criterion for Within<'_> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        let all = self.desk.at_true_level(level_m);
        let states = acting(self.desk.plan(), self.part, &all);
        std::array::from_fn(|lane| {
            self.bending.utilisation(&self.bending.inward_bound(&states, lane)) <= 1.0
        })
    }
}

/// The lowest level that the plate allows, and what that leaves of the limits.
fn cut(desk: &Desk, bending: &Bending, part: &Part, row: &mut PartRow) {
    let range = desk.range();
    let kinks = [part.bottom_m, part.top_m];
    let held: Vec<Interval> = intervals(&Within { desk, bending, part }, range, kinks);
    let from_floor = held.first().filter(|first| first.low_m <= range.low_m);
    let to_top = held.last().filter(|last| last.high_m >= range.high_m);
    let lowest_m = from_floor.or(to_top).map(|one| one.low_m);
    let judged = &mut row.judgement;
    let lowest_level_m = match &judged.lowest {
        None => lowest_m,
        Some(old) => old.lowest_level_m.zip(lowest_m).map(|(a, b)| greater(a, b)),
    };
    judged.lowest = Some(Lowest { lowest_level_m });
    let Some(limits) = &mut judged.limits else { return };
    let shared = limits.limit_intervals_m.iter().flat_map(|&[low_m, high_m]| {
        held.iter().map(move |one| [greater(low_m, one.low_m), lesser(high_m, one.high_m)])
    });
    limits.limit_intervals_m = shared.filter(|[low_m, high_m]| low_m <= high_m).collect();
    let ends_m = from_floor.map(|first| first.high_m).filter(|&end_m| end_m < range.high_m);
    for level in [&mut limits.limit_level_m, &mut limits.limit_level_bound_m] {
        let Some(level_m) = *level else { continue };
        let cut = match (lowest_level_m, ends_m) {
            (None, _) => None,
            (Some(lowest_m), _) if lowest_m > level_m => None,
            (_, Some(end_m)) if end_m < level_m => Some(end_m),
            _ => continue,
        };
        *level = cut;
        limits.limited_by = LimitedBy::Inward.as_str();
        limits.capacity_alone_m = None;
    }
}
