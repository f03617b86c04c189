//! Codec 1 of samples: writing. Whatever is chosen here is written down, so no reader needs it.

use super::packed::{Chain, Lane, Status, Steady, gave_a_count};
use super::scale::{Scale, fold};
use super::track::{Predictor, Track, WHOLE};
use crate::journal::TICK_LIMIT_MS;
use crate::journal::bits::BitWriter;
use crate::journal::entry::Sample;
use crate::signal::Channel;

/// Bits that other predictors must spare before they are written: the change itself takes 5.
const WORTH_A_CHANGE: u32 = 5;

impl Status {
    fn write(self, out: &mut BitWriter<'_>) {
        out.bits(self.quality.number().into(), 3);
        if !gave_a_count(self.quality) {
            out.flag(self.absent);
        }
    }
}

impl Steady {
    fn write(self, out: &mut BitWriter<'_>) {
        out.flag(self == Self::ALL);
        if self != Self::ALL {
            out.flag(self.time);
            out.flag(self.status);
            out.flag(self.battery);
        }
    }
}

impl Lane {
    /// Begins a page with `first`; `counts` are all of the block, with the first.
    fn write_track(
        &mut self,
        first: Channel,
        counts: impl Iterator<Item = i32> + Clone,
        out: &mut BitWriter<'_>,
    ) {
        let last_page = self.track;
        let count = first.count_16;
        let step = common_step(&Track::begin(count, 0, Scale::at(0)), counts.clone());
        let step = match (step, last_page.step()) {
            (0, 0) => WHOLE,
            (0, known) => known,
            // A multiple of the known step in a few counts is chance.
            (found, known) if found.checked_rem(known) == Some(0) => known,
            (found, _) => found,
        };
        if self.status.absent {
            out.flag(step == WHOLE);
            if step != WHOLE {
                out.number(step.into());
            }
            self.track = Track::absent(step);
            return;
        }
        let k = if last_page.step() > 0 { last_page.k() } else { usual_k(counts, step) };
        let k = if k < 15 { k } else { 15 };
        let whole = step == WHOLE && count % 16 == 0;
        out.flag(whole);
        if !whole {
            out.number(step.into());
        }
        out.number(fold((if whole { count / 16 } else { count }).into()));
        out.bits(k.into(), 4);
        self.track = Track::begin(count, step, Scale::at(k));
    }

    /// Takes a finer step when these counts need one.
    fn refine(&mut self, counts: impl Iterator<Item = i32>) {
        let step = common_step(&self.track, counts);
        if step != self.track.step() {
            self.track.set_step(step);
        }
    }

    /// The predictor that takes the fewest bits for these counts, and how many it spares.
    fn best(&self, counts: impl Iterator<Item = i32>) -> (Predictor, u32) {
        let weights = self.track.weigh(counts);
        let mut now = 0;
        let (mut least, mut best) = (u32::MAX, self.predictor);
        for (bits, predictor) in weights.into_iter().zip(Predictor::ALL) {
            if predictor == self.predictor {
                now = bits;
            }
            if bits < least {
                (least, best) = (bits, predictor);
            }
        }
        if least < now { (best, now - least) } else { (self.predictor, 0) }
    }

    fn write(&mut self, channel: Channel, out: &mut BitWriter<'_>) {
        if !self.status.absent {
            self.track.write(channel.count_16, self.predictor, out);
        }
    }
}

impl Chain {
    /// As many of `samples` as fit into `payload`, and steps over those; gives the bytes used and
    /// the samples taken. `None` when not even one fits. A tick beyond [`TICK_LIMIT_MS`] is cut to
    /// 48 bits.
    pub(in crate::journal) fn write(
        &mut self,
        samples: &[Sample],
        payload: &mut [u8],
    ) -> Option<(usize, usize)> {
        let mut out = BitWriter::new(payload);
        let mut next = *self;
        let head = usize::from(!self.anchored);
        let steady = next.write_head(samples, &mut out)?;
        let mut reached = None;
        for (index, sample) in samples.iter().enumerate() {
            if index >= head {
                next.write_sample(sample, steady, &mut out);
            }
            let Some(written) = out.written() else { break };
            *self = next;
            reached = Some((written, index + 1));
        }
        let (written, taken) = reached?;
        Some((out.finish(written), taken))
    }

    /// Writes the head of a block of (the first of) these samples.
    fn write_head(&mut self, samples: &[Sample], out: &mut BitWriter<'_>) -> Option<Steady> {
        let (first, rest) = samples.split_first()?;
        let anchor = !self.anchored;
        let levels = counts(samples, |sample| sample.level);
        let temperatures = counts(samples, |sample| sample.temperature);
        if anchor {
            self.write_anchor_time(first, rest.first(), out);
            self.level.write_track(first.level, levels.clone(), out);
            self.temperature.write_track(first.temperature, temperatures.clone(), out);
            self.battery_mv = first.battery_mv;
            let low = first.battery_mv < 1 << 12;
            out.flag(low);
            out.bits(first.battery_mv.into(), if low { 12 } else { 16 });
            self.begin_page();
        }
        let steps = (self.level.track.step(), self.temperature.track.step());
        if !anchor {
            self.level.refine(levels.clone());
            self.temperature.refine(temperatures.clone());
        }
        let refined = steps != (self.level.track.step(), self.temperature.track.step());
        // The first sample of an anchor is no difference, but weighs little.
        let (level, level_spared) = self.level.best(levels);
        let (temperature, temperature_spared) = self.temperature.best(temperatures);
        let changed = refined || level_spared + temperature_spared > WORTH_A_CHANGE;
        if anchor || changed {
            (self.level.predictor, self.temperature.predictor) = (level, temperature);
        }
        if !anchor {
            out.flag(changed);
        }
        if anchor || changed {
            out.bits(level as u64, 2);
            out.bits(temperature as u64, 2);
        }
        if !anchor && changed {
            out.flag(refined);
            if refined {
                out.number(self.level.track.step().into());
                out.number(self.temperature.track.step().into());
            }
        }
        let steady = self.steady(if anchor { rest } else { samples });
        steady.write(out);
        Some(steady)
    }

    fn write_anchor_time(
        &mut self,
        first: &Sample,
        second: Option<&Sample>,
        out: &mut BitWriter<'_>,
    ) {
        self.tick_ms = first.tick_ms % TICK_LIMIT_MS;
        if let Some(second) = second {
            self.interval_ms = self.interval_to(second);
        }
        out.number(self.tick_ms);
        let seconds = self.interval_ms % 1000 == 0;
        out.flag(seconds);
        out.number(fold(if seconds { self.interval_ms / 1000 } else { self.interval_ms }));
        self.level.status = Status::of(first.level);
        self.temperature.status = Status::of(first.temperature);
        let good = (self.level.status, self.temperature.status) == (Status::GOOD, Status::GOOD);
        out.flag(good);
        if !good {
            self.level.status.write(out);
            self.temperature.status.write(out);
        }
    }

    fn interval_to(&self, sample: &Sample) -> i64 {
        (sample.tick_ms % TICK_LIMIT_MS).wrapping_sub(self.tick_ms).cast_signed()
    }

    fn steady(&self, samples: &[Sample]) -> Steady {
        let mut steady = Steady::ALL;
        let mut due_ms = self.tick_ms;
        for sample in samples {
            due_ms = due_ms.wrapping_add_signed(self.interval_ms);
            steady.time &= sample.tick_ms % TICK_LIMIT_MS == due_ms;
            steady.status &= Status::of(sample.level) == self.level.status
                && Status::of(sample.temperature) == self.temperature.status;
            steady.battery &= sample.battery_mv == self.battery_mv;
        }
        steady
    }

    fn write_sample(&mut self, sample: &Sample, steady: Steady, out: &mut BitWriter<'_>) {
        let interval_ms = self.interval_to(sample);
        if !steady.time {
            write_off(&mut self.time_scale, interval_ms - self.interval_ms, out);
        }
        self.tick_ms = sample.tick_ms % TICK_LIMIT_MS;
        self.interval_ms = interval_ms;
        if !steady.status {
            let status = (Status::of(sample.level), Status::of(sample.temperature));
            let changed = status != (self.level.status, self.temperature.status);
            (self.level.status, self.temperature.status) = status;
            out.flag(changed);
            if changed {
                status.0.write(out);
                status.1.write(out);
            }
        }
        self.level.write(sample.level, out);
        self.temperature.write(sample.temperature, out);
        if !steady.battery {
            let off = i64::from(sample.battery_mv) - i64::from(self.battery_mv);
            write_off(&mut self.battery_scale, off, out);
            self.battery_mv = sample.battery_mv;
        }
    }
}

fn write_off(scale: &mut Scale, off: i64, out: &mut BitWriter<'_>) {
    out.flag(off != 0);
    if off != 0 {
        scale.write(fold(off), out);
    }
}

/// The counts of a channel that are written. One type for every channel: what is done with them is
/// compiled once.
fn counts(
    samples: &[Sample],
    channel: fn(&Sample) -> Channel,
) -> impl Iterator<Item = i32> + Clone {
    let channels = samples.iter().map(channel);
    channels.filter(|&channel| !Status::of(channel).absent).map(|channel| channel.count_16)
}

/// Largest step, a divisor of the track's own, on which all the counts lie; 0 when the track has
/// none and all counts equal its base.
fn common_step(track: &Track, counts: impl Iterator<Item = i32>) -> u32 {
    let divisor = |mut a: u32, mut b: u32| {
        while let Some(rest) = a.checked_rem(b) {
            (a, b) = (b, rest);
        }
        a
    };
    counts.fold(track.step(), |step, count| divisor(step, track.off_base(count)))
}

/// Rice parameter that suits the differences between these counts.
fn usual_k(counts: impl Iterator<Item = i32>, step: u32) -> u32 {
    // A sum that does not fit only makes the parameter less fitting.
    let (mut sum, mut n) = (0_u32, 0_u32);
    let mut before = None;
    for count in counts {
        if let Some(before) = before.replace(count) {
            sum = sum.saturating_add(count.abs_diff(before));
            n += 1;
        }
    }
    let steps = sum.saturating_mul(2).checked_div(n.saturating_mul(step)).unwrap_or(4);
    Scale::of_mean(steps.into()).k()
}
