//! The table of loads, part by part.

use super::secured::secured;
use super::{Sheet, plate};
use crate::assess::document::{Capacity, Loads, PartRow, PartTable};
use crate::mesh::{Closed, Side};
use crate::page::{Page, WIDTH, wrap};
use crate::tank::{self, Part as Stated, Plane, Rating, Shape};
use crate::units::Quantity::{self, Density, Force, Length, LineLoad, Moment, Pressure, Ratio};

/// Columns of a label, of one number, and of the gap before the capacity.
const LABEL: usize = 24;
const NUMBER: usize = 14;
const CAPACITY_AT: usize = LABEL + 3 * NUMBER + 2;
/// Moments of a mesh about the axes through its origin.
const MOMENTS: [&str; 3] = ["  moment about x", "  moment about y", "  moment about z"];

pub(super) fn loads(sheet: &Sheet<'_>, page: &mut Page) {
    page.blank();
    page.heading(&line("Loads", ["estimate", "bound", "inward"].map(str::to_owned), "capacity"));
    page.paragraph(
        "  ",
        "Positive acts from the liquid outwards. Bound and inward are the largest and the least load \
         that the level reading, the densities and the gas allow.",
    );
    let rows = &sheet.assessment.document.parts;
    for (stated, row) in sheet.file.parts.iter().zip(rows) {
        page.blank();
        page.paragraph("", &describe(sheet, stated));
        part(sheet, page, stated, row);
        if let Some(table) = row.table {
            let shell = row.loads.tension_n_m.is_some();
            page.paragraph("  table: ", &table_words(table, shell));
        }
    }
}

/// The part in one line.
pub(crate) fn describe(sheet: &Sheet<'_>, stated: &Stated) -> String {
    let heights = stated.heights();
    let show = |value: f64| sheet.show(value, Length);
    let (kind, name) = (stated.kind().as_str(), stated.name());
    let span = format!("{} to {}", show(heights.bottom_m), show(heights.top_m));
    match stated {
        Stated::Course(course) => {
            let diameter = match sheet.file.vessel {
                tank::Vessel::Cylinder { diameter_m, .. } => show(diameter_m.value),
                _ => String::new(),
            };
            let rule = course.design_point.rule.as_ref();
            let rule = rule.map_or_else(String::new, |rule| format!(" ({})", rule.value));
            let point = show(course.design_height_m());
            format!("{name}, {kind}: {span}, diameter {diameter}, design point {point}{rule}")
        }
        Stated::Curved(part) => format!("{name}, {kind}: {span}, {}", curved(sheet, &part.surface)),
        Stated::Panel(panel) => format!("{name}, {kind}: {}", surface(sheet, &panel.plane, &span)),
        Stated::Hatch(hatch) => {
            let held = secured(sheet, hatch);
            format!("{name}, {kind}: {} to the gasket{held}", surface(sheet, &hatch.sealed, &span))
        }
    }
}

fn curved(sheet: &Sheet<'_>, surface: &tank::Surface) -> String {
    let show = |value: f64| sheet.show(value, Length);
    let angle = |value: f64| sheet.show(value, Quantity::AngleDegrees);
    let side = |inside: bool| if inside { "inside" } else { "outside" };
    match *surface {
        tank::Surface::Arc { radius_m, length_m, from_deg, to_deg, inside } => format!(
            "arc of radius {}, {} long, {} to {}, wetted {}",
            show(radius_m),
            show(length_m),
            angle(from_deg),
            angle(to_deg),
            side(inside)
        ),
        tank::Surface::Dome { radius_m, inside } => {
            format!("dome of radius {} on a wall, wetted {}", show(radius_m), side(inside))
        }
        tank::Surface::Revolved { profile, base_radius_m, height_m, apex_up } => {
            let word = match profile {
                tank::Profile::Cone => "cone",
                tank::Profile::Sphere => "sphere",
                tank::Profile::Ellipsoid => "ellipsoid",
            };
            let apex = if apex_up { "up" } else { "down" };
            let (base, height) = (show(base_radius_m), show(height_m));
            format!("{word}, rim of radius {base}, {height} high, apex {apex}")
        }
        tank::Surface::Mesh(ref mesh) => {
            let side = if mesh.reading.side == Side::Front { "into" } else { "out of" };
            let rims = match (mesh.reading.closed, mesh.rims) {
                (Some(Closed::Vessel), _) => "closed around the liquid".to_owned(),
                (Some(Closed::Body), _) => "closed within the liquid".to_owned(),
                (None, 0) => "no open rim".to_owned(),
                (None, 1) => "one open rim".to_owned(),
                (None, rims) => format!("{rims} open rims"),
            };
            format!(
                "mesh {} (CRC-32 {:08x}), {} triangles, {rims}, normals {side} the liquid",
                mesh.file,
                mesh.check,
                mesh.triangles.len()
            )
        }
    }
}

fn surface(sheet: &Sheet<'_>, plane: &Plane, span: &str) -> String {
    let show = |value: f64| sheet.show(value, Length);
    let outline = if let Shape::Circle { diameter_m } = plane.shape {
        format!("circle {}", show(diameter_m))
    } else {
        let (width, length) = (show(plane.shape.width_m()), show(plane.shape.length_m()));
        format!("{} {width} x {length}", plane.shape.word())
    };
    let hole = match &plane.hole {
        None => "",
        Some(hole) if hole.carried_elsewhere => ", a hole carried elsewhere left out",
        Some(_) => ", a hole whose load it carries",
    };
    let at = if plane.is_level() { show(plane.heights.centre_m) } else { span.to_owned() };
    let slope = sheet.show(plane.slope_deg, Quantity::AngleDegrees);
    format!("{at}, slope {slope}, {outline}{hole}")
}

fn part(sheet: &Sheet<'_>, page: &mut Page, stated: &Stated, row: &PartRow) {
    let three = |pick: fn(&Loads) -> Option<f32>, quantity: Quantity| {
        [&row.loads, &row.loads_outward_bound, &row.loads_inward_bound].map(|loads| {
            pick(loads).map_or_else(|| "-".to_owned(), |value| sheet.load(value, quantity))
        })
    };
    let mut put = |label: &str, cells: [String; 3], key: &str| {
        let capacities = capacities(sheet, stated, row, key);
        let mut capacities = capacities.iter();
        let first = capacities.next().map_or("", String::as_str);
        page.line(&line(&format!("  {label}"), cells, first));
        for more in capacities {
            page.line(&format!("{:CAPACITY_AT$}{more}", ""));
        }
    };
    let course = matches!(stated, Stated::Course(_));
    let pressure = if course { "pressure, design point" } else { "pressure, largest" };
    put(pressure, three(|loads| Some(loads.pressure_pa), Pressure), "pressure_pa");
    if course {
        put("hoop tension", three(|loads| loads.hoop_tension_n_m, LineLoad), "hoop_tension_n_m");
    } else if row.loads.force_z_n.is_some() {
        if row.loads.force_x_n.is_some() {
            put("force along angle 0", three(|loads| loads.force_x_n, Force), "");
        }
        put("force upwards", three(|loads| loads.force_z_n, Force), "");
        put("force, size", three(|loads| loads.force_n, Force), "force_n");
        if row.loads.tension_n_m.is_some() {
            put("tension, largest", three(|loads| loads.tension_n_m, LineLoad), "tension_n_m");
            let compression = three(|loads| loads.compression_n_m, LineLoad);
            put("compression, largest", compression, "compression_n_m");
        }
        action(sheet, row, &mut put);
    } else {
        put("force", three(|loads| loads.force_n, Force), "force_n");
        put("moment about centroid", three(|loads| loads.moment_centroid_n_m, Moment), "");
    }
    centre(sheet, row, &mut put);
    if row.loads_inward_bound.bolt_n.is_some() {
        put("bolt, largest share", three(|loads| loads.bolt_n, Force), "bolt_n");
    }
    if row.loads.stress_pa.is_some() {
        put("bending stress, largest", three(|loads| loads.stress_pa, Pressure), "stress_pa");
    }
    if row.loads.moment_n_m.is_some() {
        let pivots = matches!(stated, Stated::Hatch(hatch) if hatch.pivots());
        let (moment, line) = if pivots {
            ("moment about pivot", "pivot")
        } else {
            ("moment about hinge", "hinge line")
        };
        put(moment, three(|loads| loads.moment_n_m, Moment), "moment_n_m");
        if row.loads.latch_n.is_some() {
            put("latch, largest share", three(|loads| loads.latch_n, Force), "latch_n");
        }
        pins(sheet, row, line, &mut put);
    }
    let judged = &row.judgement;
    let used = [judged.utilisation, judged.utilisation_bound, judged.utilisation_inward];
    let used = used.map(|one| one.map_or_else(|| "-".to_owned(), |u| format!("{u:.3}")));
    put("utilisation", used, "");
    if let Some(thickness_m) = judged.thickness_for_state_m {
        let thickness = thickness_up(sheet, thickness_m);
        put("thickness, this state", [thickness, String::new(), String::new()], "");
    }
    plate::lines(sheet, page, row);
}

/// How far a table of rows may be off.
fn table_words(table: PartTable, shell: bool) -> String {
    if shell {
        format!(
            "tensions at {} places; what may be missed between two of them is taken off the \
             capacity.",
            table.rows
        )
    } else if table.error > 0.0 {
        format!(
            "{} rows; a force is within {:.1e} of what the surface at the part's highest point \
             gives, all weights taken as positive.",
            table.rows, table.error
        )
    } else {
        format!("{} rows, exact but for the rounding to f32.", table.rows)
    }
}

/// Where the force on a plane part acts.
fn centre(sheet: &Sheet<'_>, row: &PartRow, put: &mut impl FnMut(&str, [String; 3], &str)) {
    if let Some(centre) = &row.loads.centre {
        let height = centre.centre_of_pressure_m;
        let height = height.map_or_else(|| "none".to_owned(), |at| sheet.show(at, Length));
        put("centre of pressure", [height, String::new(), String::new()], "");
        if let Some(x_m) = centre.centre_of_pressure_sideways_m {
            put("  sideways", [sheet.show(x_m, Length), String::new(), String::new()], "");
        }
    }
}

/// Where the force on a curved part acts.
fn action(sheet: &Sheet<'_>, row: &PartRow, put: &mut impl FnMut(&str, [String; 3], &str)) {
    let mut one = |label: &str, value: Option<f64>, quantity: Quantity| {
        let shown = value.map_or_else(|| "none".to_owned(), |at| sheet.show(at, quantity));
        put(label, [shown, String::new(), String::new()], "");
    };
    if let Some(line) = &row.line_of_action {
        if line.force_y_n.is_some_and(|y_n| y_n.abs() > 0.0) {
            one("force along y", line.force_y_n, Force);
        }
        one("angle of the force", line.angle_deg, Quantity::AngleDegrees);
        if row.loads.force_x_n.is_some() {
            one("  x acts at a height of", line.force_x_at_m, Length);
        }
        one("  z acts aside by", line.force_z_at_m, Length);
        if let Some(moment) = line.moment_n_m {
            for (label, value) in MOMENTS.into_iter().zip(moment) {
                one(label, Some(value), Moment);
            }
        }
    }
}

/// A pin or hinge line in each line.
fn pins(
    sheet: &Sheet<'_>,
    row: &PartRow,
    line: &str,
    put: &mut impl FnMut(&str, [String; 3], &str),
) {
    let states = [&row.loads, &row.loads_outward_bound, &row.loads_inward_bound];
    let labels: &[&str] =
        if row.loads.hinge_n.len() == 2 { &["lower pin", "upper pin"] } else { &[line] };
    for (index, label) in labels.iter().enumerate() {
        let cells = states.map(|loads| {
            let pin = loads.hinge_n.get(index);
            pin.map_or_else(|| "-".to_owned(), |value| sheet.load(*value, Force))
        });
        // The capacity stands beside the first.
        put(label, cells, if index == 0 { "hinge_n" } else { "" });
    }
}

/// A thickness rounded up: to 0.01 mm, or 0.001 in.
pub(crate) fn thickness_up(sheet: &Sheet<'_>, thickness_m: f64) -> String {
    let steps_per_m = match sheet.units {
        crate::units::UnitSystem::Si => 1e5,
        crate::units::UnitSystem::UsCustomary => 1e3 / 0.0254,
    };
    sheet.show((thickness_m * steps_per_m).ceil() / steps_per_m, Length)
}

fn line(label: &str, cells: [String; 3], capacity: &str) -> String {
    let [a, b, c] = cells;
    // The blank before each number keeps long ones apart.
    let width = NUMBER - 1;
    format!("{label:<LABEL$} {a:>width$} {b:>width$} {c:>width$}  {capacity}")
}

/// The capacities that a load is compared with, in lines that fit beside it.
fn capacities(sheet: &Sheet<'_>, stated: &Stated, row: &PartRow, key: &str) -> Vec<String> {
    let words = capacity_words(sheet, stated, row, key);
    words.iter().flat_map(|text| wrap(text, WIDTH - CAPACITY_AT)).collect()
}

/// The capacities that a load is compared with, in words.
pub(crate) fn capacity_words(
    sheet: &Sheet<'_>,
    stated: &Stated,
    row: &PartRow,
    key: &str,
) -> Vec<String> {
    let mut found = Vec::new();
    let lists = [
        ("", stated.capacity(), &row.capacity),
        ("inward ", stated.capacity_inward(), &row.capacity_inward),
    ];
    for (side, ratings, values) in lists {
        for value in values.iter().filter(|value| value.load == key) {
            let Some(rating) = ratings.get(value.place) else { continue };
            found.push(format!("{side}{}", capacity(sheet, rating, value)));
        }
    }
    found
}

fn capacity(sheet: &Sheet<'_>, rating: &Rating, value: &Capacity) -> String {
    let basis = &value.basis;
    let shown = |quantity| sheet.show(value.value, quantity);
    match &rating.capacity.value {
        tank::Capacity::Plate {
            thickness_m,
            corrosion_allowance_m,
            allowable_stress_pa,
            joint_efficiency,
        } => format!(
            "{} = {} x {} x ({} - {}), {basis}",
            shown(LineLoad),
            sheet.show(allowable_stress_pa.value, Pressure),
            joint_efficiency.value,
            sheet.show(thickness_m.value, Length),
            sheet.show(corrosion_allowance_m.value, Length)
        ),
        tank::Capacity::Panel(plate) => plate::capacity(sheet, plate, basis),
        tank::Capacity::DesignedFor { level_m, density_kg_m3, gas_pa, remaining } => {
            let share = remaining.map_or_else(
                || "as new".to_owned(),
                |share| format!("remaining {}", sheet.show(share.value, Ratio)),
            );
            format!(
                "designed for {} of {}, gas {}, {share}, {basis}",
                sheet.show(level_m.value, Length),
                sheet.show(density_kg_m3.value, Density),
                sheet.load(gas_pa.value, Pressure)
            )
        }
        tank::Capacity::HoopTension { .. }
        | tank::Capacity::Tension { .. }
        | tank::Capacity::Compression { .. } => format!("{}, {basis}", shown(LineLoad)),
        tank::Capacity::Bolt { .. }
        | tank::Capacity::Latch { .. }
        | tank::Capacity::Hinge { .. }
        | tank::Capacity::Force { .. } => format!("{}, {basis}", shown(Force)),
        tank::Capacity::Moment { .. } => format!("{}, {basis}", shown(Moment)),
        tank::Capacity::Pressure { .. } => format!("{}, {basis}", shown(Pressure)),
        tank::Capacity::Cover(plate) => format!(
            "{} of the cover {} thick, {}, C = {}, {basis}",
            shown(Pressure),
            sheet.show(plate.thickness_m.value, Length),
            sheet.show(plate.allowable_stress_pa.value, Pressure),
            plate.attachment_factor.value
        ),
        tank::Capacity::None { .. } => String::new(),
    }
}
