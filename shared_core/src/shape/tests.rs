//! Discs, rectangles and their pieces against strips in f64, over sizes, slopes and levels.
#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

use super::{Circle, Cut, Face, Pieces, Rectangle, Shape, Wetted};
use crate::lane::Lane;
use crate::liquid::truth::{Random, Strips};
use proptest::prelude::*;

/// A shape and its strips, with the lowest point at zero.
fn random_shape(random: &mut Random) -> (Shape, Strips) {
    let sine = random.between(0.01, 1.0) as f32;
    let size = random.between(0.01, 6.0) as f32;
    let (sine_64, size_64) = (f64::from(sine), f64::from(size));
    if random.below(2) == 0 {
        let strips = Strips {
            centroid_m: size_64 * sine_64,
            sine: sine_64,
            half_m: size_64,
            size_m: size_64,
            is_disc: true,
        };
        return (Shape::Circle(Circle::new(size, sine)), strips);
    }
    let width = random.between(0.01, 9.0) as f32;
    let strips = Strips {
        centroid_m: 0.5 * size_64 * sine_64,
        sine: sine_64,
        half_m: 0.5 * size_64,
        size_m: width.into(),
        is_disc: false,
    };
    (Shape::Rectangle(Rectangle::new(width, size, sine)), strips)
}

/// A surface above the lowest point: dry, just wetted, somewhere, just covered, deep.
fn random_surface(random: &mut Random, rise_m: f32) -> f32 {
    let close = 10.0_f64.powf(-random.between(1.0, 7.0)) * f64::from(rise_m);
    let surface = match random.below(7) {
        0 => -close,
        1 => close,
        2 => f64::from(rise_m) - close,
        3 => f64::from(rise_m) + close,
        4 => 0.5 * f64::from(rise_m) + close,
        5 => f64::from(rise_m) * random.between(1.0, 4_000.0),
        _ => f64::from(rise_m) * random.between(0.0, 1.5),
    };
    surface as f32
}

/// Error of `q0`, `q1` and `q2` over `integral (h - z) dA`, `integral (h - z) |s| dA` and `q2`.
fn errors(found: Wetted<1>, strips: &Strips, surface_m: f32, up_to_s: f64) -> [f64; 3] {
    let h = f64::from(surface_m);
    let surface_s = (h - strips.centroid_m) / strips.sine;
    let top = surface_s.clamp(-strips.half_m, up_to_s);
    let over = |weight: &dyn Fn(f64) -> f64| {
        let depth = |z: f64, s: f64| (h - z) * weight(s);
        let middle = if top < 0.0 { top } else { 0.0 };
        strips.integral([-strips.half_m, middle], depth) + strips.integral([middle, top], depth)
    };
    let up = |s: f64| s + strips.half_m;
    let [q0, q1, arm, q2] = [over(&|_| 1.0), over(&|s| s), over(&f64::abs), over(&up)];
    let relative = |found: f32, exact: f64, scale: f64| {
        if scale <= 0.0 { f64::from(found).abs() } else { (f64::from(found) - exact).abs() / scale }
    };
    [
        relative(found.q0.lane(0), q0, q0),
        relative(found.q1.lane(0), q1, arm),
        relative(found.q2.lane(0), q2, q2),
    ]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(600))]

    #[test]
    fn whole_shapes(seed in any::<u64>()) {
        let mut random = Random(seed);
        let (shape, strips) = random_shape(&mut random);
        let surface_m = random_surface(&mut random, shape.rise_m());
        let found = Face::of(&shape, 0.0).wetted(Lane([surface_m]));
        let errors = errors(found, &strips, surface_m, strips.half_m);
        let [q0, q1, q2] = errors;
        let kept = q0 <= 1e-6 && q1 <= 1e-6 && q2 <= 1.8e-6;
        prop_assert!(kept, "{errors:?} {surface_m} {shape:?}");
    }

    #[test]
    fn pieces_below_a_cut(seed in any::<u64>()) {
        let mut random = Random(seed);
        let (shape, strips) = random_shape(&mut random);
        let cut_y = random.between(0.02, 0.98) * f64::from(shape.rise_m());
        let cut_s = (f64::from(cut_y as f32) - strips.centroid_m) / strips.sine;
        let area = strips.integral([-strips.half_m, cut_s], |_, _| 1.0);
        let first = strips.integral([-strips.half_m, cut_s], |_, s| s + strips.half_m);
        let cut = Cut::new(&Face::of(&shape, 0.0), cut_y as f32, area as f32, first as f32);
        let surface_m = random_surface(&mut random, shape.rise_m());
        let (face, surface) = (Face::of(&shape, 0.0), Lane([surface_m]));
        let [q0, q2] = cut.wetted(&face, surface, &face.wetted(surface));
        let found = Wetted { q0, q1: Lane::ZERO, q2 };
        let [of_q0, _, of_q2] = errors(found, &strips, surface_m, cut_s);
        prop_assert!(of_q0 <= 1e-6 && of_q2 <= 1.8e-6, "{of_q0} {of_q2} {surface_m} {shape:?}");
    }

    /// Eight surfaces at once, dry and deep ones among them, have the bits of each alone.
    #[test]
    fn lanes_have_the_same_bits(seed in any::<u64>()) {
        let mut random = Random(seed);
        let (shape, strips) = random_shape(&mut random);
        let cut_y = (0.4 * f64::from(shape.rise_m())) as f32;
        let face = Face::of(&shape, 0.0);
        let cut = Cut::new(&face, cut_y, shape.area_m2() * 0.4, 0.1 * strips.half_m as f32);
        let mut surfaces: [f32; 8] =
            core::array::from_fn(|_| random_surface(&mut random, shape.rise_m()));
        surfaces[0] = cut_y;
        let lanes = |whole: Wetted<8>| [whole.q0, whole.q1, whole.q2];
        let [q0, q2] = cut.wetted(&face, Lane(surfaces), &face.wetted(Lane(surfaces)));
        let together = [lanes(face.wetted(Lane(surfaces))), [q0, q0, q2]];
        for (lane, surface_m) in surfaces.into_iter().enumerate() {
            let one = Lane([surface_m]);
            let whole = face.wetted(one);
            let [q0, q2] = cut.wetted(&face, one, &whole);
            let singly = [[whole.q0, whole.q1, whole.q2], [q0, q0, q2]];
            for (many, alone) in together.into_iter().zip(singly) {
                for (many, alone) in many.into_iter().zip(alone) {
                    let bits = [many.lane(lane), alone.lane(0)].map(|q| (q + 0.0).to_bits());
                    prop_assert_eq!(bits[0], bits[1]);
                }
            }
        }
    }

    /// Neither falls as the surface rises by more than its own error: no step where branches meet.
    #[test]
    fn the_volume_of_the_prism_never_falls(seed in any::<u64>()) {
        let mut random = Random(seed);
        let (shape, _) = random_shape(&mut random);
        let middle = f64::from(random_surface(&mut random, shape.rise_m()));
        let mut last = f32::NEG_INFINITY;
        for step in -20..20 {
            let surface = middle * (1.0 + 1e-6 * f64::from(step) * middle.signum());
            let q0 = Face::of(&shape, 0.0).wetted(Lane([surface as f32])).q0.lane(0);
            prop_assert!(q0 >= last - 1e-6 * last.abs(), "{q0} after {last}");
            last = q0;
        }
    }
}

#[test]
fn a_level_shape_stands_at_one_height() {
    let shape = Shape::Level { area_m2: 0.44 };
    for (surface_m, volume) in [(-1.0, 0.0), (0.0, 0.0), (0.25, 0.11), (40.0, 17.6)] {
        let found = Face::of(&shape, 0.0).wetted(Lane([surface_m]));
        assert!((found.q0.lane(0) - volume).abs() <= 1e-6 * volume);
        assert!(found.q1.lane(0).abs() <= 0.0);
    }
}

/// Half a disc: `2/3 r³`, and the moment `-pi/8 r⁴` (second moment of a semicircle about its
/// diameter; Gere and Goodno, Mechanics of Materials, properties of plane areas).
#[test]
fn half_a_disc_in_closed_form() {
    let shape = Shape::Circle(Circle::new(0.5, 1.0));
    let found = Face::of(&shape, 0.0).wetted(Lane([0.5]));
    let (q0, q1) = (2.0 / 3.0 * 0.125, -core::f64::consts::PI / 8.0 * 0.0625);
    assert!((f64::from(found.q0.lane(0)) / q0 - 1.0).abs() < 2e-7);
    assert!((f64::from(found.q1.lane(0)) / q1 - 1.0).abs() < 2e-7);
}

/// The shape whose pieces are these, strips first; its area and centroid from fine strips.
fn of_pieces(
    sine: f32,
    strips: &[[f32; 4]],
    discs: &[[f32; 4]],
    length_m: f32,
) -> (Shape, Vec<f32>) {
    let numbers: Vec<f32> = strips.iter().chain(discs).flatten().copied().collect();
    let counts = [strips.len() as u8, discs.len() as u8];
    let bare = Pieces::new([0.0, length_m, 0.0], sine, 0, counts);
    let [area_m2, first_m3] = bare.moments(&numbers);
    let sizes = [area_m2, length_m, first_m3 / area_m2];
    (Shape::Pieces(Pieces::new(sizes, sine, 0, counts)), numbers)
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2_000))]

    /// One strip is a rectangle, one disc a disc; cut into pieces they stay what they are.
    #[test]
    fn pieces_of_known_shapes(seed in any::<u64>()) {
        let mut random = Random(seed);
        let (shape, strips) = random_shape(&mut random);
        let sine = strips.sine as f32;
        let length_m = shape.rise_m() / sine;
        let surface_m = random_surface(&mut random, shape.rise_m());
        let pieces = match &shape {
            Shape::Rectangle(rectangle) => {
                let [width_m, length_m] = rectangle.sides_m();
                let lower_m = length_m * random.between(0.1, 0.9) as f32;
                let split = [
                    [0.0, lower_m, width_m, 0.0],
                    [lower_m, length_m - lower_m, width_m, 0.0],
                ];
                of_pieces(sine, &split, &[], length_m)
            }
            Shape::Circle(circle) => {
                of_pieces(sine, &[], &[[0.0, circle.radius_m(), 1.0, 0.0]], length_m)
            }
            _ => unreachable!("no other shape is made"),
        };
        let face = Face { shape: &pieces.0, numbers: &pieces.1, bottom_m: 0.0 };
        let found = face.wetted(Lane([surface_m]));
        if surface_m > 0.0 {
            for error in errors(found, &strips, surface_m, strips.half_m) {
                prop_assert!(error <= 1.5e-6, "{error:e}: {shape:?} at {surface_m}");
            }
        } else {
            prop_assert_eq!(found, Wetted { q0: Lane::ZERO, q1: Lane::ZERO, q2: Lane::ZERO });
        }
    }
}
