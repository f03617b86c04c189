//! What every plate has: thickness, corrosion allowance, allowable stress.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::units::Quantity::{Length, Pressure};

/// A plate of which something is left to carry.
pub(super) struct Wall {
    pub(super) thickness_m: Located<f64>,
    pub(super) allowance_m: Option<Located<f64>>,
    pub(super) stress_pa: Located<f64>,
}

/// How one kind of plate asks for it.
pub(super) struct Asked {
    /// What to write for the thickness, and the largest one that is no slip of a unit, m.
    pub(super) thickness: (&'static str, f64),
    /// Whether the allowance must stand.
    pub(super) allowance_needed: bool,
    /// What to write for the stress.
    pub(super) stress: &'static str,
}

/// Reads it; the caller asks for the other keys as well before it gives up.
pub(super) fn wall(plate: &mut Section<'_>, asked: &Asked) -> Option<Wall> {
    let (write, thickest_m) = asked.thickness;
    let thickness = plate.need(field("thickness", Length, Range::above(0.0, thickest_m), write));
    let stated = plate.item("corrosion_allowance").is_some();
    let write = if asked.allowance_needed {
        "\"1 mm\", kept for corrosion; \"0 mm\" when none is"
    } else {
        "\"1 mm\", kept for corrosion"
    };
    let allowance = field("corrosion_allowance", Length, Range::NOT_NEGATIVE, write);
    let allowance_m =
        if asked.allowance_needed { plate.need(allowance) } else { plate.take(allowance) };
    let stress = plate.need(field("allowable_stress", Pressure, Range::POSITIVE, asked.stress));
    let thickness_m = thickness?;
    if let Some(allowance) = allowance_m.filter(|one| one.value >= thickness_m.value) {
        let message = "`corrosion_allowance` takes the whole thickness, nothing is left to carry";
        let hint = "give the thickness as measured, and the allowance that is kept of it";
        plate.report(Code::NoStrength, allowance.span, message, hint);
        return None;
    }
    if (stated || asked.allowance_needed) && allowance_m.is_none() {
        return None;
    }
    Some(Wall { thickness_m, allowance_m, stress_pa: stress? })
}
