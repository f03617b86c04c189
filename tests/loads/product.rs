//! The published, own and edge cases through the product: a tank file is written for each row,
//! read, compiled and asked, as a user would; plain loads go straight to the core.
//!
//! Every topic of the case files stands in the lists below with the number of rows that are
//! answered; a row without an answer is printed with its reason.

mod alarms;
mod bytes;
mod courses;
pub(crate) mod file;
mod hatches;
mod places;
mod times;

use crate::cases::holds;
use crate::core_cases::core_answer;
use crate::plate_cases;
use strake_oracle::cases::{Answer, Reason, Row, Tally, edge_rows, open_rows, own_rows, run};

pub(crate) use hatches::plane as hatch_answer;

/// Relative error granted to f32 on top of a row's own tolerance: the design's bound of 2e-6, and
/// the rounding of the row's decimals into f32. What is worked out in f64 has none.
const ALLOWANCE: f64 = 4e-6;
/// Topics whose answers are f32 loads of the core.
const OF_LOADS: &[&str] =
    &["bound", "curved", "density", "designed_for", "hatch", "plane", "shell", "signal", "time"];

const OPEN_ANSWERED: &[(&str, usize)] = &[
    ("alarm", 7),
    ("comms", 8),
    ("corrosion", 3),
    ("curved", 29),
    ("density", 13),
    ("fatigue", 6),
    ("gravity", 4),
    ("hatch", 14),
    ("incident", 0),
    ("plane", 50),
    ("plate", 59),
    ("shell", 15),
    ("signal", 3),
    ("uncertainty", 0),
    ("volume", 4),
];
const OWN_ANSWERED: &[(&str, usize)] = &[
    ("bound", 5),
    ("curved", 16),
    ("density", 3),
    ("hatch", 16),
    ("plane", 8),
    ("plate", 2),
    ("shell", 5),
    ("time", 1),
];
const EDGE_ANSWERED: &[(&str, usize)] = &[
    ("bound", 10),
    ("designed_for", 10),
    ("hatch", 3),
    ("plane", 65),
    ("shell", 6),
    ("signal", 7),
    ("time", 6),
];

fn answer(row: &Row) -> Result<Answer, Reason> {
    let number = match row.topic.as_str() {
        "alarm" => return alarms::answer(row),
        "comms" => return bytes::answer(row),
        "fatigue" => return bytes::cycles(row),
        "plate" => return plate_cases::answer(row),
        "corrosion" => courses::life(row),
        "shell" if row.has("rule") => courses::rule(row),
        "hatch" if row.has("rule") => hatches::rule(row),
        "designed_for" => return hatches::designed_for(row),
        "gravity" => places::gravity(row),
        "volume" => places::volume(row),
        "density" if row.has("liquid") || row.has("VCF") => places::density(row),
        "signal" if row.is("rule", "current_loop") => times::loop_level(row),
        "time" => times::answer(row),
        "signal" if !row.is("rule", "NE43") => Err("no such sensor is offered"),
        "incident" => Err("stress of plastics and rivets is not the tool's"),
        "uncertainty" => Err("second-order terms are not the tool's"),
        _ => return core_answer(row),
    };
    number.map(Answer::Number)
}

fn tally(rows: &[Row]) -> Tally {
    let of_loads = |row: &&Row| OF_LOADS.contains(&row.topic.as_str());
    let (loads, others): (Vec<&Row>, Vec<&Row>) = rows.iter().partition(of_loads);
    let owned = |rows: Vec<&Row>| rows.into_iter().cloned().collect::<Vec<Row>>();
    run(&owned(loads), ALLOWANCE, &answer).and(run(&owned(others), 0.0, &answer))
}

#[test]
fn the_product_reproduces_the_published_values() {
    holds(&tally(&open_rows()), OPEN_ANSWERED);
}

#[test]
fn the_product_reproduces_the_own_values() {
    holds(&tally(&own_rows()), OWN_ANSWERED);
}

#[test]
fn the_product_reproduces_the_edge_cases_and_traps() {
    holds(&tally(&edge_rows()), EDGE_ANSWERED);
}
