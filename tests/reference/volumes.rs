//! Volumes by the tank geometry of the library.

use crate::python::ask;
use crate::{Outcome, hold};
use serde_json::json;
use strake::compile::curve;
use strake::tank;
use strake_oracle::random::Random;

/// Lying drums with flat heads: the shape's own volume, and the device's curve within its error.
pub(crate) fn lying() -> Outcome {
    let mut random = Random::new(9);
    let mut questions = Vec::new();
    let mut found = Vec::new();
    for _ in 0..60 {
        let (diameter, length) = (random.ratio_between(0.3, 8.0), random.ratio_between(0.5, 30.0));
        let text = format!(
            "[tank]\nname = \"drum\"\nlying = {{ diameter = \"{diameter:?} m\", \
             length = \"{length:?} m\", heads = \"flat\" }}\n[liquid]\nname = \"wine\"\n\
             density = \"990 kg/m3\"\ntemperature = \"15 degC\"\n\
             range = [\"8 degC\", \"25 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n\
             [gas]\nvented = true\n[[panel]]\nname = \"head\"\n\
             shape = {{ circle = {{ diameter = \"{diameter:?} m\" }} }}\nbottom = \"0 m\"\n\
             slope = \"90 deg\"\ncapacity = [ {{ none = \"loads only\" }} ]\n"
        );
        let file = tank::parse("drum.toml", text.as_bytes())
            .map_err(|findings| findings.to_text(false))?;
        let curve = curve(&file).ok_or("no curve")?;
        for _ in 0..8 {
            let level = diameter * random.unit();
            let by_shape = file.volume_m3(level).ok_or("no volume")?;
            let pair = curve.rows.windows(2).find(|pair| level <= pair[1].0).ok_or("no row")?;
            let [(h0, v0), (h1, v1)] = [pair[0], pair[1]];
            let by_curve = v0 + (v1 - v0) * (level - h0) / (h1 - h0);
            questions.push(json!({
                "ask": "lying_volume", "diameter": diameter, "length": length, "level": level,
            }));
            found.push((by_shape, by_curve, curve.error_m3, diameter * diameter * length));
        }
    }
    let mut worst = 0.0_f64;
    for ((by_shape, by_curve, error, scale), library) in found.into_iter().zip(ask(&questions)?) {
        worst = worst.max((by_shape - library).abs() / scale);
        let room = error + 1e-9 * scale;
        hold((by_curve - library).abs() <= room, || format!("{by_curve} for {library}, {error}"))?;
    }
    println!("volumes of lying drums: off by at most {worst:.1e} of diameter² x length");
    hold(worst <= 1e-12, || format!("{worst}"))
}
