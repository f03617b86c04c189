//! Delays, projections and loop currents, as the desk and the device have them.

use super::file::{WALL, read};
use strake::{assess, compile};
use strake_core::plan::Plan;
use strake_core::signal::{Channel, ReadingClass, SensorError, Sight, resolve};
use strake_oracle::cases::{Reason, Row};

const UNREAD: Reason = "inputs not understood";

pub(super) fn answer(row: &Row) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    if row.quantity().starts_with("TRAP") {
        return Err("a wrong result, not to be reported");
    }
    match row.get("rule") {
        Some("rise_in_delay") => needed_m(number("rise_m_s")?, number("delay_s")?),
        Some("projected_level") => projected(row, true),
        Some("projected_pressure") => projected(row, false),
        Some("inflow") => Err("an inflow is measured, not worked out of a rise"),
        None if row.has("tank") => Err("a drum with round heads is not offered"),
        None if row.quantity().starts_with("rise of level in the whole delay") => {
            let area_m2 = std::f64::consts::PI * number("D_m")?.powi(2) / 4.0;
            let samples_s = number("sampling_s")? * number("samples_to_confirm")?;
            let delay_s = samples_s + number("on_delay_s")? + number("response_s")?;
            needed_m(number("inflow_m3_h")? / 3600.0 / area_m2, delay_s)
        }
        _ => Err("alarms judge the bound: uncertainty is not taken off twice"),
    }
}

/// The margin that a delay needs at a rise: `Margin::needed_m`, all the delay given as the
/// response time but what the sheet adds.
fn needed_m(rise_m_s: f64, delay_s: f64) -> Result<f64, Reason> {
    /// Interval at rest, a reading with its retries, failed-after.
    const OTHERS_S: f64 = 10.0 + 3.0 + 1.0;
    let text = site("surface", rise_m_s, 1e-4, delay_s - OTHERS_S);
    let file = read(&text);
    let contents = compile::Contents::of(&file);
    let compiled = compile::for_desk(&file, &contents).expect("a plan");
    let margin = assess::margin(&file, &compiled.plan).ok_or("no margin is given")?;
    Ok(margin.needed_m)
}

/// A loop current on the scale of the loop, as the device has it.
pub(super) fn loop_level(row: &Row) -> Result<f64, Reason> {
    let current_a = row.number("I_A").ok_or(UNREAD)?;
    assert!(row.number("level_at_4mA_m") == Some(0.0));
    assert!(row.number("level_at_20mA_m") == Some(10.0));
    let plan = plan(&site("surface", 1e-4, 1e-4, 60.0));
    #[expect(clippy::cast_possible_truncation, reason = "sixteenths of a microampere")]
    let count_16 = (current_a * 16e6).round() as i32;
    let mut sight = Sight::NONE;
    let found = resolve(&plan, &mut sight, 0, Channel::good(count_16), Channel::default());
    // Outside 4 to 20 mA the value is kept, and so said.
    assert_eq!(found.class, ReadingClass::Held);
    Ok(found.estimate.into())
}

/// The outer end of a reading that failed some time ago: up where the row's rate is a rise.
fn projected(row: &Row, surface: bool) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let rate_m_s = number("rise_m_s")?;
    let value = number(if surface { "level_m" } else { "P_Pa" })?;
    let sensor = if surface { "surface" } else { "head" };
    let (rise, fall) = (rate_m_s.max(1e-9), (-rate_m_s).max(1e-9));
    let plan = plan(&site(sensor, rise, fall, 60.0));
    let zero = f64::from(plan.level.value_at_zero);
    #[expect(clippy::cast_possible_truncation, reason = "sixteenths of a microampere")]
    let count_16 = ((value - zero) / f64::from(plan.level.value_per_count_16)).round() as i32;
    let count_16 = count_16 + plan.level.zero_count_16;
    let mut sight = Sight::NONE;
    let silent = Channel::failed(SensorError::Silent);
    let _ = resolve(&plan, &mut sight, 0, Channel::good(count_16), Channel::default());
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "milliseconds")]
    let later_ms = (number("time_s")? * 1e3).round() as u64;
    let found = resolve(&plan, &mut sight, later_ms, silent, Channel::default());
    Ok(if rate_m_s > 0.0 { found.high } else { found.low }.into())
}

fn plan(text: &str) -> Plan {
    compile::for_device(&read(text)).unwrap_or_else(|e| panic!("{}", e.to_text(false))).plan
}

/// A tank with a sensor without any doubt: brine of 1280 kg/m3, overflow at 9.3 m; loops of 0 to
/// 10 m and of 0 to 150 kPa.
fn site(sensor: &str, rise_m_s: f64, fall_m_s: f64, response_s: f64) -> String {
    let level = if sensor == "head" {
        "sensor = \"head\"\nat = \"0 m\"\nreference = \"atmosphere\"\n\
         signal = { current_loop = [\"0 kPa\", \"150 kPa\"] }\nuncertainty = \"0 kPa\"\n"
    } else {
        "sensor = \"innage\"\nat = \"0 m\"\nsignal = { current_loop = [\"0 m\", \"10 m\"] }\n\
         uncertainty = \"0 mm\"\n"
    };
    format!(
        r#"[tank]
name = "case"
cylinder = {{ diameter = "8 m", height = "12 m" }}
[fill]
overflow = "9.3 m"
highest_rise = "{rise_m_s:?} m/s"
highest_fall = "{fall_m_s:?} m/s"
closed = false
[liquid]
name = "brine"
density = "1280 kg/m3"
temperature = "20 degC"
range = ["10 degC", "30 degC"]
expansion = "none"
uncertainty = "0 %"
[gas]
vented = true
[level]
{level}failed_after = "1 s"
{WALL}[alarm]
warn = {{ utilisation = 0.8, deadband = 0.02, on_delay = "0 s", off_delay = "60 s" }}
alarm = {{ utilisation = 0.9, deadband = 0.02, on_delay = "0 s", off_delay = "60 s" }}
response_time = "{response_s:?} s"
sounds_again_after = "10 min"
[logging]
interval = "10 s"
idle_interval = "10 s"
flush_after = "60 s"
"#
    )
}
