//! The rules of the house, held against every file of the project.
//!
//! What rustfmt, rustc and clippy can judge is left to them. Each rule here is a function from
//! text to findings, and is shown to find what it should before it is trusted to find nothing.

mod attributes;
mod bytes;
mod configs;
mod dependencies;
mod documents;
mod files;
mod imports;
mod layout;
mod wiring;
mod words;

/// Fails with all findings of a rule at once.
fn none(rule: &str, findings: &[String]) {
    assert!(findings.is_empty(), "{rule}:\n  {}\n", findings.join("\n  "));
}

/// Tells a count to whoever reads the log; the test harness would swallow a plain print.
fn tell(text: &str) {
    use std::io::Write as _;
    // A log that cannot be written is no reason to fail.
    let _ = writeln!(std::io::stderr(), "house: {text}");
}
