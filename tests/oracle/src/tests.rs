//! The oracle held against closed formulas and against itself.

use std::f64::consts::{FRAC_PI_2, PI};

use crate::envelope::{Band, Bound, Head};
use crate::generate::{liquid, plane_part, plate_with_hole, slope_deg};
use crate::liquid::{Liquid, Pressure, STANDARD_GRAVITY};
use crate::patch::{resultant, triangle};
use crate::plane::{Placement, PlanePart};
use crate::profiles::{Profile, extremes};
use crate::random::Random;
use crate::shape::Shape;
use crate::vector::Vec3;

/// Closed solutions for a covered circle: `F = gamma z_c A`, moment `gamma sin I_c` about the
/// centre.
#[test]
fn covered_circles_follow_the_closed_formula() {
    let mut random = Random::new(3);
    for _ in 0..500 {
        let diameter = random.ratio_between(0.05, 30.0);
        let mut part = PlanePart::new(Shape::Circle { diameter }, 0.4, slope_deg(&mut random));
        part.bottom_m = random.between(-1.0, 5.0);
        let surface = part.heights().1 + random.between(0.0, 8.0);
        let state = Liquid::uniform(1234.0, surface);
        let gamma = 1234.0 * STANDARD_GRAVITY;
        let area = PI * diameter * diameter / 4.0;
        let force = gamma * (surface - part.height_of(0.5 * diameter)) * area;
        let moment = -gamma * part.rise() * area * diameter * diameter / 16.0;
        let scale = part.pressed_moment(&state, 0.5 * diameter);
        assert!((part.force(&state) - force).abs() <= 1e-12 * force);
        assert!((part.moment(&state, 0.5 * diameter) - moment).abs() <= 1e-12 * scale);
    }
}

/// A half-covered disc: F = gamma 2 r^3 / 3 (statical moment of the half disc).
#[test]
fn partly_wetted_shapes_follow_the_closed_formula() {
    let gamma = 1000.0 * STANDARD_GRAVITY;
    let state = Liquid::uniform(1000.0, 2.0);
    let disc = PlanePart::centred_at(Shape::Circle { diameter: 1.4 }, 2.0, 90.0);
    let force = gamma * 2.0 * 0.7_f64.powi(3) / 3.0;
    assert!((disc.force(&state) - force).abs() < 1e-13 * force);
    // Moment about the diameter: gamma times the second moment of the half disc, pi r^4 / 8.
    let moment = -gamma * PI * 0.7_f64.powi(4) / 8.0;
    assert!((disc.moment(&state, 0.7) - moment).abs() < 1e-13 * moment.abs());
    // A sliver a tenth of a millimetre high, by series: F = gamma (4/15) sqrt(2 r) ... a^2.5.
    let a: f64 = 1e-4;
    let sliver = Liquid::uniform(1000.0, disc.bottom_m + a);
    let r: f64 = 0.7;
    let series = gamma
        * (8.0 / 15.0)
        * (2.0 * r).sqrt()
        * a.powf(2.5)
        * (1.0 - 3.0 * a / (28.0 * r) - 5.0 * a * a / (672.0 * r * r));
    assert!((disc.force(&sliver) - series).abs() < 1e-11 * series);
    let wedge = Shape::Triangle { base: 1.2, height: 0.9, apex_up: false };
    let wedge = PlanePart::new(wedge, 0.3, 90.0);
    let due = gamma * (1.2 / 0.9) * 0.4_f64.powi(3) / 6.0;
    assert!((wedge.force(&Liquid::uniform(1000.0, 0.7)) - due).abs() < 1e-12 * due);
}

/// The strips of the plane and the patches in space are two ways to the same load.
#[test]
fn strips_and_patches_agree() {
    let mut random = Random::new(5);
    let mut worst = 0.0_f64;
    for case in 0..600 {
        let part =
            if case % 3 == 0 { plate_with_hole(&mut random) } else { plane_part(&mut random) };
        let state = liquid(&mut random, part.heights().0);
        let placement = Placement { at: (0.0, 0.0), heading_rad: 0.0 };
        let found = resultant(&part.patches(placement), &state, [0.0, 0.0, part.bottom_m]);
        let slope = part.slope_deg.to_radians();
        let outward: Vec3 = [part.rise(), 0.0, -slope.cos()];
        let force = part.force(&state);
        // A height near 10 m is known to 2e-15 m: the wetted sliver of a tenth of a millimetre
        // deserves no more digits than that leaves.
        let rounding = 1e-2 * 2e3 * STANDARD_GRAVITY * part.area();
        let scale = part.pressed_force(&state) + rounding;
        for (got, m) in found.force_n.iter().zip(outward) {
            worst = worst.max((got - force * m).abs() / scale);
        }
        // About the line s = 0 the moment vector lies along y: r x F = s F.
        let (moment, lever) = (part.moment(&state, 0.0), part.shape.extent().1);
        worst = worst.max((found.moment_nm[1] - moment).abs() / (scale * lever));
        assert!(worst < 1e-12, "case {case}: {part:?} under {state:?}: {worst:e}");
    }
    println!("strips against patches: worst {worst:.1e}");
}

/// Triangulated polygons: signed triangles from the first corner.
#[test]
fn polygons_agree_with_their_triangles() {
    let mut random = Random::new(8);
    for case in 0..300 {
        let part = plane_part(&mut random);
        let Shape::Polygon { corners } = &part.shape else { continue };
        let slope = part.slope_deg.to_radians();
        let state = liquid(&mut random, part.heights().0);
        let point = |(x, s): (f64, f64)| [s * slope.cos(), x, part.height_of(s)];
        let first = point(corners[0]);
        let patches: Vec<_> = corners[1..]
            .windows(2)
            // Counter-clockwise in (x, s) is clockwise as seen from the liquid.
            .flat_map(|pair| triangle([first, point(pair[1]), point(pair[0])]))
            .collect();
        let found = resultant(&patches, &state, [0.0; 3]).force_n;
        let force = part.force(&state);
        let scale = part.pressed_force(&state).max(1e-9);
        let outward = found[0] * part.rise() - found[2] * slope.cos();
        assert!((outward - force).abs() < 1e-12 * scale, "case {case}: {outward} for {force}");
    }
}

fn head(random: &mut Random) -> Head {
    let low = random.between(650.0, 1200.0);
    let pressure = random.between(500.0, 90e3);
    let gas = random.between(-1500.0, 3000.0);
    Head {
        at_m: random.between(-0.3, 3.0),
        pressure_pa: Band::new(pressure - random.between(0.0, 400.0), pressure),
        density_kg_m3: Band::new(low, low + random.between(0.0, 700.0)),
        gas_pa: Band::new(gas - random.between(0.0, 900.0), gas),
        gravity_m_s2: STANDARD_GRAVITY,
        shell_top_m: None,
        surface_m: None,
    }
}

/// No stable profile leaves the envelope; the force and a signed moment stay within their bounds.
#[test]
fn no_stable_profile_leaves_the_envelope() {
    let mut random = Random::new(21);
    for case in 0..60 {
        let head = head(&mut random);
        let bounds = (Bound::Lower(head), Bound::Upper(head));
        let part = plane_part(&mut random);
        let pivot = random.between(part.shape.extent().0, part.shape.extent().1);
        let scale = part.pressed_force(&bounds.1) + part.pressed_force(&bounds.0);
        let turning = part.moment_bound(&bounds.0, &bounds.1, pivot);
        let room = 1e-12 * scale * (1.0 + part.shape.extent().1);
        for _ in 0..30 {
            let profile = Profile::random(&head, 4.0, &mut random);
            for i in 0..40 {
                let z = head.at_m + 0.3 * f64::from(i - 20);
                let p = profile.at(z);
                let (low, high) = (bounds.0.at(z), bounds.1.at(z));
                assert!(low - 1e-6 <= p && p <= high + 1e-6, "case {case} at {z}");
            }
            let force = part.force(&profile);
            assert!(part.force(&bounds.0) - room <= force, "case {case}: {part:?} {head:?}");
            assert!(force <= part.force(&bounds.1) + room, "case {case}: {part:?} {head:?}");
            assert!(part.moment(&profile, pivot) <= turning + room, "case {case}");
        }
    }
}

/// The upper bound is attained: light liquid above the sensor, heavy below, is a stable state.
#[test]
fn the_upper_bound_is_tight_and_corners_fall_short() {
    let head = Head {
        at_m: 2.0,
        pressure_pa: Band::exactly(25e3),
        density_kg_m3: Band::new(800.0, 1400.0),
        gas_pa: Band::exactly(0.0),
        gravity_m_s2: STANDARD_GRAVITY,
        shell_top_m: None,
        surface_m: None,
    };
    let wall = PlanePart::new(Shape::Rectangle { width: 1.0, length: 6.0 }, 0.0, 90.0);
    let bound = wall.force(&Bound::Upper(head));
    let surface = 2.0 + 25e3 / (800.0 * STANDARD_GRAVITY);
    let mut state = Liquid::uniform(800.0, surface);
    state.layers.push(crate::liquid::Layer { surface_m: 2.0, density_kg_m3: 1400.0 });
    assert!((wall.force(&state) - bound).abs() < 1e-12 * bound);
    let (least, largest) = extremes(&head, 2.5, (20_000, 1), |profile| wall.force(profile));
    assert!(largest <= bound * (1.0 + 1e-12) && largest > 0.999 * bound);
    // The uniform corners reach only 105.5 kN/m of 117.3.
    assert!((bound - 117_291.285).abs() < 0.5 && largest > 105_523.0);
    assert!(least >= wall.force(&Bound::Lower(head)) && least >= 99_999.0);
}

/// The shell top of an open tank caps the upper bound; a second sensor sharpens it.
#[test]
fn shell_top_and_surface_reading_only_lower_the_upper_bound() {
    let mut random = Random::new(34);
    for _ in 0..200 {
        let open = head(&mut random);
        let surface = open.at_m + random.between(0.1, 9.0);
        let mut capped = open;
        capped.shell_top_m = Some(surface + 0.5);
        capped.surface_m = Some(Band::new(surface - 0.1, surface));
        let part = plane_part(&mut random);
        let (full, cut) = (part.force(&Bound::Upper(open)), part.force(&Bound::Upper(capped)));
        assert!(cut <= full + 1e-9 * part.pressed_force(&Bound::Upper(open)));
        // Kinks must all be named: finer slicing changes nothing.
        let bound = Bound::Upper(capped);
        let (low, high) = part.heights();
        let fine: f64 = crate::quadrature::integral(low, high, &bound.kinks(), |z| bound.at(z));
        let slices: Vec<f64> =
            (1..500).map(|i| low + (high - low) * f64::from(i) / 500.0).collect();
        let finer: f64 =
            crate::quadrature::integral(low, high, &[bound.kinks(), slices].concat(), |z| {
                bound.at(z)
            });
        assert!((fine - finer).abs() <= 1e-11 * (1.0 + finer.abs()));
    }
}

#[test]
fn the_force_on_an_arc_passes_through_its_axis() {
    let patches = crate::patch::arc(2.0, 3.0, 0.5, (FRAC_PI_2, PI), crate::patch::Wetted::Outside);
    let found = resultant(&patches, &Liquid::uniform(1025.0, 1.8), [0.0, 0.0, 0.5]);
    // Pressures on a circle pass through its axis: no moment about it.
    assert!(found.moment_nm[1].abs() < 1e-9 * found.pressed_n);
    assert!(found.force_n[0] > 0.0 && found.force_n[2] < 0.0);
    // One arc, one sign of w: the weighed force is the force.
    let [x, _, z] = found.pressed_by_axis_n;
    assert!((x - found.force_n[0].abs()).abs() < 1e-12 * x);
    assert!((z - found.force_n[2].abs()).abs() < 1e-12 * z);
    assert!(found.pressed_n > x && found.pressed_n > z && found.pressed_n < x + z);
}
