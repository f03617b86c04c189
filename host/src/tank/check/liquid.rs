//! Temperatures, densities, layers and gas against each other.

use super::geometry::pascals;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Gas, Liquid, Thermal};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;
use crate::units::Quantity::{Density, Length, Temperature};
use crate::units::format_si;

pub(super) fn all(draft: &Draft, sink: &Sink) {
    let layers = draft.below.iter().map(|layer| &layer.liquid);
    for liquid in draft.liquid.iter().chain(layers).chain(&draft.products) {
        temperature(liquid, sink);
        expansion(liquid, sink);
        petroleum(liquid, sink);
        table(liquid, sink);
    }
}

fn degrees(value: f64) -> String {
    format_si(value, Temperature)
}

fn density(value: f64) -> String {
    format_si(value, Density)
}

fn temperature(liquid: &Liquid, sink: &Sink) {
    let at = liquid.temperature_c;
    if at.value < liquid.coldest_c.value || at.value > liquid.hottest_c.value {
        let message = format!(
            "`temperature` of `{}` is {}, outside its range {} to {}",
            liquid.name.value,
            degrees(at.value),
            degrees(liquid.coldest_c.value),
            degrees(liquid.hottest_c.value)
        );
        let hint = "widen the range, or give the density at a temperature of service";
        sink.report(Code::OutsideRange, at.span, message, hint);
    }
}

/// The density stays within half and double of the stated one.
fn expansion(liquid: &Liquid, sink: &Sink) {
    let Thermal::Expansion { .. } = liquid.thermal.value else { return };
    let stated = liquid.density_kg_m3.value;
    for end in [liquid.coldest_c, liquid.hottest_c] {
        let there = liquid.density_at(end.value);
        if !(0.5 * stated..=2.0 * stated).contains(&there) {
            let message = format!(
                "`expansion` of `{}` makes its density {} at {}",
                liquid.name.value,
                density(there),
                degrees(end.value)
            );
            let hint = "check the coefficient: water has 2.1e-4 /K, oils about 8e-4 /K";
            sink.report(Code::OutOfRange, liquid.thermal.span, message, hint);
            return;
        }
    }
}

/// The tables hold for the liquid in service.
fn petroleum(liquid: &Liquid, sink: &Sink) {
    if let Some(why) = liquid.beyond(liquid.temperature_c.value) {
        let message = format!("`expansion` of `{}`: {why}", liquid.name.value);
        let hint = "check density, temperature and range, or write density_table for this liquid";
        sink.report(Code::OutOfRange, liquid.thermal.span, message, hint);
    }
}

/// The rows cover the range of service and agree with the stated density.
fn table(liquid: &Liquid, sink: &Sink) {
    let Thermal::Table { rows } = &liquid.thermal.value else { return };
    let (Some(first), Some(last)) = (rows.first(), rows.last()) else { return };
    let span = liquid.thermal.span;
    if first.0 > liquid.coldest_c.value || last.0 < liquid.hottest_c.value {
        let message = format!(
            "`density_table` of `{}` covers {} to {}, its range is {} to {}",
            liquid.name.value,
            degrees(first.0),
            degrees(last.0),
            degrees(liquid.coldest_c.value),
            degrees(liquid.hottest_c.value)
        );
        sink.report(Code::DensityTable, span, message, "add rows, or narrow the range");
        return;
    }
    let stated = liquid.density_kg_m3;
    let read = liquid.density_at(liquid.temperature_c.value);
    let apart = (read - stated.value).abs() / stated.value;
    if apart > liquid.uncertainty.value.max(1e-4) {
        let message = format!(
            "`density` of `{}` is {}, its table gives {} at {}: further apart than the uncertainty",
            liquid.name.value,
            density(stated.value),
            density(read),
            degrees(liquid.temperature_c.value)
        );
        sink.report(Code::DensityTable, stated.span, message, "correct one of the two");
    }
}

/// Densities rise and surfaces fall from layer to layer.
pub(super) fn layers(draft: &Draft, sink: &Sink) {
    let mut above = draft.liquid.as_ref();
    let mut surface: Option<Located<f64>> = None;
    for layer in &draft.below {
        if let Some(above) = above
            && layer.liquid.density_kg_m3.value < above.density_kg_m3.value
        {
            let message = format!(
                "`{}` with {} lies below `{}` with {}: density falls with depth",
                layer.liquid.name.value,
                density(layer.liquid.density_kg_m3.value),
                above.name.value,
                density(above.density_kg_m3.value)
            );
            let hint = "write the layers from the top down; the heavier liquid lies below";
            sink.report(Code::DensityOrder, layer.liquid.density_kg_m3.span, message, hint);
        }
        above = Some(&layer.liquid);
        if let Some(surface) = surface.filter(|surface| layer.surface_m.value >= surface.value) {
            let message = format!(
                "`surface` of `{}` is {}, not below that of the layer above it, {}",
                layer.liquid.name.value,
                format_si(layer.surface_m.value, Length),
                format_si(surface.value, Length)
            );
            let hint = "write the layers from the top down";
            sink.report(Code::LayerOrder, layer.surface_m.span, message, hint);
        }
        surface = Some(layer.surface_m);
    }
    above_tank(draft, sink);
}

/// The uppermost interface lies in the tank.
fn above_tank(draft: &Draft, sink: &Sink) {
    let shell = draft.vessel.as_ref().and_then(super::super::model::Vessel::height_m);
    if let (Some(layer), Some(shell_m)) = (draft.below.first(), shell)
        && layer.surface_m.value > shell_m
    {
        let message = format!(
            "`surface` of `{}` is {}, above the shell top, {}",
            layer.liquid.name.value,
            format_si(layer.surface_m.value, Length),
            format_si(shell_m, Length)
        );
        let hint = "give the height of the top of this layer above the datum";
        sink.report(Code::LayerOrder, layer.surface_m.span, message, hint);
    }
}

/// lowest <= pressure <= highest.
pub(super) fn gas(draft: &Draft, sink: &Sink) {
    let Some(Gas::Held { lowest_pa, pressure_pa, highest_pa }) = &draft.gas else { return };
    for (low, low_key, high, high_key) in [
        (lowest_pa, "lowest", pressure_pa, "pressure"),
        (pressure_pa, "pressure", highest_pa, "highest"),
    ] {
        if low.value > high.value {
            let message = format!(
                "`{low_key}` in [gas] is {}, above `{high_key}`, {}",
                pascals(low.value),
                pascals(high.value)
            );
            let hint = "lowest is the vacuum setting, highest the relief setting, both gauge";
            sink.report(Code::ReversedRange, low.span, message, hint);
        }
    }
}
