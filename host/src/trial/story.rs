//! What happens to the tank in a trial.

use crate::sim::machine::Happening;
use crate::sim::sensor::{Failure, Level};

/// A level over time, and what happens to the device meanwhile.
#[derive(Debug)]
pub struct Story {
    /// The level.
    pub level: Box<dyn Level>,
    /// Happenings with their virtual time in ms, in order.
    pub happenings: Vec<(u64, Happening)>,
    /// When it ends, ms.
    pub end_ms: u64,
    /// Standard deviation of the sensor's noise, as a share of its stated uncertainty.
    pub noise: f64,
}

/// Heights and rates from which the filling story is made.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Landmarks {
    /// Level at which the first part warns, m.
    pub warn_m: f64,
    /// Level at which the first part alarms, m.
    pub alarm_m: f64,
    /// Level at which the tank runs over, m.
    pub overflow_m: f64,
    /// Lowest level of an empty tank, m.
    pub floor_m: f64,
    /// Fastest rise, m/s.
    pub rise_m_s: f64,
    /// Fastest fall, m/s.
    pub fall_m_s: f64,
    /// Without a reading for this long the device cannot see, ms.
    pub failed_after_ms: u64,
}

/// The story that the trial tells without a series: a delivery denser than the tank was made for.
///
/// The tank rests, is filled past its warning and its alarm, somebody acknowledges, the tank is
/// drained, the power fails for three minutes while the alarm is still latched, the latch is reset,
/// the sensor's wire breaks and is mended.
#[derive(Debug)]
pub struct Filling {
    /// Time in ms and level in m, straight in between.
    points: Vec<(u64, f64)>,
}

/// Time in ms and level in m.
type Points = Vec<(u64, f64)>;
/// Time in ms and what happens then.
type Happenings = Vec<(u64, Happening)>;

const MINUTE_MS: u64 = 60_000;

impl Filling {
    /// The story for a tank; with `duration_ms` it is told again and again until then.
    #[must_use]
    pub fn story(marks: &Landmarks, duration_ms: Option<u64>) -> Story {
        let (once, happenings) = Self::once(marks);
        let length_ms = once.last().map_or(0, |&(time_ms, _)| time_ms);
        let end_ms = duration_ms.unwrap_or(length_ms);
        let mut points = Vec::new();
        let mut all = Vec::new();
        let mut start_ms = 0;
        while start_ms < end_ms.max(1) && length_ms > 0 {
            points.extend(once.iter().map(|&(time_ms, level_m)| (start_ms + time_ms, level_m)));
            let shifted = happenings.iter().map(|&(time_ms, what)| (start_ms + time_ms, what));
            all.extend(shifted.filter(|&(time_ms, _)| time_ms < end_ms));
            start_ms += length_ms;
        }
        Story { level: Box::new(Self { points }), happenings: all, end_ms, noise: 0.1 }
    }

    fn once(marks: &Landmarks) -> (Points, Happenings) {
        let span = marks.overflow_m - marks.floor_m;
        // A little above the alarm, never over the brim.
        let peak_m = (marks.alarm_m + 0.02 * span).min(marks.overflow_m);
        let rest_m = (marks.warn_m - 0.12 * span).max(marks.floor_m);
        let low_m = (marks.warn_m - 0.10 * span).max(marks.floor_m);
        let rise_ms = travel_ms(peak_m - rest_m, 0.9 * marks.rise_m_s);
        let fall_ms = travel_ms(peak_m - low_m, 0.9 * marks.fall_m_s);

        let filling = 30 * MINUTE_MS;
        let full = filling + rise_ms;
        let draining = full + 30 * MINUTE_MS;
        let drained = draining + fall_ms;
        let broken = drained + 90 * MINUTE_MS;
        let mended = broken + 5 * marks.failed_after_ms;
        let end = mended + 60 * MINUTE_MS;
        let refill = travel_ms(rest_m - low_m, 0.9 * marks.rise_m_s);
        let points = vec![
            (0, rest_m),
            (filling, rest_m),
            (full, peak_m),
            (draining, peak_m),
            (drained, low_m),
            (end, low_m),
            (end + refill, rest_m),
        ];
        let press = |at_ms: u64| {
            [(at_ms, Happening::Button(true)), (at_ms + 1_000, Happening::Button(false))]
        };
        let cut = drained + 10 * MINUTE_MS;
        let mut happenings = Vec::new();
        happenings.extend(press(full + 5 * MINUTE_MS));
        happenings.push((cut, Happening::PowerOff));
        happenings.push((cut + 3 * MINUTE_MS, Happening::PowerOn));
        happenings.extend(press(cut + 20 * MINUTE_MS));
        happenings.push((broken, Happening::Sensor(Some(Failure::WireBreak))));
        happenings.push((mended, Happening::Sensor(None)));
        happenings.extend(press(mended + 10 * MINUTE_MS));
        (points, happenings)
    }
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates")]
fn travel_ms(distance_m: f64, rate_m_s: f64) -> u64 {
    // A rate of zero would never arrive; a day is long enough for a story.
    (distance_m.max(0.0) / rate_m_s.max(1e-9) * 1e3).clamp(1_000.0, 86_400_000.0) as u64
}

impl Level for Filling {
    fn level_m(&self, now_ms: u64) -> f64 {
        between(&self.points, now_ms)
    }

    fn temperature_c(&self, now_ms: u64) -> f64 {
        // A day of mild weather.
        20.0 + 3.0 * (std::f64::consts::TAU * ms(now_ms) / 86_400_000.0).sin()
    }
}

/// The level at a time, straight between points in order, constant beyond the ends.
pub(super) fn between(points: &[(u64, f64)], now_ms: u64) -> f64 {
    let after = points.partition_point(|&(time_ms, _)| time_ms <= now_ms);
    match (after.checked_sub(1).and_then(|before| points.get(before)), points.get(after)) {
        (Some(&(t0, h0)), Some(&(t1, h1))) => {
            h0 + (h1 - h0) * ms(now_ms - t0) / ms((t1 - t0).max(1))
        }
        (Some(&(_, level_m)), None) | (None, Some(&(_, level_m))) => level_m,
        (None, None) => 0.0,
    }
}

#[expect(clippy::cast_precision_loss, reason = "virtual times are far below 2^53 ms")]
fn ms(time_ms: u64) -> f64 {
    time_ms as f64
}
