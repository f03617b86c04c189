//! `strake sheet`: the calculation to check and file.

mod markup;

use crate::tank_text::TankText;
use crate::{document, run};
use markup::Page;
use serde_json::Value;
use strake::units::{Quantity, UnitSystem, format};

const EXAMPLES: [&str; 9] = [
    "brine_day_tank",
    "curved_parts",
    "hatch_test_tank",
    "laboratory_tank",
    "mesh_parts",
    "odd_shapes",
    "plate_box",
    "rinse_basin",
    "wine_drum",
];

/// Writes a sheet and reads it again.
fn sheet(tank: &str, more: &[&str]) -> Page {
    let folder = TankText::new("");
    let output = folder.inside("sheet.html");
    let path = output.display().to_string();
    let ran = run(&[&["sheet", tank, "-o", &path], more].concat());
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""), "{tank}: {}", ran.stdout);
    Page::read(&std::fs::read_to_string(output).unwrap())
}

fn example(name: &str) -> String {
    format!("configs/{name}.toml")
}

/// The loads of one state that the sheet has to hold, by name; a list is one entry each.
fn loads(state: &Value) -> Vec<(String, f64)> {
    let mut found = Vec::new();
    for (name, value) in state.as_object().unwrap() {
        match value {
            Value::Array(list) => {
                found.extend(list.iter().map(|one| (name.clone(), one.as_f64().unwrap())));
            }
            Value::Number(one) => found.push((name.clone(), one.as_f64().unwrap())),
            _ => {}
        }
    }
    found
}

/// Seven significant digits, as the sheet shows a figure in SI.
fn near(shown: &str, value: f64) -> bool {
    let shown: f64 = shown.parse().unwrap_or(f64::NAN);
    (shown - value).abs() <= 6e-7 * value.abs() || (shown == 0.0 && value == 0.0)
}

#[test]
fn every_load_of_assess_stands_in_the_sheet_with_a_second_method() {
    let mut count = 0;
    for name in EXAMPLES {
        let page = sheet(&example(name), &[]);
        let (_, assessed) = document(&["assess", &example(name)]);
        let parts = assessed["parts"].as_array().unwrap();
        let sections = page.sections("h3");
        assert_eq!(sections.len(), parts.len(), "{name}");
        for (part, section) in parts.iter().zip(sections) {
            let states = ["loads", "loads_outward_bound", "loads_inward_bound"];
            for (column, state) in states.iter().enumerate() {
                for (load, value) in loads(&part[*state]) {
                    let cells = section.rows(&load);
                    let held = cells.iter().find(|row| near(&row[column + 2][0], value));
                    let row = held.unwrap_or_else(|| {
                        panic!("{name}, {}, {state}: {load} {value} in {cells:?}", part["name"])
                    });
                    let number = |cell: usize, line: usize| row[cell][line].parse::<f64>().unwrap();
                    let (off, allowed) = (number(5, 0), number(6, 0));
                    // Two digits of what is allowed, seven of the figures.
                    let shown = 1.05 * allowed + 1e-6 * value.abs();
                    let apart = (number(column + 2, 1) - value).abs();
                    assert!(apart <= shown && off <= allowed, "{name}, {load}: {row:?}");
                    count += 1;
                }
            }
        }
    }
    assert!(count > 450, "{count} figures");
}

#[test]
fn the_results_are_those_of_assess() {
    for name in EXAMPLES {
        let page = sheet(&example(name), &[]);
        let (_, assessed) = document(&["assess", &example(name)]);
        let rows = page.rows("part");
        let parts = assessed["parts"].as_array().unwrap();
        assert_eq!(rows.len(), parts.len(), "{name}");
        for (row, part) in rows.iter().zip(parts) {
            assert_eq!(row[1][0], part["name"].as_str().unwrap());
            let keys = ["utilisation", "utilisation_bound", "utilisation_inward"];
            for (cell, key) in row[2..].iter().zip(keys) {
                let wanted = part[key].as_f64().map_or("-".to_owned(), |used| format!("{used:.3}"));
                assert_eq!(cell[0], wanted, "{name}, {}: {key}", part["name"]);
            }
        }
        let text = page.text();
        for part in parts {
            if let Some(level_m) = part["limit_level_m"].as_f64() {
                let wanted = format!("Calculated limit level: {level_m:.6} m unrounded");
                assert!(text.contains(&wanted), "{name}: {wanted}");
            }
        }
        for key in ["warn_level_m", "alarm_level_m"] {
            if let Some(level_m) = assessed[key].as_f64() {
                let wanted = format(level_m, Quantity::Length, UnitSystem::Si);
                assert!(text.contains(&wanted), "{name}: {key} {wanted}");
            }
        }
        for one in assessed["not_judged"].as_array().unwrap() {
            let why = one["why"].as_str().unwrap();
            assert!(text.contains(why), "{name}: {why}");
        }
    }
}

#[test]
fn every_sheet_holds_what_a_checker_asks_for() {
    for name in EXAMPLES {
        for units in ["si", "us"] {
            let page = sheet(&example(name), &["--units", units]);
            let text = page.text();
            for piece in [
                "field check: it replaces no licensed inspection and is no overfill prevention",
                "Inputs of the tank file",
                "Δγ",
                "W and M of",
                "Uncertainty budgets",
                "straight",
                "in quadrature",
                "Conditions",
                "Not covered",
                "earthquake",
                "Second method",
                "prepared",
                "checked",
                "approved",
                "valid until",
                concat!("strake ", env!("CARGO_PKG_VERSION")),
            ] {
                assert!(text.contains(piece), "{name} in {units}: {piece}");
            }
            let lower = text.to_lowercase();
            for word in ["permitted", "safe ", "safe.", "safely", "guarantee", "certified"] {
                assert!(!lower.contains(word), "{name} in {units}: {word}");
            }
            assert!(lower.contains("calculated limit level"), "{name}");
            assert_eq!(page.count("svg"), 2, "{name}: the tank and the pressure");
            for tag in ["script", "img", "link", "iframe", "object", "a", "image", "use"] {
                assert_eq!(page.count(tag), 0, "{name}: {tag}");
            }
            for reference in ["url(", "@import", "@font-face", "://", "javascript"] {
                assert!(!page.source().contains(reference), "{name}: {reference}");
            }
            if units == "us" {
                // What the file says may be SI, what the program works out may not.
                let worked_out = page.sections("h3");
                let si = |part: &Page| {
                    [" kN", " kPa", "N/m³"].iter().any(|unit| part.text().contains(unit))
                };
                assert!(!worked_out.iter().any(si), "{name}");
            }
        }
    }
}

#[test]
fn every_key_of_the_file_is_listed_with_its_line_and_basis() {
    for name in EXAMPLES {
        let page = sheet(&example(name), &[]);
        let file =
            std::fs::read_to_string(format!("{}/../{}", env!("CARGO_MANIFEST_DIR"), example(name)));
        let text = page.text();
        for (number, line) in file.unwrap().lines().enumerate() {
            let code = line.split('#').next().unwrap_or_default();
            // Each quoted text of the file stands in the sheet.
            for quoted in code.split('"').skip(1).step_by(2) {
                assert!(text.contains(quoted), "{name}, line {}: {quoted}", number + 1);
            }
        }
    }
    let page = sheet(&example("brine_day_tank"), &[]);
    let mut rows = page.all_rows();
    let thickness = |row: &Vec<Vec<String>>| {
        row.len() == 5 && row[1][0] == "capacity.plate.thickness" && row[0][0] == "62"
    };
    let row = rows.find(thickness).expect("the thickness of course 1");
    let cells: Vec<&str> = row[2..].iter().map(|cell| cell[0].as_str()).collect();
    assert_eq!(cells, ["\"4.6 mm\"", "4.60 mm", "surveyed 2026-05"]);
}

/// The terms of `a · b + c · d − e · f`, as the sheet writes it.
fn terms(text: &str) -> Vec<f64> {
    let product = |term: &str| -> f64 {
        term.split(" · ").map(|factor| factor.parse::<f64>().unwrap()).product()
    };
    text.replace(" − ", " + -").split(" + ").map(product).collect()
}

#[test]
fn the_formulas_with_their_numbers_give_their_results() {
    let mut count = 0;
    for name in EXAMPLES {
        for units in ["si", "us"] {
            let page = sheet(&example(name), &["--units", units]);
            for line in page.paragraphs() {
                let Some((load, rest)) = line.split_once(" = ") else { continue };
                let Some((sum, result)) = rest.split_once(" = ") else { continue };
                let known = ["F, ", "Fx, ", "Fz, ", "Mc, "].iter().any(|one| load.starts_with(one));
                if !known && load != "m" {
                    continue;
                }
                let result: f64 = result.split(' ').next().unwrap().parse().unwrap();
                let terms = terms(sum);
                let size: f64 = terms.iter().map(|term| term.abs()).sum();
                let off = (terms.iter().sum::<f64>() - result).abs();
                assert!(off <= 2e-6 * size + 1e-9, "{name}: {line}");
                count += 1;
            }
        }
    }
    assert!(count > 250, "{count} formulas");
}

/// An example with other lines in it, and levels at which both methods are held together.
type Variant = (&'static str, &'static [(&'static str, &'static str)], [&'static str; 3]);

const HEAD: &str = "reference    = \"atmosphere\"";

/// What no example has: every reference of a head sensor, one far up and wide, layers under a head
/// sensor, liquid outside that relieves.
const VARIANTS: [Variant; 5] = [
    (
        "brine_day_tank",
        &[
            (HEAD, "reference = \"gas space\""),
            ("vented = true", "lowest = \"-1 kPa\"\npressure = \"2 kPa\"\nhighest = \"5 kPa\""),
            ("closed       = false", "closed = true"),
        ],
        ["0.1 m", "4.9 m", "9.6 m"],
    ),
    (
        "brine_day_tank",
        &[(HEAD, "reference = \"absolute\"\natmosphere = [\"97 kPa(a)\", \"104 kPa(a)\"]")],
        ["0.2 m", "6.1 m", "9.3 m"],
    ),
    (
        "brine_day_tank",
        &[
            ("at           = \"0.15 m\"", "at = \"2.0 m\""),
            ("uncertainty  = \"0.2 kPa\"", "uncertainty = \"6 kPa\""),
        ],
        ["1.5 m", "2.3 m", "9.5 m"],
    ),
    (
        "rinse_basin",
        &[
            ("sensor      = \"ullage\"", "sensor = \"head\"\nreference = \"atmosphere\""),
            ("at          = \"2.9 m\"", "at = \"0.1 m\""),
            (
                "{ modbus = { unit = 1, function = 4, register = 0, count = \"u16\", scale = \"1 mm\" } }",
                "{ current_loop = [\"0 kPa\", \"40 kPa\"] }",
            ),
            ("uncertainty = \"5 mm\"", "uncertainty = \"0.3 kPa\""),
            ("uncertainty_of_distance = \"0.3 %\"", ""),
        ],
        ["0.2 m", "0.9 m", "2.2 m"],
    ),
    (
        "rinse_basin",
        &[("highest = \"0.6 m\"", "highest = \"0.6 m\"\nlowest = \"0.4 m\"")],
        ["0 m", "0.5 m", "1.9 m"],
    ),
];

#[test]
fn both_methods_agree_for_every_sensor_and_surrounding() {
    for (name, changes, levels) in VARIANTS {
        let tank = TankText::example(name, |text| {
            changes.iter().fold(text, |text, (from, to)| {
                assert!(text.contains(from), "{name}: {from}");
                text.replace(from, to)
            })
        });
        let output = tank.inside("a.html").display().to_string();
        for level in levels {
            let path = tank.path();
            let arguments = ["sheet", &path, "-o", &output, "--force", "--level", level];
            let (status, value) = document(&arguments);
            assert_eq!((status, &value["agrees"]), (0, &Value::Bool(true)), "{name} at {level}");
            assert!(value["loads_compared"].as_u64().unwrap() > 40, "{name}: {value}");
        }
    }
}

#[test]
fn what_a_file_says_stays_text() {
    let hostile = "<script>alert(1)</script>&";
    let named = |text: String| {
        text.replace("\"drain cover\"", "\"<b>&'x' onload=y\"")
            .replace("name = \"rinse basin\"", "name = \"</title><script>\"")
            .replace("assumed: no drawing found, as the walls", &format!("assumed: {hostile}"))
            .replace("strapping =", &format!("conditions = ['{hostile}', '\"><i>']\nstrapping ="))
    };
    let tank = TankText::example("rinse_basin", named);
    let page = sheet(&tank.path(), &["--date", "\"><script>x</script>"]);
    assert_eq!(page.count("script"), 0);
    assert_eq!(page.count("i"), 0);
    let text = page.text();
    for piece in [hostile, "</title><script>", "<b>&'x' onload=y", "\"><i>", "\"><script>x"] {
        assert!(text.contains(piece), "{piece}");
    }
}

#[test]
fn provisional_comes_first_and_conditions_can_be_ticked() {
    let page = sheet(&example("rinse_basin"), &[]);
    let text = page.text();
    let at = |piece: &str| text.find(piece).unwrap_or_else(|| panic!("{piece}"));
    assert!(at("PROVISIONAL: these capacities are assumed") < at("Governing"));
    assert!(at("apron: assumed: no drawing found") < at("Governing"));
    let page = sheet(&example("brine_day_tank"), &[]);
    assert!(!page.text().contains("PROVISIONAL"));
    assert!(
        page.text().contains("vertical seams radiographed before any fill above 5 m (line 13)")
    );
    assert!(page.source().contains("<span class=\"tick\">"));
}

#[test]
fn the_date_is_blank_or_as_given_and_bytes_repeat() {
    let folder = TankText::new("");
    let write = |name: &str, more: &[&str]| {
        let path = folder.inside(name);
        let file = path.display().to_string();
        let tank = example("brine_day_tank");
        assert_eq!(run(&[&["sheet", &tank, "-o", &file], more].concat()).status, 0);
        std::fs::read(path).unwrap()
    };
    let first = write("a.html", &[]);
    assert_eq!(first, write("b.html", &[]));
    let dated = String::from_utf8(write("c.html", &["--date", "2026-11-30"])).unwrap();
    assert!(dated.contains("2026-11-30"));
    assert_eq!(dated.replace("2026-11-30", ""), String::from_utf8(first).unwrap());
}

#[test]
fn overrides_are_taken_and_named_as_such() {
    let page = sheet(&example("brine_day_tank"), &["--level", "5 m", "--product", "rinse water"]);
    let text = page.text();
    assert!(text.contains("5.000 m"), "the level");
    assert!(text.contains("command line"), "where it comes from");
    let ran = run(&["sheet", &example("brine_day_tank"), "-o", "x.html", "--level", "12 m"]);
    assert_eq!(ran.status, 2);
    assert!(ran.stderr.contains("above the shell top"), "{}", ran.stderr);
}

#[test]
fn the_file_is_written_as_other_commands_do() {
    let folder = TankText::new("");
    let output = folder.inside("brine.html");
    let path = output.display().to_string();
    let tank = example("brine_day_tank");
    let (status, value) = document(&["sheet", &tank, "-o", &path]);
    assert_eq!(status, 0);
    assert_eq!(value["schema"], "strake.sheet/1");
    assert_eq!(value["governing"], "course 1");
    assert_eq!(value["agrees"], true);
    assert!(value["loads_compared"].as_u64().unwrap() >= 50);
    assert!(value["largest_difference"].as_f64().unwrap() <= 1.0);
    let print = value["fingerprint"].as_str().unwrap();
    let written = std::fs::read_to_string(&output).unwrap();
    assert!(written.contains(print));
    // Once more: refused, and nothing has changed; with --force replaced.
    let ran = run(&["sheet", &tank, "-o", &path]);
    assert_eq!(ran.status, 8);
    assert!(ran.stderr.contains("--force"), "{}", ran.stderr);
    assert_eq!(run(&["sheet", &tank, "-o", &path, "--force"]).status, 0);
    assert_eq!(std::fs::read_to_string(&output).unwrap(), written);
    let names = std::fs::read_dir(output.parent().unwrap()).unwrap();
    assert_eq!(names.count(), 2, "tank.toml and brine.html");
    // A folder that is not there, a tank that is not there, a broken one.
    let missing = folder.inside("none").join("a.html").display().to_string();
    let ran = run(&["sheet", &tank, "-o", &missing]);
    assert_eq!(ran.status, 6);
    assert!(ran.stderr.starts_with("error: cannot write "), "{}", ran.stderr);
    let other = folder.inside("b.html").display().to_string();
    assert_eq!(run(&["sheet", "configs/no.toml", "-o", &other]).status, 3);
    assert_eq!(run(&["sheet", "configs/invalid/basis.toml", "-o", &other]).status, 3);
    assert!(!folder.inside("b.html").exists());
}

#[test]
fn the_help_is_pinned() {
    let ran = run(&["sheet", "--help"]);
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""));
    if std::env::var_os("STRAKE_SNAPSHOTS").is_some() {
        let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../tests/cli/snapshots/sheet_help.txt");
        std::fs::write(path, &ran.stdout).unwrap();
    }
    assert_eq!(ran.stdout, include_str!("snapshots/sheet_help.txt"));
}
