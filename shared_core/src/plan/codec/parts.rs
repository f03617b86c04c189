//! The bytes of one part.
//!
//! | field | bytes |
//! | --- | --- |
//! | kind u8: 0 course, 1 disc, 2 rectangle, 3 level shape, 4 ellipse, 5 pieces | 1 |
//! | bottom, top f32; outside mask u8 | 9 |
//! | course: half diameter, design point, height f32 | 12 |
//! | disc: radius, sine; rectangle: width, length, sine; level: area; f32 | 4 to 12 |
//! | ellipse: half length up the slope, width over length, sine f32 | 12 |
//! | pieces: area, length, centroid, sine f32; strips, discs u8; 4 f32 each | 18 + 16 n |
//! | plane parts: bolts u16 (0 none), then 2 f32 and two cuts (u8 0 or 1, 3 f32) | 2 to 36 |
//! | capacities outward, then inward: mask u8, f32 for each set bit (pressure, hoop, force, bolt) | |
//! | design states u8, 3 f32 each | |

use super::{PlanError, count, flag, take_list};
use crate::cursor::{Fetch, Sink, Source};
use crate::part::{BoltPattern, Bolts, Capacities, DesignState, Geometry, Part};
use crate::plan::NUMBERS_MAX;
use crate::shape::{Circle, Face, Pieces, Rectangle, Shape};
use heapless::Vec;

/// The plan's numbers, to which parts append their own.
type Numbers = Vec<f32, NUMBERS_MAX>;

pub(super) fn put(sink: &mut Sink<'_>, part: &Part, numbers: &[f32]) -> Result<(), PlanError> {
    let kind = match &part.geometry {
        Geometry::Course { .. } => 0,
        Geometry::Plane { shape: Shape::Circle(circle), .. } if is_disc(circle) => 1,
        Geometry::Plane { shape: Shape::Rectangle(_), .. } => 2,
        Geometry::Plane { shape: Shape::Level { .. }, .. } => 3,
        Geometry::Plane { shape: Shape::Circle(_), .. } => 4,
        Geometry::Plane { shape: Shape::Pieces(_), .. } => 5,
    };
    sink.u8(kind);
    sink.f32(part.bottom_m);
    sink.f32(part.top_m);
    sink.u8(part.outside);
    match &part.geometry {
        Geometry::Course { half_diameter_m, design_point_m, height_m } => {
            sink.f32(*half_diameter_m);
            sink.f32(*design_point_m);
            sink.f32(*height_m);
        }
        Geometry::Plane { shape, sine, bolts, .. } => {
            match shape {
                Shape::Circle(circle) => {
                    sink.f32(circle.radius_m());
                    if kind == 4 {
                        sink.f32(circle.aspect());
                    }
                    sink.f32(*sine);
                }
                Shape::Rectangle(rectangle) => {
                    rectangle.sides_m().iter().for_each(|&side| sink.f32(side));
                    sink.f32(*sine);
                }
                Shape::Level { area_m2 } => sink.f32(*area_m2),
                Shape::Pieces(pieces) => put_pieces(sink, pieces, numbers),
            }
            put_bolts(sink, bolts.as_ref());
        }
    }
    put_capacities(sink, &part.outward);
    put_capacities(sink, &part.inward);
    sink.u8(count(part.designed_for.len())?);
    for state in &part.designed_for {
        sink.f32(state.level_m);
        sink.f32(state.weight_n_m3);
        sink.f32(state.gas_pa);
    }
    Ok(())
}

/// A ratio that is not a number makes no disc.
fn is_disc(circle: &Circle) -> bool {
    (circle.aspect() - 1.0).abs() <= 0.0
}

fn put_pieces(sink: &mut Sink<'_>, pieces: &Pieces, numbers: &[f32]) {
    for number in [pieces.area_m2, pieces.length_m, pieces.centroid_m, pieces.sine] {
        sink.f32(number);
    }
    sink.u8(pieces.strips);
    sink.u8(pieces.discs);
    pieces.pieces(numbers).iter().copied().flatten().flatten().for_each(|&one| sink.f32(one));
}

fn take_pieces<F: Fetch>(source: &mut Source<F>, numbers: &mut Numbers) -> Option<(Shape, f32)> {
    let sizes = [source.f32()?, source.f32()?, source.f32()?];
    let sine = source.f32()?;
    let counts = [source.u8()?, source.u8()?];
    let first = u16::try_from(numbers.len()).ok()?;
    let pieces = Pieces::new(sizes, sine, first, counts);
    for _ in 0..pieces.count() {
        numbers.push(source.f32()?).ok()?;
    }
    Some((Shape::Pieces(pieces), sine))
}

pub(super) fn take<F: Fetch>(source: &mut Source<F>, numbers: &mut Numbers) -> Option<Part> {
    let kind = source.u8()?;
    let bottom_m = source.f32()?;
    let top_m = source.f32()?;
    let outside = source.u8()?;
    let geometry = take_geometry(source, kind, numbers)?;
    let outward = take_capacities(source)?;
    let inward = take_capacities(source)?;
    let designed_for = take_list(source, |source| {
        Some(DesignState {
            level_m: source.f32()?,
            weight_n_m3: source.f32()?,
            gas_pa: source.f32()?,
        })
    })?;
    Some(Part { geometry, bottom_m, top_m, outward, inward, designed_for, outside })
}

fn take_geometry<F: Fetch>(
    source: &mut Source<F>,
    kind: u8,
    numbers: &mut Numbers,
) -> Option<Geometry> {
    let (shape, sine) = match kind {
        0 => {
            return Some(Geometry::Course {
                half_diameter_m: source.f32()?,
                design_point_m: source.f32()?,
                height_m: source.f32()?,
            });
        }
        1 => {
            let (radius_m, sine) = (source.f32()?, source.f32()?);
            (Shape::Circle(Circle::new(radius_m, sine)), sine)
        }
        2 => {
            let (width_m, length_m, sine) = (source.f32()?, source.f32()?, source.f32()?);
            (Shape::Rectangle(Rectangle::new(width_m, length_m, sine)), sine)
        }
        3 => (Shape::Level { area_m2: source.f32()? }, 0.0),
        4 => {
            let (half_m, aspect, sine) = (source.f32()?, source.f32()?, source.f32()?);
            (Shape::Circle(Circle::ellipse(half_m, aspect, sine)), sine)
        }
        5 => take_pieces(source, numbers)?,
        _ => return None,
    };
    let face = Face { shape: &shape, numbers, bottom_m: 0.0 };
    let bolts = take_bolts(source)?.map(|pattern| Bolts::new(&pattern, &face));
    Some(Geometry::plane(shape, sine, bolts))
}

fn put_bolts(sink: &mut Sink<'_>, bolts: Option<&Bolts>) {
    let Some(pattern) = bolts.map(Bolts::pattern) else {
        sink.u16(0);
        return;
    };
    sink.u16(pattern.count);
    pattern.per_moment.iter().for_each(|&number| sink.f32(number));
    for cut in pattern.cuts {
        sink.u8(u8::from(cut.is_some()));
        cut.iter().flatten().for_each(|&number| sink.f32(number));
    }
}

#[expect(clippy::option_option, reason = "outer: bytes ran out; inner: no bolts")]
fn take_bolts<F: Fetch>(source: &mut Source<F>) -> Option<Option<BoltPattern>> {
    let count = source.u16()?;
    if count == 0 {
        return Some(None);
    }
    let per_moment = [source.f32()?, source.f32()?];
    let mut cuts = [None; 2];
    for cut in &mut cuts {
        if flag(source)? {
            *cut = Some([source.f32()?, source.f32()?, source.f32()?]);
        }
    }
    Some(Some(BoltPattern { count, per_moment, cuts }))
}

fn put_capacities(sink: &mut Sink<'_>, capacities: &Capacities) {
    let all = [
        capacities.pressure_pa,
        capacities.hoop_tension_n_m,
        capacities.force_n,
        capacities.bolt_n,
    ];
    let mask = all.iter().rev().fold(0, |mask, one| mask << 1 | u8::from(one.is_some()));
    sink.u8(mask);
    all.iter().flatten().for_each(|&capacity| sink.f32(capacity));
}

fn take_capacities<F: Fetch>(source: &mut Source<F>) -> Option<Capacities> {
    let mask = source.u8()?;
    if mask > 0b1111 {
        return None;
    }
    let mut all = [None; 4];
    for (bit, slot) in all.iter_mut().enumerate() {
        if mask >> bit & 1 == 1 {
            *slot = Some(source.f32()?);
        }
    }
    let [pressure_pa, hoop_tension_n_m, force_n, bolt_n] = all;
    Some(Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n })
}
