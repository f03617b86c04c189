//! The sheet as text.

use super::{Context, Options, line_of, render, second, sheet};
use crate::assess::{Overrides, Request, assess};
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

#[test]
fn methods_that_do_not_agree_are_the_first_thing_said() {
    let bytes = include_bytes!("../../../configs/brine_day_tank.toml");
    let file = tank::parse("brine.toml", bytes).unwrap();
    let request = Request::new(&file, Overrides::default()).unwrap();
    let assessment = assess(&file, &request).unwrap();
    for wrong in [1.001, f64::NAN] {
        let mut compared = second::compare(&file, &request, &assessment);
        for pair in compared[4].iter_mut().flat_map(|one| one.states.iter_mut().flatten()) {
            pair.first *= wrong;
        }
        let agreement = second::worst(&compared);
        assert!(agreement.1 > 1.0, "{agreement:?}");
        let context = Context {
            file: &file,
            request: &request,
            assessment: &assessment,
            compared,
            units: UnitSystem::Si,
            date: None,
        };
        let html = render(&context, 0, agreement);
        let said = html.find("THE TWO METHODS DO NOT AGREE").unwrap();
        assert!(said < html.find("Governing").unwrap());
        assert!(html.contains("ground hatch: force,"), "which load of which part");
        assert!(!html.contains("course 1: hoop tension,"));
    }
}
