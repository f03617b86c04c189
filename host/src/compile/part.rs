//! Parts: geometry, and in each direction the smallest of equal capacities.

use super::bending::{Inward, Judged, Plates};
use super::curved::{self, MESH_ERROR_MAX, PLACES, Table};
use super::faults::Faults;
use super::number::{located, single};
use super::shape::{Numbers, plane_shape};
use super::site::HEIGHTS_M;
use super::{cover, cover_rule};
use crate::tank::{
    self, Capacity, Code, Course, Hatch, Located, Part as Stated, Plane, Rating, Secured, Surface,
    TankFile, Vessel,
};
use crate::units::Quantity::Length;
use heapless::Vec;
use strake_core::part::plate::Nodes;
use strake_core::part::{
    Capacities, Cover, CoverNumbers, DESIGN_STATES_MAX, DesignState, Geometry, Held, Part,
};
use strake_core::plan::NUMBERS_MAX;
use strake_core::shape::{Face, Shape};

/// Largest share of its area with which a mesh may be pressed across and be judged by its force.
const SIDEWAYS_MAX: f64 = 1e-4;

/// The part as the plan holds it; `None` with a finding when it cannot.
pub(super) fn part(
    file: &TankFile,
    stated: &Stated,
    plates: &Plates,
    numbers: &mut Vec<f32, NUMBERS_MAX>,
    faults: &mut Faults,
) -> Option<Part> {
    let heights = stated.heights();
    let top = Located::new(heights.top_m, stated.placed_at());
    faults.within(top, HEIGHTS_M, Length, "the top of the part");
    let mut list = Numbers { list: numbers };
    let geometry = match stated {
        Stated::Course(course) => Some(self::course(file, course, faults)?),
        Stated::Panel(panel) => {
            let shape = plane_shape(&panel.plane, &mut list);
            shape.and_then(|shape| bent(&panel.plane, shape, plates.outward.as_ref(), &mut list))
        }
        Stated::Hatch(hatch) => plane(hatch, file, &mut list),
        Stated::Curved(part) => {
            let table = table(&part.surface);
            within_table(part, &table, faults)?;
            table.curved(&mut list).map(Geometry::Curved)
        }
    };
    let Some(geometry) = geometry else {
        faults.too_many(stated.located_name().span, "numbers of all shapes", NUMBERS_MAX);
        return None;
    };
    let mut part = Part {
        geometry,
        bottom_m: single(heights.bottom_m),
        top_m: single(heights.top_m),
        outward: with_plates(plates.outward.as_ref(), capacities(stated, true)),
        inward: with_inward(plates.inward, capacities(stated, false)),
        designed_for: Vec::new(),
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

fn plane(hatch: &Hatch, file: &TankFile, numbers: &mut Numbers<'_>) -> Option<Geometry> {
    let shape = plane_shape(&hatch.sealed, numbers)?;
    let face = Face { shape: &shape, numbers: numbers.list, bottom_m: 0.0 };
    let cover = Cover::new(&cover::numbers(hatch, file.gravity.m_s2(), &shape), &face);
    Some(Geometry::plane(shape, single(hatch.sealed.sine()), Some(cover)))
}

/// Share that the core's arithmetic may lose of a load, with a factor of five.
const ROUNDING: f64 = 1e-5;

/// A panel with the tables of its plates.
fn bent(
    plane: &Plane,
    shape: Shape,
    plate: Option<&Judged>,
    numbers: &mut Numbers<'_>,
) -> Option<Geometry> {
    let mut cover = None;
    if let Some(Judged::Moments { tables, .. }) = plate {
        let first = u16::try_from(numbers.list.len()).ok()?;
        for nodes in &tables.points {
            numbers.list.extend_from_slice(nodes.as_flattened()).ok()?;
        }
        let count = u8::try_from(tables.nodes()).ok()?;
        let held = Held::Plate(Nodes { count, first });
        let face = Face { shape: &shape, numbers: numbers.list, bottom_m: 0.0 };
        cover = Some(Cover::new(&CoverNumbers { held, ..CoverNumbers::default() }, &face));
    }
    Some(Geometry::plane(shape, single(plane.sine()), cover))
}

/// With what stands for the plates.
fn with_plates(plate: Option<&Judged>, mut capacities: Capacities) -> Capacities {
    match plate {
        None => {}
        Some(Judged::Moments { moment_n, .. }) => {
            let moment_n = moment_n * (1.0 - ROUNDING);
            capacities.moment_n_m = strake_core::part::Stated::new(single(moment_n));
        }
        Some(Judged::Level(pressure_pa) | Judged::Substitute(pressure_pa, _)) => {
            put_pressure(&mut capacities, *pressure_pa);
        }
    }
    capacities
}

/// With what stands for the inward plates.
fn with_inward(plate: Option<Inward>, mut capacities: Capacities) -> Capacities {
    if let Some(Inward::Suction(pressure_pa)) = plate {
        put_pressure(&mut capacities, pressure_pa);
    }
    capacities
}

fn put_pressure(capacities: &mut Capacities, pressure_pa: f64) {
    let pressure_pa = single(pressure_pa * (1.0 - ROUNDING));
    let least = capacities.pressure_pa.filter(|stated_pa| stated_pa.get() < pressure_pa);
    capacities.pressure_pa = least.or_else(|| strake_core::part::Stated::new(pressure_pa));
}

/// The part without what stands for its plates, for the desk, which has their moments.
pub(crate) fn without_plates(stated: &Stated, part: &Part) -> Part {
    let [outward, inward] = [true, false].map(|outward| capacities(stated, outward));
    Part { outward, inward, ..part.clone() }
}

/// What a table of a mesh cannot hold.
fn within_table(part: &tank::Curved, table: &Table, faults: &mut Faults) -> Option<()> {
    let Surface::Mesh(mesh) = &part.surface else { return Some(()) };
    let name = &part.name.value;
    if table.error > MESH_ERROR_MAX {
        let message = format!(
            "the mesh of `{name}` turns too often: its table is off by {:.2} %, the limit is {} %",
            100.0 * table.error,
            100.0 * MESH_ERROR_MAX
        );
        let hint = "smooth or coarsen the mesh, or cut it into parts of less height";
        faults.report(Code::Mesh, part.placed_at, message, hint);
        return None;
    }
    let force =
        part.capacity.iter().find(|one| matches!(one.capacity.value, Capacity::Force { .. }));
    let sideways = curved::sideways(mesh);
    if let Some(rating) = force
        && sideways > SIDEWAYS_MAX
    {
        let message = format!(
            "`{name}` is pressed along its y axis too, with {:.2} % of its area: the device judges \
             x and z",
            100.0 * sideways
        );
        let hint = "turn the mesh so that its horizontal force lies along x, or give a pressure";
        faults.report(Code::CapacityKind, rating.capacity.span, message, hint);
        return None;
    }
    Some(())
}

/// A curved surface as a table.
#[must_use]
pub fn table(surface: &Surface) -> Table {
    match *surface {
        Surface::Arc { radius_m, length_m, from_deg, to_deg, inside } => {
            curved::arc(radius_m, length_m, from_deg, to_deg, inside)
        }
        Surface::Dome { radius_m, inside } => curved::dome(radius_m, inside),
        Surface::Revolved { profile, base_radius_m, height_m, apex_up } => {
            curved::revolved(profile, base_radius_m, height_m, apex_up)
        }
        Surface::Mesh(ref mesh) => curved::mesh(mesh),
    }
}

/// The smallest of each kind in one direction.
fn capacities(stated: &Stated, outward: bool) -> Capacities {
    let ratings = if outward { stated.capacity() } else { stated.capacity_inward() };
    let smallest = |pick: &dyn Fn(&Rating) -> Option<f64>| {
        let values = ratings.iter().filter_map(pick);
        values.min_by(f64::total_cmp).map(single).and_then(strake_core::part::Stated::new)
    };
    Capacities {
        pressure_pa: smallest(&|rating| match &rating.capacity.value {
            Capacity::Pressure { pa } => Some(*pa),
            Capacity::Cover(plate) => match stated {
                Stated::Hatch(hatch) => cover_rule::pressure_pa(plate, rating, hatch, outward).ok(),
                _ => None,
            },
            _ => None,
        }),
        hoop_tension_n_m: smallest(&|rating| match rating.capacity.value {
            // What is missed between two places is taken off here.
            Capacity::Tension { n_m } | Capacity::Compression { n_m } => {
                Some(n_m * (1.0 - f64::from(PLACES).powi(-2)))
            }
            _ => rating.capacity.value.hoop_tension_n_m(),
        }),
        force_n: smallest(&|rating| match rating.capacity.value {
            Capacity::Force { n } => Some(n),
            _ => None,
        }),
        bolt_n: smallest(&|rating| match rating.capacity.value {
            Capacity::Bolt { n } | Capacity::Hinge { n } => Some(n),
            _ => None,
        }),
        moment_n_m: smallest(&|rating| match rating.capacity.value {
            Capacity::Moment { n_m } => Some(n_m),
            Capacity::Latch { n } => latch_moment_n_m(stated, n),
            _ => None,
        }),
    }
}

/// Moment about the hinge at which the latch that carries most carries `n`.
fn latch_moment_n_m(stated: &Stated, n: f64) -> Option<f64> {
    let Stated::Hatch(hatch) = stated else { return None };
    let Some(Secured::Hinged(hinged)) = hatch.secured.as_ref().map(|secured| &secured.value) else {
        return None;
    };
    cover::latch_per_moment(hinged, hatch.sealed.sine()).map(|per_moment| n / per_moment)
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
pub(super) fn outside_mask(file: &TankFile, name: &str) -> u8 {
    let touching = file.outside.iter().map(|outside| u8::from(outside.touches(name)));
    touching.rev().fold(0, |mask, bit| mask << 1 | bit)
}
