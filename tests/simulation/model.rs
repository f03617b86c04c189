//! What the world knows of the journal: entries by number, nothing more.

use crate::flash::{Sector, look};
use std::collections::BTreeMap;
use strake::sim::sensor::Sensor;
use strake_core::alarm::AlarmState;
use strake_core::evaluate::State;
use strake_core::journal::{Entry, Sample};
use strake_core::signal::Quality;

/// What may be missing before a start.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Cut {
    /// When the power went, ms.
    pub(crate) at_ms: u64,
    /// When that start had begun, ms.
    pub(crate) since_ms: u64,
    /// Longest time that may be missing; `None` when the flash refuses, so that more may.
    pub(crate) missing_ms_max: Option<u64>,
}

#[derive(Debug)]
pub(crate) struct Model {
    /// Every durable entry that may still be asked for, with the sequence of its sector.
    entries: BTreeMap<u32, (u32, Entry)>,
    next: u32,
    /// What the sensor shows when it is well.
    truth: Sensor,
    /// When it was not, ms.
    pub(crate) failures: Vec<(u64, u64)>,
    /// When the start began to which the next entry belongs, ms.
    entry_start_ms: u64,
    /// Time of the last durable sample, ms.
    pub(crate) last_sample_ms: Option<u64>,
    /// Number of the last start with an entry.
    pub(crate) boot: u16,
    /// The last look at the flash.
    image: Vec<u8>,
    sectors: Vec<Sector>,
    /// Sequence from which on the ring must keep every sector.
    pub(crate) kept_from: u32,
    /// Sectors that refuse.
    pub(crate) worn: u32,
    pub(crate) samples: u64,
    pub(crate) moves: u64,
    pub(crate) gaps: u64,
}

impl Model {
    pub(crate) fn new(truth: Sensor) -> Self {
        Self {
            entries: BTreeMap::new(),
            next: 0,
            truth,
            failures: Vec::new(),
            entry_start_ms: 0,
            last_sample_ms: None,
            boot: 0,
            image: Vec::new(),
            sectors: Vec::new(),
            kept_from: 0,
            worn: 0,
            samples: 0,
            moves: 0,
            gaps: 0,
        }
    }

    /// Looks at the flash. The controller started at `started_ms`; `cut` says what a start-up entry
    /// that is new must account for.
    pub(crate) fn see(
        &mut self,
        image: Vec<u8>,
        started_ms: u64,
        now_ms: u64,
        cut: Option<Cut>,
    ) -> Result<(), String> {
        let sectors = look(&image, &self.image, &self.sectors);
        self.kept(&sectors, u32::try_from(image.len() / 4096).unwrap())?;
        for sector in &sectors {
            for (number, entry) in (sector.first_entry..).zip(&sector.entries) {
                match self.entries.get(&number) {
                    Some((_, known)) if known == entry => {}
                    Some((_, known)) => {
                        return Err(format!("entry {number} was {known:?}, is {entry:?}"));
                    }
                    None if number == self.next => {
                        self.entries.insert(number, (sector.sequence, *entry));
                        self.next += 1;
                        self.fresh(entry, started_ms, now_ms, cut)
                            .map_err(|error| format!("entry {number}, {entry:?}: {error}"))?;
                    }
                    // An earlier lap that was forgotten already.
                    None if number < self.next => {}
                    None => {
                        let next = self.next;
                        return Err(format!("entry {number} follows {next}: {entry:?}"));
                    }
                }
            }
        }
        (self.image, self.sectors) = (image, sectors);
        Ok(())
    }

    /// Sequence of the newest sector.
    pub(crate) fn newest(&self) -> u32 {
        self.sectors.last().map_or(0, |sector| sector.sequence)
    }

    /// Everything durable still stands, in every sector that the ring must keep.
    fn kept(&mut self, sectors: &[Sector], ring: u32) -> Result<(), String> {
        let newest = sectors.last().map_or(0, |sector| sector.sequence);
        // One place is erased ahead; each worn one may have been passed over for the next.
        let from = (newest + 2 + self.worn).saturating_sub(ring);
        self.kept_from = from;
        self.entries.retain(|_, (sequence, _)| *sequence >= from);
        for (number, (sequence, entry)) in &self.entries {
            let stands = sectors
                .iter()
                .find(|one| one.sequence == *sequence)
                .and_then(|one| one.entries.get(number.checked_sub(one.first_entry)? as usize));
            if stands != Some(entry) {
                return Err(format!("entry {number} in sector {sequence} is lost: {entry:?}"));
            }
        }
        Ok(())
    }

    /// An entry that was not there before.
    fn fresh(
        &mut self,
        entry: &Entry,
        started_ms: u64,
        now_ms: u64,
        cut: Option<Cut>,
    ) -> Result<(), String> {
        match entry {
            Entry::Sample(sample) => self.sample(sample, now_ms)?,
            Entry::StartUp { boot, missing_ms_max, .. } => {
                // A start that a cut ended may have left its number in a header alone.
                if *boot <= self.boot {
                    return Err(format!("start {} came before", self.boot));
                }
                self.boot = *boot;
                self.entry_start_ms = started_ms;
                let missing_ms = match (cut, self.last_sample_ms) {
                    (Some(Cut { at_ms, since_ms, missing_ms_max: Some(_) }), Some(last_ms)) => {
                        at_ms.saturating_sub(last_ms.max(since_ms))
                    }
                    _ => 0,
                };
                let most_ms = cut.and_then(|cut| cut.missing_ms_max).unwrap_or(u64::MAX);
                if missing_ms > most_ms || missing_ms > u64::from(*missing_ms_max) {
                    return Err(format!("{missing_ms} ms are missing, {most_ms} ms may be"));
                }
            }
            Entry::Transition(_) => self.moves += 1,
            Entry::Gap { .. } => self.gaps += 1,
            _ => {}
        }
        Ok(())
    }

    /// A sample is what the sensor showed at that moment, and comes not before the one before.
    fn sample(&mut self, sample: &Sample, now_ms: u64) -> Result<(), String> {
        self.samples += 1;
        let at_ms = self.entry_start_ms + sample.tick_ms;
        if at_ms > now_ms || self.last_sample_ms.is_some_and(|last_ms| last_ms > at_ms) {
            let last_ms = self.last_sample_ms;
            return Err(format!("at {at_ms} ms, now {now_ms} ms, the last at {last_ms:?} ms"));
        }
        self.last_sample_ms = Some(at_ms);
        if self.failures.iter().any(|&(from, to)| from <= at_ms && at_ms <= to) {
            return Ok(());
        }
        let shown = self.truth.level_count(at_ms).map_err(|error| format!("{error:?}"))?;
        let level = sample.level;
        if level.quality != Quality::Good || level.count_16 != shown * 16 {
            return Err(format!("the sensor showed {shown} counts at {at_ms} ms"));
        }
        Ok(())
    }

    /// Samples that waited when the controller restarted warm are durable now.
    pub(crate) fn carried(&self, waited: &[Sample]) -> Result<(), String> {
        let newest: Vec<_> = self.entries.values().rev().take(300).collect();
        let stands = |sample| newest.iter().any(|(_, entry)| *entry == Entry::Sample(sample));
        match waited.iter().find(|&&sample| !stands(sample)) {
            Some(sample) => Err(format!("a warm restart lost {sample:?}")),
            None => Ok(()),
        }
    }

    /// No alarm whose last durable move asks for a person is normal again without one.
    pub(crate) fn latches(&self, state: &State) -> Result<(), String> {
        let mut asking = BTreeMap::new();
        for (number, (_, entry)) in &self.entries {
            match entry {
                Entry::Transition(moved) => {
                    asking.insert(moved.machine.number(), (number, moved.to));
                }
                Entry::Acknowledge { .. } | Entry::PlanChange { .. } => asking.clear(),
                _ => {}
            }
        }
        for (machine, (number, to)) in asking {
            let now = state.machines()[usize::from(machine)].state;
            let asks = !matches!(to, AlarmState::Normal | AlarmState::Acknowledged);
            if asks && now == AlarmState::Normal {
                return Err(format!("machine {machine}, {to:?} in entry {number}, is normal now"));
            }
        }
        Ok(())
    }
}
