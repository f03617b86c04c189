//! How the plate of a panel bends, in words.

use super::Sheet;
use crate::assess::document::PartRow;
use crate::page::Page;
use crate::tank::PanelPlate;
use crate::units::Quantity::{Force, Length, LineLoad, Pressure};
use crate::units::UnitSystem;

/// Pound-force, exact (NIST SP 811).
const LBF_N: f64 = 4.448_221_615_260_5;

/// The capacity beside its load.
pub(super) fn capacity(sheet: &Sheet<'_>, plate: &PanelPlate, basis: &str) -> String {
    let allowance = plate.corrosion_allowance_m.map_or_else(
        || "no corrosion allowance stated".to_owned(),
        |allowance| format!("less {} for corrosion", sheet.show(allowance.value, Length)),
    );
    format!(
        "{}, plate {}, {allowance}, {}, {basis}",
        sheet.show(plate.allowable_stress_pa.value, Pressure),
        sheet.show(plate.thickness_m.value, Length),
        plate.edges.value.as_str(),
    )
}

/// Where it bends most, how far it sags, and what the method is good for.
pub(super) fn lines(sheet: &Sheet<'_>, page: &mut Page, row: &PartRow) {
    for plate in &row.plates {
        let Some(bent) = plate.bent else {
            let why = plate.why_not.as_deref().unwrap_or("no number");
            page.paragraph("  plate: ", &format!("not judged {}, {why}.", plate.side));
            continue;
        };
        let (moment, modulus) = match sheet.units {
            UnitSystem::Si => (
                format!("{:.1} N m/m", bent.bending_moment_n),
                format!("{} GPa", plate.elastic_modulus_pa / 1e9),
            ),
            // A moment per width is a force: 1 lbf in/in.
            UnitSystem::UsCustomary => (
                format!("{:.1} lbf in/in", bent.bending_moment_n / LBF_N),
                sheet.show(plate.elastic_modulus_pa, Pressure),
            ),
        };
        page.paragraph(
            "  plate: ",
            &format!(
                "{}, true moments by series (error {:.1e}); largest{} {moment} {}, {} up the slope \
                 and {} sideways; sags by {}, at the bound {}, with {modulus} and {}.",
                plate.edges,
                plate.series_error,
                if plate.side == "inward" { " inward" } else { "" },
                bent.bending_direction,
                sheet.show(bent.bending_at_slope_m, Length),
                sheet.show(bent.bending_at_x_m, Length),
                sheet.show(bent.deflection_m, Length),
                sheet.show(bent.deflection_bound_m, Length),
                plate.poisson_ratio,
            ),
        );
        if let Some(edges) = &plate.edges_carry {
            page.paragraph(
                "  edges: ",
                &format!(
                    "the plate presses on its base by {}, on a side by up to {}, on its top by {}; \
                     each lower corner is held down by {}, each upper one by {}.",
                    sheet.show(edges.edge_base_n_m, LineLoad),
                    sheet.show(edges.edge_side_n_m, LineLoad),
                    sheet.show(edges.edge_top_n_m, LineLoad),
                    sheet.show(edges.corner_lower_n, Force),
                    sheet.show(edges.corner_upper_n, Force),
                ),
            );
        }
    }
}
