//! A verification in plain words.

use super::damage::Damage;
use super::report::Report;
use crate::page::{Page, counted};
use crate::replay::utc;

/// Damaged places that are named one by one.
const DAMAGE_SHOWN: usize = 10;

/// What `strake verify` prints.
#[must_use]
pub fn render(report: &Report, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    let name = report.identity.as_ref().map_or("a device unknown", |one| one.device_id.as_str());
    let verdict = if report.sound() {
        "sound"
    } else if report.contradictions.is_empty() {
        "DAMAGED or incomplete"
    } else {
        "CONTRADICTS ITSELF"
    };
    page.heading(&format!("journal of {name}: {verdict}"));
    page.paragraph("", report.conclusion());
    page.blank();
    let range = match (report.oldest, report.newest) {
        (Some(oldest), Some(newest)) => format!(", {oldest} to {newest}"),
        _ => String::new(),
    };
    page.line(&format!(
        "  held       {}{range}; {} bytes, {} entries, {} of them samples, {}",
        counted(report.sectors, "sector"),
        report.bytes,
        report.entries,
        report.samples,
        counted(report.plans, "plan")
    ));
    head(report, &mut page);
    for contradiction in &report.contradictions {
        page.paragraph("  - ", &contradiction.to_string());
    }
    for plan in &report.missing_plans {
        page.paragraph("  - ", &format!("plan {plan:016x} occurs and is not in the file"));
    }
    damage(&report.damage, &mut page);
    page.into_text()
}

fn head(report: &Report, page: &mut Page) {
    let Some(head) = report.head else {
        page.line("  head       none: the collection was not finished");
        return;
    };
    let when = utc(head.collected_utc_s).unwrap_or_else(|| "at a time unknown".into());
    page.line(&format!(
        "  head       sector {}, offset {}; next entry {}; hash {:016x}; collected {when}",
        head.newest, head.used, head.next_entry, head.running_hash
    ));
    page.line(match head.signature {
        Some(_) => "  signature  present, not checked here",
        None => "  signature  none: who wrote the file cannot be shown",
    });
}

/// The damaged places, each with what it means; the report of a replay says the same.
pub fn damage(places: &[Damage], page: &mut Page) {
    if places.is_empty() {
        return;
    }
    page.line(&format!("  {}, passed over:", counted(places.len() as u64, "damaged place")));
    for damage in places.iter().take(DAMAGE_SHOWN) {
        page.paragraph("    - ", &format!("{damage}. In short: {}.", damage.meaning()));
    }
    if places.len() > DAMAGE_SHOWN {
        page.line(&format!("    - and {} more", places.len() - DAMAGE_SHOWN));
    }
}
