//! What a plan judges a panel's plates by: tables of the moments that govern, where the plan has
//! room for them and they are proven, else a pressure.

use super::{Bending, Key};
use crate::compile::faults::Faults;
use crate::compile::part::{outside_mask, part};
use crate::plate::governing::{Checked, Governing, choose};
use crate::plate::{DEFLECTION_PER_THICKNESS_MAX, Table, rigidity_n_m};
use crate::tank::TankFile;
use std::collections::VecDeque;
use std::sync::{Arc, Mutex};
use strake_core::part::plate::NODE_NUMBERS;
use strake_core::plan::NUMBERS_MAX;

/// What stands for the plates of a panel on the device.
#[derive(Clone, Debug)]
pub(crate) enum Judged {
    /// True moments at the points that govern.
    Moments {
        /// Their tables.
        tables: Arc<Governing>,
        /// The moment that the plates carry, N m/m.
        moment_n: f64,
        /// Filled over its top, a plate sags by half its thickness before its strength is used up:
        /// that is its limit.
        by_deflection: bool,
    },
    /// The level plate is pressed evenly: this pressure is exact, Pa.
    Level(f64),
    /// The conservative substitute: a pressure at the lowest edge, Pa, and why.
    Substitute(f64, &'static str),
}

/// What stands for the plates of a panel on the device, outward and inward.
#[derive(Clone, Debug, Default)]
pub(crate) struct Plates {
    /// `None` without a plate for which the theory holds.
    pub(crate) outward: Option<Judged>,
    /// Likewise.
    pub(crate) inward: Option<Inward>,
}

/// What stands for the inward plates of a panel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Inward {
    /// Suction at which, even over the plate, its moment is the capacity, less what the liquid
    /// that presses outward may turn inward elsewhere, Pa.
    Suction(f64),
    /// No such pressure is left, and why.
    Unjudged(&'static str),
}

/// What the tables follow from: each plate with the factors of its moments and deflections, length
/// and sine, numbers.
type Question = (Vec<(Key, [u64; 2])>, [u64; 2], usize);

/// The last questions answered: an inverse question compiles one file many times.
static ANSWERED: Mutex<VecDeque<(Question, Option<Arc<Governing>>)>> = Mutex::new(VecDeque::new());
/// Answers kept: two for each part of a tank.
const KEPT: usize = 2 * crate::tank::MAX_PARTS;

/// What stands for the plates of each part, in the order of the file. Upright plates share what the
/// shapes leave of the plan's numbers.
pub(crate) fn judged(file: &TankFile) -> Vec<Plates> {
    let sound = |plates: Vec<Bending>| -> Vec<Bending> {
        plates.into_iter().filter(|one| one.too_thick().is_none()).collect()
    };
    let all = file.parts.iter().map(|stated| {
        let outside = outside_mask(file, stated.name()) != 0;
        (sound(Bending::of_part(stated)), outside)
    });
    let all: Vec<(Vec<Bending>, bool)> = all.collect();
    let wants = |(plates, outside): &(Vec<Bending>, bool)| {
        !outside && plates.iter().any(|one| one.sine > 0.0)
    };
    let mut sharing = all.iter().filter(|one| wants(one)).count();
    let mut left = if sharing > 0 { NUMBERS_MAX.saturating_sub(of_shapes(file)) } else { 0 };
    let mut found = Vec::with_capacity(all.len());
    for (stated, one) in file.parts.iter().zip(&all) {
        let own = if wants(one) { left / sharing.max(1) } else { 0 };
        let judged = of_panel(&one.0, one.1, own);
        if wants(one) {
            sharing -= 1;
        }
        if let Some(Judged::Moments { tables, .. }) = &judged {
            left -= left.min(NODE_NUMBERS * tables.nodes());
        }
        let inward = sound(Bending::inward_of_part(stated));
        let inward = inward.iter().map(|plate| plate.suction(judged.as_ref()));
        let inward = inward.min_by(|a, b| a.pressure_pa().total_cmp(&b.pressure_pa()));
        found.push(Plates { outward: judged, inward });
    }
    found
}

/// Numbers that the shapes of all parts take.
fn of_shapes(file: &TankFile) -> usize {
    let (mut numbers, mut faults) = (heapless::Vec::new(), Faults::default());
    for stated in &file.parts {
        // What does not fit is a finding when the plan is made.
        let _ = part(file, stated, &Plates::default(), &mut numbers, &mut faults);
    }
    numbers.len()
}

fn of_panel(plates: &[Bending], outside: bool, numbers: usize) -> Option<Judged> {
    let moment_n = plates.iter().map(|one| one.plate.moment_n()).min_by(f64::total_cmp)?;
    let least = |anywhere: bool| {
        plates.iter().map(|one| one.even_pa(anywhere)).fold(f64::INFINITY, f64::min)
    };
    if plates.iter().all(|one| one.sine <= 0.0) {
        // Evenly pressed, whatever stands on its other side.
        return Some(Judged::Level(least(false)));
    }
    if outside {
        let why = "liquid may stand against its other side";
        return Some(Judged::Substitute(least(true), why));
    }
    Some(match tables(plates, moment_n, numbers) {
        Some(tables) => {
            let by_deflection = plates.iter().any(Bending::sags_first);
            Judged::Moments { tables, moment_n, by_deflection }
        }
        None => {
            Judged::Substitute(least(true), "the plan has no room for the tables that it takes")
        }
    })
}

fn tables(plates: &[Bending], moment_n: f64, numbers: usize) -> Option<Arc<Governing>> {
    let first = plates.first()?;
    let factors = |one: &Bending| one.factors(moment_n);
    let bits = |pair: [f64; 2]| pair.map(f64::to_bits);
    let question: Question = (
        plates.iter().map(|one| (one.key, bits(factors(one)))).collect(),
        bits([first.length_m, first.sine]),
        numbers,
    );
    if let Ok(kept) = ANSWERED.lock()
        && let Some((_, answer)) = kept.iter().find(|(one, _)| *one == question)
    {
        return answer.clone();
    }
    let mut checked = Vec::new();
    for one in plates {
        let [moment, deflection] = factors(one);
        let moments = one.solved.moments.iter();
        checked
            .extend(moments.map(|(.., weight)| Checked { weight: &weight.whole, scale: moment }));
        let deflections = one.solved.deflections.iter();
        checked
            .extend(deflections.map(|weight| Checked { weight: &weight.whole, scale: deflection }));
    }
    let answer = choose(&checked, (first.length_m, first.sine), numbers).map(Arc::new);
    if let Ok(mut kept) = ANSWERED.lock() {
        kept.truncate(KEPT - 1);
        kept.push_front((question, answer.clone()));
    }
    answer
}

/// How much of what tables judge outward may bend a point inward.
struct Reversal {
    tables: Vec<Table>,
    levels_m: Vec<f64>,
    /// Largest moment of the tables under even unit pressure.
    even: f64,
}

impl Reversal {
    fn new(outward: &Judged, (length_m, sine): (f64, f64)) -> Option<Self> {
        let Judged::Moments { tables, .. } = outward else { return None };
        let tables: Vec<Table> = tables.tables(sine).collect();
        let levels_m = (1..=512).map(|i| length_m * f64::from(i) / 512.0).collect();
        let even = tables.iter().map(Table::total).fold(0.0, f64::max);
        Some(Self { tables, levels_m, even })
    }

    /// The least number `r` for which the moment turned inward is at most `r` times that of one
    /// of the tables, whatever the level: then for every sum of layers.
    fn of(&self, weight: &Table) -> f64 {
        let turned: Vec<f64> = self.levels_m.iter().map(|&h_m| -weight.ramp(h_m)).collect();
        let against = |table: &Table| {
            let ratios = self.levels_m.iter().zip(&turned).map(|(&h_m, &turned)| {
                let own = table.ramp(h_m);
                match (turned > 0.0, own > 0.0) {
                    (false, true) => 0.0,
                    (true, true) => turned / own,
                    // A table below zero covers nothing.
                    (_, false) => f64::INFINITY,
                }
            });
            ratios.fold(0.0, f64::max)
        };
        // A little for what lies between two levels.
        1.02 * self.tables.iter().map(against).fold(f64::INFINITY, f64::min)
    }
}

impl Inward {
    /// The suction; nothing where it is not judged.
    fn pressure_pa(self) -> f64 {
        match self {
            Self::Suction(pressure_pa) => pressure_pa,
            Self::Unjudged(_) => 0.0,
        }
    }
}

impl Bending {
    /// The suction that stands for an inward plate beside what judges it outward.
    ///
    /// With `p >= -v` an inward moment is at most `v W` (where liquid may stand outside: `v
    /// integral w+`) and what the outward pressure turns inward at that point. Tables that carry
    /// `C` outward leave at most `r (C + v W)` of it, `r` the largest ratio over all loads; a
    /// pressure `q` at the lowest edge at most `q integral w-`.
    fn suction(&self, outward: Option<&Judged>) -> Inward {
        let moment_n = self.plate.moment_n();
        if self.sine <= 0.0 {
            // Evenly pressed.
            return Inward::Suction(self.even_pa(false));
        }
        let Some(outward) = outward else {
            return Inward::Unjudged("its moments need an outward plate beside it");
        };
        let [moment, deflection] = self.factors(moment_n);
        let moments = self.solved.moments.iter().map(|(.., weight)| (weight, moment));
        let all = moments.chain(self.solved.deflections.iter().map(|weight| (weight, deflection)));
        let reversal = Reversal::new(outward, (self.length_m, self.sine));
        let suction = |(weight, scale): (&crate::plate::Weighted, f64)| {
            let (up, down) = (scale * weight.positive.total(), scale * weight.negative.total());
            match (outward, &reversal) {
                (Judged::Moments { moment_n: outward_n, .. }, Some(reversal)) => {
                    let ratio = scale * reversal.of(&weight.whole);
                    (moment_n - ratio * outward_n) / ((up - down).abs() + ratio * reversal.even)
                }
                (Judged::Substitute(pa, _) | Judged::Level(pa), _) => (moment_n - pa * down) / up,
                (Judged::Moments { .. }, None) => 0.0,
            }
        };
        let least = all.map(suction).fold(f64::INFINITY, f64::min);
        if least > 0.0 {
            Inward::Suction(least)
        } else {
            Inward::Unjudged("what the liquid turns inward may alone be more than it carries")
        }
    }

    /// Factors that make its moments, and its deflections times the rigidity, moments of which
    /// `moment_n` is the limit.
    fn factors(&self, moment_n: f64) -> [f64; 2] {
        let sound_m = self.plate.sound_m();
        let rigidity = rigidity_n_m(self.elastic.modulus_pa, self.elastic.poisson, sound_m);
        let most = DEFLECTION_PER_THICKNESS_MAX * sound_m * rigidity;
        [moment_n / self.plate.moment_n(), moment_n / most]
    }

    /// Whether its deflection reaches half its thickness before its strength is used up, wetted to
    /// the top.
    fn sags_first(&self) -> bool {
        let [moment, deflection] = self.factors(1.0);
        let full = |weight: &crate::plate::Weighted| weight.whole.ramp(self.length_m).abs();
        let moments = self.solved.moments.iter().map(|(.., weight)| moment * full(weight));
        let deflections = self.solved.deflections.iter().map(|weight| deflection * full(weight));
        deflections.fold(0.0, f64::max) > moments.fold(0.0, f64::max)
    }

    /// The pressure that, even over the plate, brings a checked moment to the capacity or a
    /// deflection to its limit; `anywhere` when it may act wherever it bends a point more.
    ///
    /// Every outward pressure that is nowhere above the latter bends less: `|integral p w| <= p
    /// max(integral w+, integral w-)`.
    pub(super) fn even_pa(&self, anywhere: bool) -> f64 {
        let moment_n = self.plate.moment_n();
        let [moment, deflection] = self.factors(moment_n);
        let even = |weight: &crate::plate::Weighted| {
            let [up, down] = [weight.positive.total(), weight.negative.total()];
            if anywhere { up.max(down) } else { (up - down).abs() }
        };
        let moments = self.solved.moments.iter().map(|(.., weight)| moment * even(weight));
        let deflections = self.solved.deflections.iter().map(|weight| deflection * even(weight));
        moment_n / moments.chain(deflections).fold(0.0, f64::max)
    }
}
