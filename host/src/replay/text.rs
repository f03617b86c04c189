//! A replay in plain words.

use super::document::utc;
use super::{AlarmLine, PartSummary, Replay};
use crate::assess::{FIELD_CHECK, PROVISIONAL};
use crate::page::{Page, counted};
use crate::units::Quantity::Length;
use crate::units::{UnitSystem, format};
use crate::verify;

/// The summary that `strake replay` and `strake trial` print.
#[must_use]
pub fn render(replay: &Replay, units: UnitSystem, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    if replay.provisional {
        page.heading(PROVISIONAL);
    }
    verdict(replay, &mut page);
    what_happened(replay, &mut page);
    for part in &replay.engine.summary.parts {
        peak(part, units, &mut page);
    }
    page.blank();
    page.paragraph("", &format!("{FIELD_CHECK}."));
    page.into_text()
}

fn verdict(replay: &Replay, page: &mut Page) {
    let verdict = &replay.engine.verdict;
    let (hashes, moves) = (verdict.hashes_compared, verdict.moves_compared);
    if verdict.identical() {
        let whole = replay.damage.is_empty() && replay.missing_plans.is_empty();
        page.heading(&format!(
            "identical{}: the replay decides as the device did ({} and {} compared)",
            if whole { "" } else { " in what could be read" },
            counted(hashes, "hash"),
            counted(moves, "alarm move")
        ));
    } else if let Some(first) = &verdict.first_difference {
        page.heading("NOT IDENTICAL: the replay decides otherwise than the device did");
        page.paragraph("  first difference: ", &first.to_string());
    } else {
        page.heading("NOT COMPARED: the journal holds no hash that could be compared");
    }
    if verdict.not_compared > 0 {
        let count = verdict.not_compared;
        page.paragraph(
            "  ",
            &format!(
                "{} could not be judged: their plan or state is missing",
                counted(count, "sample")
            ),
        );
    }
    for print in &replay.missing_plans {
        page.paragraph(
            "  ",
            &format!("plan {print:016x} occurs in the journal and is not in the file"),
        );
    }
    verify::text::damage(&replay.damage, page);
    if replay.gaps > 0 {
        page.line(&format!("  {} in the journal", counted(replay.gaps, "hole")));
    }
}

fn what_happened(replay: &Replay, page: &mut Page) {
    let summary = &replay.engine.summary;
    page.blank();
    let span = match summary.utc_s.map(|(first, last)| (utc(Some(first)), utc(Some(last)))) {
        Some((Some(first), Some(last))) => format!("from {first} to {last}"),
        _ => "at times unknown: the device's clock was never set".into(),
    };
    page.paragraph(
        "",
        &format!(
            "{} {span}, {} of them with a measured level; {}, {}.",
            counted(summary.samples, "sample"),
            summary.measured,
            counted(summary.starts, "start"),
            counted(summary.acknowledgements, "acknowledgement")
        ),
    );
    page.blank();
    page.heading("Alarms");
    if summary.alarms.is_empty() {
        page.line("  none");
    }
    for line in &summary.alarms {
        page.paragraph("  ", &alarm(line));
    }
    page.blank();
    page.heading("Faults seen");
    if summary.faults.is_empty() {
        page.line("  none");
    }
    for line in summary.faults.values() {
        let when =
            utc(line.first_utc_s).unwrap_or_else(|| format!("tick {} ms", line.first.tick_ms));
        page.paragraph(
            "  ",
            &format!("{}: {}, first {when}", line.cause, counted(line.count, "time")),
        );
    }
    page.blank();
    page.heading("Highest utilisation of each part (the bound, and the estimate with it)");
}

fn alarm(line: &AlarmLine) -> String {
    let when = utc(line.utc_s).unwrap_or_else(|| format!("tick {} ms", line.moment.tick_ms));
    let bound =
        if line.utilisation > 0.0 { format!(" at {:.3}", line.utilisation) } else { String::new() };
    let acknowledged = match line.acknowledged_after_ms {
        Some(after_ms) => format!("acknowledged after {}", span(after_ms)),
        None => "not acknowledged".into(),
    };
    let gone = match line.returned_after_ms {
        Some(after_ms) => format!("gone after {}", span(after_ms)),
        None => "still standing, or gone in a later start".into(),
    };
    format!("{when}  {:<7} {}{bound}, {acknowledged}, {gone}", line.kind, line.name)
}

fn peak(part: &PartSummary, units: UnitSystem, page: &mut Page) {
    let peak = part.peak;
    if peak.utilisation_bound <= 0.0 {
        page.line(&format!("  {:<24}  no load against a stated capacity", part.name));
        return;
    }
    let when = utc(peak.utc_s).unwrap_or_else(|| format!("tick {} ms", peak.moment.tick_ms));
    let level = format(f64::from(peak.level_m), Length, units);
    page.line(&format!(
        "  {:<24}  {:.4} ({:.4})  at {level}, {when}",
        part.name, peak.utilisation_bound, peak.utilisation
    ));
}

/// A span of time as a person says it.
fn span(span_ms: u64) -> String {
    let seconds = span_ms / 1000;
    match seconds {
        0..120 => format!("{seconds} s"),
        120..7200 => format!("{} min", seconds / 60),
        _ => format!("{} h {} min", seconds / 3600, seconds % 3600 / 60),
    }
}
