use super::*;
use crate::generate::liquid;
use crate::patch::resultant;
use crate::random::Random;

fn vessel(random: &mut Random) -> Vessel {
    let base_m = random.between(-1.0, 4.0);
    let mut size = || random.between(0.2, 8.0);
    match size() {
        x if x < 1.5 => Vessel::Block { size: [x, size(), size()], base_m },
        x if x < 3.0 => {
            Vessel::Trough { floor: x, roof: size(), length: size(), height: size(), base_m }
        }
        x if x < 4.0 => Vessel::Upright { radius: x, height: size(), cone: size(), base_m },
        x if x < 5.0 => Vessel::Upright { radius: x, height: size(), cone: 0.0, base_m },
        x if x < 6.0 => Vessel::Ellipsoid { radius: x, half_height: x, base_m },
        x if x < 7.0 => Vessel::Ellipsoid { radius: x, half_height: size(), base_m },
        x => Vessel::Drum { radius: 0.3 * x, length: size(), round_heads: size() > 4.0, base_m },
    }
}

#[test]
fn a_closed_vessel_carries_the_weight_of_its_contents_and_nothing_of_the_gas() {
    let mut random = Random::new(11);
    let mut worst = 0.0_f64;
    for case in 0..400 {
        let vessel = vessel(&mut random);
        let (low, high) = vessel.heights();
        let mut state = liquid(&mut random, low);
        let top = random.between(low, high);
        // The wall pushes on gas above the surface, so every state is a full, closed vessel;
        // lower layers fall with the top one.
        let drop = state.surface_m() - top;
        for layer in &mut state.layers {
            layer.surface_m -= drop;
        }
        let about = [1.0, -2.0, 0.5];
        let found = resultant(&vessel.patches(), &state, about);
        let [fx, fy, fz] = found.force_n;
        let due = vessel.weight_balance(&state);
        let error = fx.abs().max(fy.abs()).max((fz - due).abs()) / found.pressed_n;
        // The weight acts on the axis of symmetry: its moment about the point follows.
        let moment = [-about[1] * due, about[0] * due, 0.0];
        let arm = 1.0 + 2.0 + high.abs() + low.abs() + 8.0;
        let turning =
            (0..3).map(|i| (found.moment_nm[i] - moment[i]).abs()).fold(0.0_f64, f64::max);
        worst = worst.max(error).max(turning / (found.pressed_n * arm));
        assert!(worst < 1e-12, "case {case}: {vessel:?} under {state:?}: {worst:e}");
    }
    println!("closed vessels: worst error {worst:.1e} of the pressed force");
}

#[test]
fn gas_over_an_open_top_presses_the_floor_down() {
    let mut open = upright(1.5, 4.0, 0.0, 0.0);
    open.remove(1);
    let state = Liquid::uniform(1000.0, 2.0).with_gas(5e3);
    let found = resultant(&open, &state, [0.0; 3]);
    let area = PI * 2.25;
    let due = -area * (5e3 + 2.0 * 9806.65);
    assert!((found.force_n[2] - due).abs() < 1e-12 * due.abs());
}
