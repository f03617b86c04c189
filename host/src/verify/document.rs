//! The document `strake.verify/1`.

use super::report::Report;
use crate::replay::utc;
use serde::Serialize;

/// What a verification found. Hashes and fingerprints are hexadecimal; times are UTC.
#[derive(Debug, Serialize)]
pub struct Document {
    schema: &'static str,
    device_id: Option<String>,
    /// Nothing is damaged, missing or contradictory.
    pub sound: bool,
    /// Everything that the device held is in the file.
    pub complete: bool,
    oldest_sector: Option<u32>,
    newest_sector: Option<u32>,
    sectors: u32,
    missing_sectors: u32,
    bytes: u64,
    entries: u64,
    samples: u64,
    /// Entries missing at damaged places, as far as the numbers around them tell.
    missing_entries: u64,
    damage: Vec<Row>,
    contradictions: Vec<String>,
    plans: u32,
    missing_plans: Vec<String>,
    head: Option<HeadRow>,
    /// Whether the head carries the device's signature.
    signed: bool,
    conclusion: &'static str,
}

#[derive(Debug, Serialize)]
struct Row {
    place: String,
    what: String,
    /// Missing in the stretch around the place; null when it cannot be told.
    missing_entries: Option<u32>,
    missing_samples: Option<u32>,
    /// Damaged places that share these numbers.
    places: u32,
    meaning: &'static str,
}

#[derive(Debug, Serialize)]
struct HeadRow {
    newest_sector: u32,
    used: u16,
    next_entry: u32,
    running_hash: String,
    boot: u16,
    tick_ms: u64,
    collected_utc: Option<String>,
}

impl Document {
    /// The document of a report.
    #[must_use]
    pub fn of(report: &Report) -> Self {
        Self {
            schema: "strake.verify/1",
            device_id: report.identity.as_ref().map(|identity| identity.device_id.clone()),
            sound: report.sound(),
            complete: report.complete(),
            oldest_sector: report.oldest,
            newest_sector: report.newest,
            sectors: report.sectors,
            missing_sectors: report.missing_sectors,
            bytes: report.bytes,
            entries: report.entries,
            samples: report.samples,
            missing_entries: report.missing_entries(),
            damage: report
                .damage
                .iter()
                .map(|damage| Row {
                    place: damage.place.to_string(),
                    what: damage.what.to_string(),
                    missing_entries: damage.missing.entries,
                    missing_samples: damage.missing.samples,
                    places: damage.missing.places,
                    meaning: damage.meaning(),
                })
                .collect(),
            contradictions: report.contradictions.iter().map(ToString::to_string).collect(),
            plans: report.plans,
            missing_plans: report.missing_plans.iter().map(|plan| format!("{plan:016x}")).collect(),
            head: report.head.map(|head| HeadRow {
                newest_sector: head.newest,
                used: head.used,
                next_entry: head.next_entry,
                running_hash: format!("{:016x}", head.running_hash),
                boot: head.boot,
                tick_ms: head.tick_ms,
                collected_utc: utc(head.collected_utc_s),
            }),
            signed: report.head.is_some_and(|head| head.signature.is_some()),
            conclusion: report.conclusion(),
        }
    }
}
