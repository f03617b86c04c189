//! The wiring table of a board names the pins that its program takes, and no others.

use std::collections::BTreeSet;

use crate::files;

const BOARD: &str = "firmware/boards/nrf52840";

/// Numbers of two digits behind every `mark`.
fn numbers<'a>(text: &'a str, mark: &str) -> BTreeSet<&'a str> {
    text.match_indices(mark).filter_map(|(at, _)| text[at + mark.len()..].get(..2)).collect()
}

#[test]
fn the_wiring_table_is_that_of_the_program() {
    let readme = &files::named(&format!("{BOARD}/README.md")).text;
    let program = &files::named(&format!("{BOARD}/src/pins.rs")).text;
    let wired = numbers(readme, "| P0.");
    assert_eq!(wired, numbers(program, "pins.p0_"));
    assert!(wired.len() > 10, "only {wired:?}");
    // Those that the program also knows by number.
    for (name, row) in
        [("CONTACT", "alarm contact"), ("HOST", "host plugged in"), ("BUTTON", "button")]
    {
        let number = program.split(&format!("const {name}: usize = ")).nth(1).expect("a number");
        let number: u8 = number.split(';').next().expect("an end").parse().expect("digits");
        let wired = format!("| P0.{number:02} | {row} |");
        assert!(readme.contains(&wired), "{wired}");
    }
}

#[test]
fn the_rules_find_what_they_should() {
    assert_eq!(numbers("| P0.05 |\n| P0.13 | P1.07", "| P0."), ["05", "13"].into());
    assert_eq!(numbers("pins.p0_05.into(); p0_06", "pins.p0_"), ["05"].into());
}
