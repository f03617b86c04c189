//! General libraries of the field as a second opinion: water, volumes, loads.
//!
//! They need Python with the libraries of `requirements.txt`. The gate installs them in
//! `target/reference`; where that was not possible, or nobody asked for it, every test is listed as
//! ignored with the reason. Once they are installed, a library that does not run is a failure.

mod loads;
mod python;
mod volumes;
mod water;

use libtest_mimic::{Arguments, Failed, Trial};

/// What a test gives back; any error fails it.
type Outcome = Result<(), Box<dyn std::error::Error>>;

/// A test: its name and what it runs.
type Test = (&'static str, fn() -> Outcome);

const TESTS: &[Test] = &[
    ("water_of_the_examples_stays_in_its_band", water::examples),
    ("water_as_a_table_is_met_between_its_rows", water::table),
    ("hydrometers_count_against_the_water_of_the_library", water::hydrometers),
    ("lying_drums_hold_what_the_library_says", volumes::lying),
    ("forces_and_moments_agree_with_quadrature", loads::planes),
];

fn main() {
    let arguments = Arguments::from_args();
    let missing = python::missing();
    if let Some(why) = &missing
        && !arguments.list
    {
        eprintln!("left out: {} tests that need general libraries: {why}", TESTS.len());
    }
    let trials = TESTS.iter().map(|&(name, run)| {
        let trial =
            Trial::test(name, move || run().map_err(|error| Failed::from(error.to_string())));
        match missing {
            Some(_) => trial.with_kind("needs Python libraries").with_ignored_flag(true),
            None => trial,
        }
    });
    libtest_mimic::run(&arguments, trials.collect()).exit();
}

/// An error that says `what` unless the condition holds.
fn hold(condition: bool, what: impl FnOnce() -> String) -> Outcome {
    if condition { Ok(()) } else { Err(what().into()) }
}
