//! Lines of action of curved parts against the oracle's moments.

use crate::core_engine::{at_level, plan_of};
use crate::meshes::{AS_IT_IS, VESSEL, case, cylinder, read, sphere, tumbled};
use std::f64::consts::FRAC_PI_2;
use strake::assess::{Action, action};
use strake::mesh::{Mesh, Triangle};
use strake::tank::Surface;
use strake_oracle::generate::liquid as random_liquid;
use strake_oracle::liquid::Liquid;
use strake_oracle::patch::{Patch, Wetted, arc, ellipsoid, resultant, triangle};
use strake_oracle::random::Random;

fn acting(surface: &Surface, reference_m: f64, liquid: &Liquid) -> Action {
    let (mut plan, level_m) = plan_of(liquid).unwrap();
    // The liquid outside acts on a part; it is no matter of the states of the tank.
    let outside = std::mem::take(&mut plan.outside);
    let mut states = at_level(&plan, level_m);
    for one in outside {
        let step = -(one.density.estimate_kg_m3 * plan.gravity_m_s2);
        states
            .estimate
            .add(strake_core::lane::Lane([one.lowest_m]), strake_core::lane::Lane([step]));
    }
    action(surface, reference_m, &states.estimate).expect("no shell")
}

fn of_mesh(mesh: Mesh, reference_m: f64) -> (Surface, f64, Vec<Patch>) {
    let patches = mesh.triangles.iter().flat_map(|corners| triangle(*corners)).collect();
    (Surface::Mesh(mesh.into()), reference_m, patches)
}

fn random_part(random: &mut Random) -> (Surface, f64, Vec<Patch>) {
    let (radius_m, at_m) = (random.between(0.2, 4.0), random.between(0.0, 6.0));
    let inside = random.one_in(2);
    let wetted = if inside { Wetted::Inside } else { Wetted::Outside };
    match random.below(3) {
        0 => {
            let (from_deg, length_m) = (random.between(0.0, 360.0), random.between(0.2, 5.0));
            let to_deg = from_deg + random.between(2.0, 350.0);
            let ends = (from_deg.to_radians(), to_deg.to_radians());
            let patches = arc(radius_m, length_m, at_m, ends, wetted);
            (Surface::Arc { radius_m, length_m, from_deg, to_deg, inside }, at_m, patches)
        }
        1 => {
            let turn = (-FRAC_PI_2, FRAC_PI_2);
            let patch = ellipsoid(radius_m, radius_m, at_m, turn, turn, Wetted::Inside);
            (Surface::Dome { radius_m, inside: true }, at_m, vec![patch])
        }
        _ => {
            let whole = match random.below(3) {
                0 => sphere(radius_m, 8),
                1 => cylinder(radius_m, at_m + 0.3, 12),
                _ => case([radius_m, at_m + 0.3, 1.0]),
            };
            let turned = tumbled(&whole, random);
            let half: Vec<Triangle> = turned.iter().copied().filter(|[p, ..]| p[1] > 0.0).collect();
            let open = read(&half, AS_IT_IS);
            of_mesh(open.or_else(|_| read(&turned, VESSEL)).unwrap(), 0.0)
        }
    }
}

#[test]
fn lines_of_action_agree_with_the_oracle() {
    let mut random = Random::new(53);
    let mut worst = 0.0_f64;
    for case in 0..250 {
        let (surface, reference_m, patches) = random_part(&mut random);
        let low_m = patches.iter().map(Patch::lowest_m).fold(f64::INFINITY, f64::min);
        let state = random_liquid(&mut random, low_m);
        let found = acting(&surface, reference_m, &state);
        let due = resultant(&patches, &state, [0.0, 0.0, reference_m]);
        let reach = 10.0;
        let mut compare = |one: f64, other: f64, scale: f64, what: &str| {
            let off = (one - other).abs() / scale;
            assert!(off <= 2e-6, "case {case}, {what}: {one} for {other}, {off:.1e}: {surface:?}");
            worst = worst.max(off);
        };
        let pressed = due.pressed_n + 1.0;
        for axis in 0..3 {
            compare(found.force_n[axis], due.force_n[axis], pressed, "force");
            compare(found.moment_n_m[axis], due.moment_nm[axis], pressed * reach, "moment");
        }
        compare(found.first_n_m[0], due.z_of_fx_nm, pressed * reach, "line of x");
        compare(found.first_n_m[1], due.x_of_fz_nm, pressed * reach, "line of z");
    }
    println!(
        "forces and moments of curved parts: worst difference {worst:.1e} of the pressed area"
    );
}

/// All pressures on an arc or a dome point at its axis or centre, and so does their resultant.
#[test]
fn the_resultant_of_an_arc_passes_through_its_axis() {
    let mut random = Random::new(59);
    for _ in 0..100 {
        let (surface, reference_m, _) = random_part(&mut random);
        if matches!(surface, Surface::Mesh(_)) {
            continue;
        }
        let level_m = reference_m + random.between(-1.0, 6.0);
        let found = acting(&surface, reference_m, &Liquid::uniform(1000.0, level_m).with_gas(2e3));
        let scale: f64 = found.pressed_n.iter().sum();
        assert!(found.moment_n_m[1].abs() <= 1e-9 * scale, "{found:?}");
        let (Some(z), Some(x)) = (found.x_acts_at_m(), found.z_acts_at_m()) else { continue };
        let [fx, _, fz] = found.force_n;
        assert!(((z - reference_m) * fx - x * fz).abs() <= 1e-9 * scale, "{found:?}");
    }
}

/// Where pressures cancel there is no line, only a couple.
#[test]
fn a_couple_has_no_line() {
    let half = |from_deg: f64| Surface::Arc {
        radius_m: 1.0,
        length_m: 1.0,
        from_deg,
        to_deg: from_deg + 360.0,
        inside: true,
    };
    // Gas alone on all around.
    let gas = Liquid::uniform(1000.0, -10.0).with_gas(1e4);
    let found = acting(&half(0.0), 2.0, &gas);
    assert_eq!((found.angle_deg(), found.x_acts_at_m(), found.z_acts_at_m()), (None, None, None));
    assert!(found.pressed_n[0] > 1e4);
}
