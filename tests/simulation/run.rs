//! One run: operations drawn from the seed, and a look at the flash after each.

use crate::model::{Cut, Model};
use crate::random::Random;
use crate::visit::Visitor;
use crate::world::{self, Sealed};
use std::cell::RefCell;
use std::fmt;
use std::rc::Rc;
use std::str::FromStr;
use strake::sim::board::Bench;
use strake::sim::machine::{Happening, Machine};
use strake::sim::nor::{Cut as FlashCut, Nor, Tear};
use strake::sim::sensor::Failure;

const MINUTE_MS: u64 = 60_000;
const HOUR_MS: u64 = 60 * MINUTE_MS;
/// Sectors that wear out in one run, at most: fewer than the device tries in a row.
const WORN_MAX: u32 = 2;

/// What a run is made from.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Parameters {
    pub(crate) seed: u64,
    pub(crate) days: u64,
    pub(crate) sectors: usize,
}

impl fmt::Display for Parameters {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}-{}-{}", self.seed, self.days, self.sectors)
    }
}

impl FromStr for Parameters {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        let numbers: Vec<u64> = text.split('-').filter_map(|word| word.parse().ok()).collect();
        match numbers[..] {
            [seed, days, sectors] => {
                let sectors = usize::try_from(sectors).map_err(|error| error.to_string())?;
                Ok(Self { seed, days, sectors })
            }
            _ => Err(format!("'{text}' is not seed-days-sectors")),
        }
    }
}

/// What happened.
#[derive(Clone, Debug, Default)]
pub(crate) struct Tally {
    pub(crate) days: u64,
    pub(crate) samples: u64,
    pub(crate) alarm_moves: u64,
    pub(crate) cold_starts: u64,
    pub(crate) starts_cut_short: u64,
    pub(crate) warm_restarts: u64,
    pub(crate) samples_carried: u64,
    pub(crate) torn_words: u64,
    pub(crate) half_erased: u64,
    pub(crate) worn_sectors: u64,
    pub(crate) gaps_stated: u64,
    pub(crate) sensor_failures: u64,
    pub(crate) presses: u64,
    pub(crate) plans: u64,
    pub(crate) plan_loads_cut: u64,
    pub(crate) collections: u64,
    pub(crate) tries_broken_off: u64,
    pub(crate) bits_flipped: u64,
    pub(crate) sectors_gone: u64,
    pub(crate) hashes_compared: u64,
}

impl Tally {
    fn numbers(&mut self) -> [&mut u64; 20] {
        let Self { days, samples, alarm_moves, cold_starts, starts_cut_short, .. } = self;
        let Self { warm_restarts, samples_carried, torn_words, half_erased, worn_sectors, .. } =
            self;
        let Self { gaps_stated, sensor_failures, presses, plans, plan_loads_cut, .. } = self;
        let Self {
            collections, tries_broken_off, bits_flipped, sectors_gone, hashes_compared, ..
        } = self;
        [
            days,
            samples,
            alarm_moves,
            cold_starts,
            starts_cut_short,
            warm_restarts,
            samples_carried,
            torn_words,
            half_erased,
            worn_sectors,
            gaps_stated,
            sensor_failures,
            presses,
            plans,
            plan_loads_cut,
            collections,
            tries_broken_off,
            bits_flipped,
            sectors_gone,
            hashes_compared,
        ]
    }

    pub(crate) fn add(&mut self, other: &Self) {
        let mut other = other.clone();
        for (sum, more) in self.numbers().into_iter().zip(other.numbers()) {
            *sum += *more;
        }
    }

    /// Every kind of fault came, so what holds holds against it.
    pub(crate) fn harm_was_done(&self) -> bool {
        let mut all = self.clone();
        all.numbers().into_iter().all(|number| *number > 0)
    }
}

pub(crate) fn run(parameters: Parameters) -> Result<Tally, String> {
    run_with(parameters, |_| {})
}

/// A run in which `meddle` touches the bench after every operation.
pub(crate) fn run_with(parameters: Parameters, meddle: impl Fn(&Bench)) -> Result<Tally, String> {
    let Parameters { seed, days, sectors } = parameters;
    let mut random = Random::new(seed);
    let (machine, truth) = world::device(&mut random, days, sectors);
    let bench = machine.bench().clone();
    let machine = Rc::new(RefCell::new(machine));
    let visitor = Visitor::new(&bench, machine.clone(), random.next());
    let plan = world::sealed(0);
    let model = Model::new(truth);
    let mut run = Run {
        random,
        bench,
        machine,
        visitor,
        model,
        plan,
        flush_before_ms: 0,
        cut: None,
        tally: Tally { days, ..Tally::default() },
    };
    let plan = run.plan.clone();
    run.visitor.load(&plan)?;
    run.tally.plans += 1;
    while run.now_ms() < days * 24 * HOUR_MS {
        let at_ms = run.now_ms();
        meddle(&run.bench);
        run.operation().map_err(|error| {
            let machine = run.machine.borrow();
            let journal = machine.app().and_then(|app| app.device().journal());
            let counters = journal.map(|journal| *journal.counters());
            let now_ms = run.now_ms();
            format!("in an operation begun at {at_ms} ms, now {now_ms} ms: {error}; {counters:?}")
        })?;
    }
    run.visit()?;
    Ok(run.finished())
}

struct Run {
    random: Random,
    bench: Bench,
    machine: Rc<RefCell<Machine>>,
    visitor: Visitor,
    model: Model,
    /// In force.
    plan: Sealed,
    /// Longest wait of the plan before it, ms: that plan may have judged the last samples.
    flush_before_ms: u64,
    /// A loss of power that no start-up entry has accounted for yet.
    cut: Option<Cut>,
    tally: Tally,
}

impl Run {
    fn now_ms(&self) -> u64 {
        self.bench.now_ms.get()
    }

    fn operation(&mut self) -> Result<(), String> {
        match self.random.within(0..100) {
            0..4 => {
                // Nobody comes for days.
                for _ in 0..self.random.within(8..18) {
                    self.go_on(6 * HOUR_MS);
                    self.see()?;
                }
                self.visit()
            }
            4..35 => {
                let time_ms = self.random.within(MINUTE_MS..8 * HOUR_MS);
                self.go_on(time_ms);
                self.see()
            }
            35..52 => self.cut_power(),
            52..62 => self.cut_erase(),
            62..72 => self.restart_warm(),
            72..78 => self.press(),
            78..84 => self.fail_sensor(),
            84..95 => self.visit(),
            95..98 => self.change_plan(),
            _ => {
                self.wear_out();
                Ok(())
            }
        }
    }

    fn go_on(&mut self, time_ms: u64) {
        let until_ms = self.now_ms() + time_ms;
        self.machine.borrow_mut().run_until(until_ms);
    }

    /// Looks at the flash and judges it.
    fn see(&mut self) -> Result<(), String> {
        let image = self.bench.journal.with(|flash| flash.image());
        let boot = self.model.boot;
        self.model.see(image, self.bench.started_ms(), self.now_ms(), self.cut)?;
        if self.model.boot != boot {
            self.cut = None;
        }
        Ok(())
    }

    fn tear(&mut self) -> Tear {
        [Tear::Before, Tear::During, Tear::During, Tear::After][self.random.within(0..4) as usize]
    }

    fn arm(&mut self, steps: u64) -> FlashCut {
        FlashCut { steps, tear: self.tear(), scattered: self.random.one_in(2) }
    }

    /// The power goes in the midst of some program or erase within the next hours.
    fn cut_power(&mut self) -> Result<(), String> {
        let steps = self.random.within(0..600);
        let cut = self.arm(steps);
        self.bench.journal.with(|flash| flash.cut_after(Some(cut)));
        self.wait_for_cut(6 * HOUR_MS)
    }

    /// The power goes in the next erase.
    fn cut_erase(&mut self) -> Result<(), String> {
        let tear = self.tear();
        self.bench.journal.with(|flash| flash.cut_in_erase(Some(tear)));
        self.wait_for_cut(6 * HOUR_MS)
    }

    fn wait_for_cut(&mut self, most_ms: u64) -> Result<(), String> {
        let until_ms = self.now_ms() + most_ms;
        while self.bench.journal.with(|flash| flash.is_powered()) && self.now_ms() < until_ms {
            self.go_on(1_000);
        }
        // When nothing was written the power fails all the same, at rest.
        self.power_fails()
    }

    /// The power is gone; it comes back, perhaps not for long.
    fn power_fails(&mut self) -> Result<(), String> {
        let worn = self.model.worn > 0;
        let since_ms = self.bench.started_ms();
        // It went within the last second.
        let at_ms = self.now_ms().saturating_sub(1_000).max(since_ms);
        let most_ms = self.plan.flush_after_ms.max(self.flush_before_ms) + self.plan.interval_ms;
        let missing_ms_max = (!worn).then_some(most_ms);
        self.machine.borrow_mut().happen(Happening::PowerOff);
        self.see()?;
        // A start that left no entry leaves the account to the next one.
        self.cut = self.cut.or(Some(Cut { at_ms, since_ms, missing_ms_max }));
        let mut again = self.random.within(0..3);
        loop {
            let off_ms = self.random.within(1..HOUR_MS);
            self.bench.now_ms.set(self.now_ms() + off_ms);
            self.bench.plans.with(Nor::power_on);
            self.bench.journal.with(Nor::power_on);
            if again > 0 {
                let steps = self.random.within(0..60);
                let armed = self.arm(steps);
                let erase = self.random.one_in(3).then(|| self.tear());
                self.bench.journal.with(|flash| {
                    flash.cut_after(Some(armed));
                    flash.cut_in_erase(erase);
                });
            }
            self.machine.borrow_mut().happen(Happening::PowerOn);
            self.tally.cold_starts += 1;
            if again > 0 {
                // The first cycle writes the start-up entry.
                self.machine.borrow_mut().poll();
            }
            self.see()?;
            if self.bench.journal.with(|flash| flash.is_powered()) {
                break;
            }
            self.tally.starts_cut_short += 1;
            self.machine.borrow_mut().happen(Happening::PowerOff);
            again = again.saturating_sub(1);
        }
        self.bench.journal.with(Nor::power_on);
        self.latches()
    }

    fn latches(&self) -> Result<(), String> {
        let machine = self.machine.borrow();
        let app = machine.app().ok_or("no application after a start")?;
        self.model.latches(app.device().state())
    }

    fn restart_warm(&mut self) -> Result<(), String> {
        let time_ms = self.random.within(1..20 * MINUTE_MS);
        self.go_on(time_ms);
        self.see()?;
        let waited: Vec<_> = {
            let machine = self.machine.borrow();
            let journal = machine.app().and_then(|app| app.device().journal());
            journal.map_or(Vec::new(), |journal| journal.waiting().iter().copied().collect())
        };
        let gone_ms = self.random.within(1..3_000);
        self.bench.now_ms.set(self.now_ms() + gone_ms);
        self.machine.borrow_mut().happen(Happening::WarmRestart);
        self.tally.warm_restarts += 1;
        self.tally.samples_carried += waited.len() as u64;
        self.see()?;
        if self.model.worn == 0 {
            self.model.carried(&waited)?;
        }
        self.latches()
    }

    fn press(&mut self) -> Result<(), String> {
        self.tally.presses += 1;
        for down in [true, false] {
            self.machine.borrow_mut().happen(Happening::Button(down));
            self.go_on(1_000);
        }
        self.see()
    }

    fn fail_sensor(&mut self) -> Result<(), String> {
        let failures =
            [Failure::WireBreak, Failure::FaultCurrent(3.5), Failure::Silent, Failure::Frozen];
        let failure = failures[self.random.within(0..4) as usize];
        let from_ms = self.now_ms();
        self.model.failures.push((from_ms, u64::MAX));
        self.machine.borrow_mut().happen(Happening::Sensor(Some(failure)));
        let time_ms = self.random.within(1_000..40 * MINUTE_MS);
        self.go_on(time_ms);
        self.machine.borrow_mut().happen(Happening::Sensor(None));
        self.model.failures.pop();
        self.model.failures.push((from_ms, self.now_ms()));
        self.tally.sensor_failures += 1;
        self.see()
    }

    fn visit(&mut self) -> Result<(), String> {
        for minute in 0.. {
            self.see()?;
            let (kept_from, worn) = (self.model.kept_from, self.model.worn);
            match self.visitor.collect(&mut self.tally, kept_from, worn) {
                Ok(()) => break,
                // A sector that has just begun to refuse is left within the next cycle.
                Err(_) if worn > 0 && minute < 2 => self.go_on(MINUTE_MS),
                Err(error) => return Err(error),
            }
        }
        self.see()
    }

    /// Another plan, in one of three cases with the power going in the midst of it.
    fn change_plan(&mut self) -> Result<(), String> {
        let next = world::sealed(self.tally.plans);
        self.tally.plans += 1;
        let cut = self.random.one_in(3);
        if cut {
            let steps = self.random.within(0..300);
            let armed = self.arm(steps);
            let flash = if self.random.one_in(4) { &self.bench.journal } else { &self.bench.plans };
            flash.with(|flash| flash.cut_after(Some(armed)));
        }
        let loaded = self.visitor.load(&next);
        let flashes = [&self.bench.journal, &self.bench.plans];
        let powered = flashes.iter().all(|flash| flash.with(|flash| flash.is_powered()));
        for flash in flashes {
            flash.with(|flash| flash.cut_after(None));
        }
        if powered {
            loaded?;
        } else {
            self.tally.plan_loads_cut += 1;
            self.power_fails()?;
        }
        let in_force = self.visitor.plan_in_force()?;
        if in_force == next.fingerprint {
            self.flush_before_ms = self.plan.flush_after_ms;
            self.plan = next;
        } else if powered || in_force != self.plan.fingerprint {
            return Err(format!("plan {in_force:016x} is in force"));
        }
        self.see()
    }

    fn wear_out(&mut self) {
        if self.model.worn < WORN_MAX {
            self.model.worn += 1;
            let sectors = self.bench.journal.with(|flash| flash.image().len() / 4096) as u64;
            // Any sector, or the very one that takes entries now.
            let any = self.random.within(0..sectors);
            let open = u64::from(self.model.newest()) % sectors;
            let chosen = if self.random.one_in(2) { open } else { any };
            let sector = u32::try_from(chosen).unwrap_or(0);
            self.bench.journal.with(|flash| flash.wear_out(sector));
        }
    }

    fn finished(mut self) -> Tally {
        let flash = self.bench.journal.with(|flash| *flash.counters());
        self.tally.samples = self.model.samples;
        self.tally.alarm_moves = self.model.moves;
        self.tally.gaps_stated = self.model.gaps;
        self.tally.worn_sectors = self.model.worn.into();
        self.tally.torn_words = flash.torn_words;
        self.tally.half_erased = flash.half_erased;
        self.tally
    }
}
