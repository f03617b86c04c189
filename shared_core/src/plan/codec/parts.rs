//! The bytes of one part.
//!
//! | field | bytes |
//! | --- | --- |
//! | kind u8: 0 course, 1 disc, 2 rectangle, 3 level shape, 4 ellipse, 5 pieces, 6 curved | 1 |
//! | bottom, top f32; outside mask u8 | 9 |
//! | course: half diameter, design point, height f32 | 12 |
//! | disc: radius, sine; rectangle: width, length, sine; level: area; f32 | 4 to 12 |
//! | ellipse: half length up the slope, width over length, sine f32 | 12 |
//! | pieces: area, length, centroid, sine f32; strips, discs u8; 4 f32 each | 18 + 16 n |
//! | curved: six counts of rows u8, places u8, apex up u8, see [`take_curved`] | 8 |
//! | and 5 f32 a row, 4 f32 a place | 20 n + 16 m |
//! | plane parts: cover u16, see [`put_cover`] | 2 to 58 |
//! | capacities outward, then inward: mask u8, f32 for each set bit | |
//! | design states u8, 3 f32 each | |

use super::reader::Reader;
use super::{PlanError, count, flag, take_list};
use crate::cursor::Sink;
use crate::part::plate::{NODE_NUMBERS, Nodes};
use crate::part::{
    BoltPattern, Capacities, Cover, CoverNumbers, Curved, DesignState, Geometry, Held, Part,
    Stated, WeightingNumbers,
};
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
        Geometry::Curved(_) => 6,
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
        Geometry::Plane { shape, sine, cover, .. } => {
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
            put_cover(sink, cover.as_ref(), shape, numbers);
        }
        Geometry::Curved(curved) => {
            curved.rows.as_flattened().iter().for_each(|&count| sink.u8(count));
            sink.u8(curved.places);
            sink.u8(u8::from(curved.apex_up));
            curved.numbers(numbers).iter().for_each(|&one| sink.f32(one));
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

fn take_pieces(source: &mut Reader<'_>, numbers: &mut Numbers) -> Option<(Shape, f32)> {
    let sizes = [source.f32(), source.f32(), source.f32()];
    let sine = source.f32();
    let counts = [source.u8(), source.u8()];
    let first = u16::try_from(numbers.len()).ok()?;
    let pieces = Pieces::new(sizes, sine, first, counts);
    take_own(source, numbers, pieces.count())?;
    Some((Shape::Pieces(pieces), sine))
}

fn take_own(source: &mut Reader<'_>, numbers: &mut Numbers, count: usize) -> Option<()> {
    for _ in 0..count {
        numbers.push(source.f32()).ok()?;
    }
    Some(())
}

/// Even, root and disc rows of the force along angle 0, then of that upwards; then the numbers of
/// all rows, and of the places.
fn take_curved(source: &mut Reader<'_>, numbers: &mut Numbers) -> Option<Geometry> {
    let first = u16::try_from(numbers.len()).ok()?;
    let mut rows = [[0; 3]; 2];
    source.fill(rows.as_flattened_mut());
    let curved = Curved { first, rows, places: source.u8(), apex_up: flag(source)? };
    take_own(source, numbers, curved.count())?;
    Some(Geometry::Curved(curved))
}

pub(super) fn take(source: &mut Reader<'_>, numbers: &mut Numbers) -> Option<Part> {
    let kind = source.u8();
    let bottom_m = source.f32();
    let top_m = source.f32();
    let outside = source.u8();
    let geometry = take_geometry(source, kind, numbers)?;
    let outward = take_capacities(source)?;
    let inward = take_capacities(source)?;
    let designed_for = take_list(source, |source| {
        Some(DesignState { level_m: source.f32(), weight_n_m3: source.f32(), gas_pa: source.f32() })
    })?;
    Some(Part { geometry, bottom_m, top_m, outward, inward, designed_for, outside })
}

fn take_geometry(source: &mut Reader<'_>, kind: u8, numbers: &mut Numbers) -> Option<Geometry> {
    let (shape, sine) = match kind {
        0 => {
            return Some(Geometry::Course {
                half_diameter_m: source.f32(),
                design_point_m: source.f32(),
                height_m: source.f32(),
            });
        }
        1 => {
            let (radius_m, sine) = (source.f32(), source.f32());
            (Shape::Circle(Circle::new(radius_m, sine)), sine)
        }
        2 => {
            let (width_m, length_m, sine) = (source.f32(), source.f32(), source.f32());
            (Shape::Rectangle(Rectangle::new(width_m, length_m, sine)), sine)
        }
        3 => (Shape::Level { area_m2: source.f32() }, 0.0),
        4 => {
            let (half_m, aspect, sine) = (source.f32(), source.f32(), source.f32());
            (Shape::Circle(Circle::ellipse(half_m, aspect, sine)), sine)
        }
        5 => take_pieces(source, numbers)?,
        6 => return take_curved(source, numbers),
        _ => return None,
    };
    let cover = take_cover(source, &shape, numbers)?;
    Some(Geometry::plane(shape, sine, cover))
}

/// Below this many bits stands what holds a cover.
const HELD: u16 = 0x1FFF;
const WEIGHT: u16 = 0x2000;
const MEASURED: u16 = 0x4000;
const SILL: u16 = 0x8000;
/// The record of two weightings; an opening of which nothing else is known.
const ANYHOW: u16 = 1;
const OTHERWISE: u16 = 2;
/// In the record of two weightings: there are none, a plate bends.
const PLATE: u16 = 2;

/// The lower 13 bits of the first word: 0 no cover, 1 two weightings anywhere, 2 an opening held
/// otherwise, 3 and more that many bolts about the centroid.
///
/// Bolts: `s / sum s²` of the lowest and the highest, their cuts. Weightings: u16 (0 a level line,
/// 1 a hinge at the side, 3 and more bolts), arm, and for each foot, slope, cut. A cut is u8 0, or
/// 1 and 3 f32. Then, where their bits are set, weight and sill. 2 in the place of a line: no
/// cover but a plate, nodes u8 and 2 f32 each.
fn put_cover(sink: &mut Sink<'_>, cover: Option<&Cover>, shape: &Shape, numbers: &[f32]) {
    let Some(cover) = cover.map(Cover::numbers) else {
        sink.u16(0);
        return;
    };
    let bit = |holds: bool, bit: u16| if holds { bit } else { 0 };
    let flags = bit(cover.weight_n != 0.0, WEIGHT)
        | bit(cover.weight_is_measured, MEASURED)
        | bit(cover.sill_above_m > 0.0, SILL);
    match (BoltPattern::of(&cover, shape), cover.held) {
        (Some(pattern), _) => {
            sink.u16(pattern.count | flags);
            pattern.per_moment.iter().for_each(|&number| sink.f32(number));
            pattern.cuts.into_iter().for_each(|cut| put_cut(sink, cut));
        }
        (None, Held::Otherwise) => sink.u16(OTHERWISE | flags),
        (None, Held::Plate(nodes)) => {
            sink.u16(ANYHOW);
            sink.u16(PLATE);
            sink.u8(nodes.count);
            nodes.of(numbers).as_flattened().iter().for_each(|&one| sink.f32(one));
        }
        (None, held) => {
            sink.u16(ANYHOW | flags);
            sink.u16(match held {
                Held::Bolts(count) => count,
                Held::Side => 1,
                Held::Line | Held::Otherwise | Held::Plate(_) => 0,
            });
            sink.f32(cover.arm_m);
            for weighting in cover.weightings {
                sink.f32(weighting.foot);
                sink.f32(weighting.slope);
                put_cut(sink, weighting.cut);
            }
        }
    }
    if flags & WEIGHT != 0 {
        sink.f32(cover.weight_n);
    }
    if flags & SILL != 0 {
        sink.f32(cover.sill_above_m);
    }
}

fn put_cut(sink: &mut Sink<'_>, cut: Option<[f32; 3]>) {
    sink.u8(u8::from(cut.is_some()));
    cut.iter().flatten().for_each(|&number| sink.f32(number));
}

#[expect(clippy::option_option, reason = "outer: bytes ran out; inner: no cover")]
fn take_cover(
    source: &mut Reader<'_>,
    shape: &Shape,
    numbers: &mut Numbers,
) -> Option<Option<Cover>> {
    let word = source.u16();
    let mut cover = match word & HELD {
        0 if word == 0 => return Some(None),
        0 => return None,
        ANYHOW => match source.u16() {
            PLATE if word == ANYHOW => {
                let first = u16::try_from(numbers.len()).ok()?;
                let count = source.u8();
                take_own(source, numbers, NODE_NUMBERS * usize::from(count))?;
                let held = Held::Plate(Nodes { count, first });
                CoverNumbers { held, ..CoverNumbers::default() }
            }
            PLATE => return None,
            line => {
                let held = match line {
                    0 => Held::Line,
                    1 => Held::Side,
                    count => Held::Bolts(count),
                };
                let arm_m = source.f32();
                let weightings = [take_weighting(source)?, take_weighting(source)?];
                CoverNumbers { held, arm_m, weightings, ..CoverNumbers::default() }
            }
        },
        OTHERWISE => CoverNumbers::default(),
        count => {
            let per_moment = [source.f32(), source.f32()];
            let cuts = [take_cut(source)?, take_cut(source)?];
            BoltPattern { count, per_moment, cuts }.cover(shape)
        }
    };
    if word & WEIGHT != 0 {
        cover.weight_n = source.f32();
    }
    cover.weight_is_measured = word & MEASURED != 0;
    if word & SILL != 0 {
        cover.sill_above_m = source.f32();
    }
    let face = Face { shape, numbers, bottom_m: 0.0 };
    Some(Some(Cover::new(&cover, &face)))
}

fn take_weighting(source: &mut Reader<'_>) -> Option<WeightingNumbers> {
    let mut straight = [0.0; 2];
    take_numbers(source, &mut straight);
    let [foot, slope] = straight;
    Some(WeightingNumbers { foot, slope, cut: take_cut(source)? })
}

#[expect(clippy::option_option, reason = "outer: bytes ran out; inner: no cut")]
fn take_cut(source: &mut Reader<'_>) -> Option<Option<[f32; 3]>> {
    if !flag(source)? {
        return Some(None);
    }
    let mut cut = [0.0; 3];
    take_numbers(source, &mut cut);
    Some(Some(cut))
}

#[inline(never)]
fn take_numbers(source: &mut Reader<'_>, numbers: &mut [f32]) {
    for number in numbers {
        *number = source.f32();
    }
}

fn put_capacities(sink: &mut Sink<'_>, capacities: &Capacities) {
    let all = [
        capacities.pressure_pa,
        capacities.hoop_tension_n_m,
        capacities.force_n,
        capacities.bolt_n,
        capacities.moment_n_m,
    ];
    let mask = all.iter().rev().fold(0, |mask, one| mask << 1 | u8::from(one.is_some()));
    sink.u8(mask);
    all.iter().flatten().for_each(|capacity| sink.f32(capacity.get()));
}

fn take_capacities(source: &mut Reader<'_>) -> Option<Capacities> {
    let mask = source.u8();
    if mask > 0b1_1111 {
        return None;
    }
    let mut all = [None; 5];
    for (bit, slot) in all.iter_mut().enumerate() {
        if mask >> bit & 1 == 1 {
            *slot = Some(Stated::new(source.f32())?);
        }
    }
    let [pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m] = all;
    Some(Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m })
}
