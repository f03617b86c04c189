//! Meshes through the core: closed forms, the oracle, what does not depend on place and turn.

use crate::core_curved::Placed;
use crate::meshes::{AS_IT_IS, VESSEL, case, cone, cylinder, read, sphere, tumbled, volume_m3};
use std::f64::consts::PI;
use strake::compile::curved;
use strake::mesh::{Mesh, Triangle};
use strake_oracle::generate::liquid as random_liquid;
use strake_oracle::liquid::Liquid;
use strake_oracle::patch::{Patch, resultant, triangle};
use strake_oracle::random::Random;

/// Of `integral |p| |w| dz`.
const BOUND: f64 = 2e-6;
/// Heights of rows and places are rounded to f32, m.
const ROUNDED_M: f64 = 1.5e-6;

fn placed(mesh: &Mesh) -> Placed {
    Placed { table: curved::mesh(mesh), bottom_m: mesh.heights_m()[0] }
}

fn patches(mesh: &Mesh) -> Vec<Patch> {
    mesh.triangles.iter().flat_map(|corners| triangle(*corners)).collect()
}

fn area_m2(mesh: &Mesh) -> f64 {
    let gas = Liquid::uniform(1000.0, -300.0).with_gas(1.0);
    resultant(&patches(mesh), &gas, [0.0; 3]).pressed_n
}

/// What a table may be off under a liquid: what it states, and the rounding of its heights.
fn granted_n(table: &curved::Table, liquid: &Liquid, area_m2: f64) -> f64 {
    let heaviest = liquid.layers.iter().map(|layer| layer.density_kg_m3).fold(0.0, f64::max);
    let outside = liquid.outside.map_or(0.0, |layer| layer.density_kg_m3);
    (heaviest + outside) * liquid.gravity_m_s2 * (table.error_m3 + ROUNDED_M * area_m2)
}

/// A random piece of a vessel: all of it, or the triangles on one side of a plane.
fn random_mesh(random: &mut Random) -> Mesh {
    let (a, b) = (random.between(0.3, 3.0), random.between(0.3, 3.0));
    let whole = match random.below(4) {
        0 => sphere(a, 12),
        1 => cylinder(a, b, 24),
        2 => cone(a, b, 24),
        _ => case([a, b, random.between(0.3, 3.0)]),
    };
    let turned = if random.one_in(3) { whole } else { tumbled(&whole, random) };
    let half: Vec<Triangle> = turned.iter().copied().filter(|[p, ..]| p[0] + p[2] > 0.2).collect();
    // A part that falls into pieces is refused: the whole then.
    let open = random.one_in(2).then(|| read(&half, AS_IT_IS).ok()).flatten();
    open.unwrap_or_else(|| read(&turned, VESSEL).expect("a vessel"))
}

#[test]
fn forces_on_meshes_stay_within_what_their_tables_state() {
    let mut random = Random::new(17);
    let (mut worst, mut stated, mut most_rows) = (0.0_f64, 0.0_f64, 0);
    for case in 0..200 {
        let mesh = random_mesh(&mut random);
        let placed = placed(&mesh);
        let (surface, area) = (patches(&mesh), area_m2(&mesh));
        stated = stated.max(placed.table.error);
        most_rows = most_rows.max(placed.table.rows.iter().map(Vec::len).max().unwrap_or(0));
        for _ in 0..2 {
            let state = random_liquid(&mut random, placed.bottom_m);
            let [x, z] = placed.force(&state).unwrap();
            let exact = resultant(&surface, &state, [0.0; 3]);
            let granted = granted_n(&placed.table, &state, area);
            for (found, due, pressed) in [
                (x, exact.force_n[0], exact.pressed_by_axis_n[0]),
                (z, exact.force_n[2], exact.pressed_by_axis_n[2]),
            ] {
                let off = (found - due).abs();
                assert!(
                    off <= BOUND * pressed + granted,
                    "case {case}: {found} for {due}, granted {granted}: {:?} under {state:?}",
                    placed.table
                );
                worst = worst.max((off - granted).max(0.0) / pressed.max(1.0));
            }
        }
    }
    println!(
        "meshes: worst error beside the tables {worst:.2e}; tables state up to {stated:.2e} with \
         {most_rows} rows of a force at most"
    );
    assert!(stated <= curved::MESH_ERROR_MAX);
}

/// Over a closed vessel the force is the weight of the contents; the gas contributes nothing.
#[test]
fn closed_meshes_carry_the_weight_of_their_contents() {
    let mut random = Random::new(23);
    for triangles in
        [sphere(1.1, 16), cylinder(0.8, 2.0, 32), cone(1.5, 1.2, 32), case([2.0, 1.0, 1.4])]
    {
        for turn in 0..4 {
            let turned =
                if turn == 0 { triangles.clone() } else { tumbled(&triangles, &mut random) };
            let mesh = read(&turned, VESSEL).unwrap();
            let placed = placed(&mesh);
            let above = mesh.heights_m()[1] + 2.0;
            let full = Liquid::uniform(1100.0, above);
            let weight = 1100.0 * full.gravity_m_s2 * volume_m3(&mesh);
            let granted = granted_n(&placed.table, &full, area_m2(&mesh));
            let pressed = resultant(&patches(&mesh), &full, [0.0; 3]).pressed_n;
            for gas in [0.0, 40_000.0] {
                let [x, z] = placed.force(&full.clone().with_gas(gas)).unwrap();
                let off = 2e-5 * weight + granted + BOUND * (pressed + gas * area_m2(&mesh));
                assert!((z + weight).abs() <= off, "{z} for {weight}, gas {gas}");
                assert!(x.abs() <= off, "{x} of {weight}, gas {gas}");
            }
            // Twice as high above the top is twice as far along a straight line.
            let at = |level: f64| placed.force(&Liquid::uniform(1100.0, level)).unwrap()[1];
            assert!((at(above) - at(above + 8.0)).abs() <= 4.0 * granted + 1e-5 * weight);
        }
    }
}

type Made = fn(usize) -> Vec<Triangle>;

/// The finer the mesh, the nearer to the surface itself: with the square of the edge.
#[test]
fn meshes_converge_to_the_closed_forms() {
    let (r, h, level) = (1.5, 1.2, 0.9_f64);
    let weight = 1000.0 * Liquid::uniform(1000.0, 0.0).gravity_m_s2;
    // Volume under the level: of a cone on its tip, of a cylinder, of a sphere about z = 0 filled
    // to 0.9 of 1.5 m (a cap of 2.4 m).
    let filled = 2.4;
    let forms: [(Made, f64); 3] = [
        (|n| cone(1.5, 1.2, n), PI * (r * level / h).powi(2) * level / 3.0),
        (|n| cylinder(1.5, 1.2, n), PI * r * r * level),
        (|n| sphere(1.5, n / 2), PI * filled * filled * (3.0 * r - filled) / 3.0),
    ];
    for (made, volume) in forms {
        let off = |n: usize| {
            let mesh = read(&made(n), VESSEL).unwrap();
            let [_, z] = placed(&mesh).force(&Liquid::uniform(1000.0, level)).unwrap();
            (z + weight * volume) / (weight * volume)
        };
        let errors = [12, 24, 48, 96].map(off);
        println!(
            "meshes of 12, 24, 48, 96 sectors are off by {}",
            errors.map(|e| format!("{e:.2e}")).join(", ")
        );
        for pair in errors.windows(2) {
            let ratio = pair[0] / pair[1];
            assert!((3.5..4.6).contains(&ratio), "{errors:?}");
        }
        assert!(errors[3].abs() < 3e-3, "{errors:?}");
    }
    // A box is its own mesh.
    let mesh = read(&case([2.0, 1.0, 1.4]), VESSEL).unwrap();
    let [x, z] = placed(&mesh).force(&Liquid::uniform(1000.0, 0.7)).unwrap();
    assert!((z + weight * 1.4).abs() <= 1e-5 * weight && x.abs() < 1e-9, "{x} {z}");
}

/// Turned half about the upright, x turns its sign; moved aside or lifted, nothing changes.
#[test]
fn meshes_turn_and_move_with_their_tank() {
    let mut random = Random::new(29);
    for _ in 0..40 {
        let mesh = random_mesh(&mut random);
        let moved = |of: fn([f64; 3]) -> [f64; 3]| {
            let triangles: Vec<Triangle> =
                mesh.triangles.iter().map(|corners| corners.map(of)).collect();
            Mesh { triangles, ..mesh.clone() }
        };
        let [low, high] = mesh.heights_m();
        let level = random.between(low, high + 0.5);
        let force = |mesh: &Mesh, level: f64| {
            placed(mesh).force(&Liquid::uniform(1000.0, level).with_gas(700.0)).unwrap()
        };
        let [x, z] = force(&mesh, level);
        let [tx, tz] = force(&moved(|[x, y, z]| [-x, -y, z]), level);
        let [ax, az] = force(&moved(|[x, y, z]| [x + 3.0, y - 1.0, z]), level);
        let [lx, lz] = force(&moved(|[x, y, z]| [x, y, z + 2.0]), level + 2.0);
        let scale = 2e-5 * (1e4 * (1.0 + high - low) * area_m2(&mesh));
        for (one, other) in [(x, -tx), (z, tz), (x, ax), (z, az), (x, lx), (z, lz)] {
            assert!((one - other).abs() <= scale, "{one} {other}");
        }
    }
}
