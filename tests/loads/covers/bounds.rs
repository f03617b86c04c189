//! Bounds of reactions under a head sensor: exact against the envelope, and never passed by a
//! liquid of the band.

use super::draw::Holding;
use super::{Placed, Straight, drawn};
use crate::core_error::{BOUND, Worst, hold, many, random_head, sensed, surface_step_pa};
use strake_core::liquid::States;
use strake_core::part::{acting, evaluate};
use strake_core::plan::Plan;
use strake_oracle::envelope::{Band, Bound, Head};
use strake_oracle::liquid::{Liquid, Pressure};
use strake_oracle::plane::PlanePart;
use strake_oracle::profiles::Profile;
use strake_oracle::random::Random;

/// Largest load of a weighting between two pressures, and `integral (|p_upper| + |p_lower|) |w|`.
fn largest(plane: &PlanePart, weighting: &Straight, lower: &Bound, upper: &Bound) -> (f64, f64) {
    let pressed = weighting.pressed(plane, upper) + weighting.pressed(plane, lower);
    let (low, high) = plane.shape.extent();
    let zero = weighting.zero();
    if plane.rise() <= 0.0 || !(low..=high).contains(&zero) {
        let middle =
            weighting.at_centroid + weighting.slope * (0.5 * (low + high) - weighting.centroid_s);
        let of_all = if plane.rise() <= 0.0 { weighting.at_centroid } else { middle };
        let governing = if of_all >= 0.0 { upper } else { lower };
        let moment = plane.moment(governing, weighting.centroid_s);
        return (weighting.load([plane.force(governing), moment]), pressed);
    }
    // `moment_bound` takes the upper pressure above the line.
    let largest = if weighting.slope > 0.0 {
        weighting.slope * plane.moment_bound(lower, upper, zero)
    } else {
        weighting.slope * plane.moment_bound(upper, lower, zero)
    };
    (largest, pressed)
}

/// What an f32 step of the surface costs, N or N m.
fn of_surface(plane: &PlanePart, weighting: &Straight, head: &Head) -> f64 {
    let even = Liquid { layers: Vec::new(), ..Liquid::uniform(1.0, 0.0) };
    weighting.pressed(plane, &even.with_gas(surface_step_pa(head)))
}

/// Largest and least of each reaction, as the core has them.
fn found(plan: &Plan, placed: &Placed, states: &States<1>) -> Vec<[f64; 2]> {
    let (cover, _) = placed.cover();
    let acting = acting(plan, &placed.part, states);
    let [moment, first, second] =
        cover.each(&placed.face(plan), &acting).map(|one| [1, 2].map(|i| one[i].lane(0).into()));
    match placed.drawn.holding {
        Holding::Bolts(_) => vec![first, second],
        Holding::Line { .. } => vec![moment, second],
        Holding::Side { pins: None, .. } => vec![moment, first],
        Holding::Side { .. } => vec![moment, first, second],
    }
}

/// Worst error of a bound, relative to `integral (|p_upper| + |p_lower|) |w| dA`, beside the
/// surface's.
fn worst_bound(seed: u64, covers: u32, profiles: u32) -> Worst {
    let mut random = Random::new(seed);
    let mut worst = Worst::default();
    let mut done = 0;
    while done < covers {
        let head = random_head(&mut random);
        let bounds = (Bound::Lower(head), Bound::Upper(head));
        let near = head.at_m + random.between(-0.5, 6.0);
        let uniform = Liquid::uniform(1000.0, near.max(0.0));
        let liquid = Liquid { gravity_m_s2: head.gravity_m_s2, ..uniform };
        let (with_parts, all) = drawn(&mut random, &liquid, near);
        let (mut plan, states) = sensed(&head);
        plan.numbers = with_parts.numbers;
        for placed in all.iter().filter(|placed| placed.drawn.weight_n.abs() <= 0.0) {
            done += 1;
            let loads = evaluate(&plan, &placed.part, &states);
            let found = found(&plan, placed, &states);
            for (weighting, [most, least]) in placed.weightings().iter().zip(&found) {
                let plane = &placed.plane;
                let (largest_n, pressed) = largest(plane, weighting, &bounds.0, &bounds.1);
                let turned = Straight {
                    at_centroid: -weighting.at_centroid,
                    slope: -weighting.slope,
                    ..*weighting
                };
                let least_n = -largest(plane, &turned, &bounds.0, &bounds.1).0;
                let step = of_surface(plane, weighting, &head);
                let off = (most - largest_n).abs().max((least - least_n).abs());
                let error = (off - step).max(0.0) / pressed;
                worst.take(error, || format!("{} under {head:?}", placed.drawn.text));
                for _ in 0..profiles {
                    let profile = Profile::random(&head, 4.0, &mut random);
                    let centroid = weighting.centroid_s;
                    let load = [plane.force(&profile), plane.moment(&profile, centroid)];
                    let truth = weighting.load(load);
                    let room = BOUND * pressed + step;
                    assert!(
                        *least - room <= truth && truth <= *most + room,
                        "{truth} outside {least} to {most}: {} under {head:?}",
                        placed.drawn.text
                    );
                }
            }
            // The device judges the worst of them.
            let carried = found.iter().skip(usize::from(found.len() == 3));
            if matches!(placed.drawn.holding, Holding::Bolts(_)) {
                let most = carried.map(|one| one[0]).fold(f64::NEG_INFINITY, f64::max);
                let device = f64::from(loads.outward.bolt_n.lane(0));
                assert!((device - most).abs() <= 1e-6 * most.abs());
            }
        }
    }
    worst
}

const LOAD: &str = "bound of a reaction by a head";

#[test]
fn no_liquid_of_the_band_passes_the_bound_of_a_reaction() {
    hold(&[worst_bound(31, 1_000, 6)], &[LOAD]);
}

#[test]
#[ignore = "long proof of a million covers, see DEVELOPERS.md"]
fn long_bounds_of_reactions_stay_within_the_stated_error() {
    hold(&[worst_bound(3_100, many(), 1)], &[LOAD]);
}

/// The control: a bound without the cut, the upper pressure everywhere, is passed.
#[test]
fn the_upper_pressure_everywhere_is_no_bound() {
    let mut random = Random::new(7);
    let head = random_head(&mut random);
    let head = Head { pressure_pa: Band::new(30e3, 31e3), at_m: 0.0, ..head };
    let bounds = (Bound::Lower(head), Bound::Upper(head));
    let plane = PlanePart::new(
        strake_oracle::shape::Shape::Rectangle { width: 1.0, length: 2.0 },
        0.5,
        90.0,
    );
    let weighting = Straight { at_centroid: 0.0, slope: -1.0, centroid_s: 1.0 };
    let careless = weighting.load([plane.force(&bounds.1), plane.moment(&bounds.1, 1.0)]);
    let truth = largest(&plane, &weighting, &bounds.0, &bounds.1).0;
    let held: &dyn Pressure = &bounds.1;
    assert!(truth > careless + 1e-3 * weighting.pressed(&plane, held), "{truth} {careless}");
}
