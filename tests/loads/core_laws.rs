//! Laws that the core's loads keep whatever the numbers: layers, places, turns, outlines, closed
//! vessels.

use crate::core_engine::{Numbers, bare, course, loads_of, loads_with, narrow, part_of};
use crate::core_error::{part, random_head, sensed, sides};
use strake::compile::{self, curved};
use strake_core::part::{Geometry, Loads, evaluate};
use strake_oracle::generate::{course as random_course, liquid};
use strake_oracle::liquid::{Layer, Liquid, Pressure as _};
use strake_oracle::plane::PlanePart;
use strake_oracle::random::Random;
use strake_oracle::shape::Shape;
use strake_oracle::vessel::Vessel;

const PARTS: u32 = 1_000;
/// Two loads that are each within 2e-6.
const TWICE: f64 = 4e-6;

/// Force and moment about the centroid, each with `integral |p| |w| dA`.
fn loads(plane: &PlanePart, state: &Liquid) -> [(f64, f64); 2] {
    let (part, numbers) = part_of(plane).unwrap();
    let Loads { force_n, moment_centroid_n_m, .. } =
        loads_with(&part, &numbers, state).unwrap().estimate;
    let centroid = plane.centroid().1;
    let over = |f: &dyn Fn(&Liquid) -> f64| sides(state).iter().map(f).sum::<f64>();
    [
        (force_n.lane(0).into(), over(&|side| plane.pressed_force(side))),
        (moment_centroid_n_m.lane(0).into(), over(&|side| plane.pressed_moment(side, centroid))),
    ]
}

fn same(one: [(f64, f64); 2], other: [(f64, f64); 2], room: f64, what: &str) {
    for ((a, pressed), (b, _)) in one.into_iter().zip(other) {
        assert!((a - b).abs() <= room * pressed + 1e-9, "{what}: {a} and {b} of {pressed}");
    }
}

/// A layer of the density above it is no layer.
#[test]
fn layers_of_equal_density_are_one() {
    let mut random = Random::new(41);
    for _ in 0..PARTS {
        let plane = part(&mut random);
        let mut state = liquid(&mut random, plane.heights().0);
        state.layers.truncate(1);
        let mut layered = state.clone();
        for _ in 0..=random.below(3) {
            let Some(last) = layered.layers.last().copied() else { break };
            let surface_m = f64::from(narrow(last.surface_m - random.between(0.0, 3.0)));
            layered.layers.push(Layer { surface_m, ..last });
        }
        same(loads(&plane, &state), loads(&plane, &layered), TWICE, "layers");
        let one = random_course(&mut random);
        let part = course(one.diameter_m, one.design_point_m);
        let [plain, stacked] = [&state, &layered].map(|liquid| {
            f64::from(loads_of(&part, liquid).unwrap().estimate.hoop_tension_n_m.lane(0))
        });
        let inside = Liquid { outside: None, ..state.clone() };
        let scale = (inside.at(one.design_point_m).abs() + 2e4) * one.diameter_m;
        assert!((plain - stacked).abs() <= TWICE * scale, "{plain} {stacked}");
    }
}

/// A part, its liquids and what stands outside, lifted together by what f32 heights hold exactly.
#[test]
fn loads_do_not_know_where_the_datum_lies() {
    let mut random = Random::new(42);
    let grid = |height: f64| (height * 256.0).round() / 256.0;
    for _ in 0..PARTS {
        let mut plane = part(&mut random);
        let low = plane.heights().0;
        plane.bottom_m += grid(low) - low;
        let mut state = liquid(&mut random, grid(low));
        let all = state.layers.iter_mut().chain(state.outside.as_mut());
        all.for_each(|body| body.surface_m = grid(body.surface_m));
        let by = grid(random.between(-8.0, 8.0));
        let (mut moved, mut above) = (state.clone(), plane.clone());
        let all = moved.layers.iter_mut().chain(moved.outside.as_mut());
        all.for_each(|body| body.surface_m += by);
        above.bottom_m += by;
        // Every height is exact, so every depth is, and so is every load.
        same(loads(&plane, &state), loads(&above, &moved), 1e-12, "datum");
    }
}

/// Liquid over a plate and liquid under it press alike: a slope and its supplement.
#[test]
fn a_wall_and_its_overhang_carry_the_same() {
    let mut random = Random::new(43);
    for _ in 0..PARTS {
        let plane = part(&mut random);
        let state = liquid(&mut random, plane.heights().0);
        let over = PlanePart { slope_deg: 180.0 - plane.slope_deg, ..plane.clone() };
        same(loads(&plane, &state), loads(&over, &state), TWICE, "supplement");
    }
}

/// Outlines that are the same under two names; a square and a circle turned in their plane; a
/// polygon mirrored, or begun at another corner.
#[test]
fn an_outline_is_what_it_is_by_any_name() {
    let mut random = Random::new(44);
    for _ in 0..PARTS {
        let side = f64::from(narrow(random.ratio_between(0.05, 12.0)));
        let long = f64::from(narrow(side * random.between(1.0, 3.0)));
        let rectangle = Shape::Rectangle { width: side, length: long };
        let mut corners = vec![(0.0, 0.0), (side, 0.0), (side, long), (0.0, long)];
        let turn = random.below(4) as usize;
        corners.rotate_left(turn);
        if random.one_in(2) {
            for corner in &mut corners {
                corner.0 = -corner.0;
            }
        }
        let pairs = [
            (Shape::Circle { diameter: side }, Shape::Ellipse { width: side, length: side }),
            (Shape::Circle { diameter: side }, Shape::Obround { width: side, length: side }),
            (rectangle.clone(), Shape::Trapezoid { top: side, bottom: side, length: long }),
            (rectangle, Shape::Polygon { corners }),
        ];
        let bottom = f64::from(narrow(random.between(-0.5, 8.0)));
        let state = liquid(&mut random, bottom);
        for (one, other) in pairs {
            let slope = [90.0, 30.0, 150.0][random.below(3) as usize];
            let [one, other] = [one, other].map(|shape| PlanePart::new(shape, bottom, slope));
            same(loads(&one, &state), loads(&other, &state), TWICE, "outline");
        }
    }
}

/// The vertical force of plane parts and tables on all of a vessel's wall, up.
fn upward(vessel: &Vessel, state: &Liquid) -> f64 {
    let plate = |shape: Shape, bottom: f64, slope: f64| {
        let force = loads(&PlanePart::new(shape, bottom, slope), state)[0].0;
        -force * slope.to_radians().cos()
    };
    let table = |table: curved::Table, bottom: f64| {
        let mut numbers = Numbers::new();
        let one = table.curved(&mut compile::Numbers { list: &mut numbers }).expect("room");
        let bottom_m = narrow(bottom);
        let part = bare(Geometry::Curved(one), bottom_m, narrow(bottom + table.rise_m));
        f64::from(loads_with(&part, &numbers, state).unwrap().estimate.force_z_n.lane(0))
    };
    let halves = [(90.0, 270.0), (270.0, 450.0)];
    let turned = |radius: f64, height: f64, base: f64| {
        let profile = curved::Profile::Ellipsoid;
        table(curved::revolved(profile, radius, height, false), base)
            + table(curved::revolved(profile, radius, height, true), base + height)
    };
    match *vessel {
        Vessel::Block { size: [x, y, z], base_m } => {
            let level = Shape::Rectangle { width: x, length: y };
            plate(level.clone(), base_m, 0.0) + plate(level, base_m + z, 180.0)
        }
        Vessel::Trough { floor, roof, length, height, base_m } => {
            let lean = 0.5 * (roof - floor);
            let side = Shape::Rectangle { width: length, length: lean.hypot(height) };
            let slope = height.atan2(lean).to_degrees();
            2.0 * plate(side, base_m, slope)
                + plate(Shape::Rectangle { width: floor, length }, base_m, 0.0)
                + plate(Shape::Rectangle { width: roof, length }, base_m + height, 180.0)
        }
        Vessel::Upright { radius, height, cone, base_m } => {
            let disc = Shape::Circle { diameter: 2.0 * radius };
            let below = if cone > 0.0 {
                table(curved::revolved(curved::Profile::Cone, radius, cone, false), base_m)
            } else {
                plate(disc.clone(), base_m, 0.0)
            };
            below + plate(disc, base_m + cone + height, 180.0)
        }
        Vessel::Ellipsoid { radius, half_height, base_m } => turned(radius, half_height, base_m),
        Vessel::Drum { radius, length, round_heads, base_m } => {
            let shell: f64 = halves
                .map(|(from, to)| table(curved::arc(radius, length, from, to, true), base_m))
                .iter()
                .sum();
            shell + if round_heads { 2.0 * table(curved::dome(radius, true), base_m) } else { 0.0 }
        }
    }
}

/// Over a closed vessel of every kind the force is the weight of the contents less that of the
/// displaced outside liquid; the gas adds nothing. Tables of revolved shapes state their own error.
#[test]
fn closed_vessels_of_every_kind_carry_the_weight_of_their_contents() {
    let mut random = Random::new(45);
    let single = |x: f64| f64::from(narrow(x));
    let mut worst = 0.0_f64;
    for case in 0..600 {
        let base_m = single(random.between(0.0, 4.0));
        let mut size = || single(random.between(0.3, 6.0));
        let vessel = match case % 6 {
            0 => Vessel::Block { size: [size(), size(), size()], base_m },
            1 => Vessel::Trough {
                floor: size(),
                roof: size(),
                length: size(),
                height: size(),
                base_m,
            },
            2 => Vessel::Upright { radius: size(), height: size(), cone: 0.0, base_m },
            3 => Vessel::Upright { radius: size(), height: size(), cone: size(), base_m },
            4 => {
                let radius = size();
                Vessel::Ellipsoid {
                    radius,
                    half_height: radius * single(0.3 + size() / 9.0),
                    base_m,
                }
            }
            _ => Vessel::Drum {
                radius: 0.5 * size(),
                length: size(),
                round_heads: case % 12 == 5,
                base_m,
            },
        };
        // The wall carries gas above the surface, so every state is a full, closed vessel.
        let (low, high) = vessel.heights();
        let mut state = liquid(&mut random, low);
        let drop = state.surface_m() - random.between(low, high);
        state.layers.iter_mut().for_each(|layer| layer.surface_m = single(layer.surface_m - drop));
        let found = upward(&vessel, &state);
        let due = vessel.weight_balance(&state);
        // What presses up and down: the largest pressure on the plan of the vessel, twice.
        let largest = state.layers.iter().map(|l| l.density_kg_m3).fold(0.0, f64::max) * 9.81;
        let outside = state.outside.map_or(0.0, |l| 9.81 * l.density_kg_m3 * l.surface_m.abs());
        let pressed = state.gas_pa.abs() + largest * (high - low) + outside;
        let plan_area = vessel.volume_below(high) / (high - low) * 3.0;
        let error = (found - due).abs() / (pressed * plan_area);
        assert!(error <= 2e-6, "{vessel:?} under {state:?}: {found} for {due}");
        worst = worst.max(error);
    }
    println!("closed vessels through the core: worst {worst:.1e}, tables included");
}

/// The size of the force on a curved part is that of its components, and its bound that of the
/// largest of each.
#[test]
fn a_force_on_a_curved_part_has_the_size_of_its_components() {
    let mut random = Random::new(46);
    for _ in 0..400 {
        let (from, span) = (random.between(0.0, 360.0), random.between(5.0, 180.0));
        let table = curved::arc(random.between(0.3, 4.0), 2.0, from, from + span, random.one_in(2));
        let mut numbers = Numbers::new();
        let one = table.curved(&mut compile::Numbers { list: &mut numbers }).expect("room");
        let bottom = random.between(-0.5, 5.0);
        let (low, high) = (narrow(bottom), narrow(bottom + table.rise_m));
        let part = bare(Geometry::Curved(one), low, high);
        let (mut plan, states) = sensed(&random_head(&mut random));
        plan.numbers = numbers;
        let loads = evaluate(&plan, &part, &states);
        let [middle, most, least] = [&loads.estimate, &loads.outward, &loads.inward]
            .map(|loads| [loads.force_x_n, loads.force_z_n].map(|lane| f64::from(lane.lane(0))));
        let size = f64::from(loads.estimate.force_n.lane(0));
        let due = middle[0].hypot(middle[1]);
        assert!((size - due).abs() <= 1e-6 * due, "{size} for {due}");
        let farthest = [0, 1].map(|axis| most[axis].abs().max(least[axis].abs()));
        let bound = f64::from(loads.outward.force_n.lane(0));
        let due = farthest[0].hypot(farthest[1]);
        assert!((bound - due).abs() <= 1e-6 * due, "{bound} for {due}");
        assert!(size <= bound * (1.0 + 1e-6), "{size} {bound}");
    }
}
