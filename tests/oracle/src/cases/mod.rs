//! Check cases: published values and own ones, read once and answered by whoever is under test.
//!
//! Row: one case with inputs, an expected value, a tolerance and a source. Problem: the same case
//! as parts, liquids and a quantity, free of wording. An answerer takes a row to an answer or says
//! why it has none; [`run`] compares, counts and keeps the disagreements.
//!
//! A second answerer (the load engine) reads the same [`Problem`] and answers it in its own way.

mod csv;
pub mod problem;
mod read;
mod row;
mod rules;
mod solve;
mod tally;

pub use problem::{
    BoundAsk, CourseAsk, CurvedAsk, CurvedPart, DensityAsk, DesignedForAsk, DoorAsk, Line,
    PlaneAsk, Plate, Problem, Securing,
};
pub use read::problem_of;
pub use row::{Row, edge_rows, open_rows, own_rows};
pub use solve::solve;
pub use tally::{Answer, Tally, TopicCount, run};

/// Why a row has no answer: one class, the same words for every row of the class.
pub type Reason = &'static str;

/// The oracle's answer to a row.
///
/// # Errors
/// The class of rows it belongs to when the oracle has no answer.
pub fn oracle_answer(row: &Row) -> Result<Answer, Reason> {
    let answer = solve(&problem_of(row)?)?;
    Ok(match answer {
        Answer::Number(degrees) if row.unit == "rad" => Answer::Number(degrees.to_radians()),
        other => other,
    })
}
