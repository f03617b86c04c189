//! Random parts and liquid states, the same for every run of one seed.
//!
//! Every number is one an f32 holds, so that a comparison with f32 code is fed the same inputs.
//! Sizes run from 0.05 to 30 m, slopes from 0 to 180 degrees, surfaces from dry to 30 m.

use crate::liquid::{Layer, Liquid, STANDARD_GRAVITY};
use crate::plane::{Hole, PlanePart};
use crate::random::Random;
use crate::shape::Shape;

/// The value nearest to `x` that an f32 holds.
#[must_use]
pub fn as_f32(x: f64) -> f64 {
    #[expect(clippy::cast_possible_truncation, reason = "rounding to f32 is what is asked for")]
    let rounded = x as f32;
    f64::from(rounded)
}

/// A course of an upright cylinder, judged at one height.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Course {
    /// Diameter, m.
    pub diameter_m: f64,
    /// Height of the design point above the datum, m.
    pub design_point_m: f64,
}

fn size(random: &mut Random) -> f64 {
    as_f32(random.ratio_between(0.05, 30.0))
}

/// A random outline that every reader of a tank file knows.
pub fn shape(random: &mut Random) -> Shape {
    let (a, b) = (size(random), size(random));
    match random.below(7) {
        0 => Shape::Circle { diameter: a },
        1 => Shape::Ellipse { width: a, length: b },
        2 => Shape::Obround { width: a, length: b },
        3 => Shape::Rectangle { width: a, length: b },
        4 => Shape::Triangle { base: a, height: b, apex_up: random.one_in(2) },
        5 => Shape::Trapezoid { top: a, bottom: size(random), length: b },
        _ => Shape::Polygon { corners: star(random, a) },
    }
}

/// A polygon seen whole from its middle, lowest corner near s = 0.
fn star(random: &mut Random, extent: f64) -> Vec<(f64, f64)> {
    let count = 3 + random.below(8);
    let middle = 0.5 * extent;
    (0..count)
        .map(|i| {
            let turn =
                std::f64::consts::TAU * (f64::from(i) + 0.7 * random.unit()) / f64::from(count);
            let reach = middle * random.between(0.4, 1.0);
            (as_f32(reach * turn.cos()), as_f32(middle + reach * turn.sin()))
        })
        .collect()
}

/// A random slope: walls, floors, roofs and everything between.
pub fn slope_deg(random: &mut Random) -> f64 {
    match random.below(8) {
        0..=2 => 90.0,
        3 => 0.0,
        4 => 180.0,
        _ => as_f32(random.between(1.0, 179.0)),
    }
}

/// A random plane part without openings.
pub fn plane_part(random: &mut Random) -> PlanePart {
    let slope = slope_deg(random);
    let bottom = as_f32(random.between(-0.5, 12.0));
    PlanePart::new(shape(random), bottom, slope)
}

/// A random plane part with a round opening where there is room for one.
pub fn plate_with_hole(random: &mut Random) -> PlanePart {
    let (width, length) = (size(random), size(random));
    let bottom = as_f32(random.between(-0.5, 12.0));
    let slope = slope_deg(random);
    let mut part = PlanePart::new(Shape::Rectangle { width, length }, bottom, slope);
    let room = width.min(length);
    let diameter = as_f32(room * random.between(0.1, 0.6));
    let x = as_f32(0.5 * (width - diameter) * random.between(-1.0, 1.0));
    let s = as_f32((length - diameter) * random.unit());
    part.holes.push(Hole { shape: Shape::Circle { diameter }, origin: (x, s) });
    part
}

/// A random course.
pub fn course(random: &mut Random) -> Course {
    let design_point_m = as_f32(random.between(0.0, 25.0));
    Course { diameter_m: as_f32(random.ratio_between(0.5, 90.0)), design_point_m }
}

/// A random state: one to four layers, heavier below, one in four of them dry; gas from vacuum to
/// 50 kPa in half of them; liquid outside in one in three. One state in eight has a surface just
/// above the height `near_m`, where wetted slivers are thin.
pub fn liquid(random: &mut Random, near_m: f64) -> Liquid {
    let count = if random.one_in(2) { 1 } else { 1 + random.below(4) };
    let mut top = match random.below(8) {
        0 | 1 => near_m - random.between(0.0, 2.0),
        2 => near_m + random.ratio_between(1e-4, 0.1),
        _ => random.between(near_m, near_m.max(0.0) + 18.0),
    };
    top = top.min(30.0);
    let mut density = random.between(600.0, 1400.0);
    let mut layers = Vec::new();
    for _ in 0..count {
        layers.push(Layer { surface_m: as_f32(top), density_kg_m3: as_f32(density) });
        top -= random.between(0.0, 4.0);
        density += random.between(0.0, 300.0);
    }
    let gas_pa = if random.one_in(2) { as_f32(random.between(-5e3, 50e3)) } else { 0.0 };
    let outside = random.one_in(3).then(|| Layer {
        surface_m: as_f32(random.between(near_m - 1.0, near_m + 6.0)),
        density_kg_m3: as_f32(random.between(600.0, 1400.0)),
    });
    Liquid { gravity_m_s2: as_f32(STANDARD_GRAVITY), gas_pa, layers, outside }
}
