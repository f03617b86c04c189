//! A small application over the journal, and what must hold after every restart.
//!
//! Every entry carries a number of its own, so that a lost and an invented one can be told apart.
//! The state is a hash over all entries; so a restored state shows whether checkpoint and entries
//! fit together without gap or overlap.

use embedded_storage::nor_flash::NorFlash;
use std::fs;
use std::path::Path;
use strake::sim::nor::{Cut, Nor, NorError};
use strake_core::alarm::FaultCause;
use strake_core::journal::entry::ResetCause;
use strake_core::journal::{Entry, Item, Sample, SectorReader};
use strake_core::signal::{Channel, Quality};
use strake_firmware::journal::{Journal, JournalError, Recovery, Restore, Snapshot};

/// A flash whose power can be cut.
pub(crate) trait Medium: NorFlash<Error = NorError> + Clone {
    fn cut_after(&mut self, cut: Option<Cut>);
    fn power_on(&mut self);
    fn seed(&mut self, seed: u64);
    /// Steps done so far, as a cut counts them.
    fn steps(&self) -> u64;
    fn torn_words(&self) -> u64;
    fn half_erased(&self) -> u64;
}

impl<const WORD: usize> Medium for Nor<WORD> {
    fn cut_after(&mut self, cut: Option<Cut>) {
        Nor::cut_after(self, cut);
    }
    fn power_on(&mut self) {
        Nor::power_on(self);
    }
    fn seed(&mut self, seed: u64) {
        Nor::seed(self, seed);
    }
    fn steps(&self) -> u64 {
        self.counters().programmed_words + self.counters().erases
    }
    fn torn_words(&self) -> u64 {
        self.counters().torn_words
    }
    fn half_erased(&self) -> u64 {
        self.counters().half_erased
    }
}

/// A flash around another one, which it forwards to.
pub(crate) trait Around: NorFlash<Error = NorError> + Clone {
    fn inner(&self) -> &Nor<4>;
    fn inner_mut(&mut self) -> &mut Nor<4>;
    /// What the device around it loses with the power.
    fn forget(&mut self);
}

impl<F: Around> Medium for F {
    fn cut_after(&mut self, cut: Option<Cut>) {
        self.inner_mut().cut_after(cut);
    }
    fn power_on(&mut self) {
        self.forget();
        self.inner_mut().power_on();
    }
    fn seed(&mut self, seed: u64) {
        self.inner_mut().seed(seed);
    }
    fn steps(&self) -> u64 {
        self.inner().steps()
    }
    fn torn_words(&self) -> u64 {
        self.inner().torn_words()
    }
    fn half_erased(&self) -> u64 {
        self.inner().half_erased()
    }
}

/// State of the application: how many entries it took, and a hash over them.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(crate) struct State {
    pub(crate) count: u64,
    pub(crate) hash: u64,
}

impl State {
    /// FNV-1a by words (Fowler, Noll and Vo, draft-eastlake-fnv).
    fn apply(&mut self, entry: &Entry) {
        let words = [u64::from(entry.number()), entry.tick_ms(), number_of(entry).cast_unsigned()];
        self.count += 1;
        for word in words {
            self.hash = (self.hash ^ word).wrapping_mul(0x0000_0100_0000_01B3);
        }
    }
}

/// The number that each entry of the bench carries.
fn number_of(entry: &Entry) -> i64 {
    match entry {
        Entry::Sample(sample) => i64::from(sample.level.count_16),
        Entry::Fault { detail, .. } => i64::from(*detail),
        Entry::StartUp { boot, .. } => -i64::from(*boot),
        _ => 0,
    }
}

/// What the application does between two looks at the flash.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Op {
    Push,
    Flush,
    Event,
    Housekeep,
}

pub(crate) const fn op(index: usize) -> Op {
    match index % 7 {
        2 => Op::Flush,
        4 => Op::Event,
        6 => Op::Housekeep,
        _ => Op::Push,
    }
}

#[derive(Clone, Debug, Default)]
pub(crate) struct App {
    pub(crate) state: State,
    boot: u16,
    tick_ms: u64,
    number: i32,
    state_len: usize,
}

impl App {
    /// A fresh one whose state has this many bytes.
    pub(crate) fn with_state(state_len: usize) -> Self {
        Self { state_len, ..Self::default() }
    }
}

impl Snapshot for App {
    fn plan_fingerprint(&self) -> u64 {
        0x1122_3344_5566_7788
    }
    fn boot(&self) -> u16 {
        self.boot
    }
    fn tick_ms(&self) -> u64 {
        self.tick_ms
    }
    fn utc_s(&self) -> Option<u64> {
        None
    }
    fn write_state(&mut self, out: &mut [u8]) -> usize {
        out[..8].copy_from_slice(&self.state.count.to_le_bytes());
        out[8..16].copy_from_slice(&self.state.hash.to_le_bytes());
        out[16..self.state_len].fill(0xA5);
        self.state_len
    }
}

/// Takes what the journal remembers.
#[derive(Debug, Default)]
pub(crate) struct Remembered {
    pub(crate) state: State,
    pub(crate) given: u64,
    /// The checkpoint is not one that the application wrote.
    pub(crate) wild: bool,
}

impl Restore for Remembered {
    fn checkpoint(&mut self, bytes: &[u8]) {
        assert_eq!(self.given, 0, "the checkpoint comes first");
        let word = |at: usize| u64::from_le_bytes(bytes[at..at + 8].try_into().unwrap());
        self.state = State { count: word(0), hash: word(8) };
        self.wild = bytes[16..].iter().any(|&byte| byte != 0xA5);
    }
    fn entry(&mut self, entry: &Entry) {
        self.given += 1;
        self.state.apply(entry);
    }
}

/// One entry handed to the journal.
#[derive(Clone, Copy, Debug)]
struct Logged {
    entry: Entry,
    durable: bool,
}

#[derive(Clone, Debug)]
pub(crate) struct Bench<F> {
    pub(crate) journal: Journal<F>,
    pub(crate) app: App,
    /// What was handed over and may still stand in the ring, oldest first.
    log: Vec<Logged>,
    /// State behind all that the ring has forgotten.
    forgotten: State,
}

type Outcome = Result<(), JournalError<NorError>>;

impl<F: Medium> Bench<F> {
    pub(crate) fn new(flash: F, state_len: usize) -> Self {
        let app = App { state_len, ..App::default() };
        let mut remembered = Remembered::default();
        let (journal, _) = Journal::open(flash, &mut remembered).unwrap();
        Self { journal, app, log: Vec::new(), forgotten: State::default() }
    }

    fn log(&mut self, entry: Entry) {
        self.log.push(Logged { entry, durable: false });
    }

    fn all_durable(&mut self) {
        for logged in self.log.iter_mut().rev().take_while(|logged| !logged.durable) {
            logged.durable = true;
        }
    }

    pub(crate) fn sample(&mut self) -> Outcome {
        let app = &mut self.app;
        app.number += 1;
        app.tick_ms += 10_000 + u64::from(app.number.unsigned_abs() % 3);
        let sample = Sample {
            tick_ms: app.tick_ms,
            level: Channel { count_16: app.number, quality: Quality::Good },
            temperature: Channel { count_16: app.number % 50, quality: Quality::Sparse },
            battery_mv: 3600 - u16::try_from(app.number % 11).unwrap(),
        };
        self.log(Entry::Sample(sample));
        self.journal.push(&sample, &mut self.app)?;
        self.app.state.apply(&Entry::Sample(sample));
        Ok(())
    }

    pub(crate) fn event(&mut self) -> Outcome {
        self.app.number += 1;
        let (tick_ms, detail) = (self.app.tick_ms, self.app.number);
        self.append(Entry::Fault { tick_ms, cause: FaultCause::Silent, count: 1, detail })
    }

    pub(crate) fn append(&mut self, entry: Entry) -> Outcome {
        self.log(entry);
        self.journal.append_event(&entry, &mut self.app)?;
        self.all_durable();
        self.app.state.apply(&entry);
        Ok(())
    }

    pub(crate) fn flush(&mut self) -> Outcome {
        self.journal.flush()?;
        self.all_durable();
        Ok(())
    }

    pub(crate) fn run(&mut self, op: Op) -> Outcome {
        match op {
            Op::Push => self.sample(),
            Op::Flush => self.flush(),
            Op::Event => self.event(),
            Op::Housekeep => self.journal.housekeeping(self.app.tick_ms).map(|_| ()),
        }
    }

    /// Power returns: opens the journal again, judges what it holds, and writes the start-up entry
    /// unless the power is to fail before. `Err` says what is wrong.
    pub(crate) fn restart(&mut self) -> Result<Recovery, String> {
        let mut flash = self.journal.flash().clone();
        flash.power_on();
        let mut remembered = Remembered::default();
        let (journal, recovery) =
            Journal::open(flash, &mut remembered).map_err(|error| format!("{error:?}"))?;
        self.journal = journal;
        self.judge()?;
        let mut expected = self.forgotten;
        self.log.iter().for_each(|logged| expected.apply(&logged.entry));
        if remembered.wild || remembered.state != expected {
            return Err(format!("restored {:?} instead of {expected:?}", remembered.state));
        }
        if u64::from(recovery.next_entry) != expected.count {
            return Err(format!("next entry {} of {}", recovery.next_entry, expected.count));
        }
        self.app.state = expected;
        self.app.boot += 1;
        self.app.tick_ms = 0;
        Ok(recovery)
    }

    pub(crate) fn start_up(&mut self) -> Outcome {
        let boot = self.app.boot;
        self.append(Entry::StartUp {
            tick_ms: 0,
            boot,
            cause: ResetCause::PowerOn,
            carried: 0,
            missing_ms_max: 60_000,
            count: 1,
        })
    }

    /// Compares what stands on the flash with what was handed over; what a cut took is struck off.
    fn judge(&mut self) -> Result<(), String> {
        let mut found = Vec::new();
        let Some(newest) = self.journal.newest_sequence() else {
            return self.settle(&[], 0);
        };
        let oldest = self.journal.oldest_sequence();
        let sectors = u32::try_from(self.journal.flash().capacity() / 4096).unwrap();
        if newest + 1 - oldest < (newest + 1).min(sectors - 2) {
            return Err(format!("only sectors {oldest} to {newest} are kept"));
        }
        let mut whole_from = 0;
        for sequence in oldest..=newest {
            let mut bytes = [0; 4096];
            self.journal.read_sector(sequence, 0, &mut bytes).unwrap();
            let reader = SectorReader::new(&bytes)
                .map_err(|error| format!("header of sector {sequence}: {error:?}"))?;
            for item in reader {
                match item {
                    Item::Entry(entry) => found.push(entry),
                    // A cut in the erase of the oldest sector destroys it.
                    Item::Damage(_) if sequence == oldest => whole_from = usize::MAX,
                    Item::State { .. } | Item::Damage(_) => {}
                }
            }
            if whole_from == usize::MAX && self.journal.flash().half_erased() > 0 {
                whole_from = found.len();
            }
        }
        self.settle(&found, if whole_from == usize::MAX { 0 } else { whole_from })
    }

    fn settle(&mut self, found: &[Entry], whole_from: usize) -> Result<(), String> {
        let mut rest = self.log.iter().enumerate();
        let mut places = Vec::new();
        for entry in found {
            match rest.find(|(_, logged)| logged.entry == *entry) {
                Some((place, _)) => places.push(place),
                None => return Err(format!("invented or misplaced: {entry:?}")),
            }
        }
        let oldest = places.first().copied().unwrap_or(0);
        let whole = places.get(whole_from).copied();
        let whole = whole.unwrap_or(if whole_from > 0 { self.log.len() } else { 0 });
        let mut kept = vec![false; self.log.len()];
        for place in places {
            kept[place] = true;
        }
        let lost = (whole..self.log.len()).find(|&at| self.log[at].durable && !kept[at]);
        if let Some(lost) = lost {
            return Err(format!("lost: {:?}", self.log[lost]));
        }
        let log = core::mem::take(&mut self.log);
        for (at, logged) in log.into_iter().enumerate() {
            if at < oldest {
                self.forgotten.apply(&logged.entry);
            } else if logged.durable || kept[at] {
                self.log.push(Logged { durable: true, ..logged });
            }
        }
        Ok(())
    }
}

/// Holds a table against the one kept under this name beside the tests.
pub(crate) fn held_as(name: &str, table: &str) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/journal").join(name);
    if std::env::var_os("STRAKE_SNAPSHOTS").is_some() {
        fs::write(&path, table).unwrap();
    }
    let held = fs::read_to_string(&path).unwrap_or_default();
    assert_eq!(table, held, "run with STRAKE_SNAPSHOTS=write when the change is meant");
}
