//! Why a command did not do what it was asked: what, where, and what to do.

mod device;

use crate::exit::Exit;
use crate::tank::Findings;
use serde_json::{Value, json};
use std::io;

/// A failure of a command; it decides the exit status.
#[derive(Debug)]
pub enum Failure {
    /// The reader of standard output went away: not an error.
    ClosedPipe,
    /// Everything that is wrong with a tank file.
    Findings(Findings),
    /// One thing that went wrong.
    Said(Said),
}

/// One thing that went wrong.
#[derive(Debug)]
pub struct Said {
    /// The exit status.
    pub exit: Exit,
    /// Its class, stable, for scripts.
    pub code: &'static str,
    /// What went wrong and where, in lower case, the value against the limit.
    pub message: String,
    /// What to do; empty when there is nothing to add.
    pub hint: String,
}

impl Failure {
    /// One thing that went wrong.
    pub fn new(
        exit: Exit,
        code: &'static str,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) -> Self {
        Self::Said(Said { exit, code, message: message.into(), hint: hint.into() })
    }

    /// The exit status.
    #[must_use]
    pub const fn exit(&self) -> Exit {
        match self {
            Self::ClosedPipe => Exit::Done,
            Self::Findings(_) => Exit::InvalidInput,
            Self::Said(said) => said.exit,
        }
    }

    /// The failure for a person; nothing for a closed pipe.
    #[must_use]
    pub fn to_text(&self, coloured: bool) -> Option<String> {
        match self {
            Self::ClosedPipe => None,
            Self::Findings(findings) => Some(findings.to_text(coloured)),
            Self::Said(said) => {
                let (on, off) = if coloured { ("\u{1b}[1;31m", "\u{1b}[0m") } else { ("", "") };
                let hint = match said.hint.as_str() {
                    "" => String::new(),
                    hint => format!("  hint: {hint}\n"),
                };
                Some(format!("{on}error{off}: {}\n{hint}", said.message))
            }
        }
    }

    /// The failure as a document `strake.error/1`.
    #[must_use]
    pub fn to_json(&self) -> Option<Value> {
        match self {
            Self::ClosedPipe => None,
            Self::Findings(findings) => Some(json!({
                "schema": "strake.error/1",
                "code": "invalid-tank-file",
                "message": format!("{} is no valid tank file", findings.path()),
                "hint": "correct what the findings name",
                "findings": findings.to_json(),
            })),
            Self::Said(said) => Some(json!({
                "schema": "strake.error/1",
                "code": said.code,
                "message": said.message,
                "hint": said.hint,
            })),
        }
    }
}

impl From<Findings> for Failure {
    fn from(findings: Findings) -> Self {
        Self::Findings(findings)
    }
}

/// An error while the result was written to standard output.
impl From<io::Error> for Failure {
    fn from(error: io::Error) -> Self {
        if error.kind() == io::ErrorKind::BrokenPipe {
            return Self::ClosedPipe;
        }
        let message = format!("the result could not be written in full: {error}");
        Self::new(Exit::Partial, "output", message, "check where standard output goes")
    }
}
