//! The measured laboratory series: peaks that can be checked by hand from the CSV.

use crate::bench::{root, trial};

/// Highest level of the series, m.
fn highest(csv: &str) -> f64 {
    let levels = csv.lines().skip(1).map(|row| row.split(',').nth(1).unwrap());
    levels.map(|level| level.parse::<f64>().unwrap()).fold(0.0, f64::max)
}

#[test]
fn the_recorded_tank_peaks_where_the_csv_does() {
    let series = root().join("tests/series/laboratory_tank_1s.csv");
    let tank = root().join("configs/laboratory_tank.toml");
    let words = [tank.to_str().unwrap(), "--series", series.to_str().unwrap()];
    let (_directory, status, document) = trial(&words);
    assert_eq!(status, 0, "{document}");
    assert_eq!(document["identical"], true);
    assert_eq!(document["collected"], true);
    let csv = std::fs::read_to_string(&series).unwrap();
    // One sample a second, as the rows.
    assert_eq!(document["samples"], csv.lines().count() as u64 - 1);

    let peaks = document["replay"]["peaks"].as_array().unwrap();
    let peak = peaks.iter().find(|peak| peak["part"] == "inspection cover").unwrap();
    let level_m = peak["level_m"].as_f64().unwrap();
    // The loop resolves 1 m in 16,000 microamperes; quantisation is all that stands between.
    assert!((level_m - highest(&csv)).abs() <= 0.5 / 16_000.0 + 1e-7, "{level_m}");

    // The clamp slips at 7.7 kPa at the cover's lowest point, 45 mm below its centre at 70 mm;
    // water of 998.2 kg/m3 at 59.9 degrees north, 20 m up (GRS80: 9.8191 m/s2).
    let pressure_pa = 998.2 * 9.8191 * (level_m - 0.025);
    let utilisation = peak["utilisation"].as_f64().unwrap();
    assert!((utilisation - pressure_pa / 7700.0).abs() < 2e-5 * utilisation, "{utilisation}");

    // The highest fill passes the alarm's threshold, 0.9 of the clamp, on its bound.
    let alarms = document["replay"]["alarms"].as_array().unwrap();
    assert!(alarms.iter().any(|alarm| alarm["kind"] == "alarm"), "{alarms:?}");
}
