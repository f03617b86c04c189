//! How fast the tank fills, and how long until the first part reaches its capacity.
//!
//! The inflow is the slope of a straight line through the last few volumes (ordinary least squares)
//! over the plan's window, with half the width of its confidence band from the residuals (Draper
//! and Smith, Applied Regression Analysis, 3rd ed., section 1.4; Student's t, 95 % one-sided). The
//! time to limit takes the upper end of that band, but never a level that rises faster than the
//! plan's highest rise: noise would be believed otherwise. A sudden change of the inflow is in the
//! slope by half after half the window, and wholly after the window: that is its lag.
//!
//! Points are the first samples in fifths of the window that lie fixed in time. So what was sampled
//! before, at whatever interval, is forgotten wholly within [`REMEMBERED_WINDOWS`].

use crate::lane::{at_least, ramp};
use crate::plan::Plan;
use crate::signal::{ReadingClass, Resolved};

/// Volumes kept.
pub(super) const POINTS: usize = 6;
/// Steps from the oldest to the youngest of them in a window.
const STEPS: u32 = 5;
/// No point is older than this many windows, in quarters: six steps and late samples.
const WINDOW_QUARTERS: u32 = 5;
/// After so many windows nothing is left of how it was sampled before.
pub(super) const REMEMBERED_WINDOWS: f32 = 1.5;
/// Fewer give no slope: with two degrees of freedom the band has a width.
const LEAST: usize = 4;
/// Student's t, 95 % one-sided, for two and more degrees of freedom.
const STUDENT: [f32; POINTS - LEAST + 1] = [2.920, 2.353, 2.132];

/// A volume at a tick (its low 32 bits); the volume by its bits, m³.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Point {
    pub(super) tick_ms: u32,
    pub(super) volume_bits: u32,
}

impl Point {
    const NONE: Self = Self { tick_ms: 0, volume_bits: 0 };
}

/// The last few volumes, oldest first, and the line through them.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Trend {
    points: [Point; POINTS],
    count: u8,
    /// Slope and half-width of its band, m³/s, by their bits; zero with too few points.
    slope_bits: u32,
    half_bits: u32,
}

/// What is known of the time to limit.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum TimeToLimit {
    /// The plan has no volume curve.
    NotStated,
    /// Too few readings in the window.
    NotKnown,
    /// The volume does not rise, or by less than the uncertainty of its rate.
    NotFilling,
    /// It fills.
    Filling {
        /// Time until the estimated level reaches the limit level, s, at the upper end of the
        /// inflow.
        time_s: f32,
        /// Upper end of the inflow, m³/s.
        inflow_m3_s: f32,
    },
}

impl TimeToLimit {
    /// The number that travels over the link.
    #[must_use]
    pub const fn number(&self) -> u8 {
        match self {
            Self::NotStated => 0,
            Self::NotKnown => 1,
            Self::NotFilling => 2,
            Self::Filling { .. } => 3,
        }
    }
}

impl Trend {
    /// No volume is known. Every bit is zero.
    pub(super) const NONE: Self =
        Self { points: [Point::NONE; POINTS], count: 0, slope_bits: 0, half_bits: 0 };

    pub(super) fn points(&self) -> &[Point] {
        self.points.get(..usize::from(self.count)).unwrap_or_default()
    }

    /// Bits of the last volume and of the slope, for the hash.
    pub(super) fn bits(&self) -> u64 {
        let last = self.points().last().map_or(0, |point| point.volume_bits);
        u64::from(last) << 32 | u64::from(self.slope_bits)
    }

    /// Appends a point; the oldest gives way.
    pub(super) fn push(&mut self, point: Point) {
        if usize::from(self.count) >= POINTS {
            self.drop_oldest();
        }
        if let Some(free) = self.points.get_mut(usize::from(self.count)) {
            *free = point;
            self.count += 1;
        }
        self.fit();
    }

    fn drop_oldest(&mut self) {
        let [_, b, c, d, e, f] = self.points;
        self.points = [b, c, d, e, f, Point::NONE];
        self.count = self.count.saturating_sub(1);
    }

    /// Forgets what is older than the window (and a quarter of it, as points stand where they do).
    fn forget(&mut self, tick: u32, window_ms: u32) {
        let before = self.count;
        while self.points().first().is_some_and(|oldest| {
            tick.wrapping_sub(oldest.tick_ms) > (window_ms / 4).saturating_mul(WINDOW_QUARTERS)
        }) {
            self.drop_oldest();
        }
        if self.count != before {
            self.fit();
        }
    }

    /// A new point is due when there is none of this fifth of a window.
    fn is_due(&self, tick: u32, window_ms: u32) -> bool {
        let fifth = |tick: u32| tick.checked_div(window_ms / STEPS).unwrap_or(tick);
        self.points().last().is_none_or(|youngest| fifth(tick) != fifth(youngest.tick_ms))
    }

    /// The line through the points, about the first of them, which keeps the sums small.
    #[inline(never)]
    fn fit(&mut self) {
        self.slope_bits = 0;
        self.half_bits = 0;
        let points = self.points();
        let (Some(first), Some(&student)) =
            (points.first(), points.len().checked_sub(LEAST).and_then(|free| STUDENT.get(free)))
        else {
            return;
        };
        let relative = |point: &Point| {
            let after_ms = point.tick_ms.wrapping_sub(first.tick_ms);
            #[expect(clippy::cast_precision_loss, reason = "a window has fewer than 2^24 ms")]
            let after_s = after_ms as f32 * 1.0e-3;
            (after_s, f32::from_bits(point.volume_bits) - f32::from_bits(first.volume_bits))
        };
        #[expect(clippy::cast_precision_loss, reason = "a handful")]
        let count = points.len() as f32;
        let (mut t_mean, mut v_mean) = (0.0, 0.0);
        for (t, v) in points.iter().map(relative) {
            t_mean += t / count;
            v_mean += v / count;
        }
        let (mut squares, mut products) = (0.0, 0.0);
        for (t, v) in points.iter().map(relative) {
            squares += (t - t_mean) * (t - t_mean);
            products += (t - t_mean) * (v - v_mean);
        }
        let slope = products / squares;
        let mut residual = 0.0;
        for (t, v) in points.iter().map(relative) {
            let off = (v - v_mean) - slope * (t - t_mean);
            residual += off * off;
        }
        let half = student * libm::sqrtf(residual / ((count - 2.0) * squares));
        self.slope_bits = slope.to_bits();
        self.half_bits = half.to_bits();
    }

    /// Upper end of the inflow, m³/s; `None` when it is not above its own uncertainty.
    fn inflow_m3_s(&self) -> Option<f32> {
        let (slope, half) = (f32::from_bits(self.slope_bits), f32::from_bits(self.half_bits));
        (slope > half).then_some(slope + half)
    }

    /// Takes a sample in. Gives whether a point came of it.
    pub(super) fn take(&mut self, plan: &Plan, tick_ms: u64, resolved: &Resolved) -> bool {
        let window_ms = plan.filling.window_ms;
        #[expect(clippy::cast_possible_truncation, reason = "differences of the low bits count")]
        let tick = tick_ms as u32;
        self.forget(tick, window_ms);
        if !is_measured(resolved) || !self.is_due(tick, window_ms) {
            return false;
        }
        let level_m = crate::liquid::level_m(plan, resolved.estimate, resolved.density);
        let volume_bits = plan.volume_m3(level_m).to_bits();
        self.push(Point { tick_ms: tick, volume_bits });
        true
    }

    /// The time to limit under a reading. What is not measured now is taken at its upper end.
    #[must_use]
    pub fn time_to_limit(
        &self,
        plan: &Plan,
        product: Option<u8>,
        resolved: &Resolved,
    ) -> TimeToLimit {
        let Some(limit_m) = plan.limit_m(product) else { return TimeToLimit::NotStated };
        if self.points().len() < LEAST {
            return TimeToLimit::NotKnown;
        }
        let Some(inflow_m3_s) = self.inflow_m3_s() else { return TimeToLimit::NotFilling };
        let reading = if is_measured(resolved) { resolved.estimate } else { resolved.high };
        let level_m = crate::liquid::level_m(plan, reading, resolved.density);
        let left_m3 = plan.volume_m3(limit_m) - plan.volume_m3(level_m);
        let soonest_s = ramp(limit_m - level_m) / plan.highest_rise_m_s;
        let time_s = at_least(ramp(left_m3) / inflow_m3_s, soonest_s);
        TimeToLimit::Filling { time_s, inflow_m3_s }
    }
}

/// A level of this cycle that nothing speaks against.
fn is_measured(resolved: &Resolved) -> bool {
    matches!(resolved.class, ReadingClass::Valid | ReadingClass::Held) && resolved.fault.is_none()
}

#[cfg(test)]
mod tests;
