//! What is asked: at which level, with what in the tank, and where each number comes from.

use crate::compile::{Contents, HEIGHT_MAX_M, floor_m};
use crate::nearest::nearest;
use crate::tank::TankFile;
use crate::units::Quantity::{Density, Flow, Length, Temperature};
use crate::units::format_si;

/// Numbers given beside the file, SI.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Overrides {
    /// Level above the datum, m.
    pub level_m: Option<f64>,
    /// Density at the reference temperature, kg/m³.
    pub density_kg_m3: Option<f64>,
    /// Temperature of the estimate, °C.
    pub temperature_c: Option<f64>,
    /// Gas pressure of the estimate, Pa gauge.
    pub gas_pa: Option<f64>,
    /// Name of one of the file's liquids.
    pub product: Option<String>,
}

/// Where a number comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Source {
    /// The command line.
    Override,
    /// The overflow of the file, for want of a stated level.
    Overflow,
    /// The shell top of the file, for want of a stated level and an overflow.
    ShellTop,
}

/// The state to assess.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// Level above the datum, m.
    pub level_m: f64,
    /// Where it comes from.
    pub level_source: Source,
    /// What is in the tank.
    pub contents: Contents,
    /// What was overridden.
    pub overrides: Overrides,
    /// Net inflow to ask the time to the limits for, m³/s; negative when it runs out.
    pub inflow_m3_s: Option<f64>,
}

/// Why a state cannot be assessed.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("{message}")]
pub struct RequestError {
    /// What is wrong, the value against the limit.
    pub message: String,
    /// What to do.
    pub hint: String,
}

fn refuse<T>(message: String, hint: impl Into<String>) -> Result<T, RequestError> {
    Err(RequestError { message, hint: hint.into() })
}

impl Request {
    /// The state that the file describes, changed by the overrides.
    ///
    /// # Errors
    /// [`RequestError`] when there is no level, when it cannot stand in this tank, or when an
    /// override contradicts the file.
    pub fn new(file: &TankFile, overrides: Overrides) -> Result<Self, RequestError> {
        let (level_m, level_source) = level(file, overrides.level_m)?;
        let mut contents = Contents::of(file);
        if let Some(name) = &overrides.product {
            contents.take_liquid(liquid_named(file, name)?);
        }
        if let Some(density_kg_m3) = overrides.density_kg_m3 {
            if !(1.0..=25e3).contains(&density_kg_m3) {
                let message = format!(
                    "--density is {}; densities run from 1 to 25000 kg/m3",
                    format_si(density_kg_m3, Density)
                );
                return refuse(message, "check the number and its unit");
            }
            contents.take_density(density_kg_m3);
        }
        if let Some(temperature_c) = overrides.temperature_c {
            if !(-200.0..=500.0).contains(&temperature_c) {
                let message = format!(
                    "--temperature is {}; temperatures run from -200 to 500 degC",
                    format_si(temperature_c, Temperature)
                );
                return refuse(message, "check the number and its unit");
            }
            contents.temperature_c = temperature_c;
        }
        if let Some(why) = contents.liquid.beyond(contents.temperature_c) {
            let message = format!("the density cannot be followed: {why}");
            return refuse(message, "check --density and --temperature, or the file's `expansion`");
        }
        if let Some(gas_pa) = overrides.gas_pa {
            if !(-101_325.0..=1e7).contains(&gas_pa) {
                let message =
                    format!("--gas-pressure is {gas_pa} Pa, below vacuum or above 10 MPa");
                return refuse(message, "it is a gauge pressure; check the number and its unit");
            }
            contents.take_gas(gas_pa);
        }
        lighter_than_below(file, &contents)?;
        Ok(Self { level_m, level_source, contents, overrides, inflow_m3_s: None })
    }

    /// The same with an inflow to ask the time to the limits for.
    ///
    /// # Errors
    /// [`RequestError`] when the file describes no volume, or the flow is none of a tank.
    pub fn with_inflow(
        self,
        file: &TankFile,
        inflow_m3_s: Option<f64>,
    ) -> Result<Self, RequestError> {
        let Some(flow) = inflow_m3_s else { return Ok(self) };
        if flow.abs() > 1e3 {
            let shown = format_si(flow, Flow);
            let message = format!("--inflow is {shown}; flows run up to 1000 m3/s");
            return refuse(message, "check the number and its unit");
        }
        if file.volume_m3(self.level_m).is_none() {
            let message = "--inflow: the file describes no volume".to_owned();
            return refuse(message, "state the tank's shape or a strapping table in [tank]");
        }
        Ok(Self { inflow_m3_s, ..self })
    }
}

fn level(file: &TankFile, stated_m: Option<f64>) -> Result<(f64, Source), RequestError> {
    let shell = file.vessel.height_m();
    let Some(level_m) = stated_m else {
        let overflow = file.fill.overflow_m.map(|level| (level.value, Source::Overflow));
        return overflow.or(shell.map(|top| (top, Source::ShellTop))).ok_or_else(|| RequestError {
            message: "no level: the file has neither an overflow nor a shell".to_owned(),
            hint: "state one, as --level \"6.5 m\"".to_owned(),
        });
    };
    let shown = format_si(level_m, Length);
    let floor_m = floor_m(file);
    if level_m < floor_m {
        let message =
            format!("--level is {shown}, below the floor at {}", format_si(floor_m, Length));
        return refuse(message, "levels are heights above the tank datum, the inside bottom");
    }
    let closed = file.fill.closed.is_some_and(|closed| closed.value);
    if let Some(top_m) = shell.filter(|&top_m| !closed && level_m > top_m) {
        let message = format!(
            "--level is {shown}, above the shell top at {}: an open tank runs over",
            format_si(top_m, Length)
        );
        let hint = "state a lower level; for a closed tank with a pipe above its roof write \
                    closed = true in [fill]";
        return refuse(message, hint);
    }
    if level_m > HEIGHT_MAX_M {
        let message = format!("--level is {shown}; levels run up to 200 m");
        return refuse(message, "check the number and its unit");
    }
    Ok((level_m, Source::Override))
}

fn liquid_named<'a>(
    file: &'a TankFile,
    name: &str,
) -> Result<&'a crate::tank::Liquid, RequestError> {
    let all = || std::iter::once(&file.liquid).chain(&file.products);
    if let Some(liquid) = all().find(|liquid| liquid.name.value == name) {
        return Ok(liquid);
    }
    let names: Vec<&str> = all().map(|liquid| liquid.name.value.as_str()).collect();
    let hint = match nearest(name, names.iter().copied()) {
        Some(near) => format!("write --product \"{near}\", the nearest name"),
        None => format!("the file has: {}", names.join(", ")),
    };
    refuse(format!("the file has no liquid `{name}`"), hint)
}

/// Density never falls with depth.
fn lighter_than_below(file: &TankFile, contents: &Contents) -> Result<(), RequestError> {
    let top = contents.density_kg_m3();
    match file.below.first() {
        Some(layer) if layer.liquid.density_kg_m3.value < top => {
            let message = format!(
                "{} would lie above `{}` with {}: density falls with depth",
                format_si(top, Density),
                layer.liquid.name.value,
                format_si(layer.liquid.density_kg_m3.value, Density)
            );
            refuse(message, "such layers would mix; state a lighter liquid, or change the file")
        }
        _ => Ok(()),
    }
}
