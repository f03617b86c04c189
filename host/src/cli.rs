//! The command line: global options, and one subcommand each in [`crate::cmd`].

use crate::cmd::Command;
use crate::exit::Exit;
use crate::failure::Failure;
use crate::term::{Colour, Format, Settings, Term};
use crate::units::UnitSystem;
use clap::error::ErrorKind;
use clap::{ArgAction, Args, Parser, ValueEnum};
use std::ffi::OsString;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::LazyLock;

/// Version of the tool and of every format it reads and writes.
static VERSION: LazyLock<String> = LazyLock::new(|| {
    format!(
        "{}\nplan format {}\njournal format {}\nprotocol {}",
        env!("CARGO_PKG_VERSION"),
        strake_core::plan::PLAN_FORMAT,
        strake_core::journal::header::VERSION,
        strake_core::wire::PROTOCOL_VERSION
    )
});

fn exit_statuses() -> String {
    let rows = Exit::TABLE.iter().map(|(exit, what)| format!("  {:>3}  {what}", exit.number()));
    format!("Exit status:\n{}", rows.collect::<Vec<_>>().join("\n"))
}

/// Watches what the liquid in a tank does to its parts, against what they were designed to carry.
#[derive(Debug, Parser)]
#[command(name = "strake", version = VERSION.as_str(), after_long_help = exit_statuses())]
#[command(max_term_width = 100, propagate_version = false)]
pub struct Cli {
    /// Options of every subcommand.
    #[command(flatten)]
    pub global: Global,
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// In which units text shows quantities.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Units {
    /// International System of Units.
    Si,
    /// United States customary units.
    Us,
}

/// Options of every subcommand.
#[derive(Args, Clone, Copy, Debug)]
#[command(next_help_heading = "Output")]
pub struct Global {
    /// How results and errors are written
    #[arg(long, global = true, value_enum, default_value_t = Format::Text)]
    pub format: Format,
    /// Units of text output; JSON is always SI
    #[arg(long, global = true, value_enum, default_value_t = Units::Si)]
    pub units: Units,
    /// When to use colour
    #[arg(long, global = true, value_enum, default_value_t = Colour::Auto, value_name = "WHEN")]
    pub color: Colour,
    /// No notes on standard error
    #[arg(long, short, global = true)]
    pub quiet: bool,
    /// More detail on standard error
    #[arg(long, short, global = true, action = ArgAction::Count, conflicts_with = "quiet")]
    pub verbose: u8,
}

impl Global {
    const fn settings(self) -> Settings {
        Settings {
            format: self.format,
            units: match self.units {
                Units::Si => UnitSystem::Si,
                Units::Us => UnitSystem::UsCustomary,
            },
            colour: self.color,
            quiet: self.quiet,
            verbosity: self.verbose,
        }
    }
}

/// Runs the command line of this process.
#[must_use]
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> Exit {
    let arguments: Vec<OsString> = arguments.into_iter().collect();
    let cli = match Cli::try_parse_from(&arguments) {
        Ok(cli) => cli,
        Err(error) => return not_parsed(&arguments, &error),
    };
    let mut term = Term::new(cli.global.settings());
    // A panic has printed its own message; what is left is to say that it is ours, and the status.
    let outcome = catch_unwind(AssertUnwindSafe(|| cli.command.run(&mut term)));
    match outcome.unwrap_or_else(|_| Err(own_bug())) {
        Ok(exit) => exit,
        Err(failure) => {
            term.failure(&failure);
            failure.exit()
        }
    }
}

fn own_bug() -> Failure {
    Failure::new(
        Exit::Bug,
        "bug",
        "strake stopped on an error of its own; no result of this run may be used",
        "keep the input file and the message above, they show the error again",
    )
}

/// Help and version are results; anything else is a wrong use.
fn not_parsed(arguments: &[OsString], error: &clap::Error) -> Exit {
    let colour = asked(arguments, "--color").unwrap_or_default();
    let format = asked(arguments, "--format").unwrap_or_default();
    let mut term = Term::new(Settings { format, colour, ..Settings::default() });
    if !error.use_stderr() {
        term.from_parser(error);
        return Exit::Done;
    }
    if format == Format::Json && error.kind() != ErrorKind::DisplayHelpOnMissingArgumentOrSubcommand
    {
        let text = error.render().to_string();
        let message = text.split("\n\n").next().unwrap_or(&text);
        let message = message.trim_start_matches("error: ").replace('\n', " ");
        let hint = "see strake --help";
        term.failure(&Failure::new(Exit::Usage, "usage", message, hint));
    } else {
        term.from_parser(error);
    }
    Exit::Usage
}

/// The value of an option on a command line that could not be parsed.
fn asked<T: ValueEnum>(arguments: &[OsString], option: &str) -> Option<T> {
    let mut words = arguments.iter().filter_map(|word| word.to_str());
    while let Some(word) = words.next() {
        let value = match word.strip_prefix(option) {
            Some("") => words.next(),
            Some(rest) => rest.strip_prefix('='),
            None => None,
        };
        if let Some(value) = value.and_then(|value| T::from_str(value, false).ok()) {
            return Some(value);
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::Cli;
    use clap::CommandFactory;

    #[test]
    fn the_definitions_agree_with_each_other() {
        Cli::command().debug_assert();
    }
}
