//! The error of every load against the oracle, over the whole domain.
//!
//! The oracle takes the plan's and the state's f32 values as exact. The error is relative to
//! `integral |p| |w|` of the same state; gas, liquid inside and liquid outside are counted apart:
//! where a vacuum or what stands outside nearly cancels the rest, no arithmetic in f32 can be exact
//! to the small difference. The bound is 2e-6.

use crate::core_engine::{at_head, course, loads_of, loads_with, narrow, part_of, plan_of};
use strake_core::liquid::{Band as DensityBand, Gas, States};
use strake_core::part::evaluate;
use strake_core::plan::Plan;
use strake_oracle::envelope::{Band, Bound, Head};
use strake_oracle::generate::{course as random_course, liquid, plane_part, plate_with_hole};
use strake_oracle::liquid::{Liquid, Pressure as _, STANDARD_GRAVITY};
use strake_oracle::membrane::hoop_tension;
use strake_oracle::plane::PlanePart;
use strake_oracle::random::Random;

pub(crate) const BOUND: f64 = 2e-6;
const PARTS: u32 = 4_000;
/// Cases of a long proof: `STRAKE_CASES`, a million where it is not set.
pub(crate) fn many() -> u32 {
    std::env::var("STRAKE_CASES").map_or(1_000_000, |count| count.parse().expect("a count"))
}

/// A random part with or without a hole; the sine of its slope and its lowest height are f32
/// values.
pub(crate) fn part(random: &mut Random) -> PlanePart {
    let mut part = if random.one_in(4) { plate_with_hole(random) } else { plane_part(random) };
    let sine = f64::from(narrow(part.rise()));
    let steep = sine.asin().to_degrees();
    part.slope_deg = if part.slope_deg > 90.0 { 180.0 - steep } else { steep };
    let (low, _) = part.heights();
    part.bottom_m += f64::from(narrow(low)) - low;
    part
}

/// Gas, liquid inside and liquid outside, each by itself as if it stood inside.
pub(crate) fn sides(state: &Liquid) -> Vec<Liquid> {
    let gas = Liquid { layers: Vec::new(), outside: None, ..state.clone() };
    let inside = Liquid { gas_pa: 0.0, outside: None, ..state.clone() };
    let outside = state.outside.map(|layer| Liquid { layers: vec![layer], ..inside.clone() });
    [gas, inside].into_iter().chain(outside).collect()
}

/// The worst error of one load, and where it was met.
#[derive(Clone, Debug, Default)]
pub(crate) struct Worst {
    pub error: f64,
    at: String,
}

impl Worst {
    /// Takes an error and, when it is the worst, what it was met at.
    pub(crate) fn take(&mut self, error: f64, at: impl FnOnce() -> String) {
        if error > self.error || error.is_nan() {
            (self.error, self.at) = (error, at());
        }
    }

    /// Prints it; says where it was met when it is beyond the bound.
    fn beyond(&self, load: &str) -> Option<String> {
        println!("worst error of the {load}: {:.2e}", self.error);
        (self.error.is_nan() || self.error > BOUND)
            .then(|| format!("{load}: {:.2e} at {}", self.error, self.at))
    }
}

/// Prints the worst of each load and holds all against the bound.
pub(crate) fn hold(worst: &[Worst], loads: &[&str]) {
    let beyond: Vec<String> =
        worst.iter().zip(loads).filter_map(|(worst, load)| worst.beyond(load)).collect();
    assert!(beyond.is_empty(), "{}", beyond.join("\n"));
}

/// Force and moment about the centroid of plane parts.
fn planes(seed: u64, cases: u32) -> [Worst; 2] {
    let mut random = Random::new(seed);
    let mut worst = [Worst::default(), Worst::default()];
    let mut wetted = 0;
    for case in 0..cases {
        let plane = part(&mut random);
        let (low, _) = plane.heights();
        let state = liquid(&mut random, low);
        let (judged, numbers) = part_of(&plane).unwrap();
        let loads = loads_with(&judged, &numbers, &state).unwrap().estimate;
        let (_, centroid) = plane.centroid();
        let sides = sides(&state);
        let pairs = [
            (
                loads.force_n.lane(0),
                plane.force(&state),
                sides.iter().map(|side| plane.pressed_force(side)).sum::<f64>(),
            ),
            (
                loads.moment_centroid_n_m.lane(0),
                plane.moment(&state, centroid),
                sides.iter().map(|side| plane.pressed_moment(side, centroid)).sum::<f64>(),
            ),
        ];
        for (worst, (core, oracle, pressed)) in worst.iter_mut().zip(pairs) {
            if pressed <= 0.0 {
                assert!(core.abs() < 1e-6, "case {case}: {core} where nothing presses");
                continue;
            }
            wetted += 1;
            let error = (f64::from(core) - oracle).abs() / pressed;
            worst.take(error, || format!("case {case}: {plane:?} under {state:?}"));
        }
    }
    assert!(wetted > cases, "most states press on the part");
    worst
}

/// Hoop tension of courses, and pressure: at the design point and at a part's lowest point.
fn points(seed: u64, cases: u32) -> [Worst; 2] {
    let mut random = Random::new(seed);
    let mut worst = [Worst::default(), Worst::default()];
    for _ in 0..cases {
        let one = random_course(&mut random);
        let state = liquid(&mut random, one.design_point_m);
        let part = course(one.diameter_m, one.design_point_m);
        let loads = loads_of(&part, &state).unwrap().estimate;
        let pressures: f64 =
            sides(&state).iter().map(|side| side.at(one.design_point_m).abs()).sum();
        // A point weight: integral |p| |w| dz is |p| D / 2.
        let pressed = pressures * 0.5 * one.diameter_m;
        let oracle = hoop_tension(one.diameter_m, one.design_point_m, &state);
        if pressed > 0.0 {
            let tension = f64::from(loads.hoop_tension_n_m.lane(0));
            worst[0].take((tension - oracle).abs() / pressed, || format!("{one:?} {state:?}"));
            let pressure = f64::from(loads.pressure_pa.lane(0));
            let off = (pressure - state.at(one.design_point_m)).abs();
            worst[1].take(off / pressures, || format!("{one:?} {state:?}"));
        }
    }
    worst
}

/// Bounds of force and hoop tension under a head sensor, upper and lower; relative to
/// `integral (|p_upper| + |p_lower|) |w| dz`, beside what one f32 step of the surface costs.
fn bounds(seed: u64, cases: u32) -> [Worst; 2] {
    let mut random = Random::new(seed);
    let mut worst = [Worst::default(), Worst::default()];
    for _ in 0..cases {
        let head = random_head(&mut random);
        let (lower, upper) = (Bound::Lower(head), Bound::Upper(head));
        let (plan, states) = sensed(&head);
        let plane = part(&mut random);
        let (judged, numbers) = part_of(&plane).unwrap();
        let mut with_numbers = plan.clone();
        with_numbers.numbers = numbers;
        let loads = evaluate(&with_numbers, &judged, &states);
        let step = surface_step_pa(&head);
        let pressed = plane.pressed_force(&upper) + plane.pressed_force(&lower);
        for (found, bound) in [(&loads.outward, &upper), (&loads.inward, &lower)] {
            let off = (f64::from(found.force_n.lane(0)) - plane.force(bound)).abs();
            let error = (off - step * plane.area()).max(0.0) / pressed;
            worst[0].take(error, || format!("{plane:?} under {head:?}"));
        }
        let one = random_course(&mut random);
        let loads = evaluate(&plan, &course(one.diameter_m, one.design_point_m), &states);
        let at = one.design_point_m;
        let pressed = upper.at(at).abs() + lower.at(at).abs();
        for (found, bound) in [(&loads.outward, &upper), (&loads.inward, &lower)] {
            let tension = f64::from(found.hoop_tension_n_m.lane(0));
            let off = (tension / (0.5 * one.diameter_m) - bound.at(at)).abs();
            worst[1].take((off - step).max(0.0) / pressed, || format!("{one:?} under {head:?}"));
        }
    }
    worst
}

/// A head sensor and its bands, of numbers that an f32 holds.
pub(crate) fn random_head(random: &mut Random) -> Head {
    let single = |x: f64| f64::from(narrow(x));
    let mut band = |low: f64, high: f64, width: f64| {
        let low = single(random.between(low, high));
        Band::new(low, single(low + random.between(0.0, width)))
    };
    let pressure_pa = band(2e3, 90e3, 800.0);
    let gas_pa = band(-1.5e3, 1.5e3, 500.0);
    let density_kg_m3 = band(650.0, 1300.0, 600.0);
    Head {
        at_m: single(random.between(-0.3, 3.0)),
        pressure_pa,
        density_kg_m3,
        gas_pa,
        gravity_m_s2: single(STANDARD_GRAVITY),
        shell_top_m: None,
        surface_m: None,
    }
}

/// A plan with that sensor's liquid, and its states.
pub(crate) fn sensed(head: &Head) -> (Plan, States<1>) {
    let density = [head.density_kg_m3.low, head.density_kg_m3.high].map(narrow);
    let uniform = Liquid::uniform(head.density_kg_m3.low, 0.0);
    let liquid = Liquid { gravity_m_s2: head.gravity_m_s2, ..uniform };
    let (mut plan, _) = plan_of(&liquid).unwrap();
    plan.liquid.top =
        DensityBand { estimate_kg_m3: density[0], low_kg_m3: density[0], high_kg_m3: density[1] };
    let gas = [head.gas_pa.low, head.gas_pa.high].map(narrow);
    plan.gas = Gas { lowest_pa: gas[0], nominal_pa: gas[0], highest_pa: gas[1] };
    let read = head.pressure_pa;
    let states = at_head(&plan, head.at_m, [read.low, read.low, read.high]);
    (plan, states)
}

/// The surface that follows from a head is an f32 height, known to one step: what that makes of the
/// pressure below it, Pa.
pub(crate) fn surface_step_pa(head: &Head) -> f64 {
    let lightest = head.density_kg_m3.low * head.gravity_m_s2;
    let surface_m = head.at_m.abs() + (head.pressure_pa.high - head.gas_pa.low) / lightest;
    head.density_kg_m3.high * head.gravity_m_s2 * f64::from(f32::EPSILON) * surface_m
}

const PLANES: [&str; 2] = ["force", "moment about the centroid"];
const POINTS: [&str; 2] = ["hoop tension", "pressure"];
const BOUNDS: [&str; 2] = ["bound of a force by a head", "bound of a hoop tension by a head"];

#[test]
fn forces_and_moments_stay_within_the_stated_error() {
    hold(&planes(2026, PARTS), &PLANES);
}

#[test]
fn tensions_and_pressures_stay_within_the_stated_error() {
    hold(&points(7, PARTS), &POINTS);
}

#[test]
fn bounds_by_a_head_sensor_stay_within_the_stated_error() {
    hold(&bounds(8, PARTS), &BOUNDS);
}

#[test]
#[ignore = "long proof of a million cases each, see DEVELOPERS.md"]
fn long_loads_stay_within_the_stated_error() {
    let all = [planes(1_000_003, many()), points(1_000_033, many()), bounds(1_000_037, many())];
    hold(&all.concat(), &[PLANES, POINTS, BOUNDS].concat());
}
