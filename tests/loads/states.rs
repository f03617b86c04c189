//! Random parts under random liquids: properties that hold whatever the numbers.

use strake_oracle::generate::{course, liquid, plane_part, plate_with_hole};
use strake_oracle::liquid::Pressure;
use strake_oracle::membrane::hoop_tension;
use strake_oracle::plane::PlanePart;
use strake_oracle::random::Random;

const PARTS: u32 = 500;

fn part(random: &mut Random) -> PlanePart {
    if random.one_in(4) { plate_with_hole(random) } else { plane_part(random) }
}

#[test]
fn generated_numbers_are_numbers_of_an_f32_and_cover_the_range() {
    let mut random = Random::new(1);
    let (mut dry, mut part_wet, mut covered, mut layered, mut vacuum) = (0, 0, 0, 0, 0);
    for _ in 0..PARTS {
        let part = part(&mut random);
        let (low, high) = part.heights();
        let state = liquid(&mut random, low);
        let surface = state.surface_m();
        assert!(part.area() > 0.0 && (0.0..=180.0).contains(&part.slope_deg));
        assert!(surface <= 30.0);
        for layer in &state.layers {
            #[expect(clippy::cast_possible_truncation, reason = "the rounding is what is tested")]
            let narrow = layer.density_kg_m3 as f32;
            assert!((f64::from(narrow) - layer.density_kg_m3).abs() <= 0.0);
        }
        assert!(state.layers.windows(2).all(|w| w[0].density_kg_m3 <= w[1].density_kg_m3));
        dry += u32::from(surface <= low);
        part_wet += u32::from(low < surface && surface < high);
        covered += u32::from(surface >= high);
        layered += u32::from(state.layers.len() > 1);
        vacuum += u32::from(state.gas_pa < 0.0);
    }
    let least = [dry, part_wet, covered, layered, vacuum].into_iter().min();
    assert!(least > Some(PARTS / 50), "{dry} {part_wet} {covered} {layered} {vacuum}");
}

/// Superposition, shift of the datum and of the moment line, and the bound by |p|.
#[test]
fn loads_are_linear_in_the_pressure_and_blind_to_the_datum() {
    let mut random = Random::new(2);
    for case in 0..PARTS {
        let part = part(&mut random);
        let state = liquid(&mut random, part.heights().0);
        let force = part.force(&state);
        let scale = part.pressed_force(&state) + 1e-2 * 2e4 * part.area();
        let room = 1e-11 * scale;
        assert!(force.abs() <= part.pressed_force(&state) + room, "case {case}");
        // Gas adds its pressure times the area.
        let gassed = part.force(&state.clone().with_gas(state.gas_pa + 1234.0));
        assert!((gassed - force - 1234.0 * part.area()).abs() <= room + 1e-9 * part.area());
        // The moment about another line is the moment and the force times the distance.
        let (low, high) = part.shape.extent();
        let (about_low, about_high) = (part.moment(&state, low), part.moment(&state, high));
        let reach = high - low;
        assert!(
            (about_low - about_high - force * reach).abs() <= room * (1.0 + reach + high.abs())
        );
        // Everything lifted by 1 m.
        let mut lifted = (part.clone(), state.clone());
        lifted.0.bottom_m += 1.0;
        lifted.1.layers.iter_mut().for_each(|layer| layer.surface_m += 1.0);
        lifted.1.outside.iter_mut().for_each(|body| body.surface_m += 1.0);
        assert!((lifted.0.force(&lifted.1) - force).abs() <= room, "case {case}");
        // A state pressed upon from both sides by the same liquid carries nothing.
        if let [only] = state.layers[..] {
            let level = state.clone().with_gas(0.0);
            let level = level.with_outside(only.density_kg_m3, only.surface_m);
            assert!(part.force(&level).abs() <= room, "case {case}");
        }
    }
}

#[test]
fn a_course_carries_half_the_pressure_times_its_diameter() {
    let mut random = Random::new(4);
    for _ in 0..PARTS {
        let course = course(&mut random);
        let state = liquid(&mut random, course.design_point_m);
        let tension = hoop_tension(course.diameter_m, course.design_point_m, &state);
        let due = 0.5 * course.diameter_m * state.at(course.design_point_m);
        assert!((tension - due).abs() <= 1e-13 * due.abs());
    }
}
