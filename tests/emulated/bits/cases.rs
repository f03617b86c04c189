//! The random plans with their inputs, and what they cover.

use std::error::Error;
use std::fmt;

use strake_core::alarm::FaultCause;
use strake_core::part::{Geometry, Held};
use strake_core::plan::codec::decode;
use strake_core::plan::{LevelSensor, Plan, Reference, SignalKind};
use strake_core::shape::Shape;
use strake_core::signal::Quality;
use strake_generate::{Readings, plan, plan_bytes};
use strake_oracle::random::Random;

use super::vectors::Input;

const SEED: u64 = 0x5354_524B;
const REPORTED: [FaultCause; 3] =
    [FaultCause::Journal, FaultCause::JournalDamaged, FaultCause::Plan];

/// A plan as its bytes give it, and what happens to it.
#[derive(Debug)]
pub(super) struct Case {
    pub(super) plan: Plan,
    pub(super) bytes: Vec<u8>,
    pub(super) inputs: Vec<Input>,
}

/// The same cases in every run.
pub(super) fn cases(plans: u32, inputs: u32) -> Result<Vec<Case>, Box<dyn Error>> {
    let mut random = Random::new(SEED);
    (0..plans)
        .map(|_| {
            let made = plan(&mut random);
            let bytes = plan_bytes(&made)?;
            let (_, plan) = decode(&bytes)?;
            if plan != made {
                return Err("a plan does not come back from its bytes".into());
            }
            let inputs = self::inputs(&mut random, &plan, inputs);
            Ok(Case { plan, bytes, inputs })
        })
        .collect()
}

/// Mostly samples; one in twelve something else.
fn inputs(random: &mut Random, plan: &Plan, count: u32) -> Vec<Input> {
    let mut readings = Readings::new(plan, random);
    let products = u32::try_from(plan.liquid.products.len()).unwrap_or(0);
    (0..count)
        .map(|_| {
            let tick_ms = readings.tick_ms();
            if !random.one_in(12) {
                return Input::Sample(readings.next(random));
            }
            match random.below(8) {
                0 => Input::Product(None),
                1 => {
                    let product = random.below(products + 2);
                    Input::Product(u8::try_from(product).ok())
                }
                2 => {
                    readings.restart();
                    Input::Restart { tick_ms: 0 }
                }
                3 => Input::Report { tick_ms, cause: REPORTED[random.below(3) as usize] },
                _ => Input::Acknowledge { tick_ms },
            }
        })
        .collect()
}

/// How often each thing that a plan or an input can be occurs.
#[derive(Debug)]
pub(super) struct Coverage {
    pub(super) plans: usize,
    pub(super) samples: usize,
    counts: Vec<(&'static str, usize)>,
}

impl Coverage {
    pub(super) fn of(cases: &[Case]) -> Self {
        let plans = |holds: &dyn Fn(&Plan) -> bool| cases.iter().filter(|c| holds(&c.plan)).count();
        let parts = || cases.iter().flat_map(|case| &case.plan.parts);
        let inputs = || cases.iter().flat_map(|case| &case.inputs);
        let geometry =
            |holds: fn(&Geometry) -> bool| parts().filter(|p| holds(&p.geometry)).count();
        let covers = || {
            parts().filter_map(|part| match &part.geometry {
                Geometry::Plane { cover: Some(cover), .. } => Some(cover.numbers()),
                _ => None,
            })
        };
        let held = |holds: fn(Held) -> bool| covers().filter(|one| holds(one.held)).count();
        let weighing = |measured: bool| {
            covers().filter(|c| c.weight_n != 0.0 && c.weight_is_measured == measured).count()
        };
        let quality = |holds: fn(Quality) -> bool| {
            let of = |input: &&Input| matches!(input, Input::Sample(s) if holds(s.level.quality));
            inputs().filter(of).count()
        };
        let count = |holds: fn(&Input) -> bool| inputs().filter(|input| holds(input)).count();
        let mut counts = vec![
            ("head, gas space", plans(&|p| head(p, |r| *r == Reference::GasSpace))),
            ("head, gauge", plans(&|p| head(p, |r| offset(r) == Some(false)))),
            ("head, absolute", plans(&|p| head(p, |r| offset(r) == Some(true)))),
            ("innage", plans(&|p| surface(p, false))),
            ("ullage", plans(&|p| surface(p, true))),
            ("current loop", plans(&|p| p.level.signal == SignalKind::CurrentLoop)),
            ("bus register", plans(&|p| p.level.signal != SignalKind::CurrentLoop)),
            ("closed tank", plans(&|p| p.closed)),
            ("gas", plans(&|p| p.gas.lowest_pa < p.gas.highest_pa)),
            ("layers", plans(&|p| !p.liquid.below.is_empty())),
            ("products", plans(&|p| !p.liquid.products.is_empty())),
            ("temperature", plans(&|p| p.liquid.temperature.is_some())),
        ];
        counts.extend([
            ("courses", geometry(|g| matches!(g, Geometry::Course { .. }))),
            ("discs", geometry(|g| shape(g, |s| matches!(s, Shape::Circle(_))))),
            ("rectangles", geometry(|g| shape(g, |s| matches!(s, Shape::Rectangle(_))))),
            ("ellipses", geometry(|g| shape(g, is_ellipse))),
            ("pieces", geometry(|g| shape(g, |s| matches!(s, Shape::Pieces(_))))),
            ("curved", geometry(|g| matches!(g, Geometry::Curved(_)))),
            ("level parts", geometry(|g| shape(g, |s| matches!(s, Shape::Level { .. })))),
            ("bolts, even", held(|h| matches!(h, Held::Bolts(n) if n % 2 == 0))),
            ("bolts, odd", held(|h| matches!(h, Held::Bolts(n) if n % 2 == 1))),
            ("hinge line or pivot", held(|h| h == Held::Line)),
            ("hinge at the side", held(|h| h == Held::Side)),
            ("plates", held(|h| matches!(h, Held::Plate(_)))),
            ("covers held otherwise", held(|h| h == Held::Otherwise)),
            ("weight, measured", weighing(true)),
            ("weight, not measured", weighing(false)),
            ("weightings with a cut", covers().filter(|c| c.weightings[0].cut.is_some()).count()),
            ("liquid outside", parts().filter(|part| part.outside != 0).count()),
            ("designed for", parts().filter(|part| !part.designed_for.is_empty()).count()),
            ("judged inward", parts().filter(|part| part.judged_inward()).count()),
            ("not read", quality(|q| q == Quality::NotRead)),
            ("failed", quality(|q| matches!(q, Quality::Failed(_)))),
            ("acknowledgements", count(|i| matches!(i, Input::Acknowledge { .. }))),
            ("restarts", count(|i| matches!(i, Input::Restart { .. }))),
            ("products told", count(|i| matches!(i, Input::Product(_)))),
            ("faults reported", count(|i| matches!(i, Input::Report { .. }))),
        ]);
        let samples = count(|input| matches!(input, Input::Sample(_)));
        Self { plans: cases.len(), samples, counts }
    }

    /// Whether nothing is missing or rare.
    pub(super) fn holds_everything(&self) -> Result<(), Box<dyn Error>> {
        let rare = self.counts.iter().find(|(_, count)| *count < 10);
        if self.plans < 200 || self.samples < 20_000 || rare.is_some() {
            return Err(format!("too few cases: {rare:?}\n{self}").into());
        }
        Ok(())
    }
}

impl fmt::Display for Coverage {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.counts.iter().try_for_each(|(what, count)| writeln!(f, "{what}: {count}"))
    }
}

fn head(plan: &Plan, holds: fn(&Reference) -> bool) -> bool {
    matches!(&plan.level.sensor, LevelSensor::Head { reference, .. } if holds(reference))
}

/// Whether the air pressure is in the reading; none for a reference to the gas.
fn offset(reference: &Reference) -> Option<bool> {
    match reference {
        Reference::GasSpace => None,
        Reference::Atmosphere { offset_pa: [nominal, ..] } => Some(*nominal > 0.0),
    }
}

fn surface(plan: &Plan, looks_down: bool) -> bool {
    let falls = plan.level.value_per_count_16 < 0.0;
    plan.level.sensor == LevelSensor::Surface && falls == looks_down
}

fn shape(geometry: &Geometry, holds: fn(&Shape) -> bool) -> bool {
    matches!(geometry, Geometry::Plane { shape, .. } if holds(shape))
}

fn is_ellipse(shape: &Shape) -> bool {
    matches!(shape, Shape::Circle(circle) if (circle.aspect() - 1.0).abs() > 0.0)
}
