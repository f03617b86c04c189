//! Parts of every kind, with capacities of the size of their loads.

use crate::cover::{Outline, cover};
use crate::{between, ratio, single};
use strake_core::part::plate::Nodes;
use strake_core::part::{
    Capacities, Cover, CoverNumbers, Curved, DesignState, Geometry, Held, Part, Stated,
};
use strake_core::plan::NUMBERS_MAX;
use strake_core::shape::{Circle, Face, Pieces, Rectangle, Shape};
use strake_oracle::random::Random;

/// The tank a part belongs to, in round numbers.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Around {
    pub(crate) height_m: f64,
    /// Bits of the liquids outside that there are.
    pub(crate) outside: u8,
}

/// The plan's numbers, to which parts append their own.
pub(crate) type Numbers = heapless::Vec<f32, NUMBERS_MAX>;
/// Up to here parts with many numbers are made, so that a plan of them fits its bytes.
const NUMBERS: usize = 120;

pub(crate) fn part(random: &mut Random, around: Around, numbers: &mut Numbers) -> Part {
    let bottom_m = match random.below(4) {
        0 => 0.0,
        1 => between(random, -0.5, 0.0),
        _ => between(random, 0.0, 0.9 * around.height_m),
    };
    let (geometry, rise_m) = match random.below(3) {
        0 => course(random, bottom_m),
        1 if numbers.len() < NUMBERS && random.one_in(2) => pieces(random, numbers),
        1 if numbers.len() < NUMBERS => curved(random, numbers),
        _ => plane(random, numbers),
    };
    let [outward, inward] = capacities(random, &geometry, around);
    let designed_for = if random.one_in(3) { 1 + random.below(2) } else { 0 };
    let mut part = Part {
        geometry,
        bottom_m,
        top_m: bottom_m + rise_m,
        outward,
        inward,
        designed_for: (0..designed_for).map(|_| design_state(random, around)).collect(),
        outside: 0,
    };
    // The design point must not leave the course by the rounding of its top.
    if let Geometry::Course { design_point_m, .. } = &mut part.geometry
        && *design_point_m > part.top_m
    {
        *design_point_m = part.top_m;
    }
    if random.one_in(2) {
        part.outside = u8::try_from(random.below(4)).unwrap_or(0) & around.outside;
    }
    part
}

fn course(random: &mut Random, bottom_m: f32) -> (Geometry, f32) {
    let height_m = between(random, 0.3, 3.0);
    let share = if random.one_in(4) { 0.0 } else { between(random, 0.0, 1.0) };
    let design_point_m = bottom_m + share * height_m;
    let half_diameter_m = ratio(random, 0.25, 40.0);
    (Geometry::Course { half_diameter_m, design_point_m, height_m }, height_m)
}

/// One in four level; of the others half upright.
fn plane(random: &mut Random, numbers: &mut Numbers) -> (Geometry, f32) {
    let sine = match random.below(8) {
        0 | 1 => 0.0,
        2..=4 => 1.0,
        _ => between(random, 0.02, 1.0),
    };
    let (a, b) = (ratio(random, 0.05, 6.0), ratio(random, 0.05, 6.0));
    let round = random.one_in(2);
    let shape = match (sine > 0.0, round) {
        (false, _) => Shape::Level { area_m2: a * b },
        (true, true) if random.one_in(3) => {
            Shape::Circle(Circle::ellipse(a, ratio(random, 0.2, 5.0), sine))
        }
        (true, true) => Shape::Circle(Circle::new(a, sine)),
        (true, false) => Shape::Rectangle(Rectangle::new(a, b, sine)),
    };
    let is_ellipse = matches!(&shape, Shape::Circle(circle) if (circle.aspect() - 1.0).abs() > 0.0);
    let is_plate = sine > 0.0 && numbers.len() < NUMBERS && random.one_in(3);
    if !is_ellipse && is_plate {
        let rise_m = shape.rise_m();
        let held = Held::Plate(nodes(random, rise_m, numbers));
        let bent = CoverNumbers { held, ..CoverNumbers::default() };
        let cover = Cover::new(&bent, &Face { shape: &shape, numbers, bottom_m: 0.0 });
        return (Geometry::plane(shape, sine, Some(cover)), rise_m);
    }
    let cover = (!is_ellipse && !random.one_in(4)).then(|| {
        let outline = match shape {
            Shape::Circle(_) => Outline::Disc { radius_m: f64::from(a) },
            _ => Outline::Rectangle { width_m: f64::from(a), half_m: 0.5 * f64::from(b) },
        };
        cover(random, outline, &Face::of(&shape, 0.0), f64::from(sine))
    });
    let rise_m = shape.rise_m();
    (Geometry::plane(shape, sine, cover), rise_m)
}

/// Up to three points of two to four nodes; between nodes the weighting keeps its sign.
fn nodes(random: &mut Random, rise_m: f32, numbers: &mut Numbers) -> Nodes {
    let first = u16::try_from(numbers.len()).unwrap_or(0);
    for _ in 0..=random.below(3) {
        let (stretches, mut sign) = (1 + random.below(3), 1.0);
        let mut y_m = 0.0;
        for left in (0..=stretches).rev() {
            let turns = left > 0 && left < stretches && random.one_in(3);
            let w = if turns { 0.0 } else { sign * ratio(random, 0.01, 1.0) };
            sign = if turns { -sign } else { sign };
            let _ = numbers.extend_from_slice(&[y_m, w]);
            let ahead = if left <= 1 { 1.0 } else { between(random, 0.2, 0.6) };
            y_m += (rise_m - y_m) * ahead;
        }
    }
    let count = (numbers.len() - usize::from(first)) / 2;
    Nodes { count: u8::try_from(count).unwrap_or(0), first }
}

/// One to six strips on top of each other and up to two discs anywhere beside them; one disc in
/// two is drawn apart, one in four a hole.
fn pieces(random: &mut Random, numbers: &mut Numbers) -> (Geometry, f32) {
    let first = u16::try_from(numbers.len()).unwrap_or(0);
    let sine = if random.one_in(2) { 1.0 } else { between(random, 0.02, 1.0) };
    let (strips, discs) = (1 + random.below(6), random.below(3));
    let mut length_m = 0.0_f32;
    let mut list: Vec<[f32; 4]> = Vec::new();
    for _ in 0..strips {
        let (width_m, upper_m) = (ratio(random, 0.3, 3.0), ratio(random, 0.3, 3.0));
        let long_m = ratio(random, 0.05, 1.0);
        list.push([length_m, long_m, width_m, (upper_m - width_m) / long_m]);
        length_m += long_m;
    }
    for _ in 0..discs {
        // Inside the strips: no hole takes more than a part of them.
        let radius_m = length_m * between(random, 0.05, 0.2);
        let middle_m = if random.one_in(2) { 0.5 * radius_m } else { 0.0 };
        let low_m = between(random, 0.0, 0.4) * length_m;
        let aspect = 0.3 / length_m * if random.one_in(4) { -1.0 } else { 1.0 };
        list.push([low_m, radius_m, aspect, middle_m]);
    }
    let _ = numbers.extend_from_slice(list.as_flattened());
    let counts = [strips, discs].map(|count| u8::try_from(count).unwrap_or(0));
    let bare = Pieces::new([0.0, length_m, 0.0], sine, first, counts);
    let [area_m2, first_m3] = bare.moments(numbers);
    let shape = Pieces::new([area_m2, length_m, first_m3 / area_m2], sine, first, counts);
    let shape = Shape::Pieces(shape);
    (Geometry::plane(shape, sine, None), shape.rise_m())
}

/// Rows of every kind and sign, or one row and places of tension.
fn curved(random: &mut Random, numbers: &mut Numbers) -> (Geometry, f32) {
    let first = u16::try_from(numbers.len()).unwrap_or(0);
    let rise_m = ratio(random, 0.2, 4.0);
    let shell = random.one_in(2);
    let mut list: Vec<f32> = Vec::new();
    let mut counts = [[0_u8; 3]; 2];
    for (force, counts) in counts.iter_mut().enumerate() {
        for (kind, count) in counts.iter_mut().enumerate() {
            let most = if shell { u32::from(force == 1 && kind == 0) } else { random.below(3) };
            for _ in 0..most {
                *count += 1;
                list.extend(row(random, kind, rise_m, shell));
            }
        }
    }
    let places = if shell { 1 + random.below(6) } else { 0 };
    for _ in 0..places {
        let y_m = rise_m * between(random, 0.0, 1.0);
        let sign = if random.one_in(2) { 1.0 } else { -1.0 };
        let (along, around) = (sign * ratio(random, 0.1, 2.0), ratio(random, 0.1, 4.0));
        list.extend([y_m, along, around, along * between(random, 0.0, 1.5)]);
    }
    let _ = numbers.extend_from_slice(&list);
    let places = u8::try_from(places).unwrap_or(0);
    let apex_up = random.one_in(2);
    (Geometry::Curved(Curved { first, rows: counts, places, apex_up }), rise_m)
}

/// A row of one sign: both ends and the middle of its polynomial have it.
fn row(random: &mut Random, kind: usize, rise_m: f32, shell: bool) -> [f32; 5] {
    let sign = if random.one_in(2) { 1.0 } else { -1.0 };
    if kind == 2 {
        let radius_m = 0.25 * rise_m;
        return [rise_m * between(random, 0.0, 0.45), radius_m, sign, 0.0, 0.0];
    }
    let share = if shell { 1.0 } else { between(random, 0.05, 0.9) };
    let low_m = if shell { 0.0 } else { rise_m * (1.0 - share) * between(random, 0.0, 1.0) };
    let x = rise_m * share;
    let (c0, end) = (ratio(random, 0.1, 3.0), ratio(random, 0.1, 3.0));
    let c2 = if shell { 0.0 } else { between(random, 0.0, 0.1) / (x * x) };
    let c1 = (end - c0 - c2 * x * x) / x;
    let [c0, c1, c2] = [c0, c1, c2].map(|c| sign * c);
    if kind == 1 && random.one_in(2) {
        return [low_m + x, -x, c0, c1, c2];
    }
    [low_m, x, c0, c1, c2]
}

/// Outward and inward capacities, each stated or not, from a third of to three times the load of
/// water to the top.
fn capacities(random: &mut Random, geometry: &Geometry, around: Around) -> [Capacities; 2] {
    let head_pa = single(9806.65 * around.height_m);
    let (tension, force, cover) = match geometry {
        Geometry::Course { half_diameter_m, .. } => (Some(head_pa * half_diameter_m), None, None),
        Geometry::Curved(curved) => {
            let tension = (curved.places > 0).then_some(head_pa);
            (tension, Some(head_pa * single(around.height_m.powi(2))), None)
        }
        Geometry::Plane { shape, cover, .. } => {
            (None, Some(head_pa * shape.area_m2()), cover.as_ref())
        }
    };
    let held = cover.map_or(Held::Otherwise, Cover::held);
    let (bolt, moment) = match held {
        Held::Otherwise => (None, None),
        Held::Bolts(count) => (force.map(|n| n / f32::from(count)), None),
        Held::Line | Held::Side => (force.map(|n| 0.5 * n), force),
        Held::Plate(_) => (None, Some(head_pa)),
    };
    let mut stated = |load: Option<f32>, one_in: u32| {
        let share = ratio(random, 0.3, 3.0);
        load.filter(|_| random.one_in(one_in)).and_then(|load| Stated::new(load * share))
    };
    let mut both = [2, 4].map(|one_in| Capacities {
        pressure_pa: stated(Some(head_pa), one_in),
        hoop_tension_n_m: stated(tension, one_in),
        force_n: stated(force, one_in),
        bolt_n: stated(bolt, one_in),
        moment_n_m: stated(moment, one_in),
    });
    if matches!(geometry, Geometry::Curved(_)) {
        // The size of a force has no direction.
        both[1].force_n = None;
    }
    both
}

fn design_state(random: &mut Random, around: Around) -> DesignState {
    let gas_pa = if random.one_in(2) { 0.0 } else { between(random, -1e3, 2e4) };
    DesignState {
        level_m: between(random, 0.1 * around.height_m, 1.2 * around.height_m),
        weight_n_m3: between(random, 5_000.0, 15_000.0),
        gas_pa,
    }
}
