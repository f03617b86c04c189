//! The device at work: commissioned, alarmed, restarted, collected, replayed.

use crate::device::{ACT_NOW, CANNOT_SEE, HEALTHY, Site, WELL_MM, image};
use crate::machine::Setup;
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] = tests![
    a_filling_tank_alarms_and_its_journal_replays_identically,
    a_warm_restart_keeps_a_latched_alarm,
    a_cold_restart_keeps_a_latched_alarm,
];

fn a_filling_tank_alarms_and_its_journal_replays_identically() -> Outcome {
    let mut site = Site::start(Setup::new(&image()?), WELL_MM)?;
    same(&site.client.status()?.output, &CANNOT_SEE)?;
    hold(!site.machine.contact()?, "the contact conducts without a plan")?;
    site.commission(&crate::device::sealed("eight_courses")?)?;
    let status = site.wait_for("the device to be healthy", |status| status.output == HEALTHY)?;
    same(&(status.parts, status.level_reading), &(12, 1))?;
    hold((status.level_m - 6.1).abs() < 1e-5, &format!("level {} m", status.level_m))?;
    hold(site.machine.contact()?, "the contact is open although all is well")?;
    site.raise_alarm()?;
    hold(!site.machine.contact()?, "the contact conducts in an alarm")?;
    // The button silences; the contact stays open while the condition stands.
    site.machine.flash().set_button(true)?;
    site.wait_for("the button", |status| status.output == ACT_NOW)?;
    std::thread::sleep(std::time::Duration::from_millis(700));
    site.machine.flash().set_button(false)?;
    hold(!site.machine.contact()?, "the contact conducts in an acknowledged alarm")?;
    let (replay, journal_bytes) = site.replayed_identically()?;
    let verdict = &replay.engine.verdict;
    hold(verdict.moves_compared >= 4, &format!("{verdict:?}"))?;
    let kinds: Vec<_> = replay.engine.summary.alarms.iter().map(|line| line.kind).collect();
    hold(kinds.contains(&"warn") && kinds.contains(&"alarm"), &format!("{kinds:?}"))?;
    let peak = replay.engine.summary.parts.first().map(|part| part.peak.level_m);
    hold(peak.is_some_and(|peak| (peak - 7.9).abs() < 1e-5), &format!("peak {peak:?}"))?;
    let link = site.client.status()?.link;
    hold(u64::from(link.bytes_out) > journal_bytes && journal_bytes > 0, &format!("{link:?}"))?;
    println!(
        "end to end: {} records, {} hashes and {} moves compared, journal {journal_bytes} B, \
         link {} B out, {} B in",
        replay.records,
        verdict.hashes_compared,
        verdict.moves_compared,
        link.bytes_out,
        link.bytes_in
    );
    Ok(())
}

/// A latched alarm whose condition is gone.
fn latched() -> Result<Site, Box<dyn std::error::Error>> {
    let mut site = Site::commissioned(Setup::new(&image()?))?;
    site.raise_alarm()?;
    site.client.acknowledge()?;
    site.set_level(WELL_MM);
    site.wait_for("the warning to return", |status| status.alarms == 1)?;
    hold(!site.machine.contact()?, "the latch does not hold the contact open")?;
    Ok(site)
}

/// After a restart: still latched, and healthy after the reset.
fn expect_latched(site: &mut Site) -> Outcome {
    let status = site.wait_for("the first reading", |status| status.level_reading == 1)?;
    same(&(status.output, status.alarms), &(ACT_NOW, 1))?;
    hold(!site.machine.contact()?, "a restart closed the contact of a latched alarm")?;
    let (replay, _) = site.replayed_identically()?;
    same(&replay.engine.summary.starts, &2)?;
    // It is acknowledged already: this resets it.
    site.client.acknowledge()?;
    site.wait_for("the reset alarm", |status| status.output == HEALTHY)?;
    hold(site.machine.contact()?, "the contact stays open after the reset")
}

fn a_warm_restart_keeps_a_latched_alarm() -> Outcome {
    let mut site = latched()?;
    site.machine.reset()?;
    site.greet()?;
    expect_latched(&mut site)
}

fn a_cold_restart_keeps_a_latched_alarm() -> Outcome {
    let site = latched()?;
    let flash = site.machine.cut_power();
    let mut site = Site::start(Setup::new(&image()?).flash(flash), WELL_MM)?;
    expect_latched(&mut site)
}
