//! The error of every load against the oracle, over the whole domain.
//!
//! The oracle takes the plan's and the state's f32 values as exact. The error is relative to
//! `integral |p| |w|` of the same state, inside and outside counted apart: where they nearly
//! cancel, no arithmetic on the two can be exact to the small difference. The bound is 2e-6.

use crate::core_engine::{course, loads_of, loads_with, narrow, part_of};
use strake_oracle::generate::{course as random_course, liquid, plane_part, plate_with_hole};
use strake_oracle::liquid::{Liquid, Pressure as _};
use strake_oracle::membrane::hoop_tension;
use strake_oracle::plane::PlanePart;
use strake_oracle::random::Random;

const BOUND: f64 = 2e-6;
const PARTS: u32 = 4_000;

/// A random part with or without a hole; the sine of its slope and its lowest height are f32
/// values.
fn part(random: &mut Random) -> PlanePart {
    let mut part = if random.one_in(4) { plate_with_hole(random) } else { plane_part(random) };
    let sine = f64::from(narrow(part.rise()));
    let steep = sine.asin().to_degrees();
    part.slope_deg = if part.slope_deg > 90.0 { 180.0 - steep } else { steep };
    let (low, _) = part.heights();
    part.bottom_m += f64::from(narrow(low)) - low;
    part
}

/// Each side by itself, as if it stood inside.
fn sides(state: &Liquid) -> Vec<Liquid> {
    let inside = Liquid { outside: None, ..state.clone() };
    let outside = state.outside.map(|layer| Liquid {
        gas_pa: 0.0,
        layers: vec![layer],
        outside: None,
        ..state.clone()
    });
    std::iter::once(inside).chain(outside).collect()
}

#[test]
fn forces_and_moments_stay_within_the_stated_error() {
    let mut random = Random::new(2026);
    let mut worst = [(0.0_f64, String::new()), (0.0, String::new())];
    let mut wetted = 0;
    for case in 0..PARTS {
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
        for ((worst, at), (core, oracle, pressed)) in worst.iter_mut().zip(pairs) {
            if pressed <= 0.0 {
                assert!(core.abs() < 1e-6, "case {case}: {core} where nothing presses");
                continue;
            }
            wetted += 1;
            let error = (f64::from(core) - oracle).abs() / pressed;
            if error > *worst {
                (*worst, *at) = (error, format!("case {case}: {plane:?} under {state:?}"));
            }
        }
    }
    for ((error, at), load) in worst.iter().zip(["force", "moment about the centroid"]) {
        println!("worst error of the {load}: {error:.2e} ({at})");
        assert!(*error <= BOUND, "{load}: {error:.2e} at {at}");
    }
    assert!(wetted > PARTS, "most states press on the part");
}

#[test]
fn hoop_tension_stays_within_the_stated_error() {
    let mut random = Random::new(7);
    let mut worst = 0.0_f64;
    for _ in 0..PARTS {
        let one = random_course(&mut random);
        let state = liquid(&mut random, one.design_point_m);
        let part = course(one.diameter_m, one.design_point_m);
        let core = f64::from(loads_of(&part, &state).unwrap().estimate.hoop_tension_n_m.lane(0));
        let oracle = hoop_tension(one.diameter_m, one.design_point_m, &state);
        // A point weight: integral |p| |w| dz is |p| D / 2.
        let pressed = sides(&state)
            .iter()
            .map(|side| side.at(one.design_point_m).abs() * 0.5 * one.diameter_m)
            .sum::<f64>();
        if pressed > 0.0 {
            worst = worst.max((core - oracle).abs() / pressed);
        }
    }
    println!("worst error of the hoop tension: {worst:.2e}");
    assert!(worst <= BOUND, "{worst:.2e}");
}
