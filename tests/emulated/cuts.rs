//! Power cuts on the application's image: nothing durable lost, nothing invented, wherever the
//! power fails.
//!
//! A scenario is played once, with every store into the flash recorded: its place, and the word
//! that stood there from then on. A cut after the n-th store leaves the flash of the beginning with
//! the first n stores done, and no memory; the device is started on exactly that, for every n
//! wanted. Cuts of a running device are made too, and leave what the record says they leave.

mod flash;
mod journal;
mod judge;
mod plans;
mod scenario;

use std::error::Error;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Arc, Mutex, OnceLock, PoisonError};
use std::thread;
use std::time::Instant;

use strake_core::journal::Entry;
use strake_oracle::random::Random;

use crate::device::connect;
use crate::flash_file::FlashFile;
use crate::image::Image;
use crate::plugin::{CUT_STATUS, Store, recorded, recording_power_cut};
use crate::toolchain::{image, image_with};
use crate::{Outcome, Test};
use flash::{Content, Steps};
use judge::{Model, Seen};
use scenario::{Plans, machine, play, prepare};

pub(crate) const TESTS: &[Test] = tests![
    no_cut_loses_or_invents,
    a_running_device_is_cut_where_the_record_says,
    without_the_check_of_blocks_cuts_do_harm,
];

const PROGRAM: &str = "device";
const WORKERS: usize = 2;
const RUNNING_CUTS: usize = 4;
/// Every so many cuts of programs one for the negative control.
const CONTROL_SHARE: usize = 8;

/// The scenario as it was played once.
#[derive(Debug)]
struct Played {
    plans: Plans,
    begin: Content,
    stores: Vec<Store>,
    model: Model,
}

/// Played once in a run of the tests.
fn played() -> Result<&'static Played, Box<dyn Error>> {
    static PLAYED: OnceLock<Result<Played, String>> = OnceLock::new();
    let played = PLAYED.get_or_init(|| record().map_err(|error| error.to_string()));
    Ok(played.as_ref().map_err(Clone::clone)?)
}

fn record() -> Result<Played, Box<dyn Error>> {
    let image = image(PROGRAM)?;
    let plans = [plans::sealed(1_000, 80_000.0)?, plans::sealed(2_000, 75_000.0)?];
    let begin = prepare(&image, &plans)?;
    let plugin = recording_power_cut(None)?;
    let mut machine = machine(&image, FlashFile::erased()?, &begin, Some(plugin))?;
    play(&mut machine, &plans)?;
    let flash = machine.quit()?;
    let stores = recorded(flash.folder())?;
    let end = Content::read(&flash)?;
    if begin.after(&stores)? != end {
        return Err("the recorded stores do not lead to the flash's content".into());
    }
    let model = Model::new(&end.journal, &stores, &plans)?;
    let acknowledged = model.count(|entry| matches!(entry, Entry::Acknowledge { .. }));
    let changed = model.count(|entry| matches!(entry, Entry::PlanChange { .. }));
    let moves = model.count(|entry| matches!(entry, Entry::Transition(_)));
    let closed = end.newest() > begin.newest();
    if acknowledged != 1 || changed != 2 || moves < 6 || !closed {
        return Err(format!("the scenario was another: {model:?}").into());
    }
    Ok(Played { plans, begin, stores, model })
}

/// Starts the device on this flash and looks at what it is.
fn restart(
    image: &Arc<Image>,
    flash: FlashFile,
    cut: &Content,
) -> Result<(Seen, FlashFile), Box<dyn Error>> {
    let mut machine = machine(image, flash, cut, None)?;
    let mut client = connect(&mut machine)?;
    let head = client.head()?;
    let (boot, plan) = (client.identity().boot, client.identity().plan_fingerprint);
    let contact = machine.contact()?;
    let flash = machine.cut_power();
    let Content { journal, .. } = Content::read(&flash)?;
    Ok((Seen { boot, plan, head, contact, journal }, flash))
}

/// Restarts behind each of these cuts, on two machines at a time; what went wrong.
fn failures(image: &Arc<Image>, played: &Played, cuts: &[usize]) -> Vec<String> {
    let next = AtomicUsize::new(0);
    let failures = Mutex::new(Vec::new());
    let work = || {
        let mut spare = None;
        while let Some(&stores) = cuts.get(next.fetch_add(1, Ordering::Relaxed)) {
            let judged = one(image, played, stores, &mut spare);
            if let Err(error) = judged {
                let mut failures = failures.lock().unwrap_or_else(PoisonError::into_inner);
                failures.push(format!("cut after store {stores}: {error}"));
            }
        }
    };
    thread::scope(|scope| {
        for _ in 0..WORKERS {
            scope.spawn(work);
        }
    });
    failures.into_inner().unwrap_or_else(PoisonError::into_inner)
}

fn one(
    image: &Arc<Image>,
    played: &Played,
    stores: usize,
    spare: &mut Option<FlashFile>,
) -> Outcome {
    let cut = played.begin.after(&played.stores[..stores])?;
    let flash = spare.take().map_or_else(FlashFile::erased, Ok)?;
    let (seen, flash) = restart(image, flash, &cut)?;
    *spare = Some(flash);
    Ok(played.model.judge(stores, &cut, &seen, &played.plans)?)
}

fn no_cut_loses_or_invents() -> Outcome {
    let played = played()?;
    let image = image(PROGRAM)?;
    let steps = Steps::of(&played.stores);
    let mut random = Random::new(0x4355_5453);
    let cuts = steps.cuts(|count| random.below(count));
    let start = Instant::now();
    let failures = failures(&image, played, &cuts);
    let first = played.model.durable(0);
    println!(
        "power cuts, image {}: {} runs, after each of {} programs and within {} erases, {} stores \
         in all; {} to {} durable entries; {} failures; {:.1?}",
        image.sha256,
        cuts.len(),
        steps.programs.len(),
        steps.erases.len(),
        played.stores.len(),
        first,
        played.model.durable(played.stores.len()),
        failures.len(),
        start.elapsed(),
    );
    if steps.erases.len() < 2 || steps.programs.len() < 200 {
        return Err(format!("too few steps: {steps:?}").into());
    }
    match failures.first() {
        None => Ok(()),
        Some(failure) => Err(format!("{} failures, first: {failure}", failures.len()).into()),
    }
}

/// The plugin ends the emulator of a device in the midst of the scenario. Ticks differ from those
/// of the record, so each such run is a model of its own.
fn a_running_device_is_cut_where_the_record_says() -> Outcome {
    let played = played()?;
    let image = image(PROGRAM)?;
    let mut random = Random::new(0x5255_4E53);
    for _ in 0..RUNNING_CUTS {
        let most = u32::try_from(played.stores.len()).unwrap_or(u32::MAX) / 10 * 9;
        let stores = 1 + random.below(most) as usize;
        let plugin = recording_power_cut(Some(stores as u64))?;
        let mut machine = machine(&image, FlashFile::erased()?, &played.begin, Some(plugin))?;
        if play(&mut machine, &played.plans).is_ok() {
            return Err(format!("the power did not fail at store {stores}").into());
        }
        let (status, flash) = machine.wait()?;
        let cut = Content::read(&flash)?;
        let record = recorded(flash.folder())?;
        if status.code() != Some(CUT_STATUS)
            || record.len() != stores
            || played.begin.after(&record)? != cut
        {
            return Err(format!("{status}, {} stores of {stores}", record.len()).into());
        }
        let model = Model::new(&cut.journal, &record, &played.plans)?;
        let (seen, _) = restart(&image, flash, &cut)?;
        model.judge(stores, &cut, &seen, &played.plans)?;
    }
    Ok(())
}

/// Fails unless a build that takes torn blocks for whole ones loses or invents.
fn without_the_check_of_blocks_cuts_do_harm() -> Outcome {
    let played = played()?;
    let image = image_with(PROGRAM, "_careless_check")?;
    let programs = Steps::of(&played.stores).programs;
    let cuts: Vec<usize> = programs.into_iter().step_by(CONTROL_SHARE).collect();
    let failures = failures(&image, played, &cuts);
    let harm = |failure: &&String| failure.contains("lost") || failure.contains("invented");
    let harmed = failures.iter().filter(harm).count();
    println!("check of blocks off: {harmed} of {} runs lose or invent", cuts.len());
    if let Some(failure) = failures.iter().find(harm) {
        println!("first: {failure}");
    }
    if harmed == 0 { Err(format!("no harm seen; {failures:?}").into()) } else { Ok(()) }
}
