//! What the sensors of a plan say from cycle to cycle.

use strake_core::journal::Sample;
use strake_core::plan::{Plan, SignalKind};
use strake_core::signal::{Channel, Quality, SensorError};
use strake_oracle::random::Random;

const FAILURES: [SensorError; 5] = [
    SensorError::Silent,
    SensorError::Garbled,
    SensorError::Unexpected,
    SensorError::Exception,
    SensorError::Converter,
];

/// A level that wanders, jumps and stands; a sensor that fails for a while now and then.
#[derive(Clone, Debug)]
pub struct Readings {
    zero_count_16: i32,
    span_16: f64,
    on_loop: bool,
    has_temperature: bool,
    /// Share of the sensor's span, 0 to 1 within it.
    share: f64,
    tick_ms: u64,
    /// Cycles for which the sensor stays dead.
    dead: u32,
}

impl Readings {
    /// The sensors of a plan, nothing read so far.
    #[must_use]
    pub fn new(plan: &Plan, random: &mut Random) -> Self {
        let on_loop = plan.level.signal == SignalKind::CurrentLoop;
        Self {
            zero_count_16: plan.level.zero_count_16,
            span_16: if on_loop { 256_000.0 } else { 65_535.0 * 16.0 },
            on_loop,
            has_temperature: plan.liquid.temperature.is_some(),
            share: random.unit(),
            tick_ms: 0,
            dead: random.below(3),
        }
    }

    /// Tick of the last sample, ms.
    #[must_use]
    pub const fn tick_ms(&self) -> u64 {
        self.tick_ms
    }

    /// The controller starts anew: its ticks begin again.
    pub fn restart(&mut self) {
        self.tick_ms = 0;
    }

    /// The next cycle's sample.
    pub fn next(&mut self, random: &mut Random) -> Sample {
        self.tick_ms += match random.below(10) {
            0 => u64::from(random.below(1_000)),
            1 => u64::from(random.below(86_400_000)),
            _ => 10_000,
        };
        Sample {
            tick_ms: self.tick_ms,
            level: self.level(random),
            temperature: self.temperature(random),
            battery_mv: 0,
        }
    }

    fn level(&mut self, random: &mut Random) -> Channel {
        if self.dead == 0 && random.one_in(20) {
            self.dead = 1 + random.below(6);
        }
        if self.dead > 0 {
            self.dead -= 1;
            if random.one_in(4) {
                return Channel::default();
            }
            return if self.on_loop && random.one_in(2) {
                let current_ua = [0, 499, 3_600, 3_700, 20_600, 21_000][random.below(6) as usize];
                Channel::good(current_ua * 16)
            } else {
                Channel::failed(FAILURES[random.below(5) as usize])
            };
        }
        self.share = match random.below(8) {
            0 => random.between(-0.02, 1.02),
            1 => 0.0,
            2 => self.share,
            _ => self.share + random.between(-0.03, 0.03),
        }
        .clamp(-0.02, 1.03);
        #[expect(clippy::cast_possible_truncation, reason = "a count fits")]
        let counts = (self.share * self.span_16).round() as i32;
        let count_16 = self.zero_count_16 + counts;
        let quality = if random.one_in(16) { Quality::Sparse } else { Quality::Good };
        Channel { count_16, quality }
    }

    fn temperature(&self, random: &mut Random) -> Channel {
        if !self.has_temperature {
            return Channel::default();
        }
        match random.below(12) {
            0 => Channel::default(),
            1 => Channel::failed(FAILURES[random.below(5) as usize]),
            _ => Channel::good(i32::try_from(random.below(32_000)).unwrap_or(0)),
        }
    }
}
