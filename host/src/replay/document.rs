//! The document `strake.replay/1`.

use super::{AlarmLine, FaultLine, PartSummary, Replay};
use crate::assess::{FIELD_CHECK, PROVISIONAL};
use jiff::Timestamp;
use serde::Serialize;

/// What a replay found. Times are UTC, or absent while the device's clock was never set; levels are
/// metres above the datum; utilisations are of the outward bound unless named otherwise.
#[derive(Debug, Serialize)]
pub struct Document {
    schema: &'static str,
    /// Entries decoded.
    records: u64,
    /// Samples among them.
    samples: u64,
    /// Places that could not be read.
    pub damaged: u64,
    /// Where they are.
    damage: Vec<String>,
    /// Holes in the journal.
    gaps: u64,
    /// Plans that occur and are not in the file, by fingerprint.
    missing_plans: Vec<String>,
    /// Hashes of the device that were compared.
    pub hashes_compared: u64,
    /// Moves of alarm machines that were compared.
    moves_compared: u64,
    /// All hashes and moves equal the device's, and at least one hash was compared.
    pub identical: bool,
    #[serde(skip_serializing_if = "Option::is_none")]
    first_difference: Option<FirstDifference>,
    first_utc: Option<String>,
    last_utc: Option<String>,
    peaks: Vec<PeakRow>,
    bands: Vec<BandRow>,
    cycles: Vec<CycleRow>,
    /// Alarms in order.
    pub alarms: Vec<AlarmRow>,
    /// Faults by cause.
    pub faults: Vec<FaultRow>,
    cautions: Vec<&'static str>,
}

#[derive(Debug, Serialize)]
struct FirstDifference {
    sector: u32,
    entry: u32,
    tick_ms: u64,
    what: String,
    device: String,
    replay: String,
}

#[derive(Debug, Serialize)]
struct PeakRow {
    part: String,
    utilisation_bound: f32,
    utilisation: f32,
    level_m: f32,
    tick_ms: u64,
    utc: Option<String>,
}

#[derive(Debug, Serialize)]
struct BandRow {
    part: String,
    from: f64,
    time_s: f64,
}

#[derive(Debug, Serialize)]
struct CycleRow {
    part: String,
    /// Range of utilisation, rounded to hundredths.
    range: f64,
    cycles: f64,
}

/// An alarm.
#[derive(Debug, Serialize)]
pub struct AlarmRow {
    name: String,
    kind: &'static str,
    tick_ms: u64,
    utc: Option<String>,
    utilisation: f32,
    acknowledged_after_s: Option<f64>,
    returned_after_s: Option<f64>,
}

/// A fault.
#[derive(Debug, Serialize)]
pub struct FaultRow {
    cause: String,
    count: u64,
    first_tick_ms: u64,
    first_utc: Option<String>,
}

impl Document {
    /// The document of a replay.
    #[must_use]
    pub fn of(replay: &Replay) -> Self {
        let (verdict, summary) = (&replay.engine.verdict, &replay.engine.summary);
        Self {
            schema: "strake.replay/1",
            records: replay.records,
            samples: summary.samples,
            damaged: replay.damage.len() as u64,
            damage: replay.damage.iter().map(ToString::to_string).collect(),
            gaps: replay.gaps,
            missing_plans: replay
                .missing_plans
                .iter()
                .map(|print| format!("{print:016x}"))
                .collect(),
            hashes_compared: verdict.hashes_compared,
            moves_compared: verdict.moves_compared,
            identical: verdict.identical(),
            first_difference: verdict.first_difference.as_ref().map(|first| FirstDifference {
                sector: first.sequence,
                entry: first.entry,
                tick_ms: first.tick_ms,
                what: first.what.clone(),
                device: first.device.clone(),
                replay: first.replay.clone(),
            }),
            first_utc: utc(summary.utc_s.map(|(first, _)| first)),
            last_utc: utc(summary.utc_s.map(|(_, last)| last)),
            peaks: summary.parts.iter().map(peak).collect(),
            bands: summary.parts.iter().flat_map(bands).collect(),
            cycles: summary.parts.iter().flat_map(cycles).collect(),
            alarms: summary.alarms.iter().map(alarm).collect(),
            faults: summary.faults.values().map(fault).collect(),
            cautions: replay
                .provisional
                .then_some(PROVISIONAL)
                .into_iter()
                .chain([FIELD_CHECK])
                .collect(),
        }
    }
}

fn peak(part: &PartSummary) -> PeakRow {
    let peak = part.peak;
    PeakRow {
        part: part.name.clone(),
        utilisation_bound: peak.utilisation_bound,
        utilisation: peak.utilisation,
        level_m: peak.level_m,
        tick_ms: peak.moment.tick_ms,
        utc: utc(peak.utc_s),
    }
}

fn bands(part: &PartSummary) -> impl Iterator<Item = BandRow> {
    part.bands.iter().map(|band| BandRow {
        part: part.name.clone(),
        from: band.from,
        time_s: band.time_s,
    })
}

fn cycles(part: &PartSummary) -> Vec<CycleRow> {
    let mut rows: Vec<CycleRow> = Vec::new();
    for (range, cycles) in part.cycles.cycles() {
        let range = (range * 100.0).round() / 100.0;
        match rows.last_mut().filter(|last| (last.range - range).abs() < 1e-9) {
            Some(last) => last.cycles += cycles,
            None => rows.push(CycleRow { part: part.name.clone(), range, cycles }),
        }
    }
    rows
}

fn alarm(line: &AlarmLine) -> AlarmRow {
    AlarmRow {
        name: line.name.clone(),
        kind: line.kind,
        tick_ms: line.moment.tick_ms,
        utc: utc(line.utc_s),
        utilisation: line.utilisation,
        acknowledged_after_s: line.acknowledged_after_ms.map(seconds),
        returned_after_s: line.returned_after_ms.map(seconds),
    }
}

fn fault(line: &FaultLine) -> FaultRow {
    FaultRow {
        cause: line.cause.to_string(),
        count: line.count,
        first_tick_ms: line.first.tick_ms,
        first_utc: utc(line.first_utc_s),
    }
}

#[expect(clippy::cast_precision_loss, reason = "spans are below 2^48 ms")]
fn seconds(span_ms: u64) -> f64 {
    span_ms as f64 * 1e-3
}

/// A time as ISO 8601 shows it.
pub(crate) fn utc(utc_s: Option<u64>) -> Option<String> {
    let second = i64::try_from(utc_s?).ok()?;
    Some(Timestamp::from_second(second).ok()?.to_string())
}
