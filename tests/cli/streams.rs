//! Streams, colour, help and version.

use crate::{run, strake};
use std::io::Read;
use std::process::Stdio;

const BRINE: &str = "configs/brine_day_tank.toml";

#[test]
fn a_reader_that_goes_away_ends_it_quietly() {
    let binary = strake().get_program().to_owned();
    let mut child = std::process::Command::new(binary)
        .args(["assess", BRINE, "--level", "5 m"])
        .current_dir(concat!(env!("CARGO_MANIFEST_DIR"), "/.."))
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    // Closed before anything is read.
    drop(child.stdout.take());
    let mut stderr = String::new();
    child.stderr.take().unwrap().read_to_string(&mut stderr).unwrap();
    assert_eq!(child.wait().unwrap().code(), Some(0));
    assert_eq!(stderr, "");
}

#[test]
fn version_names_every_format() {
    let ran = run(&["--version"]);
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""));
    assert!(ran.stdout.starts_with("strake "), "{}", ran.stdout);
    for line in ["plan format 1", "journal format 1", "protocol 1"] {
        assert!(ran.stdout.lines().any(|one| one == line), "{}", ran.stdout);
    }
}

#[test]
fn help_is_a_result_and_lists_the_exit_statuses() {
    let ran = run(&["--help"]);
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""));
    for piece in ["assess", "seal", "--format", "--units", "Exit status:", "130  interrupted"] {
        assert!(ran.stdout.contains(piece), "{}", ran.stdout);
    }
    for command in ["assess", "seal"] {
        let ran = run(&[command, "--help"]);
        assert_eq!(ran.status, 0);
        assert!(ran.stdout.contains("Examples:"), "{}", ran.stdout);
        assert!(ran.stdout.lines().all(|line| line.chars().count() <= 100), "{}", ran.stdout);
    }
}

#[test]
fn colour_only_where_it_is_asked_for() {
    let escape = '\u{1b}';
    let arguments = ["assess", BRINE, "--level", "5 m"];
    assert!(!run(&arguments).stdout.contains(escape), "a pipe is no terminal");
    let coloured = run(&[&arguments[..], &["--color", "always"]].concat()).stdout;
    assert!(coloured.contains(escape));
    let plain = run(&[&arguments[..], &["--color", "never"]].concat()).stdout;
    let stripped = coloured.replace("\u{1b}[1m", "").replace("\u{1b}[0m", "");
    assert_eq!(stripped, plain, "colour is never the only sign");
    let error = run(&["assess", BRINE, "--level", "9.7 m", "--color", "always"]).stderr;
    assert!(error.contains(escape));
}
