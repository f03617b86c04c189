//! Plans for the tests of this crate, in few words.
#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

pub(crate) mod random;

use super::{
    AlarmPlan, LevelPlan, LevelSensor, LoggingPlan, Plan, Reference, SignalKind, ThresholdPlan,
};
use crate::alarm::FaultCause;
use crate::journal::entry::Sample;
use crate::liquid::{Band, DensityTable, Gas, Layer};
use crate::part::plate::Nodes;
use crate::part::{
    BoltPattern, Capacities, Cover, CoverNumbers, Curved, Geometry, Held, Part, Stated,
    WeightingNumbers,
};
use crate::plan::LiquidPlan;
use crate::shape::{Circle, Face, Pieces, Rectangle, Shape};
use crate::signal::{Channel, ReadingClass, Resolved};
use core::f64::consts::PI;
use heapless::Vec;

pub(crate) const G: f64 = 9.80665;

/// Every figure known exactly.
pub(crate) fn exact(kg_m3: f32) -> Band {
    band(kg_m3, kg_m3, kg_m3)
}

pub(crate) fn band(low_kg_m3: f32, estimate_kg_m3: f32, high_kg_m3: f32) -> Band {
    Band { estimate_kg_m3, low_kg_m3, high_kg_m3 }
}

pub(crate) fn gas(lowest_pa: f32, nominal_pa: f32, highest_pa: f32) -> Gas {
    Gas { lowest_pa, nominal_pa, highest_pa }
}

pub(crate) fn layer(surface_m: f32, surface_uncertainty_m: f32, density: Band) -> Layer {
    Layer { surface_m, surface_uncertainty_m, density }
}

/// An open, vented 10 m tank of water with an exact surface sensor that counts in millimetres and
/// one course.
pub(crate) fn water_tank() -> Plan {
    let threshold = |utilisation, latch| ThresholdPlan {
        utilisation,
        deadband: 0.02,
        on_delay_ms: 0,
        off_delay_ms: 0,
        latch,
    };
    Plan {
        gravity_m_s2: 9.80665,
        shell_top_m: 10.0,
        overflow_m: 9.5,
        floor_m: 0.0,
        closed: false,
        highest_rise_m_s: 0.001,
        highest_fall_m_s: 0.002,
        liquid: LiquidPlan {
            top: exact(1000.0),
            table: DensityTable::default(),
            table_uncertainty: 0.0,
            temperature: None,
            below: Vec::new(),
            products: Vec::new(),
        },
        gas: gas(0.0, 0.0, 0.0),
        outside: Vec::new(),
        level: surface_sensor(),
        alarm: AlarmPlan {
            warn: threshold(0.85, false),
            alarm: threshold(0.95, true),
            inward: None,
            response_time_ms: 900_000,
            sounds_again_after_ms: 600_000,
        },
        logging: LoggingPlan {
            interval_ms: 10_000,
            idle_interval_ms: 60_000,
            flush_after_ms: 60_000,
        },
        parts: Vec::from_iter([course(0.0, 2.4, 4.0, 0.3)]),
        numbers: Vec::new(),
        filling: super::Filling::NONE,
    }
}

/// Adds a threshold for the inward bound.
pub(crate) fn with_inward_alarm(mut plan: Plan) -> Plan {
    plan.alarm.inward = Some(plan.alarm.warn);
    plan
}

/// A bus sensor of the surface, 1 mm per count.
pub(crate) fn surface_sensor() -> LevelPlan {
    LevelPlan {
        sensor: LevelSensor::Surface,
        signal: SignalKind::Register { unit: 1, function: 4, register: 0, coding: 0 },
        zero_count_16: 0,
        value_at_zero: 0.0,
        value_per_count_16: 1.0 / 16_000.0,
        uncertainty: 0.0,
        uncertainty_per_distance: 0.0,
        reference_m: 0.0,
        failed_after_ms: 60_000,
    }
}

/// A bus sensor of the pressure at a height, 1 Pa per count.
pub(crate) fn head_sensor(at_m: f32, reference: Reference, uncertainty_pa: f32) -> LevelPlan {
    LevelPlan {
        sensor: LevelSensor::Head { at_m, reference },
        value_per_count_16: 1.0 / 16.0,
        uncertainty: uncertainty_pa,
        ..surface_sensor()
    }
}

pub(crate) const GAUGE: Reference = Reference::Atmosphere { offset_pa: [0.0; 3] };

/// The plan's surface or head sensor on a current loop: 4 mA is `zero`, 20 mA is `full`.
pub(crate) fn on_loop(level: LevelPlan, zero: f32, full: f32) -> LevelPlan {
    LevelPlan {
        signal: SignalKind::CurrentLoop,
        zero_count_16: 4_000 * 16,
        value_at_zero: zero,
        value_per_count_16: (full - zero) / 256_000.0,
        ..level
    }
}

fn part(geometry: Geometry, bottom_m: f32, rise_m: f32) -> Part {
    Part {
        geometry,
        bottom_m,
        top_m: bottom_m + rise_m,
        outward: Capacities::default(),
        inward: Capacities::default(),
        designed_for: Vec::new(),
        outside: 0,
    }
}

pub(crate) fn course(bottom_m: f32, height_m: f32, half_diameter_m: f32, point_m: f32) -> Part {
    let design_point_m = bottom_m + point_m;
    part(Geometry::Course { half_diameter_m, design_point_m, height_m }, bottom_m, height_m)
}

pub(crate) fn plane(shape: Shape, bottom_m: f32, sine: f32, cover: Option<Cover>) -> Part {
    let rise_m = shape.rise_m();
    part(Geometry::plane(shape, sine, cover), bottom_m, rise_m)
}

pub(crate) fn disc(bottom_m: f32, radius_m: f32, sine: f32) -> Part {
    plane(Shape::Circle(Circle::new(radius_m, sine)), bottom_m, sine, None)
}

pub(crate) fn rectangle(bottom_m: f32, width_m: f32, length_m: f32, sine: f32) -> Part {
    plane(Shape::Rectangle(Rectangle::new(width_m, length_m, sine)), bottom_m, sine, None)
}

pub(crate) fn level_cover(height_m: f32, area_m2: f32) -> Part {
    plane(Shape::Level { area_m2 }, height_m, 0.0, None)
}

/// A disc on `count` bolts around it, the first at the lowest point, `count` even.
pub(crate) fn bolted_disc(
    bottom_m: f32,
    radius_m: f32,
    sine: f32,
    count: u16,
    bolt_radius_m: f32,
) -> Part {
    let shape = Shape::Circle(Circle::new(radius_m, sine));
    let (radius, sine_64) = (f64::from(radius_m), f64::from(sine));
    // sum s² = n R² / 2 on a circle.
    let per_moment = 2.0 / (f64::from(count) * f64::from(bolt_radius_m));
    let cut_s = 0.5 * f64::from(bolt_radius_m);
    let cut = |s: f64| {
        (s.abs() < radius).then(|| {
            // Segment of a circle below the chord at s.
            let chord = (radius * radius - s * s).sqrt();
            let area = PI * radius * radius - radius * radius * (s / radius).acos() + s * chord;
            let first = radius * area - 2.0 / 3.0 * chord * chord * chord;
            [((radius + s) * sine_64) as f32, area as f32, first as f32]
        })
    };
    let pattern = BoltPattern {
        count,
        per_moment: [-per_moment as f32, per_moment as f32],
        cuts: [cut(cut_s), cut(-cut_s)],
    };
    let cover = Cover::new(&pattern.cover(&shape), &Face::of(&shape, 0.0));
    plane(shape, bottom_m, sine, Some(cover))
}

/// A disc on a hinge at its highest point and a latch at its lowest.
pub(crate) fn hinged_disc(bottom_m: f32, radius_m: f32, sine: f32) -> Part {
    let shape = Shape::Circle(Circle::new(radius_m, sine));
    let length_m = 2.0 * radius_m;
    let numbers = CoverNumbers {
        held: Held::Line,
        weightings: [
            WeightingNumbers { foot: length_m, slope: -1.0, cut: None },
            WeightingNumbers { foot: 0.0, slope: 1.0 / length_m, cut: None },
        ],
        ..CoverNumbers::default()
    };
    let cover = Cover::new(&numbers, &Face::of(&shape, 0.0));
    plane(shape, bottom_m, sine, Some(cover))
}

/// A rectangle on bolts with the given `s / sum s²` of the highest, the same below.
pub(crate) fn bolted_rectangle(
    bottom_m: f32,
    [width_m, length_m]: [f32; 2],
    sine: f32,
    count: u16,
    per_moment: f32,
) -> Part {
    let shape = Shape::Rectangle(Rectangle::new(width_m, length_m, sine));
    let (width, length) = (f64::from(width_m), f64::from(length_m));
    let zero_s = 1.0 / (f64::from(count) * f64::from(per_moment));
    let cut = |s: f64| {
        (2.0 * s.abs() < length).then(|| {
            let wetted = 0.5 * length + s;
            let y = wetted * f64::from(sine);
            let first = 0.5 * width * wetted * wetted;
            [y as f32, (width * wetted) as f32, first as f32]
        })
    };
    let pattern = BoltPattern {
        count,
        per_moment: [-per_moment, per_moment],
        cuts: [cut(zero_s), cut(-zero_s)],
    };
    let cover = Cover::new(&pattern.cover(&shape), &Face::of(&shape, 0.0));
    plane(shape, bottom_m, sine, Some(cover))
}

/// The count (in sixteenths) that a value stands for.
pub(crate) fn count_of(plan: &Plan, value: f64) -> i32 {
    let level = &plan.level;
    let counts = (value - f64::from(level.value_at_zero)) / f64::from(level.value_per_count_16);
    level.zero_count_16 + counts.round() as i32
}

/// A sample with a good reading of this value.
pub(crate) fn reads(plan: &Plan, tick_ms: u64, value: f64) -> Sample {
    Sample { tick_ms, level: Channel::good(count_of(plan, value)), ..Sample::default() }
}

/// A valid reading with its bounds, in the sensor's quantity, and the plan's own liquid.
pub(crate) fn reading(plan: &Plan, estimate: f32, low: f32, high: f32) -> Resolved {
    Resolved {
        class: ReadingClass::Valid,
        estimate,
        low,
        high,
        density: plan.liquid.any_product(),
        fault: None::<FaultCause>,
    }
}

/// Adds an upright obround of 0.6 by 1.0 m with a triangle of 0.3 m under it to the plan: every
/// kind of piece.
pub(crate) fn push_pieces(plan: &mut Plan, bottom_m: f32, sine: f32) {
    let first = u16::try_from(plan.numbers.len()).unwrap();
    let pieces = [[0.0, 0.3, 0.0, 2.0], [0.6, 0.4, 0.6, 0.0], [0.3, 0.3, 1.0, 0.4]];
    plan.numbers.extend_from_slice(pieces.as_flattened()).unwrap();
    let bare = Pieces::new([0.0, 1.3, 0.0], sine, first, [2, 1]);
    let [area_m2, first_m3] = bare.moments(&plan.numbers);
    let shape = Shape::Pieces(Pieces::new([area_m2, 1.3, first_m3 / area_m2], sine, first, [2, 1]));
    plan.parts.push(plane(shape, bottom_m, sine, None)).unwrap();
}

/// An ellipse without bolts.
pub(crate) fn ellipse(bottom_m: f32, radius_m: f32, aspect: f32, sine: f32) -> Part {
    plane(Shape::Circle(Circle::ellipse(radius_m, aspect, sine)), bottom_m, sine, None)
}

/// Adds a part of rows of every kind, or a shell with two places, to the plan.
pub(crate) fn push_curved(plan: &mut Plan, bottom_m: f32, shell: bool) {
    let first = u16::try_from(plan.numbers.len()).unwrap();
    let even = [0.0, 1.5, -2.0, 0.5, 0.1];
    let root = [0.0, 0.5, 1.0, 0.5, 0.0];
    let down = [1.5, -0.5, -1.0, 0.2, 0.0];
    let disc = [0.25, 0.5, 1.0, 0.0, 0.0];
    let cone = [0.0, 1.5, 0.0, -4.0, 0.0];
    let (rows, places): (Vec<[f32; 5], 4>, u8) = if shell {
        plan.numbers.extend_from_slice(&cone).unwrap();
        plan.numbers.extend_from_slice(&[0.75, -0.3, 0.9, 0.0, 1.5, -0.15, 1.8, -0.05]).unwrap();
        (Vec::new(), 2)
    } else {
        (Vec::from_iter([disc, even, root, down]), 0)
    };
    plan.numbers.extend_from_slice(rows.as_flattened()).unwrap();
    let rows = if shell { [[0; 3], [1, 0, 0]] } else { [[0, 0, 1], [1, 2, 0]] };
    let curved = Curved { first, rows, places, apex_up: false };
    plan.parts.push(part(Geometry::Curved(curved), bottom_m, 1.5)).unwrap();
}

/// Adds a rectangular panel whose plate is judged at two points, one with a weighting that turns
/// its sign.
pub(crate) fn push_plate(plan: &mut Plan, bottom_m: f32, length_m: f32, sine: f32) {
    let first = u16::try_from(plan.numbers.len()).unwrap();
    let rise_m = length_m * sine;
    let nodes = [[0.0, 0.01], [0.3, 0.2], [1.0, 0.0], [0.0, 0.0], [0.4, -0.02], [0.5, 0.0]];
    let above = [[1.0, 0.3]];
    for [share, w] in nodes.into_iter().chain(above) {
        plan.numbers.extend_from_slice(&[share * rise_m, w]).unwrap();
    }
    let held = Held::Plate(Nodes { count: 7, first });
    let mut judged = rectangle(bottom_m, 1.5, length_m, sine);
    let Geometry::Plane { shape, cover, .. } = &mut judged.geometry else { unreachable!() };
    let face = Face { shape, numbers: &plan.numbers, bottom_m: 0.0 };
    *cover = Some(Cover::new(&CoverNumbers { held, ..CoverNumbers::default() }, &face));
    judged.outward.moment_n_m = Stated::new(1e3);
    plan.parts.push(judged).unwrap();
}
