//! `strake collect`: takes the journal home.

use super::device::{PortArgs, connect};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::journal_file::{JournalFile, PartFile};
use crate::link::{Collected, Progress, collect};
use crate::page::{Page, counted};
use crate::term::{Format, Term};
use crate::utc;
use crate::verify::{Report, verify};
use serde::Serialize;
use std::ops::ControlFlow;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicBool, Ordering};

/// What `strake collect` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake collect -o journals\n  \
    strake collect -o journals --port /dev/ttyUSB0\n\n\
    An interrupted collection leaves a part file; the same command goes on from there.")]
pub struct Args {
    /// Folder for the journal file; made when it is not there
    #[arg(short, long, value_name = "DIR")]
    pub output: PathBuf,
    /// Which device.
    #[command(flatten)]
    pub device: PortArgs,
}

/// The document `strake.collect/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    port: String,
    device_id: String,
    /// The journal file.
    file: String,
    /// The file holds everything that the device held.
    complete: bool,
    oldest_sector: Option<u32>,
    newest_sector: Option<u32>,
    sectors: u32,
    /// Bytes of all sectors.
    bytes: u64,
    entries: u64,
    /// Sectors that an earlier, interrupted run had taken.
    resumed_sectors: u32,
    /// Sectors that the device overwrote before they could be taken.
    gone_sectors: u32,
    /// Sectors that are missing for any other reason.
    missing_sectors: u32,
    /// Sectors with places that cannot be read, as they are on the device.
    damaged_sectors: u32,
    damaged_places: u32,
    plans: u32,
    /// Fingerprints, hexadecimal, of plans that neither device nor file has.
    missing_plans: Vec<String>,
    /// The device's hash over all its results, hexadecimal.
    running_hash: Option<String>,
    /// Whether the device has signed the head.
    signed: bool,
    /// Frames that came damaged, and frames that were asked for again.
    damaged_frames: u64,
    repeated_frames: u64,
}

/// Collects.
///
/// # Errors
/// When there is no device, the line breaks, or a file cannot be written; what has come is kept.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let mut client = connect(&args.device, term)?;
    let device_id = client.identity().device_id.as_str().to_owned();
    let port = client.port_name().to_owned();
    make_folder(&args.output)?;
    let name = safe_name(&device_id);
    let mut part = PartFile::open(&args.output.join(format!("{name}.strake-journal.part")))?;
    if !part.sectors().is_empty() {
        term.note(&format!(
            "going on with {}: {} there",
            part.path().display(),
            counted(part.sectors().len() as u64, "sector")
        ));
    }
    let utc_s = utc::now_s()?;
    let interrupted = interruption();
    let mut meter = term.meter("collecting", "sectors");
    let result = collect(&mut client, &mut part, Some(utc_s), &mut |progress: &Progress| {
        meter.show(progress.sectors.into(), progress.sectors_total.into());
        if interrupted.load(Ordering::Relaxed) {
            ControlFlow::Break(())
        } else {
            ControlFlow::Continue(())
        }
    });
    meter.end();
    let collected = result?;
    let target = args.output.join(format!("{name}-{}.strake-journal", utc::stamp(utc_s)));
    part.finish(&collected.head, &target, false)?;
    let report = verify(&mut JournalFile::open(&target)?)?;
    let document = Document::new(port, device_id, &target, &collected, &report);
    match term.settings().format {
        Format::Json => term.document(&document)?,
        Format::Text => {
            let text = text(&document, term.colour_out());
            term.result(&text)?;
        }
    }
    Ok(if document.flawless() { Exit::Done } else { Exit::Partial })
}

fn make_folder(folder: &Path) -> Result<(), Failure> {
    std::fs::create_dir_all(folder).map_err(|error| {
        let message = format!("cannot make the folder {}: {error}", folder.display());
        Failure::new(Exit::Partial, "cannot-write", message, "give another folder with -o")
    })
}

/// Whether the user wants to stop. Without a handler the system stops the program at once, which
/// leaves a sound part file too.
fn interruption() -> &'static AtomicBool {
    static INTERRUPTED: AtomicBool = AtomicBool::new(false);
    let _kept_as_it_was = ctrlc::set_handler(|| INTERRUPTED.store(true, Ordering::Relaxed));
    &INTERRUPTED
}

/// Letters, digits, point, underscore and hyphen are safe in a file's name everywhere.
fn safe_name(device_id: &str) -> String {
    let safe = |c: char| if c.is_ascii_alphanumeric() || "._-".contains(c) { c } else { '-' };
    let name: String = device_id.chars().map(safe).collect();
    if name.trim_matches(['.', '-']).is_empty() { format!("device{name}") } else { name }
}

impl Document {
    fn new(
        port: String,
        device_id: String,
        target: &Path,
        collected: &Collected,
        report: &Report,
    ) -> Self {
        Self {
            schema: "strake.collect/1",
            port,
            device_id,
            file: target.display().to_string(),
            complete: report.complete() && collected.gone == 0,
            oldest_sector: report.oldest,
            newest_sector: report.newest,
            sectors: report.sectors,
            bytes: report.bytes,
            entries: report.entries,
            resumed_sectors: collected.resumed,
            gone_sectors: collected.gone,
            missing_sectors: report.missing_sectors.saturating_sub(collected.gone),
            damaged_sectors: report.damaged_sectors(),
            damaged_places: report.damaged_places(),
            plans: report.plans,
            missing_plans: report.missing_plans.iter().map(|plan| format!("{plan:016x}")).collect(),
            running_hash: report.head.map(|head| format!("{:016x}", head.running_hash)),
            signed: report.head.is_some_and(|head| head.signature.is_some()),
            damaged_frames: collected.damaged_frames,
            repeated_frames: collected.lost_frames,
        }
    }

    fn flawless(&self) -> bool {
        self.complete && self.damaged_sectors == 0 && self.missing_plans.is_empty()
    }
}

fn text(document: &Document, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    let verdict = if document.complete {
        "complete: everything that the device held is in the file"
    } else {
        "NOT COMPLETE"
    };
    page.heading(&format!("{}: {verdict}", document.device_id));
    page.line(&format!("  file     {}", document.file));
    let range = match (document.oldest_sector, document.newest_sector) {
        (Some(oldest), Some(newest)) => format!(", {oldest} to {newest}"),
        _ => String::new(),
    };
    page.line(&format!(
        "  taken    {}{range}; {} bytes, {} entries, {}",
        counted(document.sectors, "sector"),
        document.bytes,
        document.entries,
        counted(document.plans, "plan")
    ));
    if document.resumed_sectors > 0 {
        let resumed = counted(document.resumed_sectors, "sector");
        page.line(&format!("  resumed  {resumed} there from an interrupted run"));
    }
    if document.damaged_frames + document.repeated_frames > 0 {
        page.line(&format!(
            "  line     {}, {} asked for again",
            counted(document.damaged_frames, "damaged frame"),
            counted(document.repeated_frames, "frame")
        ));
    }
    let hash = document.running_hash.as_deref().unwrap_or("none");
    let signed = if document.signed { "signed" } else { "unsigned" };
    page.line(&format!("  hash     {hash}, {signed}"));
    let counts = [
        (document.gone_sectors, "overwritten on the device before they were taken"),
        (document.missing_sectors, "missing in the file"),
        (document.damaged_sectors, "with places that cannot be read, as on the device"),
    ];
    for (count, what) in counts.into_iter().filter(|(count, _)| *count > 0) {
        page.paragraph("  - ", &format!("{} {what}", counted(count, "sector")));
    }
    for plan in &document.missing_plans {
        let what = "is kept no longer: its sectors can be read but not compared";
        page.paragraph("  - ", &format!("plan {plan} {what}"));
    }
    page.into_text()
}

#[cfg(test)]
mod tests {
    use super::safe_name;

    #[test]
    fn names_are_safe_in_every_file_system() {
        assert_eq!(safe_name("pump house 7"), "pump-house-7");
        assert_eq!(safe_name("a/b\\c:d"), "a-b-c-d");
        assert_eq!(safe_name("Tank_7.b"), "Tank_7.b");
        assert_eq!(safe_name(".."), "device..");
        assert_eq!(safe_name(""), "device");
    }
}
