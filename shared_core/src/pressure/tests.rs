//! Forces and moments against values computed by hand (g = 9.80665 m/s², water 1000 kg/m³): own
//! values, strip integration beside the closed form.

use super::Pressure;
use crate::lane::Lane;
use crate::shape::{Circle, Face, Rectangle, Shape};

const WEIGHT: f32 = 9806.65;

fn water(level_m: f32) -> Pressure<1> {
    let mut pressure = Pressure::gas(Lane::ZERO);
    pressure.add(Lane([level_m]), Lane([WEIGHT]));
    pressure
}

fn near(value: f32, expected: f64, relative: f64) {
    let value = f64::from(value);
    assert!((value - expected).abs() <= relative * expected.abs(), "{value} is not {expected}");
}

#[test]
fn round_manway_covered_and_partly_wetted() {
    let shape = Shape::Circle(Circle::new(0.3, 1.0));
    // Level, force, moment about the lowest point.
    let cases = [
        (6.0, 14_418.0, 4263.0),
        (0.65, 33.341, 2.105),
        (0.80, 176.520, 21.762),
        (0.95, 449.256, 80.287),
    ];
    for (level_m, force_n, about_bottom_n_m) in cases {
        let r = water(level_m).on(&Face::of(&shape, 0.5));
        near(r.force_n.lane(0), force_n, 4e-5);
        // s is measured from the centroid, 0.3 m above the lowest point.
        near(r.moment_n_m.lane(0) + 0.3 * r.force_n.lane(0), about_bottom_n_m, 3e-4);
    }
}

#[test]
fn square_hatch_from_dry_to_covered() {
    let shape = Shape::Rectangle(Rectangle::new(0.6, 0.6, 1.0));
    for (level_m, force_n) in [(0.3, 0.0), (0.1, 0.0), (0.5, 117.680), (0.9, 1059.118)] {
        near(water(level_m).on(&Face::of(&shape, 0.3)).force_n.lane(0), force_n, 1e-5);
    }
    let r = water(0.5).on(&Face::of(&shape, 0.3));
    near(r.moment_n_m.lane(0) + 0.3 * r.force_n.lane(0), 7.845, 1e-4);
}

#[test]
fn inclined_panel_takes_depth_not_length() {
    let sine = 0.866_025_4;
    let shape = Shape::Rectangle(Rectangle::new(1.5, 2.0, sine));
    near(water(3.0).on(&Face::of(&shape, 0.0)).force_n.lane(0), 62_781.0, 2e-5);
}

#[test]
fn lanes_do_not_change_bits() {
    let shape = Shape::Circle(Circle::new(0.33, 0.8));
    let levels: [f32; 8] = [-1.0, 0.0, 0.501, 0.55, 0.77, 1.0, 1.03, 9.0];
    let mut many = Pressure::<8>::gas(Lane::splat(120.0));
    many.add(Lane(levels), Lane::splat(WEIGHT));
    let together = many.on(&Face::of(&shape, 0.5));
    for (index, level_m) in levels.into_iter().enumerate() {
        let mut one = Pressure::<1>::gas(Lane([120.0]));
        one.add(Lane([level_m]), Lane([WEIGHT]));
        let alone = one.on(&Face::of(&shape, 0.5));
        assert_eq!(
            (together.force_n.lane(index) + 0.0).to_bits(),
            (alone.force_n.lane(0) + 0.0).to_bits()
        );
        assert_eq!(
            (together.moment_n_m.lane(index) + 0.0).to_bits(),
            (alone.moment_n_m.lane(0) + 0.0).to_bits()
        );
    }
}
