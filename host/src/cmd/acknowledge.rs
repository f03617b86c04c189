//! `strake acknowledge`: acknowledges what sounds, resets latches whose condition has gone.

use super::device::{PortArgs, connect};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::page::Page;
use crate::status::{Document, look, state_words};
use crate::term::{Format, Term};
use crate::utc;
use serde::Serialize;

/// What `strake acknowledge` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  strake acknowledge\n  strake acknowledge --port COM3")]
pub struct Args {
    /// Which device.
    #[command(flatten)]
    pub device: PortArgs,
}

/// The document `strake.acknowledge/1`.
#[derive(Debug, Serialize)]
struct Acknowledged {
    schema: &'static str,
    port: String,
    device_id: String,
    /// Every alarm and fault that was not normal, before and after.
    moves: Vec<Move>,
}

#[derive(Debug, Serialize)]
struct Move {
    /// Part and threshold, or the cause of a fault.
    what: String,
    from: &'static str,
    to: &'static str,
}

/// Acknowledges.
///
/// # Errors
/// When there is no device, or nothing to acknowledge.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let mut client = connect(&args.device, term)?;
    let before = states(&Document::of(&look(&mut client, utc::now_s)?));
    client.acknowledge()?;
    let document = Document::of(&look(&mut client, utc::now_s)?);
    let after = states(&document);
    let state_after = |what: &str| after.iter().find(|(other, _)| other == what);
    let moves = before.into_iter().map(|(what, from)| {
        let to = state_after(&what).map_or("normal", |(_, state)| *state);
        Move { what, from, to }
    });
    let acknowledged = Acknowledged {
        schema: "strake.acknowledge/1",
        port: document.port,
        device_id: document.device.id,
        moves: moves.collect(),
    };
    match term.settings().format {
        Format::Json => term.document(&acknowledged)?,
        Format::Text => {
            let text = text(&acknowledged, term.colour_out());
            term.result(&text)?;
        }
    }
    Ok(Exit::Done)
}

/// Everything that is not normal, with its state.
fn states(document: &Document) -> Vec<(String, &'static str)> {
    let alarms = document.alarms.iter();
    let alarms = alarms.map(|row| (format!("{}, {}", row.part, row.threshold), row.state));
    let faults = document.faults.iter().filter(|row| row.state != "normal");
    alarms.chain(faults.map(|row| (row.cause.clone(), row.state))).collect()
}

fn text(acknowledged: &Acknowledged, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    let Acknowledged { device_id, port, moves, .. } = acknowledged;
    page.heading(&format!("{device_id} on {port}: acknowledged"));
    for one in moves {
        let (from, to) = (state_words(one.from), state_words(one.to));
        let said = if from == to { format!("still {to}") } else { format!("{from} -> {to}") };
        page.paragraph("  ", &format!("{}: {said}", one.what));
    }
    if moves.iter().any(|one| one.to == "acknowledged") {
        page.paragraph("", "What stands stays shown, and sounds again after the plan's time.");
    }
    if moves.iter().any(|one| one.to == "latched_acknowledged") {
        page.paragraph("", "What is latched goes out with the next 'strake acknowledge'.");
    }
    page.into_text()
}
