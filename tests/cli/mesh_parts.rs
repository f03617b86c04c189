//! Meshes through the command line: figures worked by hand, the sides, what is refused.

use crate::{document, run};
use serde_json::Value;
use std::fs;
use std::path::Path;

const TANK: &str = "configs/mesh_parts.toml";
const G: f64 = 9.806_65;

fn loads<'a>(document: &'a Value, name: &str) -> &'a Value {
    let parts = document["parts"].as_array().expect("parts");
    &parts.iter().find(|part| part["name"] == name).expect("a part of that name")["loads"]
}

#[track_caller]
fn near(found: &Value, due: f64, share: f64) {
    let found = found.as_f64().expect("a number");
    assert!((found - due).abs() <= share * due.abs(), "{found} is not {due}");
}

/// The example with a text changed, its meshes beside it.
fn changed(from: &str, to: &str) -> (tempfile::TempDir, String) {
    let folder = tempfile::tempdir().unwrap();
    let configs = Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs");
    for name in ["drain_transition.stl", "sampling_pocket.stl"] {
        fs::copy(configs.join(name), folder.path().join(name)).unwrap();
    }
    let text = fs::read_to_string(configs.join("mesh_parts.toml")).unwrap();
    assert!(text.contains(from), "{from}");
    let path = folder.path().join("tank.toml");
    fs::write(&path, text.replacen(from, to, 1)).unwrap();
    let path = path.to_str().unwrap().to_owned();
    (folder, path)
}

#[test]
fn a_pocket_and_a_hopper_carry_what_presses_on_them() {
    let (_, found) = document(&["assess", TANK, "--level", "1.1 m"]);
    // own-17 without its gas: 2 kPa on 0.8 x 0.8 m.
    let pocket = loads(&found, "sampling pocket");
    near(&pocket["force_x_n"], 2456.798 - 2000.0 * 0.64, 1e-5);
    near(&pocket["force_z_n"], -514.849_125, 1e-5);
    // Full, it carries its mouth's pressure outwards and the weight of what it holds.
    let (_, full) = document(&["assess", TANK, "--level", "2.0 m"]);
    let pocket = loads(&full, "sampling pocket");
    near(&pocket["force_x_n"], 1200.0 * G * 1.0 * 0.64, 1e-5);
    near(&pocket["force_z_n"], -1200.0 * G * 0.64 * 0.3 / 3.0, 1e-5);
    // The hopper closes with two level planes: nothing sideways. Upwards by the mid-areas of its
    // slices, Simpson's rule, exact for what is ruled between two outlines.
    let outline = |share: f64| -> f64 {
        let corners: Vec<[f64; 2]> = (0..24).map(|step| corner(step, share)).collect();
        let pairs = corners.iter().zip(corners.iter().cycle().skip(1));
        pairs.map(|(a, b)| 0.5 * (a[0] * b[1] - a[1] * b[0])).sum()
    };
    let hopper = loads(&full, "hopper");
    // Triangles bulge beside the ruled surface: the volume by their own sections.
    let [low, high] = [outline(0.0), outline(1.0)];
    let volume = 0.6 * (low + 4.0 * triangles_at_half() + high) / 6.0;
    let carried = volume + high * (2.0 - 0.7) - low * (2.0 - 0.1);
    near(&hopper["force_z_n"], -1200.0 * G * carried, 1e-5);
    near(&hopper["force_n"], 1200.0 * G * carried, 1e-5);
    assert!(hopper["force_x_n"].as_f64().unwrap().abs() < 1e-6 * 1200.0 * G * carried);
}

#[test]
fn a_mesh_says_where_its_force_acts() {
    let (_, found) = document(&["assess", TANK, "--level", "1.1 m"]);
    let parts = found["parts"].as_array().expect("parts");
    let pocket = parts.iter().find(|part| part["name"] == "sampling pocket").expect("the pocket");
    // own-17c without its gas, about (0 0 1.0): the gas has its centre there along x, and presses
    // nothing upwards in sum, so that its own moment is none.
    let number = |at: &Value| at.as_f64().expect("a number");
    let line = &pocket["line_of_action"];
    let (x, z) = (number(&pocket["loads"]["force_x_n"]), number(&pocket["loads"]["force_z_n"]));
    let about = number(&line["moment_n_m"][1]) - 1.0 * x;
    assert!((about + 232.993_746).abs() < 0.005, "{about}");
    let again = (number(&line["force_x_at_m"]) - 1.0) * x - number(&line["force_z_at_m"]) * z;
    assert!((again - about).abs() < 1e-3, "{again}");
    assert!(number(&line["force_y_n"]).abs() < 1e-9);
    near(&line["angle_deg"], z.atan2(x).to_degrees(), 1e-6);
    assert_eq!(pocket["table"]["rows"], 3);
}

fn round(value: f64) -> f64 {
    (value * 1e6).round() / 1e6
}

/// A corner of the hopper's section between its outlet and its square top, m.
fn corner(step: u8, share: f64) -> [f64; 2] {
    let angle = std::f64::consts::TAU * f64::from(step) / 24.0;
    let (x, y) = (angle.cos(), angle.sin());
    let out = x.abs().max(y.abs());
    let low = [round(0.2 + 0.15 * x), round(0.15 * y)];
    let high = [round(0.5 * x / out), round(0.5 * y / out)];
    [0, 1].map(|axis| low[axis] + share * (high[axis] - low[axis]))
}

/// Area of the section at half height: its corners are the middles of all edges between the rims,
/// uprights and diagonals.
fn triangles_at_half() -> f64 {
    let middle = |a: [f64; 2], b: [f64; 2]| [0.5 * (a[0] + b[0]), 0.5 * (a[1] + b[1])];
    let corners: Vec<[f64; 2]> = (0..24)
        .flat_map(|step| {
            let next = (step + 1) % 24;
            let upright = middle(corner(step, 0.0), corner(step, 1.0));
            [upright, middle(corner(next, 0.0), corner(step, 1.0))]
        })
        .collect();
    let pairs = corners.iter().zip(corners.iter().cycle().skip(1));
    pairs.map(|(a, b)| 0.5 * (a[0] * b[1] - a[1] * b[0])).sum()
}

#[test]
fn the_normals_turn_the_force() {
    let (_, found) = document(&["assess", TANK, "--level", "2.0 m"]);
    let side = "mesh     = \"sampling_pocket.stl\"";
    let (_folder, path) = changed(side, &format!("{side}\nnormals = \"out of the liquid\""));
    let (_, turned) = document(&["assess", &path, "--level", "2.0 m"]);
    for key in ["force_x_n", "force_z_n"] {
        let [one, other] = [&found, &turned].map(|all| loads(all, "sampling pocket")[key].as_f64());
        assert!((one.unwrap() + other.unwrap()).abs() < 1e-9 * one.unwrap().abs(), "{key}");
    }
}

#[test]
fn the_file_is_named_with_its_check_and_its_rims() {
    let ran = run(&["assess", TANK]);
    let text = ran.stdout;
    assert_eq!(ran.status, 0, "{text}");
    let words = text.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(words.contains("mesh drain_transition.stl (CRC-32 "), "{text}");
    assert!(words.contains("48 triangles, 2 open rims, normals into the liquid"), "{text}");
}

#[test]
fn a_mesh_pressed_across_is_not_judged_by_its_force() {
    // A quarter turn about the upright lays the pocket's force along y.
    let (folder, path) = changed(
        "capacity = [ { pressure = \"24 kPa\", basis = \"drawing\" } ]",
        "capacity = [ { force = \"24 kN\", basis = \"drawing\" } ]",
    );
    let file = folder.path().join("sampling_pocket.stl");
    let turned: Vec<String> = fs::read_to_string(&file)
        .unwrap()
        .lines()
        .map(|line| match line.split_whitespace().collect::<Vec<_>>()[..] {
            ["vertex", x, y, z] => format!("vertex {y} {x} {z}"),
            ["facet", ..] => "facet normal 0 0 0".to_owned(),
            _ => line.to_owned(),
        })
        .collect();
    fs::write(&file, turned.join("\n")).unwrap();
    let ran = run(&["assess", &path]);
    assert_eq!(ran.status, 3, "{}", ran.stdout);
    assert!(ran.stderr.contains("is pressed along its y axis too"), "{}", ran.stderr);
    // Judged by its pressure it is told, with the force that the device does not have.
    let text =
        fs::read_to_string(&path).unwrap().replace("force = \"24 kN\"", "pressure = \"24 kPa\"");
    fs::write(&path, text).unwrap();
    let (_, found) = document(&["assess", &path, "--level", "2.0 m"]);
    let parts = found["parts"].as_array().expect("parts");
    let pocket = parts.iter().find(|part| part["name"] == "sampling pocket").expect("the pocket");
    // Swapping two axes turns the surface inside out: out of the wall is along -y now.
    near(&pocket["line_of_action"]["force_y_n"], -1200.0 * G * 0.64, 1e-5);
    assert!(pocket["loads"].get("force_n").is_none(), "{pocket}");
}
