//! The device after what should not happen: a hang, a fault, damaged flash.

use strake_core::alarm::FaultCause;
use strake_core::journal::{Entry, Item, SectorReader};

use crate::device::{ACT_NOW, CANNOT_SEE, HEALTHY, Site, WELL_MM, image, sealed};
use crate::flash_file::{FlashFile, PLANS_OFFSET};
use crate::machine::{PATIENCE, Setup};
use crate::sensor::Mood;
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] = tests![
    a_hanging_program_is_restarted_by_the_watchdog,
    a_processor_fault_restarts_the_device_as_a_panic,
    a_damaged_plan_is_told_and_another_taken,
    a_damaged_journal_is_told_and_the_alarm_kept,
    a_destroyed_journal_is_told,
    start_up_finishes_on_random_flash,
    starts_without_a_sample_are_counted,
];

/// `b .`: a loop without end.
const ENDLESS: (u16, u16) = (0xE7FE, 0xFFFF);
/// `udf`, with any number.
const UNDEFINED: (u16, u16) = (0xDE00, 0xFF00);
/// Bytes of a sector of the journal and of a plan slot.
const SECTOR: u64 = 4096;
/// Where a plan begins in its slot.
const PLAN_IN_SLOT: u64 = 256;

/// Raises the alarm, ends the run at an instruction, and finds the alarm in the next one.
fn end_at(code: (u16, u16), expected: &str) -> Outcome {
    let image = image()?;
    let mut site = Site::commissioned(Setup::new(&image).debugged())?;
    site.raise_alarm()?;
    let address = image.instruction(code)?;
    site.machine.debugger()?.halted(|debugger| debugger.jump(address))?;
    let deadline = std::time::Instant::now() + 4 * PATIENCE;
    while site.client.hello().is_err() {
        hold(std::time::Instant::now() < deadline, "the device did not come back")?;
    }
    let status = site.wait_for("the alarm again", |status| status.level_reading == 1)?;
    same(&(status.boot, status.output), &(2, ACT_NOW))?;
    hold(!site.machine.contact()?, "a restart closed the contact of an alarm")?;
    let log = site.machine.log()?;
    hold(log.iter().any(|line| line.contains(expected)), &format!("{log:?}"))?;
    let (replay, _) = site.replayed_identically()?;
    same(&replay.engine.summary.starts, &2)
}

fn a_hanging_program_is_restarted_by_the_watchdog() -> Outcome {
    end_at(ENDLESS, "start: Watchdog, last failure: None")
}

fn a_processor_fault_restarts_the_device_as_a_panic() -> Outcome {
    end_at(UNDEFINED, "start: Panic, last failure: Some(Fault")
}

fn a_damaged_plan_is_told_and_another_taken() -> Outcome {
    let mut site = Site::commissioned(Setup::new(&image()?))?;
    let plan = sealed("eight_courses")?;
    same(&site.client.hello()?.plan_fingerprint, &plan.fingerprint)?;
    let flash = site.machine.cut_power();
    // One bit of the plan in the first slot.
    let place = PLANS_OFFSET + PLAN_IN_SLOT + 100;
    let byte = flash.read(place, 1)?[0];
    flash.overwrite(place, &[byte ^ 0x10])?;
    let mut site = Site::start(Setup::new(&image()?).flash(flash), WELL_MM)?;
    let identity = *site.client.hello()?;
    same(&(identity.plan_fingerprint, identity.boot), &(0, 2))?;
    same(&site.client.status()?.output, &CANNOT_SEE)?;
    hold(!site.machine.contact()?, "the contact conducts without a plan")?;
    site.commission(&plan)?;
    site.wait_for("the device to be healthy", |status| status.output == HEALTHY)?;
    hold(site.machine.contact()?, "the contact is open although all is well")
}

fn a_damaged_journal_is_told_and_the_alarm_kept() -> Outcome {
    let mut site = Site::commissioned(Setup::new(&image()?))?;
    site.raise_alarm()?;
    let bounds = site.client.journal_bounds()?;
    same(&bounds.newest, &0)?;
    let flash = site.machine.cut_power();
    // The end of what is written: later entries are torn, the alarm's stand.
    let end = u64::from(bounds.newest_used);
    flash.overwrite(end - 2, &[0x00])?;
    let mut site = Site::start(Setup::new(&image()?).flash(flash), crate::device::TOO_HIGH_MM)?;
    let status = site.wait_for("a reading", |status| status.level_reading == 1)?;
    same(&status.output, &ACT_NOW)?;
    hold(!site.machine.contact()?, "damage closed the contact of an alarm")?;
    let (replay, _) = site.replayed()?;
    hold(!replay.damage.is_empty(), "the damaged block is not told")?;
    Ok(())
}

fn a_destroyed_journal_is_told() -> Outcome {
    let mut site = Site::commissioned(Setup::new(&image()?))?;
    site.fill_journal(3 * 4096)?;
    let flash = site.machine.cut_power();
    flash.overwrite(0, &[0; 4 * 4096])?;
    let mut site = Site::start(Setup::new(&image()?).flash(flash), WELL_MM)?;
    let damaged = usize::from(FaultCause::JournalDamaged.number());
    let faults = site.client.fault_status()?;
    same(&faults.counts.get(damaged), &Some(&1))?;
    let status = site.wait_for("a reading", |status| status.level_reading == 1)?;
    same(&(status.output, status.faults), &(CANNOT_SEE, 1))?;
    hold(!site.machine.contact()?, "the contact conducts although alarms may be lost")?;
    // Somebody has seen it: acknowledged, then reset.
    site.client.acknowledge()?;
    site.client.acknowledge()?;
    site.wait_for("the device to be healthy", |status| status.output == HEALTHY)?;
    site.replayed_identically()?;
    Ok(())
}

fn start_up_finishes_on_random_flash() -> Outcome {
    let image = image()?;
    for seed in 1..=4_u64 {
        let flash = FlashFile::erased()?;
        let mut state = seed;
        let mut random = |bytes: u64| -> Vec<u8> {
            let mut content = Vec::new();
            for _ in 0..bytes / 8 {
                // Marsaglia, Xorshift RNGs (2003).
                state ^= state << 13;
                state ^= state >> 7;
                state ^= state << 17;
                content.extend(state.to_le_bytes());
            }
            content
        };
        flash.overwrite(0, &random(PLANS_OFFSET))?;
        flash.overwrite(PLANS_OFFSET, &random(16 * SECTOR))?;
        let mut site = Site::start(Setup::new(&image).flash(flash), WELL_MM)?;
        same(&site.client.status()?.output, &CANNOT_SEE)?;
        hold(!site.machine.contact()?, "the contact conducts on random flash")?;
        site.commission(&sealed("eight_courses")?)?;
        site.wait_for("a reading", |status| status.level_reading == 1)?;
        site.replayed_identically()?;
    }
    Ok(())
}

/// Retained memory has room for the count behind the samples that wait.
fn starts_without_a_sample_are_counted() -> Outcome {
    const STARTS: u16 = 4;
    let mut site = Site::commissioned(Setup::new(&image()?))?;
    site.machine.sensor().set_mood(Mood::Silent);
    for _ in 0..STARTS {
        site.machine.reset()?;
        // The device asks once it has started; a sensor that is silent holds up the first sample.
        let (asked, since) = (site.machine.sensor().questions(), std::time::Instant::now());
        while site.machine.sensor().questions() == asked {
            hold(since.elapsed() < PATIENCE, "the device did not start")?;
            std::thread::sleep(std::time::Duration::from_millis(1));
        }
    }
    site.machine.sensor().set_mood(Mood::Well);
    site.greet()?;
    site.wait_for("a reading", |status| status.level_reading == 1)?;
    let sector = site.machine.flash().read(0, 4096)?;
    let items = SectorReader::new(&sector).map_err(|error| format!("{error:?}"))?;
    let starts = items.filter_map(|item| match item {
        Item::Entry(Entry::StartUp { boot, count, .. }) => Some((boot, count)),
        _ => None,
    });
    same(&starts.collect::<Vec<_>>(), &vec![(1, 1), (2, STARTS)])
}
