//! One trial from the blank device to the compared replay.

use super::Story;
use crate::journal_file::{HeadRecord, JournalFile, JournalFileError, PartFile};
use crate::link::{Client, InProcess, LinkError, Port, Progress, collect};
use crate::replay::{Replay, replay};
use crate::sim::board::Bench;
use crate::sim::machine::{Happening, Machine};
use crate::sim::sensor::Sensor;
use std::cell::RefCell;
use std::ops::ControlFlow;
use std::path::{Path, PathBuf};
use std::rc::Rc;
use strake_core::plan::{Plan, PlanHeader};
use strake_core::wire::Text;
use thiserror::Error;

/// Sectors of the simulated journal: 8 MiB.
const JOURNAL_SECTORS: usize = 2048;
/// Virtual time between two visits of a long trial, ms.
const VISIT_EVERY_MS: u64 = 30 * 86_400_000;
/// UTC at which every trial begins: 2026-01-05, 06:00.
pub(super) const TRIAL_UTC_S: u64 = 1_767_592_800;

/// What a trial needs.
#[derive(Debug)]
pub struct Setup<'a> {
    /// The compiled plan, for the sensor's wiring.
    pub plan: &'a Plan,
    /// Its serial and device.
    pub header: &'a PlanHeader,
    /// Its bytes, as sealed.
    pub bytes: &'a [u8],
    /// Their fingerprint.
    pub fingerprint: u64,
    /// What happens.
    pub story: Story,
    /// Seed of the sensor's noise.
    pub seed: u64,
    /// Directory for the journal.
    pub directory: &'a Path,
    /// Replace a journal that is there.
    pub replace: bool,
}

/// How far a trial is, for a progress display.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stage {
    /// Virtual time, of how much, ms.
    Running {
        /// Now.
        now_ms: u64,
        /// End.
        end_ms: u64,
    },
    /// The journal is being collected.
    Collecting,
    /// The journal is being replayed.
    Replaying,
}

/// What a trial ends with.
#[derive(Debug)]
pub struct Outcome {
    /// Where the journal stands.
    pub journal: PathBuf,
    /// Bytes of the journal: 4096 for each closed sector, and the offset in the open one.
    pub journal_bytes: u64,
    /// Everything that the device had was taken home.
    pub collected: bool,
    /// Sectors that were overwritten before a visit.
    pub gone: u32,
    /// Bytes that the device received and sent over the link, counted by the device.
    pub link_bytes: (u64, u64),
    /// Virtual time, ms.
    pub span_ms: u64,
    /// The replay.
    pub replay: Replay,
}

/// Why a trial could not be carried out.
#[derive(Debug, Error)]
pub enum TrialError {
    /// The link.
    #[error(transparent)]
    Link(#[from] LinkError),
    /// The journal file.
    #[error(transparent)]
    File(#[from] JournalFileError),
    /// The directory.
    #[error("cannot make the directory {path}: {cause}")]
    Directory {
        /// Which.
        path: PathBuf,
        /// The system's reason.
        cause: std::io::Error,
    },
    /// The plan read back is not the plan loaded.
    #[error("the plan read back from the device differs from the one loaded; this is a bug")]
    ReadBack,
}

/// Carries out a trial.
///
/// # Errors
/// What went wrong; a difference between device and replay is no error but stands in the outcome.
pub fn run(setup: Setup<'_>, progress: &mut dyn FnMut(Stage)) -> Result<Outcome, TrialError> {
    let target = setup.directory.join("trial.strake-journal");
    let part = open_part(setup.directory, &target, setup.replace)?;
    let Story { level, happenings, end_ms, noise } = setup.story;
    let noise = noise * f64::from(setup.plan.level.uncertainty);
    let bench = Bench::new(Sensor::new(setup.plan, level, noise, setup.seed), JOURNAL_SECTORS);
    let name = if setup.header.device_id.is_empty() { "trial" } else { &setup.header.device_id };
    let name = Text::new(name).unwrap_or_default();
    let wire = bench.wire.clone();
    let machine = Rc::new(RefCell::new(Machine::new(bench, name)));
    let turning = machine.clone();
    let port = InProcess::new(&wire, move || turning.borrow_mut().poll());
    let mut client = Client::connect(port)?;

    let sealed_for = Text::new(&setup.header.device_id).unwrap_or_default();
    client.load_plan(setup.bytes, setup.header.serial, setup.fingerprint, sealed_for)?;
    if client.read_plan(setup.fingerprint)? != setup.bytes {
        return Err(TrialError::ReadBack);
    }
    client.set_clock(TRIAL_UTC_S)?;

    let mut visits = Visits { machine, client, part, gone: 0 };
    let head = visits.play(happenings, end_ms, progress)?;
    let link = visits.client.status()?.link;
    visits.part.finish(&head, &target, setup.replace)?;

    progress(Stage::Replaying);
    let replay = replay(&mut JournalFile::open(&target)?)?;
    Ok(Outcome {
        journal: target,
        journal_bytes: u64::from(head.newest) * 4096 + u64::from(head.used),
        collected: visits.gone == 0,
        gone: visits.gone,
        link_bytes: (link.bytes_in.into(), link.bytes_out.into()),
        span_ms: end_ms,
        replay,
    })
}

/// An empty part file in the directory.
fn open_part(directory: &Path, target: &Path, replace: bool) -> Result<PartFile, TrialError> {
    let failed = |path: &Path| {
        let path = path.to_path_buf();
        move |cause| TrialError::Directory { path, cause }
    };
    std::fs::create_dir_all(directory).map_err(failed(directory))?;
    if target.exists() && !replace {
        return Err(JournalFileError::Exists { path: target.into() }.into());
    }
    let part = target.with_extension("strake-journal.part");
    // A part file of an earlier trial belongs to another device.
    if part.exists() {
        std::fs::remove_file(&part).map_err(failed(&part))?;
    }
    Ok(PartFile::open(&part)?)
}

/// The device, and the technician who visits it.
struct Visits<P> {
    machine: Rc<RefCell<Machine>>,
    client: Client<P>,
    part: PartFile,
    /// Sectors that were overwritten before a visit.
    gone: u32,
}

impl<P: Port> Visits<P> {
    /// Plays the story to its end, visiting in between; gives where the journal ended.
    fn play(
        &mut self,
        happenings: Vec<(u64, Happening)>,
        end_ms: u64,
        progress: &mut dyn FnMut(Stage),
    ) -> Result<HeadRecord, TrialError> {
        let mut next = happenings.into_iter().peekable();
        let mut visit_ms = VISIT_EVERY_MS;
        loop {
            let happening_ms = next.peek().map_or(u64::MAX, |&(time_ms, _)| time_ms);
            let now_ms = happening_ms.min(visit_ms).min(end_ms);
            self.machine.borrow_mut().run_until(now_ms);
            progress(Stage::Running { now_ms, end_ms });
            if let Some((_, happening)) = next.next_if(|&(time_ms, _)| time_ms <= now_ms) {
                self.machine.borrow_mut().happen(happening);
                continue;
            }
            let without_power = self.machine.borrow().app().is_none();
            if now_ms >= end_ms {
                if without_power {
                    self.machine.borrow_mut().happen(Happening::PowerOn);
                }
                progress(Stage::Collecting);
                let utc_s = TRIAL_UTC_S + now_ms / 1000;
                self.client.set_clock(utc_s)?;
                return self.collect(utc_s);
            }
            // Without power nobody can collect; the next visit finds it all.
            if !without_power {
                progress(Stage::Collecting);
                let utc_s = TRIAL_UTC_S + now_ms / 1000;
                self.client.set_clock(utc_s)?;
                self.collect(utc_s)?;
            }
            visit_ms += VISIT_EVERY_MS;
        }
    }

    fn collect(&mut self, utc_s: u64) -> Result<HeadRecord, TrialError> {
        let all = &mut |_: &Progress| ControlFlow::Continue(());
        let collected = collect(&mut self.client, &mut self.part, Some(utc_s), all)?;
        self.gone += collected.gone;
        Ok(collected.head)
    }
}
