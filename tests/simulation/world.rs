//! The tank, its plans, and the device on its bench.

use crate::random::Random;
use std::sync::Arc;
use strake::compile::{self, Compiled, fingerprint};
use strake::sim::board::Bench;
use strake::sim::machine::Machine;
use strake::sim::sensor::{Level, Sensor};
use strake_core::wire::Text;

const TANK: &str = include_str!("../../configs/brine_day_tank.toml");
/// Serial of the first plan: 2026-05-28, 20:26:40.
const SERIAL: u64 = 1_780_000_000;
const NAME: &str = "pump house 7";

/// A level that wanders between nearly empty and the brim.
#[derive(Clone, Debug)]
struct Wander {
    /// Time, ms, and level, m; straight in between.
    points: Arc<[(u64, f64)]>,
}

impl Wander {
    fn new(random: &mut Random, end_ms: u64) -> Self {
        let mut points = vec![(0, 4.0)];
        let mut now_ms = 0;
        while now_ms < end_ms {
            // Rest, or move: a day of rest is long enough to see what silence costs.
            now_ms += random.within(600_000..12 * 3_600_000);
            let level_m = match points.last() {
                Some(&(_, level_m)) if random.one_in(3) => level_m,
                _ => 0.6 + 1e-3 * random.within(0..8_600) as f64,
            };
            points.push((now_ms, level_m));
        }
        Self { points: points.into() }
    }
}

impl Level for Wander {
    fn level_m(&self, now_ms: u64) -> f64 {
        let after = self.points.partition_point(|&(time_ms, _)| time_ms <= now_ms);
        match (self.points[after - 1], self.points.get(after)) {
            ((t0, h0), Some(&(t1, h1))) => h0 + (h1 - h0) * (now_ms - t0) as f64 / (t1 - t0) as f64,
            ((_, level_m), None) => level_m,
        }
    }
}

/// A sealed plan.
#[derive(Clone, Debug)]
pub(crate) struct Sealed {
    pub(crate) bytes: Vec<u8>,
    pub(crate) serial: u64,
    pub(crate) fingerprint: u64,
    /// Longest time that a sample may wait in RAM, ms.
    pub(crate) flush_after_ms: u64,
    /// Longest time between two samples, ms.
    pub(crate) interval_ms: u64,
}

pub(crate) fn name() -> Text {
    Text::new(NAME).unwrap()
}

fn compiled() -> Compiled {
    let file = strake::tank::parse("tank.toml", TANK.as_bytes()).unwrap();
    compile::for_device(&file).unwrap()
}

/// The plan with this number: the shipped tank, now and then with other times.
pub(crate) fn sealed(number: u64) -> Sealed {
    let mut compiled = compiled();
    let logging = &mut compiled.plan.logging;
    logging.flush_after_ms = [60_000, 30_000, 120_000][(number % 3) as usize];
    // At rest as many samples wait as else, six at most, a minute apart: never ten minutes.
    let waiting = (logging.flush_after_ms / logging.interval_ms).min(6);
    let interval_ms = u64::from(logging.idle_interval_ms);
    let flush_after_ms =
        (u64::from(waiting) * interval_ms).min(600_000).max(logging.flush_after_ms.into());
    let serial = SERIAL + number;
    let bytes = compiled.encode(serial).unwrap();
    Sealed { serial, fingerprint: fingerprint(&bytes), flush_after_ms, interval_ms, bytes }
}

/// A device that was never switched on, and a sensor that shows what its sensor shows.
pub(crate) fn device(random: &mut Random, days: u64, sectors: usize) -> (Machine, Sensor) {
    let level = Wander::new(random, days * 86_400_000);
    let plan = compiled().plan;
    let sensor = || Sensor::new(&plan, Box::new(level.clone()), 0.0, 1);
    (Machine::new(Bench::new(sensor(), sectors), name()), sensor())
}
