//! Parts: geometry, and in each direction the smallest of equal capacities.

use super::bolts;
use super::faults::Faults;
use super::number::{located, single};
use super::site::HEIGHTS_M;
use crate::tank::{
    Capacity, Code, Course, Hatch, Located, Part as Stated, Plane, Rating, Shape as Outline,
    TankFile, Vessel,
};
use crate::units::Quantity::Length;
use strake_core::part::{Bolts, Capacities, DESIGN_STATES_MAX, DesignState, Geometry, Part};
use strake_core::shape::{Circle, Face, Rectangle, Shape};

/// The part as the plan holds it; `None` with a finding when it cannot.
pub(super) fn part(file: &TankFile, stated: &Stated, faults: &mut Faults) -> Option<Part> {
    let heights = stated.heights();
    let top = Located::new(heights.top_m, stated.placed_at());
    faults.within(top, HEIGHTS_M, Length, "the top of the part");
    let geometry = match stated {
        Stated::Course(course) => self::course(file, course, faults)?,
        Stated::Panel(panel) => plane(&panel.plane, None),
        Stated::Hatch(hatch) => plane(&hatch.sealed, Some(hatch)),
    };
    let mut part = Part {
        geometry,
        bottom_m: single(heights.bottom_m),
        top_m: single(heights.top_m),
        outward: capacities(stated.capacity()),
        inward: capacities(stated.capacity_inward()),
        designed_for: heapless::Vec::new(),
        outside: outside_mask(file, stated.name()),
    };
    for rating in stated.capacity() {
        let Some(state) = design_state(file, &rating.capacity.value) else { continue };
        if part.designed_for.push(state).is_err() {
            faults.too_many(rating.capacity.span, "design states of a part", DESIGN_STATES_MAX);
        }
    }
    Some(part)
}

fn course(file: &TankFile, course: &Course, faults: &mut Faults) -> Option<Geometry> {
    let Vessel::Cylinder { diameter_m, .. } = &file.vessel else {
        // The tank room reports a course without a cylinder; this keeps the promise if it changes.
        let message = format!("course `{}` needs a cylinder", course.name.value);
        let hint = "write cylinder = { diameter, height } in [tank]";
        faults.report(Code::VesselKind, course.name.span, message, hint);
        return None;
    };
    Some(Geometry::Course {
        half_diameter_m: single(0.5 * diameter_m.value),
        design_point_m: single(course.design_height_m()),
        height_m: located(course.height_m),
    })
}

fn plane(plane: &Plane, hatch: Option<&Hatch>) -> Geometry {
    let sine = plane.sine();
    let shape = if plane.is_level() {
        Shape::Level { area_m2: single(plane.shape.area_m2()) }
    } else {
        match plane.shape {
            Outline::Circle { diameter_m } => {
                Shape::Circle(Circle::new(single(0.5 * diameter_m), single(sine)))
            }
            Outline::Rectangle { width_m, length_m } => {
                let (width, length) = (single(width_m), single(length_m));
                Shape::Rectangle(Rectangle::new(width, length, single(sine)))
            }
        }
    };
    let face = Face::of(&shape, 0.0);
    let bolts = hatch
        .and_then(|hatch| hatch.bolts)
        .map(|stated| Bolts::new(&bolts::pattern(&stated.value, &plane.shape, sine), &face));
    Geometry::plane(shape, single(sine), bolts)
}

/// The smallest of each kind.
fn capacities(ratings: &[Rating]) -> Capacities {
    let smallest = |pick: fn(&Capacity) -> Option<f64>| {
        let values = ratings.iter().filter_map(|rating| pick(&rating.capacity.value));
        values.min_by(f64::total_cmp).map(single)
    };
    Capacities {
        pressure_pa: smallest(|capacity| match *capacity {
            Capacity::Pressure { pa } => Some(pa),
            _ => None,
        }),
        hoop_tension_n_m: smallest(Capacity::hoop_tension_n_m),
        force_n: smallest(|capacity| match *capacity {
            Capacity::Force { n } => Some(n),
            _ => None,
        }),
        bolt_n: smallest(|capacity| match *capacity {
            Capacity::Bolt { n } => Some(n),
            _ => None,
        }),
    }
}

/// A design state with its share of strength that remains; "as new" where the file states none.
fn design_state(file: &TankFile, capacity: &Capacity) -> Option<DesignState> {
    let Capacity::DesignedFor { level_m, density_kg_m3, gas_pa, remaining } = capacity else {
        return None;
    };
    let share = remaining.map_or(1.0, |remaining| remaining.value);
    Some(DesignState {
        level_m: located(*level_m),
        weight_n_m3: single(density_kg_m3.value * file.gravity.m_s2() * share),
        gas_pa: single(gas_pa.value * share),
    })
}

/// Bit `i`: the file's outside liquid `i` touches the part.
fn outside_mask(file: &TankFile, name: &str) -> u8 {
    let touching = file.outside.iter().map(|outside| u8::from(outside.touches(name)));
    touching.rev().fold(0, |mask, bit| mask << 1 | bit)
}
