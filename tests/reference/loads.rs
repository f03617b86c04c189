//! Loads by the quadrature of the library.

use crate::python::ask;
use crate::{Outcome, hold};
use serde_json::{Value, json};
use strake::assess::{self, Overrides, Request};
use strake::tank;
use strake_oracle::random::Random;

/// A random number that a text of few digits and an f32 hold.
fn grid(random: &mut Random, low: f64, high: f64) -> f64 {
    (random.between(low, high) * 256.0).round() / 256.0
}

/// One part under one liquid.
struct Case {
    shape: &'static str,
    a: f64,
    b: f64,
    bottom: f64,
    slope_deg: f64,
    level: f64,
    density: f64,
    gas: f64,
}

impl Case {
    fn random(random: &mut Random) -> Self {
        let shape = ["rectangle", "ellipse", "triangle"][random.below(3) as usize];
        let bottom = grid(random, 0.0, 4.0);
        Self {
            shape,
            a: grid(random, 0.2, 3.0),
            b: grid(random, 0.2, 3.0),
            bottom,
            slope_deg: [90.0, 30.0, 150.0][random.below(3) as usize],
            level: grid(random, bottom, bottom + 4.0),
            density: grid(random, 800.0, 1400.0),
            gas: if random.one_in(2) { grid(random, -900.0, 4000.0) } else { 0.0 },
        }
    }

    fn text(&self) -> String {
        let Self { shape, a, b, bottom, slope_deg, density, gas, .. } = self;
        let sides = if *shape == "triangle" {
            format!("base = \"{a:?} m\", height = \"{b:?} m\", apex = \"up\"")
        } else {
            format!("width = \"{a:?} m\", length = \"{b:?} m\"")
        };
        format!(
            "[tank]\nname = \"case\"\n[fill]\nclosed = true\n[liquid]\nname = \"liquid\"\n\
             density = \"{density:?} kg/m3\"\ntemperature = \"15 degC\"\n\
             range = [\"10 degC\", \"20 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n\
             [gas]\nlowest = \"{gas:?} Pa\"\npressure = \"{gas:?} Pa\"\nhighest = \"{gas:?} Pa\"\n\
             [site]\ngravity = \"9.8125 m/s2\"\n[[panel]]\nname = \"part\"\n\
             shape = {{ {shape} = {{ {sides} }} }}\nbottom = \"{bottom:?} m\"\n\
             slope = \"{slope_deg:?} deg\"\ncapacity = [ {{ none = \"loads only\" }} ]\n"
        )
    }

    /// Integrals of p and of p times the lever about the centroid, and of their absolute values.
    fn questions(&self) -> [Value; 4] {
        let Self { shape, a, b, bottom, slope_deg, level, density, gas } = self;
        let centroid = if *shape == "triangle" { b / 3.0 } else { 0.5 * b };
        // Of 30 and 150 degrees one half, of 90 one.
        let sine = if (80.0..100.0).contains(slope_deg) { 1.0 } else { 0.5 };
        let ask = |line: Option<f64>, size: bool| {
            json!({
                "ask": "load", "shape": shape, "a": a, "b": b, "bottom": bottom,
                "sine": sine, "level": level,
                "weight": density * 9.8125, "gas": gas, "line": line, "size": size,
            })
        };
        let about = Some(centroid);
        [ask(None, false), ask(about, false), ask(None, true), ask(about, true)]
    }
}

/// 2e-6 of the integral of |p| |w|, through the file and the sheet.
pub(crate) fn planes() -> Outcome {
    let mut random = Random::new(77);
    let cases: Vec<Case> = (0..120).map(|_| Case::random(&mut random)).collect();
    let questions: Vec<Value> = cases.iter().flat_map(Case::questions).collect();
    let answers = ask(&questions)?;
    let mut worst = [0.0_f64; 2];
    for (case, library) in cases.iter().zip(answers.as_chunks::<4>().0) {
        let file = tank::parse("case.toml", case.text().as_bytes())
            .map_err(|found| found.to_text(false))?;
        let overrides = Overrides { level_m: Some(case.level), ..Overrides::default() };
        let request = Request::new(&file, overrides)?;
        let sheet = assess::assess(&file, &request).map_err(|found| found.to_text(false))?.document;
        let loads = &sheet.parts.first().ok_or("no part")?.loads;
        let found = [loads.force_n, loads.moment_centroid_n_m];
        let [force, moment, pressed, turned] = *library;
        for ((worst, found), (due, size)) in
            worst.iter_mut().zip(found).zip([(force, pressed), (moment, turned)])
        {
            let found = f64::from(found.ok_or("no load")?);
            if size > 0.0 {
                *worst = worst.max((found - due).abs() / size);
            }
            hold((found - due).abs() <= 2e-6 * size + 1e-9, || {
                format!("{found} for {due} of {size}: {}", case.text())
            })?;
        }
    }
    println!("against quadrature: force {:.1e}, moment {:.1e} of |p| |w|", worst[0], worst[1]);
    Ok(())
}
