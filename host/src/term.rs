//! The terminal: the only file that writes to standard output and standard error.
//!
//! Results go to standard output, everything else to standard error, so that a result can be piped.

mod meter;

pub use meter::Meter;

use crate::failure::Failure;
use crate::units::UnitSystem;
use serde::Serialize;
use std::io::{self, IsTerminal, Write};

/// How results are written.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, clap::ValueEnum)]
pub enum Format {
    /// For people.
    #[default]
    Text,
    /// One document, or JSON Lines where records stream; always SI.
    Json,
}

/// When colour is used. It is never the only sign.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, clap::ValueEnum)]
pub enum Colour {
    /// On a terminal, unless `NO_COLOR` is set.
    #[default]
    Auto,
    /// Always.
    Always,
    /// Never.
    Never,
}

/// What the global options say.
#[derive(Clone, Copy, Debug, Default)]
pub struct Settings {
    /// How results are written.
    pub format: Format,
    /// In which units text shows them.
    pub units: UnitSystem,
    /// When colour is used.
    pub colour: Colour,
    /// No notes on standard error.
    pub quiet: bool,
    /// How much detail on standard error.
    pub verbosity: u8,
}

/// Where a command speaks.
pub struct Term {
    settings: Settings,
    out: Box<dyn Write>,
    err: Box<dyn Write>,
    colour_out: bool,
    colour_err: bool,
}

impl std::fmt::Debug for Term {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Term").field("settings", &self.settings).finish_non_exhaustive()
    }
}

impl Term {
    /// The process's own streams.
    #[must_use]
    pub fn new(settings: Settings) -> Self {
        Self {
            settings,
            colour_out: coloured(settings.colour, &io::stdout()),
            colour_err: coloured(settings.colour, &io::stderr()),
            out: Box::new(io::stdout()),
            err: Box::new(io::stderr()),
        }
    }

    /// The global options.
    #[must_use]
    pub const fn settings(&self) -> &Settings {
        &self.settings
    }

    /// Whether a result on standard output may be coloured.
    #[must_use]
    pub const fn colour_out(&self) -> bool {
        self.colour_out
    }

    /// Writes a result, which ends with a line's end.
    ///
    /// # Errors
    /// [`Failure::ClosedPipe`], or that it could not be written in full.
    pub fn result(&mut self, text: &str) -> Result<(), Failure> {
        self.out.write_all(text.as_bytes())?;
        self.out.flush()?;
        Ok(())
    }

    /// Writes a result as one JSON document.
    ///
    /// # Errors
    /// As [`Term::result`].
    pub fn document(&mut self, document: &impl Serialize) -> Result<(), Failure> {
        let mut text = serde_json::to_string_pretty(document).map_err(io::Error::from)?;
        text.push('\n');
        self.result(&text)
    }

    /// A note beside the result, unless quiet. JSON output has no notes.
    pub fn note(&mut self, text: &str) {
        if !self.settings.quiet && self.settings.format == Format::Text {
            self.say(&format!("{text}\n"));
        }
    }

    /// A detail, with `-v`.
    pub fn detail(&mut self, text: &str) {
        if self.settings.verbosity > 0 {
            self.say(&format!("{text}\n"));
        }
    }

    /// Asks for a yes. `None` where nobody can be asked: without a terminal.
    pub fn ask(&mut self, question: &str) -> Option<bool> {
        if !(io::stdin().is_terminal() && io::stderr().is_terminal()) {
            return None;
        }
        self.say(&format!("{question} [y/N] "));
        let mut answer = String::new();
        // What cannot be read is no yes.
        let read = io::stdin().read_line(&mut answer).is_ok();
        Some(read && matches!(answer.trim(), "y" | "Y" | "yes"))
    }

    /// A display of how far something long is. JSON output and `--quiet` have none.
    #[must_use]
    pub fn meter(&self, what: &'static str, unit: &'static str) -> Meter {
        if self.settings.quiet || self.settings.format == Format::Json {
            return Meter::silent();
        }
        Meter::on_standard_error(what, unit)
    }

    /// Says why a command failed, in the format asked for.
    pub fn failure(&mut self, failure: &Failure) {
        let text = match self.settings.format {
            Format::Text => failure.to_text(self.colour_err),
            Format::Json => failure.to_json().map(|document| format!("{document}\n")),
        };
        self.say(&text.unwrap_or_default());
    }

    /// What the parser of the command line says: help and version are results.
    pub fn from_parser(&mut self, error: &clap::Error) {
        let rendered = error.render();
        if error.use_stderr() {
            let text =
                if self.colour_err { rendered.ansi().to_string() } else { rendered.to_string() };
            self.say(&text);
        } else {
            let text =
                if self.colour_out { rendered.ansi().to_string() } else { rendered.to_string() };
            // A reader that went away wants no help either.
            let _ = self.result(&text);
        }
    }

    /// Standard error has nobody to complain to.
    fn say(&mut self, text: &str) {
        let _ = self.err.write_all(text.as_bytes());
        let _ = self.err.flush();
    }
}

fn coloured(choice: Colour, stream: &impl anstream::stream::RawStream) -> bool {
    match choice {
        Colour::Always => true,
        Colour::Never => false,
        Colour::Auto => anstream::AutoStream::choice(stream) != anstream::ColorChoice::Never,
    }
}
