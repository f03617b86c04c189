//! The command line as a user meets it: numbers, texts, exit statuses, streams.

mod assess;
mod curved_parts;

mod errors;
mod figures;
mod filling;
mod hatches;
mod liquids;
mod mesh_parts;
mod odd_shapes;
mod plates;
mod rerate;
mod schema;
mod seal;
mod sheet;
mod slips;
mod streams;
mod tank_text;

use assert_cmd::Command;
use serde_json::Value;
use std::path::Path;

/// The program, run at the top of the repository.
fn strake() -> Command {
    let mut command = Command::cargo_bin("strake").expect("the program is built");
    command.current_dir(Path::new(env!("CARGO_MANIFEST_DIR")).join(".."));
    command.env_remove("NO_COLOR").env_remove("CLICOLOR_FORCE").env_remove("CLICOLOR");
    command
}

/// What a run gave.
struct Ran {
    status: i32,
    stdout: String,
    stderr: String,
}

fn run(arguments: &[&str]) -> Ran {
    let output = strake().args(arguments).output().expect("the program runs");
    Ran {
        status: output.status.code().expect("it ended by itself"),
        stdout: String::from_utf8(output.stdout).expect("UTF-8"),
        stderr: String::from_utf8(output.stderr).expect("UTF-8"),
    }
}

/// The one document on standard output.
fn document(arguments: &[&str]) -> (i32, Value) {
    let ran = run(&[arguments, &["--format", "json"]].concat());
    assert_eq!(ran.stderr, "", "nothing but the document");
    (ran.status, serde_json::from_str(&ran.stdout).expect("one JSON document"))
}
