//! `strake ports`: the serial ports of this computer, and who answers.

use crate::exit::Exit;
use crate::failure::Failure;
use crate::link::{self, FoundDevice};
use crate::page::Page;
use crate::status::DeviceRow;
use crate::term::{Format, Term};
use crate::utc;
use serde::Serialize;
use serde_json::Value;

/// What `strake ports` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  strake ports\n  strake ports --format json")]
pub struct Args {}

/// The document `strake.ports/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    ports: Vec<Row>,
}

/// A port: either `device` or `error` is null.
#[derive(Debug, Serialize)]
struct Row {
    port: String,
    device: Option<DeviceRow>,
    /// Fingerprint of the plan in force, hexadecimal; null without one.
    plan_fingerprint: Option<String>,
    /// UTC seconds at which it was sealed; null without one.
    plan_serial: Option<u64>,
    /// A document `strake.error/1`.
    error: Option<Value>,
}

/// Greets on every port.
///
/// # Errors
/// When the result cannot be written.
pub fn run(_: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let found = link::ports();
    match term.settings().format {
        Format::Json => {
            let ports = found.into_iter().map(row).collect();
            term.document(&Document { schema: "strake.ports/1", ports })?;
        }
        Format::Text => {
            let text = text(&found, term);
            term.result(&text)?;
        }
    }
    Ok(Exit::Done)
}

fn row(found: FoundDevice) -> Row {
    match found.device {
        Ok(identity) => {
            let planned = identity.plan_fingerprint != 0;
            Row {
                port: found.port,
                device: Some(DeviceRow::of(&identity)),
                plan_fingerprint: planned.then(|| format!("{:016x}", identity.plan_fingerprint)),
                plan_serial: planned.then_some(identity.plan_serial),
                error: None,
            }
        }
        Err(error) => Row {
            port: found.port,
            device: None,
            plan_fingerprint: None,
            plan_serial: None,
            error: Failure::from(error).to_json(),
        },
    }
}

fn text(found: &[FoundDevice], term: &Term) -> String {
    let mut page = Page::new(term.colour_out());
    if found.is_empty() {
        page.line("no serial port on this computer; connect the device and switch it on");
    }
    let width = found.iter().map(|one| one.port.chars().count()).max().unwrap_or(0);
    for one in found {
        let port = format!("{:<width$}  ", one.port);
        match &one.device {
            Ok(identity) => {
                let plan = if identity.plan_fingerprint == 0 {
                    "no plan".to_owned()
                } else {
                    let sealed = utc::text(identity.plan_serial);
                    format!("plan {:016x}, sealed {sealed}", identity.plan_fingerprint)
                };
                let who = format!("{}, firmware {}", identity.device_id, identity.firmware);
                page.paragraph(&port, &format!("{who}, {plan}"));
            }
            Err(error) => page.paragraph(&port, &format!("no device: {error}")),
        }
    }
    page.into_text()
}
