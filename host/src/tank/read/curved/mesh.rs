//! `mesh = "sump.stl"`: its file and how that is meant.

use crate::mesh::{Closed, Mesh, Reading, Side};
use crate::tank::finding::{Code, Located};
use crate::tank::read::field::{Range, field};
use crate::tank::read::section::Section;
use crate::units::Quantity::Length;
use std::path::{Component, Path};

const UNITS: [(&str, f64); 5] =
    [("mm", 1e-3), ("cm", 1e-2), ("m", 1.0), ("in", 0.0254), ("ft", 0.3048)];
const NORMALS: [(&str, Side); 2] =
    [("into the liquid", Side::Front), ("out of the liquid", Side::Back)];
const CLOSED: [(&str, Closed); 2] = [("vessel", Closed::Vessel), ("body", Closed::Body)];

/// Reads the file and checks it. By the key's meaning the normals point into the liquid, and z
/// counts from the datum: `normals` and `origin` say otherwise.
pub(super) fn mesh(section: &mut Section<'_>, folder: &Path) -> Option<Mesh> {
    let file = section.text("mesh", "\"sump.stl\", counted from the folder of the tank file");
    let write = "\"mm\", in which the file's numbers are: mm, cm, m, in or ft";
    let unit = section.need_choice("unit", &UNITS, write);
    let write = "\"1.2 m\", the height of the mesh's z = 0 above the datum";
    let origin = section.take(field("origin", Length, Range::ANY, write));
    let write = "\"into the liquid\", or \"out of the liquid\"";
    let side = section.take_choice("normals", &NORMALS, write);
    let write = "\"vessel\", closed around the liquid, or \"body\", closed within the liquid";
    let closed = section.take_choice("closed", &CLOSED, write);
    let (file, unit) = (file?, unit?);
    let misread = |key| section.item_is_there(key);
    if (origin.is_none() && misread("origin"))
        || (side.is_none() && misread("normals"))
        || (closed.is_none() && misread("closed"))
        || !stays_beside(section, &file)
    {
        return None;
    }
    let reading = Reading {
        unit_m: unit.value,
        origin_m: origin.map_or(0.0, |origin| origin.value),
        side: side.map_or(Side::Front, |side| side.value),
        closed: closed.map(|closed| closed.value),
    };
    match Mesh::read(folder, &file.value, reading) {
        Ok(mesh) => Some(mesh),
        Err(fault) => {
            let message = format!("`{}` in {} {fault}", file.value, section.place);
            section.report(Code::Mesh, file.span, message, fault.hint());
            None
        }
    }
}

/// A tank file and what belongs to it move together.
fn stays_beside(section: &Section<'_>, file: &Located<String>) -> bool {
    let mut components = Path::new(&file.value).components();
    let beside = components.all(|one| matches!(one, Component::Normal(_) | Component::CurDir));
    if !beside {
        let message =
            format!("`{}` in {} leaves the folder of the file", file.value, section.place);
        let hint = "put the mesh beside the tank file or in a folder below it";
        section.report(Code::Mesh, file.span, message, hint);
    }
    beside
}
