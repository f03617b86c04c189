//! `[liquid]`, `[[liquid.below]]` and `[[product]]`.

use super::field::{Range, field};
use super::level;
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Layer, Liquid, Petroleum, TemperatureSignal, Thermal};
use crate::units::Quantity::{Density, Length, PerKelvin, Ratio, Temperature};

pub(super) const NOT_HYDROSTATIC: &str =
    "grain and powder do not press as a liquid does: friction at the wall carries part of them";
pub(super) const NOT_HYDROSTATIC_HINT: &str =
    "use a method for silos; this tool calculates liquids only";

/// What `[liquid]` says.
pub(super) struct State {
    pub(super) liquid: Option<Liquid>,
    pub(super) below: Vec<Layer>,
    pub(super) temperature_signal: Option<TemperatureSignal>,
}

const WRITE_LIQUID: &str = "[liquid] with name, density, temperature, range, expansion and \
                            uncertainty";

pub(super) fn state(root: &mut Section<'_>) -> State {
    let nothing = State { liquid: None, below: Vec::new(), temperature_signal: None };
    if root.item("liquid").is_none() {
        let message = "table [liquid] is missing";
        root.report(Code::MissingTable, root.span, message, format!("write {WRITE_LIQUID}"));
        return nothing;
    }
    let Some(mut section) = root.table("liquid", WRITE_LIQUID) else { return nothing };
    let layers = section.tables("below", "[[liquid.below]] at the head of each layer");
    let below = layers.into_iter().filter_map(layer).collect();
    let temperature_signal = level::temperature_signal(&mut section);
    let liquid = liquid(&mut section);
    section.finish();
    State { liquid, below, temperature_signal }
}

pub(super) fn products(root: &mut Section<'_>) -> Vec<Liquid> {
    let products = root.tables("product", "[[product]] at the head of each product");
    let read = products.into_iter().filter_map(|mut section| {
        let product = liquid(&mut section);
        section.refuse("temperature_signal", "give it in [liquid]; it holds for every product");
        section.finish();
        product
    });
    read.collect()
}

fn layer(mut section: Section<'_>) -> Option<Layer> {
    let surface = section.need(field(
        "surface",
        Length,
        Range::POSITIVE,
        "\"0.30 m\", the height of the top of this layer",
    ));
    let uncertainty = section.need(field(
        "surface_uncertainty",
        Length,
        Range::NOT_NEGATIVE,
        "\"0.05 m\", the half-width that this height never exceeds",
    ));
    let liquid = liquid(&mut section);
    section.finish();
    Some(Layer { surface_m: surface?, surface_uncertainty_m: uncertainty?, liquid: liquid? })
}

/// The keys that every liquid has; the caller finishes the section.
fn liquid(section: &mut Section<'_>) -> Option<Liquid> {
    let span = section.span;
    let name = section.need_name("name", "\"rinse water\"");
    if let Some(name) = &name {
        refuse_solids(section, name);
    }
    let density = section.need(field(
        "density",
        Density,
        Range::POSITIVE,
        "\"1280 kg/m3\", the density at `temperature`",
    ));
    let temperature = section.need(field(
        "temperature",
        Temperature,
        Range::between(-200.0, 500.0),
        "\"20 degC\", at which `density` holds",
    ));
    let range = section.need_rising_pair(field(
        "range",
        Temperature,
        Range::between(-200.0, 500.0),
        "[\"5 degC\", \"35 degC\"], coldest and hottest in service",
    ));
    let thermal = thermal(section);
    let uncertainty = section.need(field(
        "uncertainty",
        Ratio,
        Range::between(0.0, 0.5),
        "\"0.5 %\", the half-width that the density never exceeds",
    ));
    let [coldest_c, hottest_c] = range?;
    Some(Liquid {
        name: name?,
        density_kg_m3: density?,
        temperature_c: temperature?,
        coldest_c,
        hottest_c,
        thermal: thermal?,
        uncertainty: uncertainty?,
        span,
    })
}

/// Refuses a name whose head word, the last one, is a solid: "milk powder", not "barley wine".
fn refuse_solids(section: &Section<'_>, name: &Located<String>) {
    const SOLIDS: [&str; 12] = [
        "grain",
        "grains",
        "wheat",
        "barley",
        "maize",
        "flour",
        "powder",
        "cement",
        "pellets",
        "granules",
        "granulate",
        "gravel",
    ];
    let head = name.value.rsplit(' ').next().unwrap_or_default().to_lowercase();
    if SOLIDS.contains(&head.as_str()) {
        let message = format!("`{}` is no liquid: {NOT_HYDROSTATIC}", name.value);
        section.report(Code::NotHydrostatic, name.span, message, NOT_HYDROSTATIC_HINT);
    }
}

fn thermal(section: &mut Section<'_>) -> Option<Located<Thermal>> {
    const WRITE: &str = "write expansion = \"4.0e-4 /K\", or density_table = [[\"0 degC\", \
                         \"1290 kg/m3\"], [\"40 degC\", \"1270 kg/m3\"]], or expansion = \"none\"";
    match section.one_of(&["expansion", "density_table"], WRITE)? {
        "expansion" => expansion(section),
        _ => density_table(section),
    }
}

fn expansion(section: &mut Section<'_>) -> Option<Located<Thermal>> {
    let item = section.item("expansion")?;
    if item.get_ref().is_table() {
        let write = "{ petroleum = \"crude\" }";
        let mut table = section.table("expansion", write)?;
        let write = "\"crude\", \"refined\" or \"lubricating oil\"";
        let group = table.need_choice("petroleum", &Petroleum::WORDS, write);
        table.finish();
        let span = item.span().into();
        return group.map(|group| Located::new(Thermal::Petroleum(group.value), span));
    }
    if item.get_ref().as_str().is_some_and(|text| text.trim() == "none") {
        return Some(Located::new(Thermal::None, item.span().into()));
    }
    let write = "\"4.0e-4 /K\", or \"none\" when the density does not change";
    let range = Range::between(-0.01, 0.01);
    let per_k = section.quantity(field("expansion", PerKelvin, range, write), item)?;
    Some(per_k.map(|per_k| Thermal::Expansion { per_k }))
}

fn density_table(section: &mut Section<'_>) -> Option<Located<Thermal>> {
    const WRITE: &str = "[[\"0 degC\", \"1290 kg/m3\"], [\"40 degC\", \"1270 kg/m3\"]]";
    const MOST_ROWS: usize = 64;
    let temperature = field("density_table", Temperature, Range::between(-200.0, 500.0), WRITE);
    let density = field("density_table", Density, Range::POSITIVE, WRITE);
    let (rows, span) = section.rows_of_two(temperature, density)?;
    let rising = rows.windows(2).all(|pair| matches!(pair, [a, b] if a.0 < b.0));
    if rows.len() < 2 || rows.len() > MOST_ROWS || !rising {
        let message = format!(
            "`density_table` in {} needs 2 to {MOST_ROWS} rows with rising temperature",
            section.place
        );
        section.report(Code::DensityTable, span, message, format!("write density_table = {WRITE}"));
        return None;
    }
    Some(Located::new(Thermal::Table { rows }, span))
}
