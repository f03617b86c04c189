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
            let text = text(&found, term.colour_out());
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

fn text(found: &[FoundDevice], coloured: bool) -> String {
    let mut page = Page::new(coloured);
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

#[cfg(test)]
mod tests {
    use super::{row, text};
    use crate::link::{FoundDevice, PortError};
    use strake_core::wire::{Identity, Text};

    fn two_ports() -> Vec<FoundDevice> {
        let identity = Identity {
            device_id: Text::new("yard 2").unwrap(),
            firmware: Text::new("0.1.0").unwrap(),
            plan_fingerprint: 0xAB,
            plan_serial: 1_780_000_000,
            ..Identity::default()
        };
        let busy = PortError::Busy { port: "COM4".to_owned() };
        vec![
            FoundDevice { port: "COM31".to_owned(), device: Ok(identity) },
            FoundDevice { port: "COM4".to_owned(), device: Err(busy.into()) },
        ]
    }

    #[test]
    fn each_port_says_who_answers_or_why_nobody_does() {
        assert_eq!(
            text(&two_ports(), false),
            "COM31  yard 2, firmware 0.1.0, plan 00000000000000ab, sealed 2026-05-28 20:26:40 UTC\n\
             COM4   no device: port COM4 is in use by another program; close that program and \
             repeat\n"
        );
        assert!(text(&[], false).starts_with("no serial port on this computer"));
    }

    #[test]
    fn a_row_has_a_device_or_an_error() {
        let rows: Vec<_> = two_ports().into_iter().map(row).collect();
        let document = serde_json::to_value(&rows).unwrap();
        assert_eq!(document[0]["device"]["id"], "yard 2");
        assert_eq!(document[0]["plan_serial"], 1_780_000_000);
        assert!(document[0]["error"].is_null() && document[1]["device"].is_null());
        assert_eq!(document[1]["error"]["code"], "port-busy");
    }
}
