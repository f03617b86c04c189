//! `strake seal`: the plan that a device loads.

use super::tank_file;
use crate::assess::{Desk, FIELD_CHECK, PartMargin, assumed, margin, plate_cautions};
use crate::compile::{self, fingerprint};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::inverse::first_reached;
use crate::output_file;
use crate::page::Page;
use crate::plan_file;
use crate::tank::TankFile;
use crate::term::{Format, Term};
use crate::units::Quantity::Length;
use crate::units::{UnitSystem, format};
use crate::utc;
use serde::Serialize;
use std::path::PathBuf;
use strake_core::plan::codec::REASON_BYTES_MAX;
use strake_core::plan::{Plan, PlanError};

/// What `strake seal` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake seal day_tank.toml -o day_tank.plan\n  \
    strake seal day_tank.toml -o day_tank.plan --serial 1780000000")]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// The plan file to write
    #[arg(short, long, value_name = "FILE")]
    pub output: PathBuf,
    /// Replace the file if it exists
    #[arg(long)]
    pub force: bool,
    /// Seal although the margin of a threshold is short, for this reason (120 bytes at most)
    #[arg(long, value_name = "REASON", value_parser = reason)]
    pub accept_short_margin: Option<String>,
    /// Serial of the plan, UTC seconds; else the time now
    #[arg(long, value_name = "SECONDS")]
    pub serial: Option<u64>,
}

fn reason(text: &str) -> Result<String, String> {
    let text = text.trim();
    if text.is_empty() || text.len() > REASON_BYTES_MAX {
        return Err(format!("it has {} bytes, 1 to {REASON_BYTES_MAX} are held", text.len()));
    }
    Ok(text.to_owned())
}

/// The document `strake.seal/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    tank: String,
    file: String,
    signed: bool,
    provisional: Vec<String>,
    fingerprint: String,
    serial: u64,
    device_id: Option<String>,
    bytes: usize,
    parts: usize,
    warn_utilisation: f32,
    warn_level_m: Option<f32>,
    alarm_utilisation: f32,
    alarm_level_m: Option<f32>,
    #[serde(skip_serializing_if = "Option::is_none")]
    accepted_short_margin: Option<String>,
    cautions: Vec<String>,
}

/// What is short, part by part, whichever of its liquids the tank holds.
fn short_margins(file: &TankFile, plan: &Plan) -> Vec<String> {
    let mut found: Vec<PartMargin> = Vec::new();
    for plan in compile::each_liquid(plan) {
        let parts = margin(file, &plan).map_or_else(Vec::new, |margin| margin.per_part);
        for part in parts.into_iter().filter(|part| !part.enough) {
            let same = |one: &&mut PartMargin| one.name == part.name && one.side == part.side;
            match found.iter_mut().find(same) {
                Some(one) if one.given_m <= part.given_m => {}
                Some(one) => *one = part,
                None => found.push(part),
            }
        }
    }
    let words = |one: &PartMargin| {
        format!(
            "{} {} has {}, needs {}",
            one.name,
            one.side,
            format(one.given_m, Length, UnitSystem::Si),
            format(one.needed_m, Length, UnitSystem::Si)
        )
    };
    found.iter().map(words).collect()
}

/// Seals the plan.
///
/// # Errors
/// When the file is invalid or lacks what the device needs, when the output exists, or when it
/// cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = tank_file::read(&args.tank)?;
    let compiled = compile::for_device(&file)?;
    let serial = match args.serial {
        Some(serial) => serial,
        None => utc::now_s()?,
    };
    let short = short_margins(&file, &compiled.plan);
    let accepted = args.accept_short_margin.as_deref().filter(|_| !short.is_empty());
    if !short.is_empty() && accepted.is_none() {
        let message = format!("{}: the margin is short: {}", file.path(), short.join("; "));
        let hint = "lower the alarm threshold, act or sample faster, or state why it is accepted: \
                    --accept-short-margin REASON";
        return Err(Failure::new(Exit::Refused, "margin", message, hint));
    }
    let bytes = match accepted {
        Some(reason) => compiled.encode_with_reason(serial, reason),
        None => compiled.encode(serial),
    };
    let bytes = bytes.map_err(|error| not_encoded(&file, error))?;
    let sealed = plan_file::write(&bytes).map_err(|error| not_encoded(&file, error))?;
    output_file::write(&args.output, &sealed, args.force)?;
    let alarm = compiled.plan.alarm;
    let parts = compiled.plan.parts.len();
    let desk = Desk::new(compiled, &file);
    let mut cautions = vec!["unsigned: a device cannot tell who made this plan".to_owned()];
    cautions.extend(plate_cautions(&file, term.settings().units, "the device judges"));
    cautions.push(FIELD_CHECK.to_owned());
    let document = Document {
        schema: "strake.seal/1",
        tank: file.name.value.clone(),
        file: args.output.display().to_string(),
        signed: false,
        provisional: assumed(&file),
        fingerprint: format!("{:016x}", fingerprint(&bytes)),
        serial,
        device_id: file.device_id.as_ref().map(|id| id.value.clone()),
        bytes: bytes.len(),
        parts,
        warn_utilisation: alarm.warn.utilisation,
        warn_level_m: first_reached(&desk, alarm.warn.utilisation),
        alarm_utilisation: alarm.alarm.utilisation,
        alarm_level_m: first_reached(&desk, alarm.alarm.utilisation),
        accepted_short_margin: accepted.map(str::to_owned),
        cautions,
    };
    match term.settings().format {
        Format::Json => term.document(&document)?,
        Format::Text => term.result(&text(&document, term))?,
    }
    Ok(Exit::Done)
}

fn not_encoded(file: &TankFile, error: PlanError) -> Failure {
    let message = format!("{}: {error}", file.path());
    let hint = "leave out parts that others outlast, or shorten names";
    Failure::new(Exit::InvalidInput, "plan", message, hint)
}

fn text(document: &Document, term: &Term) -> String {
    let units = term.settings().units;
    let mut page = Page::new(term.colour_out());
    page.heading(&format!("{}: plan written to {}, unsigned", document.tank, document.file));
    if !document.provisional.is_empty() {
        page.heading("PROVISIONAL: these capacities are assumed");
        for one in &document.provisional {
            page.paragraph("  - ", one);
        }
    }
    let device = document.device_id.as_deref().unwrap_or("any");
    page.line(&format!("  fingerprint  {}", document.fingerprint));
    page.line(&format!("  serial       {}", document.serial));
    page.line(&format!("  device       {device}"));
    page.line(&format!("  size         {} bytes, {} parts", document.bytes, document.parts));
    let pairs = [
        ("warn", document.warn_utilisation, document.warn_level_m),
        ("alarm", document.alarm_utilisation, document.alarm_level_m),
    ];
    for (name, utilisation, level_m) in pairs {
        let at = level_m.map_or_else(
            || "not reached up to the overflow".to_owned(),
            |level_m| format!("first reached at {}", format(f64::from(level_m), Length, units)),
        );
        page.line(&format!("  {name:<12} {utilisation} of a capacity, {at}"));
    }
    if let Some(reason) = &document.accepted_short_margin {
        page.paragraph("  short margin accepted: ", reason);
    }
    for caution in &document.cautions {
        page.paragraph("", &format!("{caution}."));
    }
    page.into_text()
}
