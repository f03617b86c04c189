//! `strake commission`: puts a sealed plan into a device, after showing what it changes.

mod page;

use super::device::{PortArgs, connect};
use crate::assess::{FIELD_CHECK, PROVISIONAL};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::link::{Client, SerialPort};
use crate::plan_file::{self, PlanFile};
use crate::plan_words::{Change, changes, lines};
use crate::status::{ClockRow, DeviceRow, InForce, PlanRow, in_force};
use crate::term::{Format, Term};
use crate::utc;
use serde::Serialize;
use std::path::{Path, PathBuf};
use strake_core::plan::PLAN_FORMAT;
use strake_core::wire::{ErrorCode, Identity, Text};

/// What `strake commission` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake commission day_tank.plan\n  \
    strake commission day_tank.plan --dry-run\n  \
    strake commission day_tank.plan --port COM3 --yes")]
pub struct Args {
    /// The sealed plan
    #[arg(value_name = "FILE")]
    pub file: PathBuf,
    /// Which device.
    #[command(flatten)]
    pub device: PortArgs,
    /// Do not ask; without a terminal nobody is asked
    #[arg(long)]
    pub yes: bool,
    /// Show what would change, and change nothing
    #[arg(long, conflicts_with = "yes")]
    pub dry_run: bool,
}

/// The document `strake.commission/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    port: String,
    device: DeviceRow,
    file: String,
    /// Null without a plan in force, or when it cannot be read back.
    old_plan: Option<PlanRow>,
    /// Why the plan in force cannot be read back; else null.
    old_plan_unreadable: Option<String>,
    new_plan: PlanRow,
    /// Every line that differs; all of them where there is no old plan.
    changes: Vec<ChangeRow>,
    /// Null in a dry run.
    loaded: Option<Loaded>,
    cautions: Vec<&'static str>,
}

#[derive(Debug, Serialize)]
struct ChangeRow {
    section: String,
    label: String,
    old: Option<String>,
    new: Option<String>,
}

impl From<Change> for ChangeRow {
    fn from(change: Change) -> Self {
        let Change { section, label, old, new } = change;
        Self { section, label, old, new }
    }
}

/// What was done.
#[derive(Debug, Serialize)]
struct Loaded {
    bytes: usize,
    /// The plan read back has the bytes of the file.
    read_back_identical: bool,
    /// The device's clock before it was set.
    clock_before: ClockRow,
    /// What it was set to, UTC seconds.
    clock_set_utc_s: u64,
}

/// Commissions the device.
///
/// # Errors
/// When the file is no sealed plan, there is no device, the device refuses, or what is read back
/// differs.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let plan = read_file(&args.file)?;
    let mut client = connect(&args.device, term)?;
    let identity = *client.identity();
    let old = in_force(&mut client)?;
    let mut document = Document::new(args, &client, &plan, &old, term);
    let text = term.settings().format == Format::Text;
    if text {
        let page = page::difference(&document, term.colour_out());
        term.result(&page)?;
    }
    if let Some(refusal) = foreseen(&identity, &plan) {
        return Err(refusal);
    }
    if args.dry_run {
        term.note("dry run: nothing was changed");
    } else {
        confirm(args, &identity, term)?;
        let loaded = load(&mut client, &plan)?;
        if text {
            let page = page::result(&document, &loaded, term.colour_out());
            term.result(&page)?;
        }
        document.loaded = Some(loaded);
    }
    if !text {
        term.document(&document)?;
    }
    Ok(Exit::Done)
}

impl Document {
    fn new(
        args: &Args,
        client: &Client<SerialPort>,
        plan: &PlanFile,
        old: &InForce,
        term: &Term,
    ) -> Self {
        let units = term.settings().units;
        let old_lines = old.plan().map(|old| lines(old, units)).unwrap_or_default();
        let changes = changes(&old_lines, &lines(plan, units));
        Self {
            schema: "strake.commission/1",
            port: client.port_name().to_owned(),
            device: DeviceRow::of(client.identity()),
            file: args.file.display().to_string(),
            old_plan: old.plan().map(PlanRow::of),
            old_plan_unreadable: match old {
                InForce::Unreadable(why) => Some(why.clone()),
                InForce::Nothing | InForce::Plan(_) => None,
            },
            new_plan: PlanRow::of(plan),
            changes: changes.into_iter().map(ChangeRow::from).collect(),
            loaded: None,
            cautions: plan
                .header
                .provisional
                .then_some(PROVISIONAL)
                .into_iter()
                .chain(["unsigned: a device cannot tell who made this plan", FIELD_CHECK])
                .collect(),
        }
    }
}

fn read_file(path: &Path) -> Result<PlanFile, Failure> {
    let name = path.display();
    let bytes = std::fs::read(path).map_err(|error| {
        let hint = "give the file that 'strake seal' wrote";
        Failure::new(
            Exit::InvalidInput,
            "cannot-read",
            format!("cannot read {name}: {error}"),
            hint,
        )
    })?;
    plan_file::read(&bytes).map_err(|error| {
        let hint = "give the file that 'strake seal' wrote, or seal the plan again";
        Failure::new(Exit::InvalidInput, "plan-file", format!("{name}: {error}"), hint)
    })
}

/// The refusal that the device would give, before anybody is asked. The device judges all the same.
fn foreseen(identity: &Identity, plan: &PlanFile) -> Option<Failure> {
    let header = &plan.header;
    let device = identity.device_id.as_str();
    if identity.plan_format != PLAN_FORMAT {
        let message = format!(
            "version mismatch: this program seals plans of format {PLAN_FORMAT}, device '{device}' \
             with firmware {} takes format {}",
            identity.firmware, identity.plan_format
        );
        let hint = "update the device's firmware, or seal with a matching version of this program";
        return Some(Failure::new(Exit::VersionMismatch, "version", message, hint));
    }
    let (code, numbers) = if !header.device_id.is_empty() && header.device_id != device {
        (ErrorCode::PlanForOther, format!("'{}', and this is '{device}'", header.device_id))
    } else if identity.plan_fingerprint != 0 && header.serial <= identity.plan_serial {
        let (new, old) = (utc::text(header.serial), utc::text(identity.plan_serial));
        let same = plan.fingerprint == identity.plan_fingerprint;
        let same = if same { "; it is the very plan in force" } else { "" };
        (ErrorCode::PlanNotLater, format!("{new} against {old}{same}"))
    } else {
        return None;
    };
    let text = code.to_string();
    let (what, remedy) = text.split_once("; ").unwrap_or((&text, ""));
    Some(Failure::new(Exit::Refused, "refused", format!("{what}: {numbers}"), remedy))
}

fn confirm(args: &Args, identity: &Identity, term: &mut Term) -> Result<(), Failure> {
    let question = format!("load this plan into {}?", identity.device_id);
    if args.yes || term.ask(&question).unwrap_or(true) {
        return Ok(());
    }
    let message = "not confirmed: nothing was changed";
    Err(Failure::new(Exit::Refused, "not-confirmed", message, "answer y, or give --yes"))
}

fn load(client: &mut Client<SerialPort>, plan: &PlanFile) -> Result<Loaded, Failure> {
    let device_id = Text::new(&plan.header.device_id).unwrap_or_default();
    client.load_plan(&plan.bytes, plan.header.serial, plan.fingerprint, device_id)?;
    let in_force = |error| but_in_force(Failure::from(error));
    if client.read_plan(plan.fingerprint).map_err(in_force)? != plan.bytes {
        let message = "the plan read back from the device differs from the file";
        let hint = "take the device out of use and replace it";
        return Err(Failure::new(Exit::NotIdentical, "read-back", message, hint));
    }
    let status = client.status().map_err(in_force)?;
    let now_s = utc::now_s().map_err(but_in_force)?;
    client.set_clock(now_s).map_err(in_force)?;
    Ok(Loaded {
        bytes: plan.bytes.len(),
        read_back_identical: true,
        clock_before: ClockRow::of(&status, now_s),
        clock_set_utc_s: now_s,
    })
}

/// A failure after the plan came into force.
fn but_in_force(failure: Failure) -> Failure {
    match failure {
        Failure::Said(mut said) => {
            said.message = format!("the new plan is in force, but {}", said.message);
            Failure::Said(said)
        }
        other => other,
    }
}
