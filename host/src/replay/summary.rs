//! What a journal tells: peaks, time in bands, cycles, alarms, faults.

use super::Rainflow;
use super::batch::Taken;
use std::collections::BTreeMap;
use strake_core::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use strake_core::evaluate::levels_m;
use strake_core::journal::entry::TransitionCause;
use strake_core::journal::{Entry, SectorHeader};
use strake_core::plan::Plan;
use strake_core::signal::{ReadingClass, Resolved};

/// Ranges of utilisation below this are no cycles.
const CYCLE_DEAD_BAND: f64 = 0.01;
/// Edges of the bands of utilisation.
pub const BAND_EDGES: [f64; 6] = [0.0, 0.25, 0.5, 0.75, 0.85, 0.95];

/// The highest value of a utilisation bound, and when.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Peak {
    /// Outward bound.
    pub utilisation_bound: f32,
    /// Estimate in the same sample.
    pub utilisation: f32,
    /// Estimated level, m above the datum.
    pub level_m: f32,
    /// When.
    pub moment: Moment,
    /// UTC seconds, when the clock was set in that start.
    pub utc_s: Option<u64>,
}

/// Time spent between two edges of utilisation (the bound).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Band {
    /// Lower edge.
    pub from: f64,
    /// Time, s.
    pub time_s: f64,
}

/// One part over the whole journal.
#[derive(Clone, Debug)]
pub struct PartSummary {
    /// Its name.
    pub name: String,
    /// Highest outward bound.
    pub peak: Peak,
    /// Time in bands.
    pub bands: [Band; BAND_EDGES.len()],
    /// Cycles of the estimate.
    pub cycles: Rainflow,
}

/// One alarm, from its raising on.
#[derive(Clone, Debug, PartialEq)]
pub struct AlarmLine {
    /// Part or fault.
    pub name: String,
    /// `warn`, `alarm`, `inward` or `fault`.
    pub kind: &'static str,
    /// When it was raised.
    pub moment: Moment,
    /// UTC seconds, when the clock was set in that start.
    pub utc_s: Option<u64>,
    /// Utilisation that raised it.
    pub utilisation: f32,
    /// Time until it was acknowledged, ms.
    pub acknowledged_after_ms: Option<u64>,
    /// Time until the condition was gone, ms.
    pub returned_after_ms: Option<u64>,
}

/// How often a fault was seen.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FaultLine {
    /// What was wrong.
    pub cause: FaultCause,
    /// Occurrences.
    pub count: u64,
    /// When the first entry was made.
    pub first: Moment,
    /// UTC seconds of the first entry, when the clock was set in that start.
    pub first_utc_s: Option<u64>,
}

/// Ticks to UTC, as far as the journal knows it: each start counts its own ticks, and a fix serves
/// all of its start, also what came before it.
#[derive(Clone, Debug, Default)]
pub(super) struct JournalClock {
    /// UTC seconds at tick zero, by boot.
    offsets_s: BTreeMap<u16, i64>,
    boot: u16,
}

impl JournalClock {
    pub(super) fn sector(&mut self, header: &SectorHeader) {
        self.boot = header.boot;
        if let Some(utc_s) = header.utc_s {
            self.fix(header.tick_ms, utc_s);
        }
    }

    fn fix(&mut self, tick_ms: u64, utc_s: u64) {
        let (tick_s, utc_s) = (i64::try_from(tick_ms / 1000), i64::try_from(utc_s));
        if let (Ok(tick_s), Ok(utc_s)) = (tick_s, utc_s) {
            self.offsets_s.insert(self.boot, utc_s - tick_s);
        }
    }

    fn utc_s(&self, moment: Moment) -> Option<u64> {
        let tick_s = i64::try_from(moment.tick_ms / 1000).ok()?;
        u64::try_from(self.offsets_s.get(&moment.boot)? + tick_s).ok()
    }
}

/// A tick of one start of the controller.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Moment {
    /// Number of the start.
    pub boot: u16,
    /// Tick, ms.
    pub tick_ms: u64,
}

/// What happened.
#[derive(Debug, Default)]
pub struct Summary {
    /// Samples.
    pub samples: u64,
    /// Samples with a measured level.
    pub measured: u64,
    /// Starts of the controller.
    pub starts: u64,
    /// Acknowledgements.
    pub acknowledgements: u64,
    /// Parts, in the order in which plans named them.
    pub parts: Vec<PartSummary>,
    /// Alarms, in order.
    pub alarms: Vec<AlarmLine>,
    /// Faults by cause.
    pub faults: BTreeMap<u8, FaultLine>,
    /// UTC seconds of the first and the last sample, when both are known.
    pub utc_s: Option<(u64, u64)>,
    ends: Option<(Moment, Moment)>,
    /// Ticks to UTC.
    pub(super) clock: JournalClock,
    plan: Option<Plan>,
    /// For each part of the plan in force its place in `parts`.
    places: Vec<usize>,
    last_tick_ms: Option<u64>,
}

impl Summary {
    /// Another plan: parts of the same name go on.
    pub(super) fn plan(&mut self, plan: &Plan, names: &[String]) {
        self.places = names
            .iter()
            .map(|name| {
                let known = self.parts.iter().position(|part| part.name == *name);
                known.unwrap_or_else(|| {
                    let mut bands = [Band::default(); BAND_EDGES.len()];
                    for (band, from) in bands.iter_mut().zip(BAND_EDGES) {
                        band.from = from;
                    }
                    self.parts.push(PartSummary {
                        name: name.clone(),
                        peak: Peak::default(),
                        bands,
                        cycles: Rainflow::new(CYCLE_DEAD_BAND),
                    });
                    self.parts.len() - 1
                })
            })
            .collect();
        self.plan = Some(plan.clone());
    }

    pub(super) fn sample(&mut self, taken: &Taken<'_>) {
        let tick_ms = taken.sample.tick_ms;
        self.samples += 1;
        let seen = matches!(taken.resolved.class, ReadingClass::Valid | ReadingClass::Held);
        self.measured += u64::from(seen);
        let moment = self.moment(tick_ms);
        self.ends = Some(self.ends.map_or((moment, moment), |(first, _)| (first, moment)));
        let time_s = match self.last_tick_ms.replace(tick_ms) {
            // A tick counts as long as the one before it at most lasted to it.
            Some(last_ms) if last_ms < tick_ms => seconds(tick_ms - last_ms),
            _ => 0.0,
        };
        if !seen {
            return;
        }
        for (&place, &[estimate, outward, _]) in self.places.iter().zip(taken.utilisations) {
            let Some(part) = self.parts.get_mut(place) else { continue };
            if outward > part.peak.utilisation_bound {
                let level_m = self.plan.as_ref().map_or(0.0, |plan| level_m(plan, taken.resolved));
                part.peak = Peak {
                    utilisation_bound: outward,
                    utilisation: estimate,
                    level_m,
                    moment,
                    utc_s: None,
                };
            }
            let band = BAND_EDGES.iter().rposition(|&edge| f64::from(outward) >= edge);
            if let Some(band) = band.and_then(|index| part.bands.get_mut(index)) {
                band.time_s += time_s;
            }
            part.cycles.push(f64::from(estimate));
        }
    }

    pub(super) fn event(&mut self, entry: &Entry) {
        let tick_ms = entry.tick_ms();
        match entry {
            Entry::StartUp { boot, .. } => {
                self.starts += 1;
                self.last_tick_ms = None;
                self.clock.boot = *boot;
            }
            Entry::ClockFix { utc_s, .. } => self.clock.fix(tick_ms, *utc_s),
            Entry::Acknowledge { .. } => self.acknowledgements += 1,
            Entry::Fault { cause, count, .. } => {
                let first = self.moment(tick_ms);
                let line = self.faults.entry(cause.number()).or_insert(FaultLine {
                    cause: *cause,
                    count: 0,
                    first,
                    first_utc_s: None,
                });
                line.count += u64::from(*count);
            }
            Entry::Transition(transition) => {
                self.transition(transition.machine, transition.to, transition.cause, transition);
            }
            Entry::Sample(_) | Entry::PlanChange { .. } | Entry::Gap { .. } => {}
        }
    }

    fn transition(
        &mut self,
        machine: MachineId,
        to: AlarmState,
        cause: TransitionCause,
        transition: &strake_core::journal::entry::Transition,
    ) {
        let (name, kind) = self.name(machine);
        let tick_ms = transition.tick_ms;
        if cause == TransitionCause::Raised {
            let moment = self.moment(tick_ms);
            self.alarms.push(AlarmLine {
                name,
                kind,
                moment,
                utc_s: None,
                utilisation: transition.utilisation,
                acknowledged_after_ms: None,
                returned_after_ms: None,
            });
            return;
        }
        let boot = self.clock.boot;
        let line = self.alarms.iter_mut().rev().find(|line| line.name == name && line.kind == kind);
        let Some(line) = line else { return };
        // Ticks of a later boot say nothing of the time between.
        let after = tick_ms.checked_sub(line.moment.tick_ms).filter(|_| line.moment.boot == boot);
        match (cause, to) {
            (TransitionCause::Acknowledged, _) if line.acknowledged_after_ms.is_none() => {
                line.acknowledged_after_ms = after;
            }
            (TransitionCause::Returned, _) => line.returned_after_ms = after,
            _ => {}
        }
    }

    fn name(&self, machine: MachineId) -> (String, &'static str) {
        match (machine.part(), machine.fault()) {
            (Some((part, threshold)), _) => {
                let place = self.places.get(usize::from(part));
                let name = place.and_then(|&place| self.parts.get(place));
                let name = name.map_or_else(|| format!("part {part}"), |part| part.name.clone());
                let kind = match threshold {
                    Threshold::Warn => "warn",
                    Threshold::Alarm => "alarm",
                    Threshold::Inward => "inward",
                };
                (name, kind)
            }
            (None, Some(cause)) => (cause.to_string(), "fault"),
            // The one machine that is neither.
            (None, None) => ("tank".to_owned(), "time to limit"),
        }
    }

    const fn moment(&self, tick_ms: u64) -> Moment {
        Moment { boot: self.clock.boot, tick_ms }
    }

    /// Puts UTC to every moment, now that all fixes are known.
    pub(super) fn finish(&mut self) {
        self.plan = None;
        let clock = &self.clock;
        for part in &mut self.parts {
            part.peak.utc_s = clock.utc_s(part.peak.moment);
        }
        for line in &mut self.alarms {
            line.utc_s = clock.utc_s(line.moment);
        }
        for line in self.faults.values_mut() {
            line.first_utc_s = clock.utc_s(line.first);
        }
        let ends = self.ends.map(|(first, last)| (clock.utc_s(first), clock.utc_s(last)));
        if let Some((Some(first), Some(last))) = ends {
            self.utc_s = Some((first, last));
        }
    }
}

#[expect(clippy::cast_precision_loss, reason = "ticks are below 2^48")]
fn seconds(span_ms: u64) -> f64 {
    span_ms as f64 * 1e-3
}

fn level_m(plan: &Plan, resolved: &Resolved) -> f32 {
    let [_, level_m, _] = levels_m(plan, resolved);
    level_m
}
