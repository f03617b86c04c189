//! Density of water by IAPWS-95.

use crate::python::ask;
use crate::{Outcome, hold};
use serde_json::json;
use std::path::Path;
use strake::tank::{self, Liquid, TankFile};
use strake::units::{self, Quantity};

fn densities(at_c: &[f64]) -> Result<Vec<f64>, Box<dyn std::error::Error>> {
    let questions: Vec<_> =
        at_c.iter().map(|t_c| json!({ "ask": "water_density", "t_c": t_c })).collect();
    ask(&questions)
}

fn read(text: &str) -> Result<TankFile, Box<dyn std::error::Error>> {
    tank::parse("water.toml", text.as_bytes()).map_err(|found| found.to_text(false).into())
}

/// Steps of a degree from the coldest to the hottest.
fn degrees(cold_c: f64, hot_c: f64) -> Vec<f64> {
    let mut all = vec![cold_c];
    while let Some(next) = all.last().map(|t| t + 1.0).filter(|t| *t < hot_c) {
        all.push(next);
    }
    all.push(hot_c);
    all
}

/// What the example files call water of about 998 kg/m3 keeps within the band that they state.
pub(crate) fn examples() -> Outcome {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs");
    let mut seen = 0;
    for entry in std::fs::read_dir(&folder)? {
        let path = entry?.path();
        if path.extension().is_none_or(|end| end != "toml") {
            continue;
        }
        let file = tank::parse_in(&folder, "example.toml", &std::fs::read(&path)?)
            .map_err(|found| found.to_text(false))?;
        let plain = |liquid: &&Liquid| {
            liquid.name.value.contains("water")
                && (996.0..1000.5).contains(&liquid.density_kg_m3.value)
        };
        for liquid in std::iter::once(&file.liquid).chain(&file.products).filter(plain) {
            seen += 1;
            let (low, high) = liquid.band_kg_m3();
            let at_c = degrees(liquid.coldest_c.value, liquid.hottest_c.value);
            for (t, rho) in at_c.iter().zip(densities(&at_c)?) {
                hold((low..=high).contains(&rho), || {
                    format!("{}: {rho} at {t} degC, stated {low} to {high}", liquid.name.value)
                })?;
            }
        }
    }
    hold(seen > 0, || "no example holds water".to_owned())
}

/// Water stated by rows of five degrees: straight lines between them miss at most `rho'' h² / 8`.
pub(crate) fn table() -> Outcome {
    let rows_c: Vec<f64> = (1..=9).map(|step| 5.0 * f64::from(step)).collect();
    let rows = rows_c
        .iter()
        .zip(densities(&rows_c)?)
        .map(|(t, rho)| format!("[\"{t:?} degC\", \"{rho:?} kg/m3\"]"))
        .collect::<Vec<_>>()
        .join(", ");
    let file = read(&format!(
        "[tank]\nname = \"water\"\n[liquid]\nname = \"water\"\ndensity = \"999.1 kg/m3\"\n\
         temperature = \"15 degC\"\nrange = [\"5 degC\", \"45 degC\"]\ndensity_table = [{rows}]\n\
         uncertainty = \"0 %\"\n[gas]\nvented = true\n[[panel]]\nname = \"wall\"\n\
         shape = {{ rectangle = {{ width = \"1 m\", length = \"1 m\" }} }}\nbottom = \"0 m\"\n\
         slope = \"90 deg\"\ncapacity = [ {{ none = \"loads only\" }} ]\n"
    ))?;
    let at_c = degrees(5.0, 45.0);
    let mut worst = 0.0_f64;
    for (t, rho) in at_c.iter().zip(densities(&at_c)?) {
        worst = worst.max((file.liquid.density_at(*t) - rho).abs());
    }
    println!("water by rows of five degrees: off by at most {worst:.3} kg/m3");
    // rho'' is 0.015 kg/m3/K² at 5 degC and falls with temperature.
    hold(worst <= 0.015 * 25.0 / 8.0, || format!("{worst} kg/m3"))
}

/// Scales of hydrometers stand on water at 60 degF.
pub(crate) fn hydrometers() -> Outcome {
    let water = densities(&[(60.0 - 32.0) / 1.8])?[0];
    for text in ["10 degAPI", "0 degTw", "0 degBaume heavy", "10 degBaume light"] {
        let stated = units::parse(text, Quantity::Density)?;
        hold((stated - water).abs() <= 2e-3, || format!("{text}: {stated} for {water}"))?;
    }
    Ok(())
}
