//! The plate of a panel.

use super::field::{Range, field};
use super::section::Section;
use crate::plate::Edges;
use crate::tank::finding::Code;
use crate::tank::model::PanelPlate;
use crate::units::Quantity::{Length, Pressure};

const EDGES: [(&str, Edges); 3] =
    [("clamped", Edges::Clamped), ("supported", Edges::Supported), ("top free", Edges::TopFree)];

/// `plate = { thickness, allowable_stress, edges }` of a panel.
pub(super) fn panel(entry: &mut Section<'_>) -> Option<PanelPlate> {
    let mut plate = entry.table("plate", "{ thickness = \"12 mm\", .. }")?;
    let thickness = plate.need(field(
        "thickness",
        Length,
        Range::above(0.0, 0.2),
        "\"12 mm\", as measured or drawn",
    ));
    let allowance_stated = plate.item("corrosion_allowance").is_some();
    let allowance = plate.take(field(
        "corrosion_allowance",
        Length,
        Range::NOT_NEGATIVE,
        "\"1 mm\", kept for corrosion",
    ));
    let stress = plate.need(field(
        "allowable_stress",
        Pressure,
        Range::POSITIVE,
        "\"160 MPa\", in bending, by the design code",
    ));
    let edges = plate.need_choice(
        "edges",
        &EDGES,
        "\"clamped\", \"supported\" or \"top free\" (base and sides clamped)",
    );
    let modulus = plate.take(field(
        "elastic_modulus",
        Pressure,
        Range::above(1e8, 1e12),
        "\"200 GPa\", that of the material",
    ));
    let poisson_stated = plate.item("poisson_ratio").is_some();
    let poisson =
        plate.take_ratio("poisson_ratio", Range::between(0.0, 0.5), "0.3, that of the material");
    plate.finish();
    let thickness_m = thickness?;
    if let Some(allowance) = allowance.filter(|one| one.value >= thickness_m.value) {
        let message = "`corrosion_allowance` takes the whole thickness, nothing is left to carry";
        let hint = "give the thickness as measured, and the allowance that is kept of it";
        entry.report(Code::NoStrength, allowance.span, message, hint);
        return None;
    }
    if (allowance_stated && allowance.is_none()) || (poisson_stated && poisson.is_none()) {
        return None;
    }
    Some(PanelPlate {
        thickness_m,
        corrosion_allowance_m: allowance,
        allowable_stress_pa: stress?,
        edges: edges?,
        elastic_modulus_pa: modulus,
        poisson_ratio: poisson,
    })
}
