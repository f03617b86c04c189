//! The plate of a panel.

use super::field::{Range, field};
use super::section::Section;
use super::wall::{Asked, Wall, wall};
use crate::plate::Edges;
use crate::tank::model::PanelPlate;
use crate::units::Quantity::Pressure;

const EDGES: [(&str, Edges); 3] =
    [("clamped", Edges::Clamped), ("supported", Edges::Supported), ("top free", Edges::TopFree)];

/// `plate = { thickness, allowable_stress, edges }` of a panel.
pub(super) fn panel(entry: &mut Section<'_>) -> Option<PanelPlate> {
    let mut plate = entry.table("plate", "{ thickness = \"12 mm\", .. }")?;
    let asked = Asked {
        thickness: ("\"12 mm\", as measured or drawn", 0.2),
        allowance_needed: false,
        stress: "\"160 MPa\", in bending, by the design code",
    };
    let wall = wall(&mut plate, &asked);
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
    if poisson_stated && poisson.is_none() {
        return None;
    }
    let Wall { thickness_m, allowance_m, stress_pa } = wall?;
    Some(PanelPlate {
        thickness_m,
        corrosion_allowance_m: allowance_m,
        allowable_stress_pa: stress_pa,
        edges: edges?,
        elastic_modulus_pa: modulus,
        poisson_ratio: poisson,
    })
}
