//! Somebody with a laptop: loads plans, collects over lines good and bad, verifies and replays.

use crate::random::Random;
use crate::run::Tally;
use crate::world::{Sealed, name};
use std::cell::RefCell;
use std::collections::BTreeSet;
use std::io::Cursor;
use std::ops::ControlFlow;
use std::path::Path;
use std::rc::Rc;
use strake::journal_file::{HeadRecord, JournalFile, PartFile, Record};
use strake::link::{Client, InProcess, LinkError, Noisy, Port, Progress, Wire, collect};
use strake::replay::replay;
use strake::sim::board::Bench;
use strake::sim::machine::Machine;
use strake::verify::{Place, Report, What, verify};
use tempfile::TempDir;

/// Tries on a bad line before the technician takes another cable.
const BAD_TRIES: u32 = 4;
/// Plans that the device keeps beside the one in force.
const PLANS_KEPT: u64 = 4;

pub(crate) struct Visitor {
    random: Random,
    wire: Wire,
    machine: Rc<RefCell<Machine>>,
    folder: TempDir,
    part: Option<PartFile>,
    files: u64,
    /// Sectors that were collected while the ring no longer had to keep them: a cut in their erase
    /// may have left anything.
    doubtful: BTreeSet<u32>,
}

impl Visitor {
    pub(crate) fn new(bench: &Bench, machine: Rc<RefCell<Machine>>, seed: u64) -> Self {
        Self {
            random: Random::new(seed),
            wire: bench.wire.clone(),
            machine,
            folder: tempfile::tempdir().unwrap(),
            part: None,
            files: 0,
            doubtful: BTreeSet::new(),
        }
    }

    fn port(&self) -> InProcess<impl FnMut() + use<>> {
        let machine = self.machine.clone();
        InProcess::new(&self.wire, move || machine.borrow_mut().poll())
    }

    /// Loads a plan over a good line.
    pub(crate) fn load(&mut self, plan: &Sealed) -> Result<(), String> {
        let mut client = Client::connect(self.port()).map_err(said)?;
        client.load_plan(&plan.bytes, plan.serial, plan.fingerprint, name()).map_err(said)
    }

    pub(crate) fn plan_in_force(&mut self) -> Result<u64, String> {
        Ok(Client::connect(self.port()).map_err(said)?.identity().plan_fingerprint)
    }

    /// Takes the journal home; verifies and replays it.
    pub(crate) fn collect(
        &mut self,
        tally: &mut Tally,
        kept_from: u32,
        worn: u32,
    ) -> Result<(), String> {
        // The same file goes on, or a new one begins.
        if self.part.is_none() || self.random.one_in(2) {
            let path = self.folder.path().join(format!("{}.part", self.files));
            self.files += 1;
            self.part = Some(PartFile::open(&path).map_err(|error| error.to_string())?);
        }
        let (mut tries, bad) = (0, self.random.one_in(2));
        let head = loop {
            let line = self.line(bad && tries < BAD_TRIES);
            let mut port = line;
            match self.take(&mut port, tally, kept_from) {
                Ok(head) => {
                    tally.bits_flipped += port.bits_flipped();
                    break head;
                }
                Err(_) if bad && tries < BAD_TRIES => {
                    tally.tries_broken_off += 1;
                    tally.bits_flipped += port.bits_flipped();
                }
                Err(error) => return Err(format!("collecting over a good line: {error}")),
            }
            tries += 1;
        };
        tally.collections += 1;
        self.judge(&head, tally, worn)
    }

    fn line(&mut self, bad: bool) -> Noisy<InProcess<impl FnMut() + use<>>> {
        let rate = if bad { [1e-5, 1e-4, 3e-4][self.random.within(0..3) as usize] } else { 0.0 };
        let line = Noisy::new(self.port(), rate, rate / 4.0, self.random.next());
        if bad && self.random.one_in(2) {
            let bytes = self.random.within(200..200_000);
            line.cut_after(bytes)
        } else {
            line
        }
    }

    /// One try.
    fn take<P: Port>(
        &mut self,
        port: &mut P,
        tally: &mut Tally,
        kept_from: u32,
    ) -> Result<HeadRecord, LinkError> {
        let mut client = Client::connect(Borrowed(port))?;
        let now_ms = self.machine.borrow().bench().now_ms.get();
        client.set_clock(1_780_100_000 + now_ms / 1000)?;
        let oldest = client.journal_bounds()?.oldest;
        self.doubtful.extend(oldest..kept_from.max(oldest));
        let Some(part) = &mut self.part else { return Err(LinkError::Interrupted) };
        let collected =
            collect(&mut client, part, None, &mut |_: &Progress| ControlFlow::Continue(()))?;
        tally.sectors_gone += u64::from(collected.gone);
        Ok(collected.head)
    }

    fn judge(&mut self, head: &HeadRecord, tally: &mut Tally, worn: u32) -> Result<(), String> {
        let Some(part) = &self.part else { return Ok(()) };
        let mut bytes = std::fs::read(part.path()).map_err(|error| error.to_string())?;
        bytes.extend(Record::Head(*head).encode());
        let path = Path::new("simulated.strake-journal");
        let mut file = JournalFile::read(Cursor::new(bytes), path).map_err(|e| e.to_string())?;
        let report = verify(&mut file).map_err(|error| error.to_string())?;
        if let Some(contradiction) = report.contradictions.first() {
            return Err(format!("{contradiction}; worn {worn}"));
        }
        self.damage(&report, worn)?;
        if !report.missing_plans.is_empty() && tally.plans <= PLANS_KEPT {
            return Err(format!("plans {:x?} are missing", report.missing_plans));
        }
        let replay = replay(&mut file).map_err(|error| error.to_string())?;
        let verdict = &replay.engine.verdict;
        tally.hashes_compared += verdict.hashes_compared;
        match &verdict.first_difference {
            Some(first) => Err(format!("not identical: {first}")),
            None if !verdict.identical() => Err("nothing was compared".into()),
            None => Ok(()),
        }
    }

    /// Entries are missing only where the medium may have destroyed a sector, or nobody came in
    /// time.
    fn damage(&self, report: &Report, worn: u32) -> Result<(), String> {
        for damage in &report.damage {
            let doubtful = match damage.place {
                Place::Sector { sequence } | Place::Block { sequence, .. } => {
                    self.doubtful.contains(&sequence)
                }
                Place::Sectors { .. } => true,
                Place::File { .. } => false,
            };
            let costs = damage.missing.entries != Some(0) && damage.missing.places == 1;
            let excused = match damage.what {
                What::Absent | What::CutShort => true,
                What::EarlierLap { .. } => worn > 0 || doubtful,
                _ => doubtful || !costs || worn > 0,
            };
            if !excused {
                return Err(format!("{damage}"));
            }
        }
        Ok(())
    }
}

/// A port that its owner can still look at afterwards.
#[derive(Debug)]
struct Borrowed<'a, P>(&'a mut P);

impl<P: Port> Port for Borrowed<'_, P> {
    fn name(&self) -> &str {
        self.0.name()
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), strake::link::PortError> {
        self.0.write(bytes)
    }

    fn read(
        &mut self,
        out: &mut [u8],
        wait: std::time::Duration,
    ) -> Result<usize, strake::link::PortError> {
        self.0.read(out, wait)
    }

    fn now(&self) -> std::time::Duration {
        self.0.now()
    }
}

#[expect(clippy::needless_pass_by_value, reason = "reads best as the argument of map_err")]
fn said(error: LinkError) -> String {
    error.to_string()
}
