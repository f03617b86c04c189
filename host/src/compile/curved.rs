//! Curved surfaces as tables of rows, worked out in f64 and rounded once.
//!
//! The force along x and that upwards are functionals of the pressure with the weightings
//! `dA_x/dz` and `dA_z/dz` of the surface's projections, signed by its outward normal (hydrostatics
//! of curved surfaces by projected areas; White, Fluid Mechanics, chapter 2).

mod arc;
mod fit;
mod mesh;
mod shell;

pub use arc::arc;
pub(crate) use fit::GAUSS;
pub use mesh::{MESH_ERROR_MAX, mesh, sideways};
pub use shell::{PLACES, Profile, revolved};

use super::number::single;
use super::shape::Numbers;
use std::f64::consts::PI;
use strake_core::part::curved::{Curved, Place, Row, RowKind};

/// A row in f64, see [`strake_core::part::curved`].
pub type ExactRow = (RowKind, [f64; 5]);

/// A curved part as a table.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// Rows of the force along angle 0 and of that upwards, heights from the lowest point.
    pub rows: [Vec<ExactRow>; 2],
    /// Places of the tensions.
    pub places: Vec<[f64; 4]>,
    /// Whether the apex of a shell is its highest point.
    pub apex_up: bool,
    /// Height of the highest above the lowest point, m.
    pub rise_m: f64,
    /// Largest error of a force, for any surface, over what the surface at the highest point gives
    /// when all weights count as positive.
    pub error: f64,
    /// The same as a force over the specific weight of the liquid, m³: what a force is off at most
    /// is this times the specific weight of the heaviest liquid.
    pub error_m3: f64,
}

impl Table {
    /// The part of the plan; `None` when there is no room for its numbers.
    #[must_use]
    pub fn curved(&self, numbers: &mut Numbers<'_>) -> Option<Curved> {
        let first = u16::try_from(numbers.list.len()).ok()?;
        let mut counts = [[0_u8; 3]; 2];
        for (rows, counts) in self.rows.iter().zip(&mut counts) {
            for (kind, count) in [RowKind::Even, RowKind::Root, RowKind::Disc].iter().zip(counts) {
                for (_, row) in rows.iter().filter(|(own, _)| own == kind) {
                    let row: Row = row.map(single);
                    numbers.list.extend_from_slice(&row).ok()?;
                    *count = count.checked_add(1)?;
                }
            }
        }
        for place in &self.places {
            let place: Place = place.map(single);
            numbers.list.extend_from_slice(&place).ok()?;
        }
        let places = u8::try_from(self.places.len()).ok()?;
        Some(Curved { first, rows: counts, places, apex_up: self.apex_up })
    }
}

/// A hemisphere on a vertical wall, x outward; wetted on its hollow side (`inside`) when it bulges
/// out of the tank. Exact.
#[must_use]
pub fn dome(radius_m: f64, inside: bool) -> Table {
    let r = radius_m;
    let side = if inside { PI } else { -PI };
    // Half a ring of radius rho = sqrt(r² - zeta²) in plan: pi rho |d rho| = pi zeta d zeta.
    let lower = (RowKind::Even, [0.0, r, -side * r, side, 0.0]);
    let upper = (RowKind::Even, [r, r, 0.0, side, 0.0]);
    let across = (RowKind::Disc, [0.0, r, 1.0, 0.0, 0.0]);
    Table { rows: [vec![across], vec![lower, upper]], rise_m: 2.0 * r, ..Table::default() }
}
