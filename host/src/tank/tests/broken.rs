//! Single slips in an otherwise sound file, each with its class and what the message must name.

use super::{configs, tank_files};
use crate::tank::{Code, parse, parse_in};

/// The brine tank with one text replaced.
fn with(from: &str, to: &str) -> Vec<u8> {
    let (_, bytes) =
        tank_files(&configs()).into_iter().find(|(name, _)| name == "brine_day_tank").unwrap();
    let text = String::from_utf8(bytes).unwrap();
    assert!(text.contains(from), "{from}");
    text.replacen(from, to, 1).into_bytes()
}

/// The replaced text gives this one finding, and its message or hint holds the words.
fn slip(from: &str, to: &str, code: Code, words: &str) {
    let findings = parse_in(&configs(), "t.toml", &with(from, to)).expect_err(to);
    let list = findings.list();
    assert_eq!(list.len(), 1, "{findings}");
    assert_eq!(list[0].code, code, "{findings}");
    let text = format!("{}\n{}", list[0].message, list[0].hint);
    assert!(text.contains(words), "{text}");
}

#[test]
fn nothing_that_decides_a_load_is_defaulted() {
    let missing = |line: &str, words: &str| slip(line, "", Code::MissingKey, words);
    missing("uncertainty = \"0.5 %\"", "never exceeds");
    missing("uncertainty  = \"0.2 kPa\"", "as a pressure");
    missing("expansion   = \"4.0e-4 /K\"", "expansion = \"none\"");
    missing("range       = [\"5 degC\", \"35 degC\"] ", "coldest and hottest");
    missing("reference    = \"atmosphere\"", "\"gas space\"");
    missing("sealed_to = { circle = { diameter = \"0.66 m\" } }", "the line of the gasket");
    missing("opens     = \"outward\"", "\"inward\"");
    missing("response_time      = \"15 min\"", "until the filling has stopped");
    missing("utilisation = 0.85, ", "share of the capacity");
    missing("deadband = 0.02, ", "below the threshold");
    missing("on_delay = \"10 s\", ", "before it counts");
    missing("joint_efficiency = 0.85 ", "joint_efficiency = 0.85");
    missing(", allowable_stress = \"137 MPa\"", "allowable_stress");
    missing(", corrosion_allowance = \"1 mm\"", "\"0 mm\" when none is");
    slip(", basis = \"surveyed 2026-05\"", "", Code::Basis, "code default");
    slip("[gas]\nvented = true", "", Code::MissingTable, "never assumed");
}

#[test]
fn a_design_point_needs_its_rule_and_its_limits() {
    slip("\"0.3 m\"", "\"0.5 m\"", Code::DesignPoint, "\"1 ft\"");
    slip("rule         = \"API 653 4.3.3.1\"", "", Code::DesignPoint, "needs the rule");
    assert!(parse("t.toml", &with("design_point = \"0.3 m\"", "design_point = \"1 ft\"")).is_ok());
    assert!(parse("t.toml", &with("design_point = \"0.3 m\"", "design_point = \"0 m\"")).is_ok());
    // 61 m is allowed, more is not; four courses make four findings.
    assert!(parse("t.toml", &with("\"8.0 m\"", "\"61 m\"")).is_ok());
    let findings = parse("t.toml", &with("\"8.0 m\"", "\"61.1 m\"")).unwrap_err();
    assert_eq!(findings.list().len(), 4, "{findings}");
    assert!(findings.list().iter().all(|finding| finding.code == Code::DesignPoint));
}

#[test]
fn limits_are_met_exactly() {
    assert!(parse("t.toml", &with("\"brine day tank 3\"", "\"123456789012345678901234\"")).is_ok());
    let long = "\"1234567890123456789012345\"";
    slip("\"brine day tank 3\"", long, Code::NameTooLong, "25 bytes, the device holds 24");
    assert!(parse("t.toml", &with("overflow     = \"9.3 m\"", "overflow = \"9.6 m\"")).is_ok());
    slip("overflow     = \"9.3 m\"", "overflow = \"9.62 m\"", Code::FillOrder, "9.600 m");
    assert!(parse("t.toml", &with("height       = \"2.4 m\"", "height = \"2.401 m\"")).is_ok());
    slip("height       = \"2.4 m\"", "height = \"2.402 m\"", Code::CourseOverlap, "2.402 m");
    slip("height       = \"2.4 m\"", "height = \"2.398 m\"", Code::CourseGap, "2.398 m");
    slip("bolts = 28", "bolts = 2", Code::OutOfRange, "3 to 999");
    assert!(parse("t.toml", &with("slope     = \"90 deg\"", "slope = \"1 deg\"")).is_ok());
    slip("slope     = \"90 deg\"", "slope = \"0.9 deg\"", Code::Slope, "0 deg");
    slip("slope     = \"90 deg\"", "slope = \"181 deg\"", Code::OutOfRange, "at most 180");
}

#[test]
fn keys_of_later_versions_are_refused_by_name() {
    let later = |from: &str, to: &str, words: &str| slip(from, to, Code::NotOffered, words);
    later("[gas]", "[gas]\nsignal = 1", "`signal` in [gas] is not offered");
    later(
        "[[course]]",
        "[[level.check]]\nsensor = \"head\"\n[[course]]",
        "`check` in [level] is not offered",
    );
    let vessel = "cylinder   = { diameter = \"8.0 m\", height = \"9.6 m\" }";
    let dished = "lying = { diameter = \"8 m\", length = \"9 m\", heads = \"dished\" }";
    later(vessel, dished, "`dished`, only flat ones are offered");
}

#[test]
fn a_mesh_says_its_unit_and_is_there() {
    let mesh = |keys: &str| {
        format!(
            "[[curved]]\nname = \"door\"\n{keys}\ncapacity = [ {{ none = \"loads\" }} ]\n[alarm]"
        )
    };
    let there = "mesh = \"sampling_pocket.stl\"";
    slip("[alarm]", &mesh(there), Code::MissingKey, "`unit` is missing");
    let unit = format!("{there}\nunit = \"mm\"");
    let sound = with("[alarm]", &mesh(&unit));
    assert!(parse_in(&configs(), "t.toml", &sound).is_ok());
    let absent = mesh("mesh = \"absent.stl\"\nunit = \"mm\"");
    slip("[alarm]", &absent, Code::Mesh, "counts from the folder of the tank file");
    let placed = mesh(&format!("{unit}\naxis = \"2 m\""));
    slip("[alarm]", &placed, Code::UnknownKey, "key `axis` is not known");
}

#[test]
fn a_strapping_table_rises_and_has_its_rows() {
    let table = |rows: &str| format!("strapping = [{rows}]\n[fill]");
    for rows in [
        "[\"0 m\", \"0 m3\"]",
        "[\"0 m\", \"0 m3\"], [\"9.6 m\", \"0 m3\"]",
        "[\"9.6 m\", \"0 m3\"], [\"9.6 m\", \"4 m3\"]",
    ] {
        slip("[fill]", &table(rows), Code::StrappingTable, "needs 2 to 32 rows");
    }
    let late = table("[\"1 m\", \"0 m3\"], [\"9.6 m\", \"400 m3\"]");
    slip("[fill]", &late, Code::StrappingTable, "covers 1.000 m to 9.600 m");
    let window = "response_time      = \"15 min\"\ninflow_window = \"170 s\"";
    slip("response_time      = \"15 min\"", window, Code::Interval, "2.8 min, three times");
}

#[test]
fn a_broken_part_does_not_look_like_a_gap() {
    slip("bottom       = \"2.4 m\"", "bottom = 2.4", Code::BareNumber, "\"2.4 m\"");
}

#[test]
fn crlf_and_a_byte_order_mark_change_nothing() {
    let text = String::from_utf8(with("[tank]", "[tank]")).unwrap();
    assert!(parse("t.toml", text.replace('\n', "\r\n").as_bytes()).is_ok());
    assert!(parse("t.toml", format!("\u{feff}{text}").as_bytes()).is_ok());
}
