//! The moment that the device judges a plate by, against finite elements.

use crate::product::file::Tank;
use std::fmt::Write as _;
use strake::assess::{Overrides, Request, assess};
use strake_core::lane::Lane;
use strake_core::part::evaluate;
use strake_oracle::bending::{Held, Sheet};
use strake_oracle::liquid::{Layer, Liquid, Pressure as _, STANDARD_GRAVITY};
use strake_oracle::random::Random;

const PLATES: u32 = 36;
/// What the elements err by and the checked points miss (`plate_series.rs`).
const ELEMENTS: f64 = 2e-2;
/// Near the corner under a free top the elements do not resolve the moment.
const CORNER: f64 = 6e-2;

struct Plate {
    width_m: f64,
    length_m: f64,
    bottom_m: f64,
    edges: &'static str,
    held: [Held; 3],
}

fn plate(random: &mut Random) -> Plate {
    let (edges, held) = [
        ("clamped", [Held::Clamped; 3]),
        ("supported", [Held::Supported; 3]),
        ("top free", [Held::Clamped, Held::Clamped, Held::Free]),
    ][random.below(3) as usize];
    let length_m = random.between(0.8, 2.0);
    let width_m = length_m * random.between(0.4, 2.5);
    Plate { width_m, length_m, bottom_m: random.between(0.0, 1.0), edges, held }
}

/// Up to two layers and gas, wetting at least a quarter of the plate.
fn contents(random: &mut Random, plate: &Plate) -> Liquid {
    let surface_m = plate.bottom_m + plate.length_m * random.between(0.25, 2.0);
    let mut layers = vec![Layer { surface_m, density_kg_m3: random.between(700.0, 1000.0) }];
    if random.one_in(3) {
        let below = Layer {
            surface_m: plate.bottom_m + plate.length_m * random.between(0.1, 0.25),
            density_kg_m3: random.between(1000.0, 1400.0),
        };
        layers.push(below);
    }
    let gas_pa = if random.one_in(2) { 0.0 } else { random.between(0.0, 4e3) };
    Liquid { gravity_m_s2: STANDARD_GRAVITY, gas_pa, layers, outside: None }
}

/// Largest moment at the nodes, but for the corners under a free top, where it has no limit.
fn by_elements(plate: &Plate, liquid: &Liquid) -> f64 {
    let (across, up) = (12, 40);
    let sheet = Sheet {
        width: plate.width_m,
        length: plate.length_m,
        poisson: 0.3,
        held: plate.held,
        mesh: (across, up),
    };
    let breaks: Vec<f64> = liquid.kinks().iter().map(|z_m| z_m - plate.bottom_m).collect();
    let bent = sheet.bent(|s| liquid.at(plate.bottom_m + s), &breaks);
    let mut largest = 0.0_f64;
    for j in 0..=up {
        for i in 0..=across {
            let corner = plate.held[2] == Held::Free && i == across && j > up - 3;
            if !corner {
                largest = largest.max(bent.moments(i, j).principal());
            }
        }
    }
    largest
}

/// Random sides, edges, levels, layers and gas: what the device judges is not below the largest
/// moment of the elements, and above it by no more than the tables state, each within the error of
/// the elements.
#[test]
fn the_device_judges_the_moment_of_finite_elements() {
    let mut random = Random::new(31);
    let (mut below, mut above, mut points) = (0.0_f64, 0.0_f64, 0);
    for case in 0..PLATES {
        let plate = plate(&mut random);
        let liquid = contents(&mut random, &plate);
        let mut rest = String::from("[[panel]]\nname = \"plate\"\nslope = \"90 deg\"\n");
        let _ = write!(
            rest,
            "shape = {{ rectangle = {{ width = \"{:?} m\", length = \"{:?} m\" }} }}\n\
             bottom = \"{:?} m\"\n\
             capacity = [ {{ plate = {{ thickness = \"20 mm\", allowable_stress = \"4 MPa\", \
             edges = \"{}\" }}, material = \"steel\", basis = \"drawing\" }} ]\n",
            plate.width_m, plate.length_m, plate.bottom_m, plate.edges
        );
        let file = Tank::of(&liquid, rest).read();
        let level_m = liquid.surface_m();
        let overrides = Overrides { level_m: Some(level_m), ..Overrides::default() };
        let found = assess(&file, &Request::new(&file, overrides).unwrap()).unwrap();
        let plan = found.desk.plan();
        #[expect(clippy::cast_possible_truncation, reason = "a level for the core")]
        let states = found.desk.at_true_level(Lane([level_m as f32]));
        let device = evaluate(plan, &plan.parts[0], &states).estimate.moment_n_m.lane(0);
        let row = &found.document.parts[0].plates[0];
        let excess = row.device_excess;
        let excess = excess
            .unwrap_or_else(|| panic!("{} by {}, {}", plate.width_m, plate.length_m, plate.edges));
        points += row.device_points.unwrap_or(0);
        let elements = by_elements(&plate, &liquid);
        let off = f64::from(device) / elements - 1.0;
        below = below.max(-off);
        assert!(off > -ELEMENTS, "case {case}: {device} {elements}");
        if level_m >= plate.bottom_m + 0.5 * plate.length_m {
            above = above.max(off - excess);
            let within = if plate.held[2] == Held::Free { CORNER } else { ELEMENTS };
            assert!(off < excess + within, "case {case}: {device} {elements} {excess}");
        }
    }
    println!(
        "{PLATES} plates at {points} points: below the elements by {below:.1e}, above them and what \
         is stated by {above:.1e}"
    );
}
