//! The libraries, as a process that answers questions.

use serde_json::Value;
use std::io::Write as _;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

fn place() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../target/reference")
}

/// Why the tests are left out; none when the libraries were installed.
pub(crate) fn missing() -> Option<String> {
    // Written behind a complete installation.
    (!place().join("stamp").is_file()).then(|| {
        "not installed; .ci/reference does it where a package index can be reached".to_owned()
    })
}

/// The answers of the libraries, one for each question.
pub(crate) fn ask(questions: &[Value]) -> Result<Vec<f64>, Box<dyn std::error::Error>> {
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/reference/second_opinion.py");
    let mut process = Command::new(place().join("bin/python3"))
        .arg(script)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()?;
    let lines: Vec<String> = questions.iter().map(Value::to_string).collect();
    let text = lines.join("\n");
    let mut input = process.stdin.take().ok_or("no input")?;
    // It answers while it is asked: a pipe could fill in both directions.
    let asking = std::thread::spawn(move || input.write_all(text.as_bytes()));
    let output = process.wait_with_output()?;
    asking.join().map_err(|_| "asking failed")??;
    if !output.status.success() {
        return Err(format!("the libraries ended with {}", output.status).into());
    }
    let answers: Vec<f64> =
        std::str::from_utf8(&output.stdout)?.lines().map(str::parse).collect::<Result<_, _>>()?;
    if answers.len() != questions.len() {
        return Err(format!("{} answers to {}", answers.len(), questions.len()).into());
    }
    Ok(answers)
}
