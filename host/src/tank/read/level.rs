//! `[level]` and `liquid.temperature_signal`.

use super::field::{Field, Range, field};
use super::section::Section;
use crate::tank::finding::{Located, Span};
use crate::tank::model::{
    Count, LevelSensor, Modbus, PressureReference, Sensing, Signal, TemperatureSignal,
    TemperatureSource,
};
use crate::units::Quantity::{
    self, AbsolutePressure, Length, Pressure, Ratio, TemperatureDifference, Time,
};

#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Head,
    Innage,
    Ullage,
}

/// The three kinds of sensor with what they sense.
impl Kind {
    const WORDS: [(&'static str, Self); 3] =
        [("head", Self::Head), ("innage", Self::Innage), ("ullage", Self::Ullage)];

    const fn senses(self) -> Quantity {
        match self {
            Self::Head => Pressure,
            Self::Innage | Self::Ullage => Length,
        }
    }
}

pub(super) fn level(root: &mut Section<'_>) -> Option<LevelSensor> {
    let mut section = root.table("level", "[level] with sensor, at, uncertainty and signal")?;
    let span = section.span;
    section.refuse("check", "one level sensor is read; leave the second one out");
    let write = "\"head\" for a pressure transmitter, \"innage\" for a level above a zero, \
                 \"ullage\" for a distance down from above";
    let Some(kind) = section.need_choice("sensor", &Kind::WORDS, write) else {
        // Without its kind nothing else can be checked.
        return None;
    };
    let kind = kind.value;
    let sensing = sensing(&mut section, kind);
    let write = match kind {
        Kind::Head => "\"0.2 kPa\", the half-width that a reading never exceeds, as a pressure",
        _ => "\"5 mm\", the half-width that a reading never exceeds, as a length",
    };
    let uncertainty = section.need(field("uncertainty", kind.senses(), Range::NOT_NEGATIVE, write));
    let absolute = matches!(
        sensing,
        Some(Sensing::Head { reference, .. })
            if matches!(reference.value, PressureReference::Absolute { .. })
    );
    let sensed = if absolute { AbsolutePressure } else { kind.senses() };
    let signal = signal(&mut section, kind, sensed);
    let failed_after = section.take(field(
        "failed_after",
        Time,
        Range::POSITIVE,
        "\"60 s\", without a valid reading until \"cannot see\"",
    ));
    section.finish();
    Some(LevelSensor {
        sensing: sensing?,
        uncertainty: uncertainty?,
        signal,
        failed_after_s: failed_after,
        span,
    })
}

fn sensing(section: &mut Section<'_>, kind: Kind) -> Option<Sensing> {
    let write = match kind {
        Kind::Head => "\"0.15 m\", the height of the diaphragm; below the datum it is negative",
        Kind::Innage => "\"0 m\", the height of the sensor's zero",
        Kind::Ullage => "\"9.8 m\", the height that distances count from",
    };
    let at = section.need(field("at", Length, Range::ANY, write));
    match kind {
        Kind::Head => {
            let reference = reference(section);
            Some(Sensing::Head { at_m: at?, reference: reference? })
        }
        Kind::Innage => Some(Sensing::Innage { zero_m: at? }),
        Kind::Ullage => {
            let write = "\"0.3 %\", the part of the uncertainty that grows with the distance";
            let share = Range::between(0.0, 0.5);
            let of_distance = section.need(field("uncertainty_of_distance", Ratio, share, write));
            Some(Sensing::Ullage { reference_m: at?, uncertainty_of_distance: of_distance? })
        }
    }
}

fn reference(section: &mut Section<'_>) -> Option<Located<PressureReference>> {
    const WORDS: [(&str, u8); 3] = [("atmosphere", 0), ("gas space", 1), ("absolute", 2)];
    let write = "\"atmosphere\" for a vented transmitter, \"gas space\" for a differential one, \
                 \"absolute\" for one sealed against vacuum";
    let word = section.need_choice("reference", &WORDS, write)?;
    let reference = match word.value {
        0 => PressureReference::Atmosphere,
        1 => PressureReference::GasSpace,
        _ => {
            let air = section.need_rising_pair(field(
                "atmosphere",
                AbsolutePressure,
                Range::between(3e4, 1.2e5),
                "[\"97 kPa\", \"105 kPa\"], lowest and highest pressure of the air at the site",
            ));
            let [lowest, highest] = air?;
            PressureReference::Absolute { lowest_pa: lowest.value, highest_pa: highest.value }
        }
    };
    Some(Located::new(reference, word.span))
}

fn signal(section: &mut Section<'_>, kind: Kind, sensed: Quantity) -> Option<Located<Signal>> {
    const WRITE: &str = "write signal = { current_loop = [..] } or { modbus = {..} }";
    let mut table = section.table("signal", "{ current_loop = [..] } or { modbus = {..} }")?;
    let span = table.span;
    let (span_write, count_write) = match kind {
        Kind::Head => ("[\"0 kPa\", \"150 kPa\"], at 4 mA and at 20 mA", "\"10 Pa\", one count"),
        _ => ("[\"0 m\", \"10 m\"], at 4 mA and at 20 mA", "\"1 mm\", the value of one count"),
    };
    let read = if table.one_of(&["current_loop", "modbus"], WRITE)? == "modbus" {
        let scale = field("scale", kind.senses(), Range::POSITIVE, count_write);
        modbus(&mut table, scale).map(Signal::Modbus)
    } else {
        let ends = field("current_loop", sensed, Range::ANY, span_write);
        let ends = table.need_rising_pair(ends);
        ends.map(|[low, high]| Signal::CurrentLoop { at_4_ma: low.value, at_20_ma: high.value })
    };
    table.finish();
    read.map(|signal| Located::new(signal, span))
}

fn modbus(parent: &mut Section<'_>, scale: Field) -> Option<Modbus> {
    const COUNTS: [(&str, Count); 4] =
        [("u16", Count::U16), ("i16", Count::I16), ("u32", Count::U32), ("f32", Count::F32)];
    const WRITE: &str = "{ unit = 1, function = 4, register = 0, count = \"u16\", scale = .. }";
    let mut table = parent.need_table("modbus", WRITE)?;
    let unit = table.need_integer("unit", 1, 247, "1, the address of the unit");
    let function =
        table.need_integer("function", 3, 4, "3 for holding registers, 4 for input registers");
    let register =
        table.need_integer("register", 0, 65_535, "0, the first register, counted from zero");
    let count = table.need_choice("count", &COUNTS, "\"u16\", \"i16\", \"u32\" or \"f32\"");
    let scale = table.need(scale);
    table.finish();
    Some(Modbus {
        unit: u8::try_from(unit?.value).ok()?,
        function: u8::try_from(function?.value).ok()?,
        register: u16::try_from(register?.value).ok()?,
        count: count?.value,
        scale: scale?.value,
    })
}

/// The temperature sensor, a key of `[liquid]`.
pub(super) fn temperature_signal(liquid: &mut Section<'_>) -> Option<TemperatureSignal> {
    const WRITE: &str = "{ modbus = {..}, uncertainty = \"1 K\" } or { scale = \"0.0625 K\", \
                         uncertainty = \"1 K\" }";
    let scale = field(
        "scale",
        TemperatureDifference,
        Range::POSITIVE,
        "\"0.0625 K\", the value of one count",
    );
    let mut table = liquid.table("temperature_signal", WRITE)?;
    let span: Span = table.span;
    let chosen = table.one_of(&["modbus", "scale"], &format!("write temperature_signal = {WRITE}"));
    let source = match chosen {
        Some("modbus") => modbus(&mut table, scale).map(TemperatureSource::Modbus),
        Some(_) => table.need(scale).map(|s| TemperatureSource::Board { scale_k: s.value }),
        None => None,
    };
    let uncertainty = table.need(field(
        "uncertainty",
        TemperatureDifference,
        Range::NOT_NEGATIVE,
        "\"1 K\", the half-width that a reading never exceeds",
    ));
    table.finish();
    Some(TemperatureSignal { source: source?, uncertainty_k: uncertainty?, span })
}
