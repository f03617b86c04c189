//! `[[curved]]`: arcs, domes, bottoms and heads, meshes.

mod mesh;

use super::capacity::{self, Bearer};
use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Curved, Heights, PartKind, Profile, Surface};
use crate::units::Quantity::{AngleDegrees, Length};
use crate::units::format_si;
use std::path::Path;

const KINDS: [&str; 4] = ["arc", "dome", "revolved", "mesh"];
const ARC: &str = "{ radius = \"2.0 m\", length = \"4.0 m\", from = \"270 deg\", to = \"360 deg\", \
                   wetted = \"inside\" }";
const REVOLVED: &str =
    "{ kind = \"cone\", base_radius = \"1.5 m\", height = \"1.2 m\", apex = \"down\" }";
const WETTED: [(&str, bool); 2] = [("inside", true), ("outside", false)];

/// `folder` is that of the tank file, from which the path of a mesh counts.
pub(super) fn curved(
    mut section: Section<'_>,
    name: Option<Located<String>>,
    folder: &Path,
) -> Option<Curved> {
    let write = format!(
        "write arc = {ARC}, dome = {{ radius = \"0.4 m\" }}, revolved = {REVOLVED}, or \
         mesh = \"sump.stl\""
    );
    let kind = section.one_of(&KINDS, &write);
    let (key, surface) = match kind {
        Some("arc") => ("axis", arc(&mut section)),
        Some("dome") => ("centre", dome(&mut section)),
        Some("revolved") => ("base", revolved(&mut section)),
        _ => ("axis", None),
    };
    let write = "\"2.0 m\", the height of the axis, of a dome's centre, or of a shell's rim";
    let placed = match kind {
        Some("mesh") => {
            let span = section.key_span("mesh").unwrap_or(section.span);
            mesh::mesh(&mut section, folder).map(|mesh| {
                let [bottom_m, top_m] = mesh.heights_m();
                let heights = Heights { bottom_m, centre_m: mesh.reading.origin_m, top_m };
                (Surface::Mesh(mesh.into()), heights, span)
            })
        }
        None => {
            for key in ["axis", "centre", "base", "wetted", "unit", "origin", "normals", "closed"] {
                section.item(key);
            }
            None
        }
        _ => {
            let place = section.need(field(key, Length, Range::ANY, write));
            let heights = |(surface, at): (Surface, Located<f64>)| {
                let heights = heights(&surface, at.value);
                (surface, heights, at.span)
            };
            surface.zip(place).map(heights)
        }
    };
    let is_shell = kind == Some("revolved");
    let bearer = Bearer { shell: is_shell, ..Bearer::plain(PartKind::Curved) };
    let ratings = capacity::both(&mut section, bearer);
    let span = section.span;
    section.finish();
    let ((surface, heights, placed_at), (capacity, capacity_inward)) = (placed?, ratings?);
    Some(Curved { name: name?, surface, heights, placed_at, capacity, capacity_inward, span })
}

fn heights(surface: &Surface, at_m: f64) -> Heights {
    let (below_m, above_m) = match *surface {
        Surface::Arc { radius_m, from_deg, to_deg, .. } => {
            let (low, high) = reach(from_deg, to_deg);
            (-radius_m * low, radius_m * high)
        }
        Surface::Dome { radius_m, .. } => (radius_m, radius_m),
        Surface::Revolved { height_m, apex_up: true, .. } => (0.0, height_m),
        Surface::Revolved { height_m, .. } => (height_m, 0.0),
        Surface::Mesh(_) => (0.0, 0.0),
    };
    Heights { bottom_m: at_m - below_m, centre_m: at_m, top_m: at_m + above_m }
}

/// Least and largest sine between two angles.
fn reach(from_deg: f64, to_deg: f64) -> (f64, f64) {
    let within = |angle: f64| {
        let turns = ((from_deg - angle) / 360.0).ceil();
        angle + 360.0 * turns <= to_deg
    };
    let ends = [from_deg.to_radians().sin(), to_deg.to_radians().sin()];
    let low = if within(270.0) { -1.0 } else { ends[0].min(ends[1]) };
    let high = if within(90.0) { 1.0 } else { ends[0].max(ends[1]) };
    (low, high)
}

fn arc(section: &mut Section<'_>) -> Option<Surface> {
    let mut table = section.table("arc", ARC)?;
    let radius = table.need(field("radius", Length, Range::POSITIVE, "\"2.0 m\""));
    let length = table.need(field("length", Length, Range::POSITIVE, "\"4.0 m\", along the axis"));
    let angle = Range::between(0.0, 360.0);
    let from = table.need(field(
        "from",
        AngleDegrees,
        angle,
        "\"270 deg\", from the horizontal, counter-clockwise",
    ));
    let to = table.need(field(
        "to",
        AngleDegrees,
        angle,
        "\"360 deg\", from the horizontal, counter-clockwise; past 360 it counts on from 0",
    ));
    let wetted = table.need_choice("wetted", &WETTED, "\"inside\", the side of the axis");
    table.finish();
    let (from, to) = (from?, to?);
    let to_deg = if to.value <= from.value { to.value + 360.0 } else { to.value };
    if to_deg - from.value < 1.0 || to_deg - from.value >= 360.0 {
        let message = format!(
            "`to` in {} is {}, {} from `from`",
            section.place,
            format_si(to.value, AngleDegrees),
            format_si(to_deg - from.value, AngleDegrees)
        );
        let hint = "an arc spans from 1 deg to less than a full turn; describe a full one as two";
        section.report(Code::OutOfRange, to.span, message, hint);
        return None;
    }
    Some(Surface::Arc {
        radius_m: radius?.value,
        length_m: length?.value,
        from_deg: from.value,
        to_deg,
        inside: wetted?.value,
    })
}

fn dome(section: &mut Section<'_>) -> Option<Surface> {
    let mut table = section.table("dome", "{ radius = \"0.4 m\" }: the key says radius")?;
    let radius = table.need(field("radius", Length, Range::POSITIVE, "\"0.4 m\""));
    table.finish();
    let write = "\"inside\" when it bulges out of the tank, \"outside\" when into the liquid";
    let wetted = section.need_choice("wetted", &WETTED, write);
    Some(Surface::Dome { radius_m: radius?.value, inside: wetted?.value })
}

fn revolved(section: &mut Section<'_>) -> Option<Surface> {
    const PROFILES: [(&str, Profile); 3] =
        [("cone", Profile::Cone), ("sphere", Profile::Sphere), ("ellipsoid", Profile::Ellipsoid)];
    const APEX: [(&str, bool); 2] = [("up", true), ("down", false)];
    let mut table = section.table("revolved", REVOLVED)?;
    let profile = table.need_choice("kind", &PROFILES, "\"cone\", \"sphere\" or \"ellipsoid\"");
    let base = table.need(field("base_radius", Length, Range::POSITIVE, "\"1.5 m\", at the rim"));
    let height =
        table.need(field("height", Length, Range::POSITIVE, "\"1.2 m\", from the rim to the apex"));
    let apex = table.need_choice("apex", &APEX, "\"down\" of a bottom, \"up\" of a roof");
    table.finish();
    let (profile, base, height) = (profile?.value, base?, height?);
    if profile == Profile::Sphere && height.value > base.value * (1.0 + 1e-9) {
        let message = format!(
            "`height` in {} is {}, more than half of a sphere of that rim, {}",
            section.place,
            format_si(height.value, Length),
            format_si(base.value, Length)
        );
        let hint = "a cap reaches up to half a sphere; check the two";
        section.report(Code::OutOfRange, height.span, message, hint);
        return None;
    }
    Some(Surface::Revolved {
        profile,
        base_radius_m: base.value,
        height_m: height.value,
        apex_up: apex?.value,
    })
}
