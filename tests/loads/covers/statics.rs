//! Reactions at a stated level: their error, and that they balance the load.

use super::draw::Holding;
use super::{Placed, drawn, height};
use crate::core_engine::at_level;
use crate::core_error::{BOUND, Worst, hold, many, sides};
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::{PartLoads, acting, evaluate};
use strake_core::plan::Plan;
use strake_oracle::generate::liquid;
use strake_oracle::liquid::Liquid;
use strake_oracle::random::Random;

/// Names of what is checked.
const LOADS: [&str; 5] = [
    "share of a bolt",
    "moment about a hinge",
    "force on a hinge",
    "moment beside",
    "force on a pin",
];

/// Which of [`LOADS`] a cover's reactions are.
fn kinds(placed: &Placed) -> &'static [usize] {
    match placed.drawn.holding {
        Holding::Bolts(_) => &[0, 0],
        Holding::Line { .. } => &[1, 2],
        Holding::Side { .. } => &[3, 4, 4],
    }
}

/// What the core says of each, under the estimate.
fn found(plan: &Plan, placed: &Placed, states: &States<1>) -> Vec<f64> {
    let (cover, _) = placed.cover();
    let acting = acting(plan, &placed.part, states);
    let [moment, first, second] =
        cover.each(&placed.face(plan), &acting).map(|one| f64::from(one[0].lane(0)));
    match placed.drawn.holding {
        Holding::Bolts(_) => vec![first, second],
        Holding::Line { .. } => vec![moment, second],
        Holding::Side { pins: None, .. } => vec![moment, first],
        Holding::Side { .. } => vec![moment, first, second],
    }
}

/// Largest of the reactions, as the device has it.
fn largest(loads: &PartLoads<1>) -> f64 {
    loads.estimate.bolt_n.lane(0).into()
}

/// Worst error of each load, relative to `integral |p| |w| dA` and the counted weight with the
/// largest `|w|` on the cover (it acts in one point, where `w` may be next to nothing).
fn worst_errors(seed: u64, covers: u32) -> [Worst; 5] {
    let mut random = Random::new(seed);
    let mut worst = [(); 5].map(|()| Worst::default());
    let mut done = 0;
    while done < covers {
        let near = height(&mut random);
        let state = liquid(&mut random, near);
        let (plan, all) = drawn(&mut random, &state, near);
        let states = at_level(&plan, crate::core_engine::narrow(state.surface_m()));
        for placed in &all {
            done += 1;
            one(&plan, placed, &state, &states, &mut worst);
        }
    }
    worst
}

fn one(plan: &Plan, placed: &Placed, state: &Liquid, states: &States<1>, worst: &mut [Worst; 5]) {
    let plane = &placed.plane;
    let centroid = plane.centroid().1;
    let load = [plane.force(state), plane.moment(state, centroid)];
    let found = found(plan, placed, states);
    let weightings = placed.weightings();
    assert_eq!(weightings.len(), found.len(), "{:?}", placed.drawn.holding);
    let mut references = Vec::new();
    for ((weighting, core), kind) in weightings.iter().zip(&found).zip(kinds(placed)) {
        let weight = weighting.at_centroid * placed.drawn.weight_n;
        let counted = if weight > 0.0 || placed.drawn.weighed { weight } else { 0.0 };
        let reference = weighting.load(load) + counted;
        references.push(reference);
        let pressed: f64 =
            sides(state).iter().map(|side| weighting.pressed(plane, side)).sum::<f64>()
                + if counted == 0.0 {
                    0.0
                } else {
                    weighting.largest(plane) * placed.drawn.weight_n.abs()
                };
        if pressed <= 1e-9 {
            assert!(core.abs() < 1e-6, "{core} where nothing presses");
            continue;
        }
        let error = (core - reference).abs() / pressed;
        worst[*kind].take(error, || {
            format!("{core} for {reference}: {} under {state:?}", placed.drawn.text)
        });
    }
    let device = largest(&evaluate(plan, &placed.part, states));
    let due = match placed.drawn.holding {
        Holding::Line { .. } | Holding::Side { pins: None, .. } => found[1],
        _ => found[found.len() - 2].max(found[found.len() - 1]),
    };
    assert!((device - due).abs() <= 1e-6 * due.abs(), "{device} for {due}: {}", placed.drawn.text);
}

#[test]
fn reactions_stay_within_the_stated_error() {
    hold(&worst_errors(17, 2_000), &LOADS);
}

#[test]
#[ignore = "long proof of a million covers, see DEVELOPERS.md"]
fn long_reactions_stay_within_the_stated_error() {
    hold(&worst_errors(2_027, 4 * many()), &LOADS);
}

/// What holds a cover and the load on it are in equilibrium: forces, and moments about the level
/// line through the centroid; about the hinge where there is one.
#[test]
fn what_holds_a_cover_balances_the_load() {
    let mut random = Random::new(23);
    for _ in 0..60 {
        let near = height(&mut random);
        let state = Liquid { outside: None, ..liquid(&mut random, near) };
        let (plan, all) = drawn(&mut random, &state, near);
        let states = at_level(&plan, crate::core_engine::narrow(state.surface_m()));
        for placed in all.iter().filter(|placed| placed.drawn.weight_n.abs() <= 0.0) {
            let loads = evaluate(&plan, &placed.part, &states).estimate;
            let single = |lane: Lane<1>| f64::from(lane.lane(0));
            let (force, moment) = (single(loads.force_n), single(loads.moment_centroid_n_m));
            let reach = placed.plane.shape.extent().1;
            let pressed = placed.plane.pressed_force(&state);
            balance(placed, &found(&plan, placed, &states), [force, moment], [pressed, reach]);
        }
    }
}

fn balance(placed: &Placed, found: &[f64], [force, moment]: [f64; 2], [pressed, reach]: [f64; 2]) {
    // Forces at places up the slope from the centroid.
    let all: Vec<(f64, f64)> = match &placed.drawn.holding {
        Holding::Bolts(bolts) => {
            let heights = bolts.iter().map(|bolt| bolt.1);
            let low = heights.clone().fold(f64::INFINITY, f64::min);
            let high = heights.fold(f64::NEG_INFINITY, f64::max);
            let share = |s: f64| found[0] + (found[1] - found[0]) * (s - low) / (high - low);
            bolts.iter().map(|bolt| (share(bolt.1), bolt.1)).collect()
        }
        Holding::Line { line_s, up, levers } => {
            let squares: f64 = levers.iter().map(|lever| lever * lever).sum();
            let latch = |lever: f64| (found[0] * lever / squares, line_s + up * lever);
            let latches = levers.iter().map(|lever| latch(*lever));
            let mut all: Vec<(f64, f64)> = latches.collect();
            all.push((found[1], *line_s));
            if levers.is_empty() {
                // Nothing holds the moment of a pivot without a latch.
                let due = up * (moment - force * line_s);
                assert!((found[0] - due).abs() <= 4.0 * BOUND * pressed * reach);
                return;
            }
            all
        }
        Holding::Side { arm, latches, pins } => {
            let squares: f64 = latches.iter().map(|(lever, _)| lever * lever).sum();
            let pull = |lever: f64| found[0] * lever / squares;
            // About the hinge line.
            let about: f64 = latches.iter().map(|(lever, _)| pull(*lever) * lever).sum();
            assert!((about - force * arm).abs() <= 4.0 * BOUND * pressed * arm);
            let mut all: Vec<(f64, f64)> =
                latches.iter().map(|(lever, s)| (pull(*lever), *s)).collect();
            let Some([lower, upper]) = pins else {
                let sum: f64 = all.iter().map(|one| one.0).sum::<f64>() + found[1];
                assert!((sum - force).abs() <= 4.0 * BOUND * pressed * (1.0 + arm));
                return;
            };
            all.extend([(found[1], *lower), (found[2], *upper)]);
            all
        }
    };
    let sum: f64 = all.iter().map(|one| one.0).sum();
    let about: f64 = all.iter().map(|(force, s)| force * s).sum();
    let carried: f64 = all.iter().map(|one| one.0.abs()).sum::<f64>() + pressed;
    let farthest = all.iter().map(|one| one.1.abs()).fold(reach, f64::max);
    assert!((sum - force).abs() <= 4.0 * BOUND * carried, "{sum} for {force}");
    assert!(
        (about - moment).abs() <= 4.0 * BOUND * carried * farthest,
        "{about} for {moment}: {}",
        placed.drawn.text
    );
}
