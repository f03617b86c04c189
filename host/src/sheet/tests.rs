//! The sheet as text.

use super::{Options, line_of, sheet};
use crate::assess::{Overrides, Request};
use crate::tank;
use crate::units::UnitSystem;

#[test]
fn lines_count_from_one() {
    assert_eq!(line_of("a\nb\nc", 0), 1);
    assert_eq!(line_of("a\nb\nc", 2), 2);
    assert_eq!(line_of("a\nb\nc", 4), 3);
}

#[test]
fn the_same_input_gives_the_same_bytes() {
    let bytes = include_bytes!("../../../configs/rinse_basin.toml");
    let file = tank::parse("basin.toml", bytes).unwrap();
    let request = Request::new(&file, Overrides::default()).unwrap();
    let options = Options { units: UnitSystem::Si, date: None };
    let [first, again] = [0, 1].map(|_| sheet(&file, &request, options).unwrap());
    assert_eq!(first.html, again.html);
    assert!(first.agrees(), "{}", first.largest_share);
    let us = Options { units: UnitSystem::UsCustomary, ..options };
    assert_ne!(sheet(&file, &request, us).unwrap().html, first.html);
}
