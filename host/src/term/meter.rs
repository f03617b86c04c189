//! How far something long is: a bar on a terminal, else a plain line now and then.

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use std::io::{self, IsTerminal, Write};
use std::time::{Duration, Instant};

/// Time between two plain lines.
const LINE_EVERY: Duration = Duration::from_secs(10);

/// A display on standard error.
#[derive(Debug)]
pub struct Meter {
    kind: Kind,
}

#[derive(Debug)]
enum Kind {
    Silent,
    Bar(ProgressBar),
    Lines { what: &'static str, unit: &'static str, told: Instant },
}

impl Meter {
    pub(super) const fn silent() -> Self {
        Self { kind: Kind::Silent }
    }

    pub(super) fn on_standard_error(what: &'static str, unit: &'static str) -> Self {
        if !io::stderr().is_terminal() {
            return Self { kind: Kind::Lines { what, unit, told: Instant::now() } };
        }
        let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::stderr());
        let form = format!("{what} [{{bar:40}}] {{pos}}/{{len}} {unit}, {{eta}} left");
        if let Ok(style) = ProgressStyle::with_template(&form) {
            bar.set_style(style.progress_chars("=> "));
        }
        Self { kind: Kind::Bar(bar) }
    }

    /// Shows that `done` of `total` are through.
    pub fn show(&mut self, done: u64, total: u64) {
        match &mut self.kind {
            Kind::Silent => {}
            Kind::Bar(bar) => {
                bar.set_length(total);
                bar.set_position(done);
            }
            Kind::Lines { what, unit, told } => {
                if told.elapsed() >= LINE_EVERY {
                    *told = Instant::now();
                    // Standard error has nobody to complain to.
                    let _ = writeln!(io::stderr(), "{what}: {done} of {total} {unit}");
                }
            }
        }
    }

    /// Takes the display away.
    pub fn end(self) {
        if let Kind::Bar(bar) = self.kind {
            bar.finish_and_clear();
        }
    }
}
