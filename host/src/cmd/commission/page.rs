//! What a technician reads before and after a plan is loaded.

use super::{Document, Loaded};
use crate::page::Page;
use crate::status::{PlanRow, ahead_words};
use crate::units::Quantity::Time;
use crate::units::{UnitSystem, format};
use crate::utc;

/// Who the device is, and what changes.
pub(super) fn difference(document: &Document, coloured: bool) -> String {
    let Document { device, port, file, .. } = document;
    let mut page = Page::new(coloured);
    page.heading(&format!("{} on {port}", device.id));
    page.line(&format!(
        "  device    firmware {}, protocol {}, plan format {}, start {}, running for {}",
        device.firmware,
        device.protocol,
        device.plan_format,
        device.boot,
        format(device.running_s, Time, UnitSystem::Si)
    ));
    let old = match (&document.old_plan, &document.old_plan_unreadable) {
        (Some(plan), _) => plan_words(plan),
        (None, Some(why)) => format!("one that cannot be read back: {why}"),
        (None, None) => "none".to_owned(),
    };
    page.line(&format!("  in force  {old}"));
    page.line(&format!("  new       {}", plan_words(&document.new_plan)));
    page.line(&format!("            {file}, unsigned"));
    page.blank();
    let heading = match (&document.old_plan, document.changes.len()) {
        (None, count) => format!("The new plan, {count} lines"),
        (Some(_), 0) => "No change: the plans are the same".to_owned(),
        (Some(_), 1) => "1 change, old -> new".to_owned(),
        (Some(_), count) => format!("{count} changes, old -> new"),
    };
    page.heading(&heading);
    let widest = |pick: fn(&super::ChangeRow) -> &str| {
        document.changes.iter().map(|row| pick(row).chars().count()).max().unwrap_or(0)
    };
    let (sections, labels) = (widest(|row| &row.section), widest(|row| &row.label));
    let mut section = "";
    for row in &document.changes {
        let value = match (&row.old, &row.new) {
            (Some(old), Some(new)) if old == new => {
                format!("{old} -> {new} (they differ below the last digit shown)")
            }
            (Some(old), Some(new)) => format!("{old} -> {new}"),
            (None, Some(new)) if document.old_plan.is_some() => format!("(nothing) -> {new}"),
            (None, Some(new)) => new.clone(),
            (Some(old), None) => format!("{old} -> (nothing)"),
            (None, None) => String::new(),
        };
        let named = if row.section == section { "" } else { &row.section };
        page.paragraph(&format!("  {named:<sections$}  {:<labels$}  ", row.label), &value);
        section = &row.section;
    }
    page.into_text()
}

fn plan_words(plan: &PlanRow) -> String {
    let sealed = utc::text(plan.serial);
    format!("{}, sealed {sealed}, fingerprint {}", plan.tank, plan.fingerprint)
}

/// What was done.
pub(super) fn result(document: &Document, loaded: &Loaded, coloured: bool) -> String {
    let mut page = Page::new(coloured);
    page.blank();
    page.heading(&format!("{}: plan in force, read back and identical", document.device.id));
    page.line(&format!(
        "  plan   {} bytes, fingerprint {}",
        loaded.bytes, document.new_plan.fingerprint
    ));
    let before = loaded.clock_before.ahead_s.map_or_else(
        || "it was not set before".to_owned(),
        |ahead| format!("before, it was {}", ahead_words(ahead)),
    );
    page.line(&format!("  clock  set to {}; {before}", utc::text(loaded.clock_set_utc_s)));
    page.blank();
    for caution in &document.cautions {
        page.paragraph("", &format!("{caution}."));
    }
    page.into_text()
}
