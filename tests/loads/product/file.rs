//! Tank files as text, and what the desk says of them.

use std::fmt::Write as _;
use strake::assess::{self, Desk, Overrides, Request};
use strake::compile;
use strake::rerate;
use strake::tank::{self, TankFile};
use strake_oracle::liquid::Liquid;
use strake_oracle::shape::Shape;

/// A tank that is put together from pieces.
pub(crate) struct Tank {
    /// Lines of `[tank]` beside the name.
    pub vessel: String,
    /// What stands in it; the level is that of the top surface.
    pub liquid: Liquid,
    /// Lines of `[liquid]` in place of a density without any doubt.
    pub contents: Option<String>,
    /// Everything behind.
    pub rest: String,
}

impl Tank {
    /// Loose parts under a liquid; without one under the gas alone.
    pub(crate) fn of(liquid: &Liquid, rest: String) -> Self {
        Self { vessel: String::new(), liquid: liquid.clone(), contents: None, rest }
    }

    /// Its text.
    pub(crate) fn text(&self) -> String {
        let Liquid { gas_pa, layers, gravity_m_s2, outside } = &self.liquid;
        let mut text = format!("[tank]\nname = \"case\"\n{}\n[fill]\nclosed = true\n", self.vessel);
        for (index, layer) in layers.iter().enumerate() {
            text += if index == 0 { "[liquid]\n" } else { "[[liquid.below]]\n" };
            if index > 0 {
                let _ = writeln!(
                    text,
                    "surface = \"{:?} m\"\nsurface_uncertainty = \"0 m\"",
                    layer.surface_m
                );
            }
            let certain = certain(layer.density_kg_m3);
            text += self.contents.as_deref().filter(|_| index == 0).unwrap_or(&certain);
            let _ = writeln!(text, "name = \"liquid {index}\"");
        }
        let _ = write!(
            text,
            "[gas]\nlowest = \"{gas_pa:?} Pa\"\npressure = \"{gas_pa:?} Pa\"\n\
             highest = \"{gas_pa:?} Pa\"\n[site]\ngravity = \"{gravity_m_s2:?} m/s2\"\n"
        );
        if let Some(outside) = outside {
            let at = outside.surface_m;
            let _ = writeln!(
                text,
                "[[outside]]\nhighest = \"{at:?} m\"\nlowest = \"{at:?} m\"\n\
                 density = \"{:?} kg/m3\"",
                outside.density_kg_m3
            );
        }
        text + &self.rest
    }

    /// The file, read.
    pub(crate) fn read(&self) -> TankFile {
        read(&self.text())
    }

    /// The sheet at a level.
    pub(crate) fn assessed(&self, level_m: f64) -> assess::Document {
        let file = self.read();
        let overrides = Overrides { level_m: Some(level_m), ..Overrides::default() };
        let request = Request::new(&file, overrides).expect("a level that can stand");
        let found = assess::assess(&file, &request);
        found.unwrap_or_else(|found| panic!("{}\n{}", found.to_text(false), self.text())).document
    }

    /// The sheet at the level of the liquid.
    pub(crate) fn sheet(&self) -> assess::Document {
        self.assessed(self.liquid.surface_m())
    }

    /// The desk.
    pub(crate) fn desk(&self) -> Desk {
        let file = self.read();
        let contents = compile::Contents::of(&file);
        let compiled = compile::for_desk(&file, &contents);
        Desk::new(compiled.unwrap_or_else(|found| panic!("{}", found.to_text(false))), &file)
    }

    /// Rated anew at its own level, with its own density.
    pub(crate) fn rerated(&self) -> rerate::Document {
        let file = self.read();
        let top = self.liquid.layers.first().expect("a liquid");
        let overrides = Overrides {
            level_m: Some(top.surface_m),
            density_kg_m3: Some(top.density_kg_m3),
            ..Overrides::default()
        };
        let question = rerate::Question::new(&file, overrides, None).expect("a question");
        rerate::rerate(&file, &question)
            .unwrap_or_else(|found| panic!("{}", found.to_text(false)))
            .document
    }
}

/// A part for files that are about none.
pub(crate) const WALL: &str = "[[panel]]\nname = \"wall\"\nshape = { rectangle = \
    { width = \"1 m\", length = \"1 m\" } }\nbottom = \"0 m\"\nslope = \"90 deg\"\n\
    capacity = [ { force = \"50 kN\", basis = \"drawing\" } ]\n";

/// A file that must be sound.
pub(crate) fn read(text: &str) -> TankFile {
    tank::parse("case.toml", text.as_bytes())
        .unwrap_or_else(|found| panic!("{}\n{text}", found.to_text(false)))
}

fn certain(density_kg_m3: f64) -> String {
    format!(
        "density = \"{density_kg_m3:?} kg/m3\"\ntemperature = \"15 degC\"\n\
         range = [\"10 degC\", \"20 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n"
    )
}

/// A flat outline; `None` of what a file cannot state.
pub(crate) fn outline(shape: &Shape) -> Option<String> {
    Some(match shape {
        Shape::Circle { diameter } => format!("{{ circle = {{ diameter = \"{diameter:?} m\" }} }}"),
        Shape::Ellipse { width, length } => sides("ellipse", *width, *length),
        Shape::Obround { width, length } => sides("obround", *width, *length),
        Shape::Rectangle { width, length } => sides("rectangle", *width, *length),
        Shape::Triangle { base, height, apex_up } => format!(
            "{{ triangle = {{ base = \"{base:?} m\", height = \"{height:?} m\", \
             apex = \"{}\" }} }}",
            if *apex_up { "up" } else { "down" }
        ),
        Shape::Trapezoid { top, bottom, length } => format!(
            "{{ trapezoid = {{ top = \"{top:?} m\", bottom = \"{bottom:?} m\", \
             length = \"{length:?} m\" }} }}"
        ),
        Shape::HalfDisc { .. } | Shape::Polygon { .. } => return None,
    })
}

fn sides(kind: &str, width: f64, length: f64) -> String {
    format!("{{ {kind} = {{ width = \"{width:?} m\", length = \"{length:?} m\" }} }}")
}
