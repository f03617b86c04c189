//! Tests of the device's own machine code on an emulated Cortex-M4F.
//!
//! They need a compiler for the target and the emulator. Where one is missing every test is listed
//! as ignored with the reason, and with the variable CI set, as failed.

/// The tests of a module, each under its own name.
macro_rules! tests {
    ($($name:ident,)*) => { &[$((stringify!($name), $name),)*] };
}

mod bits;
mod cuts;
mod debugger;
mod device;
mod drivers;
mod flash_file;
mod footprint;
mod image;
mod log;
mod machine;
mod nrf52840;
mod operation;
mod panics;
mod plugin;
mod program;
mod qmp;
mod recovery;
mod sensor;
mod toolchain;

use libtest_mimic::{Arguments, Failed, Trial};

/// What a test gives back; any error fails it.
type Outcome = Result<(), Box<dyn std::error::Error>>;

/// A test: its name and what it runs.
type Test = (&'static str, fn() -> Outcome);

/// An error unless both are the same.
fn same<T: PartialEq + std::fmt::Debug + ?Sized>(found: &T, expected: &T) -> Outcome {
    if found == expected {
        return Ok(());
    }
    Err(format!("found {found:?}, expected {expected:?}").into())
}

/// An error that says `what` unless the condition holds.
fn hold(condition: bool, what: &str) -> Outcome {
    if condition { Ok(()) } else { Err(what.into()) }
}

/// A test of this name, ignored when `missing` says what this machine lacks.
fn trial(missing: Option<&'static str>, (name, run): Test) -> Trial {
    let trial = Trial::test(name, move || run().map_err(|error| Failed::from(error.to_string())));
    match missing {
        Some(what) => trial.with_kind(format!("needs {what}")).with_ignored_flag(true),
        None => trial,
    }
}

fn main() {
    let arguments = Arguments::from_args();
    let missing = toolchain::missing();
    let groups = [
        drivers::TESTS,
        bits::TESTS,
        cuts::TESTS,
        operation::TESTS,
        program::TESTS,
        recovery::TESTS,
        footprint::TESTS,
        panics::TESTS,
        nrf52840::TESTS,
    ];
    let trials: Vec<Trial> = groups
        .into_iter()
        .flatten()
        .map(|&test| trial(missing.as_ref().map(|(what, _)| *what), test))
        .collect();
    if let Some((what, remedy)) = &missing
        && !arguments.list
    {
        eprintln!("left out: {} tests that need {what}: {remedy}", trials.len());
    }
    libtest_mimic::run(&arguments, trials).exit();
}
