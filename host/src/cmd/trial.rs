//! `strake trial`: the whole job on a simulated device.

use super::replay::{not_read, verdict};
use super::tank_file;
use crate::assess::Desk;
use crate::compile::{self, fingerprint};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::inverse::first_reached;
use crate::page::Page;
use crate::replay::{Document as ReplayDocument, text};
use crate::tank::{self, TankFile};
use crate::term::{Format, Term};
use crate::trial::{self, Filling, Landmarks, Outcome, Series, Setup, Stage, Story, TrialError};
use crate::units::{Quantity, parse};
use serde::Serialize;
use std::path::{Path, PathBuf};
use strake_core::plan::codec;

/// The tank of a trial that names none.
const EXAMPLE: &str = include_str!("../../../configs/brine_day_tank.toml");
/// Serial of a trial's plan: 2026-01-01, so that the same seed gives the same journal.
const TRIAL_SERIAL: u64 = 1_767_225_600;

/// What `strake trial` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake trial\n  \
    strake trial laboratory_tank.toml --series tank.csv -o results\n  \
    strake trial --duration \"365 d\" --seed 7\n\n\
    Without a series the trial tells a story: a delivery denser than the tank was made for, a\n\
    warning, an alarm, an acknowledgement, a drain, a power cut, a broken wire.")]
pub struct Args {
    /// The tank file; without it the brine day tank of the examples
    #[arg(value_name = "TANK")]
    pub tank: Option<PathBuf>,
    /// A measured series to play: a CSV file, columns `time_s`, `level_m`, optional `temp_C`
    #[arg(long, value_name = "CSV")]
    pub series: Option<PathBuf>,
    /// Virtual time, as "12 h" or "365 d"; else as long as the story or the series lasts
    #[arg(long, value_parser = duration, value_name = "TIME")]
    pub duration: Option<f64>,
    /// Seed of the sensor's noise
    #[arg(long, default_value_t = 1)]
    pub seed: u64,
    /// Directory for the journal
    #[arg(short, long, value_name = "DIR", default_value = "trial")]
    pub output: PathBuf,
    /// Replace the journal of an earlier trial
    #[arg(long)]
    pub force: bool,
}

fn duration(text: &str) -> Result<f64, String> {
    let seconds = parse(text, Quantity::Time).map_err(|error| error.to_string())?;
    let century_s = 100.0 * 365.0 * 86_400.0;
    if seconds >= 1.0 && seconds <= century_s {
        Ok(seconds)
    } else {
        Err("write a time between 1 s and 100 years, as \"12 h\"".into())
    }
}

/// The document `strake.trial/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    tank: String,
    plan_fingerprint: String,
    virtual_time_s: u64,
    samples: u64,
    journal_records: u64,
    journal_bytes: u64,
    link_bytes_to_device: u64,
    link_bytes_from_device: u64,
    collected: bool,
    alarms: usize,
    faults: u64,
    hashes_compared: u64,
    identical: bool,
    journal: String,
    replay: ReplayDocument,
}

/// Carries out the trial.
///
/// # Errors
/// When an input is invalid, the journal exists, or a result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = match &args.tank {
        Some(path) => tank_file::read(path)?,
        None => tank::parse("brine_day_tank.toml (built in)", EXAMPLE.as_bytes())?,
    };
    let compiled = compile::for_device(&file)?;
    let bytes = compiled.encode(TRIAL_SERIAL).map_err(|error| {
        let message = format!("{}: {error}", file.path());
        Failure::new(Exit::InvalidInput, "plan", message, "leave out parts, or shorten names")
    })?;
    let (header, plan) = codec::decode(&bytes).map_err(|error| {
        Failure::new(Exit::Bug, "bug", error.to_string(), "keep the tank file, it shows the error")
    })?;
    let setup = Setup {
        plan: &plan,
        header: &header,
        bytes: &bytes,
        fingerprint: fingerprint(&bytes),
        story: story(args, &file, &Desk::new(compiled, &file))?,
        seed: args.seed,
        directory: &args.output,
        replace: args.force,
    };
    let print = setup.fingerprint;
    term.note(&format!("commissioning a simulated device with the plan of {}", file.name.value));
    let mut day = 0;
    let outcome = trial::run(setup, &mut |stage| say(term, &mut day, stage)).map_err(failed)?;
    let exit = verdict(&outcome.replay);
    show(term, &file.name.value, print, &outcome)?;
    Ok(match exit {
        Exit::Done if !outcome.collected => Exit::Partial,
        exit => exit,
    })
}

/// The measured series, or the filling story at the tank's own thresholds.
fn story(args: &Args, file: &TankFile, desk: &Desk) -> Result<Story, Failure> {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "checked range")]
    let duration_ms = args.duration.map(|seconds| (seconds * 1e3).round() as u64);
    if let Some(path) = &args.series {
        return Ok(read_series(path)?.story(duration_ms));
    }
    let plan = desk.plan();
    let range = desk.range();
    let reached =
        |threshold: f32| f64::from(first_reached(desk, threshold).unwrap_or(range.high_m));
    let marks = Landmarks {
        warn_m: reached(plan.alarm.warn.utilisation),
        alarm_m: reached(plan.alarm.alarm.utilisation),
        overflow_m: file.fill.overflow_m.as_ref().map_or(range.high_m.into(), |level| level.value),
        floor_m: range.low_m.into(),
        rise_m_s: plan.highest_rise_m_s.into(),
        fall_m_s: plan.highest_fall_m_s.into(),
        failed_after_ms: plan.level.failed_after_ms.into(),
    };
    Ok(Filling::story(&marks, duration_ms))
}

fn read_series(path: &Path) -> Result<Series, Failure> {
    let name = path.display();
    let text = std::fs::read_to_string(path).map_err(|error| {
        let message = format!("cannot read {name}: {error}");
        Failure::new(Exit::InvalidInput, "cannot-read", message, "give a CSV file of levels")
    })?;
    Series::parse(&text).map_err(|error| {
        let message = format!("{name}: {error}");
        Failure::new(Exit::InvalidInput, "series", message, "correct the row, nothing is skipped")
    })
}

/// Tells the stages, and each tenth day of a long trial.
fn say(term: &mut Term, day: &mut u64, stage: Stage) {
    match stage {
        Stage::Running { now_ms, end_ms } => {
            let now = now_ms / 86_400_000;
            if now >= *day + 10 {
                *day = now;
                term.note(&format!("day {now} of {}", end_ms / 86_400_000));
            }
        }
        Stage::Collecting => term.detail("collecting the journal over the link"),
        Stage::Replaying => term.note("collected; replaying the journal"),
    }
}

fn failed(error: TrialError) -> Failure {
    match error {
        TrialError::File(error) => not_read(&error),
        TrialError::Directory { .. } => Failure::new(
            Exit::Partial,
            "cannot-write",
            error.to_string(),
            "give another directory with -o",
        ),
        TrialError::Link(_) | TrialError::ReadBack => Failure::new(
            Exit::Bug,
            "bug",
            error.to_string(),
            "the simulated device failed; keep the tank file, it shows the error again",
        ),
    }
}

fn show(term: &mut Term, tank: &str, print: u64, outcome: &Outcome) -> Result<(), Failure> {
    let summary = &outcome.replay.engine.summary;
    let replayed = ReplayDocument::of(&outcome.replay);
    let document = Document {
        schema: "strake.trial/1",
        tank: tank.to_owned(),
        plan_fingerprint: format!("{print:016x}"),
        virtual_time_s: outcome.span_ms / 1000,
        samples: summary.samples,
        journal_records: outcome.replay.records,
        journal_bytes: outcome.journal_bytes,
        link_bytes_to_device: outcome.link_bytes.0,
        link_bytes_from_device: outcome.link_bytes.1,
        collected: outcome.collected,
        alarms: summary.alarms.iter().filter(|alarm| alarm.kind != "fault").count(),
        faults: summary.faults.values().map(|fault| fault.count).sum(),
        hashes_compared: replayed.hashes_compared,
        identical: replayed.identical,
        journal: outcome.journal.display().to_string(),
        replay: replayed,
    };
    if term.settings().format == Format::Json {
        return term.document(&document);
    }
    let (units, coloured) = (term.settings().units, term.colour_out());
    let mut page = Page::new(coloured);
    page.heading(&format!("trial of {tank} on a simulated device"));
    let everything = if document.collected { "everything" } else { "NOT everything" };
    page.paragraph(
        "",
        &format!(
            "{} samples and {} other entries in {} bytes of journal; {everything} collected over \
             the link ({} bytes sent by the device); {} hashes compared; identical: {}.",
            document.samples,
            document.journal_records - document.samples,
            document.journal_bytes,
            document.link_bytes_from_device,
            document.hashes_compared,
            document.identical
        ),
    );
    page.line(&format!("journal: {}", document.journal));
    page.blank();
    let mut all = page.into_text();
    all.push_str(&text::render(&outcome.replay, units, coloured));
    term.result(&all)
}
