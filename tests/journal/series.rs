//! Level series as a device would log them: read from `tests/series`, interpolated to 10 seconds,
//! with the noise of a sensor where the source is slower than that.

use std::f64::consts::TAU;
use std::path::Path;
use strake_core::journal::Sample;
use strake_core::signal::{Channel, burst};

/// Interval of the samples, ms.
pub(crate) const INTERVAL_MS: u64 = 10_000;
/// A count of the level, m.
const COUNT_M: f64 = 0.000_5;
/// Noise of one level reading (standard deviation), m.
const NOISE_M: f64 = 0.001;
/// A count of the temperature and its noise, K.
const COUNT_K: f64 = 0.01;
const NOISE_K: f64 = 0.02;

/// A fixed sequence of normally distributed numbers: xorshift (Marsaglia 2003), Box and Muller.
struct Noise(u64);

impl Noise {
    fn uniform(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (f64::from((self.0 >> 33) as u32) + 0.5) / f64::from(1_u32 << 31)
    }

    fn normal(&mut self) -> f64 {
        (-2.0 * self.uniform().ln()).sqrt() * (TAU * self.uniform()).cos()
    }
}

/// Times and values of a column of a file in `tests/series`.
fn column(file: &str, index: usize) -> Vec<(f64, f64)> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/series").join(file);
    let text = std::fs::read_to_string(path).unwrap();
    text.lines()
        .skip(1)
        .map(|row| {
            let fields: Vec<f64> = row.split(',').map(|field| field.parse().unwrap()).collect();
            (fields[0], fields[index])
        })
        .collect()
}

/// Values every ten seconds by a monotone cubic (Fritsch and Butland 1984).
fn every_10_s(points: &[(f64, f64)]) -> Vec<f64> {
    let slope = |a: (f64, f64), b: (f64, f64)| (b.1 - a.1) / (b.0 - a.0);
    let slopes: Vec<f64> = points.windows(2).map(|pair| slope(pair[0], pair[1])).collect();
    let mut tangents = vec![slopes[0]];
    tangents.extend(slopes.windows(2).map(|pair| {
        let product = pair[0] * pair[1];
        if product <= 0.0 { 0.0 } else { 2.0 * product / (pair[0] + pair[1]) }
    }));
    tangents.push(slopes[slopes.len() - 1]);
    let mut values = Vec::new();
    for (pair, tangent) in points.windows(2).zip(tangents.windows(2)) {
        let step_s = pair[1].0 - pair[0].0;
        let mut now_s = (pair[0].0 / 10.0).ceil() * 10.0;
        while now_s < pair[1].0 {
            let u = (now_s - pair[0].0) / step_s;
            let v = 1.0 - u;
            values.push(
                pair[0].1 * (1.0 + 2.0 * u) * v * v
                    + step_s * tangent[0] * u * v * v
                    + pair[1].1 * u * u * (3.0 - 2.0 * u)
                    - step_s * tangent[1] * u * u * v,
            );
            now_s += 10.0;
        }
    }
    values
}

#[expect(clippy::cast_possible_truncation, reason = "levels are some metres")]
fn count(value: f64, unit: f64) -> i32 {
    (value / unit).round() as i32
}

/// What stands in the level's integer.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Logged {
    /// One reading as it is.
    AsRead,
    /// One reading with noise.
    WithNoise,
    /// What the burst filter makes of five readings with noise.
    Burst,
}

/// Samples of these levels; temperatures of the river with noise, the battery 10 mV lower every
/// 14 hours.
fn samples(levels_m: &[f64], logged: Logged) -> Vec<Sample> {
    let temperatures = every_10_s(&column("river_blacksmithfork_15min.csv", 2));
    let mut noise = Noise(0x9E37_79B9_7F4A_7C15);
    let numbered = (0_u64..).zip(levels_m).zip(temperatures.iter().cycle());
    numbered
        .map(|((number, &level_m), &celsius)| {
            let mut reading = |by: f64| count(level_m + by * noise.normal(), COUNT_M);
            let level = match logged {
                Logged::AsRead => Channel::good(16 * reading(0.0)),
                Logged::WithNoise => Channel::good(16 * reading(NOISE_M)),
                Logged::Burst => burst::filter(&mut [0; 5].map(|_| reading(NOISE_M))),
            };
            let celsius = celsius + NOISE_K * noise.normal();
            Sample {
                tick_ms: 3_000_000_000 + number * INTERVAL_MS,
                level,
                temperature: Channel::good(16 * count(celsius, COUNT_K)),
                battery_mv: 3600 - 10 * u16::try_from(number / 5000).unwrap(),
            }
        })
        .collect()
}

/// Three days of a slow series with noise added.
pub(crate) fn slow(file: &str, logged: Logged) -> Vec<Sample> {
    samples(&every_10_s(&column(file, 1)), logged)
}

/// The recorded laboratory tank, every tenth second: all ten phases in a row, twice.
pub(crate) fn tank(logged: Logged) -> Vec<Sample> {
    let rows = column("laboratory_tank_1s.csv", 1);
    let phases = (0..20).flat_map(|phase| rows.iter().skip(phase % 10).step_by(10));
    samples(&phases.map(|row| row.1).collect::<Vec<_>>(), logged)
}

/// Days of a tank that rests for four fifths of the time: filled by 1.728 m and drawn down again at
/// 0.2 mm/s each day, bursts with noise.
pub(crate) fn resting_tank(days: u32) -> Vec<Sample> {
    let per_hour = 3_600_000 / u32::try_from(INTERVAL_MS).unwrap();
    let level_m = |number: u32| {
        let hours = f64::from(number % (24 * per_hour)) / f64::from(per_hour);
        let filled = ((hours - 6.0) / 2.4).clamp(0.0, 1.0);
        let drawn = ((hours - 16.0) / 2.4).clamp(0.0, 1.0);
        3.0 + 1.728 * (filled - drawn)
    };
    samples(&(0..days * 24 * per_hour).map(level_m).collect::<Vec<_>>(), Logged::Burst)
}
