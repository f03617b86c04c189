//! Flat outlines as the core evaluates them, worked out in f64 and rounded once.

use super::number::single;
use crate::tank::{Plane, Shape as Outline};
use heapless::Vec;
use strake_core::plan::NUMBERS_MAX;
use strake_core::shape::{Circle, PIECE_NUMBERS, Pieces, Rectangle, Shape};

/// The numbers of a plan, to which a part appends its own.
#[derive(Debug)]
pub struct Numbers<'a> {
    /// [`strake_core::plan::Plan::numbers`].
    pub list: &'a mut Vec<f32, NUMBERS_MAX>,
}

/// The shape of a flat part; `None` when the plan has no room for its numbers.
pub fn plane_shape(plane: &Plane, numbers: &mut Numbers<'_>) -> Option<Shape> {
    if plane.is_level() {
        return Some(Shape::Level { area_m2: single(plane.area_m2()) });
    }
    let sine = single(plane.sine());
    if plane.left_out().is_some() {
        return pieces(plane, sine, numbers);
    }
    Some(match plane.shape {
        Outline::Circle { diameter_m } => {
            Shape::Circle(Circle::new(single(0.5 * diameter_m), sine))
        }
        Outline::Ellipse { width_m, length_m } => {
            let (half, aspect) = (single(0.5 * length_m), single(width_m / length_m));
            Shape::Circle(Circle::ellipse(half, aspect, sine))
        }
        Outline::Rectangle { width_m, length_m } => {
            Shape::Rectangle(Rectangle::new(single(width_m), single(length_m), sine))
        }
        _ => return pieces(plane, sine, numbers),
    })
}

fn pieces(plane: &Plane, sine: f32, numbers: &mut Numbers<'_>) -> Option<Shape> {
    let made_of = plane.pieces();
    let first = u16::try_from(numbers.list.len()).ok()?;
    let strips = made_of.strips.iter();
    let strips = strips.map(|one| [one.low_m, one.length_m, one.width_m, one.growth]);
    let discs = made_of.discs.iter();
    let discs = discs.map(|one| [one.low_m, one.radius_m, one.aspect, one.middle_m]);
    for piece in strips.chain(discs) {
        let piece: [f32; PIECE_NUMBERS] = piece.map(single);
        numbers.list.extend_from_slice(&piece).ok()?;
    }
    let counts = [made_of.strips.len(), made_of.discs.len()];
    let [strips, discs] = counts.map(|count| u8::try_from(count).ok());
    let sizes = [plane.area_m2(), plane.shape.length_m(), plane.centroid_up_m()].map(single);
    Some(Shape::Pieces(Pieces::new(sizes, sine, first, [strips?, discs?])))
}
