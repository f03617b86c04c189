//! The plan's bytes, format 1. All numbers little endian, f32 as IEEE 754.
//!
//! | part | bytes |
//! | --- | --- |
//! | magic `SKP`, format 1 | 4 |
//! | serial u64, device id (length u8, bytes) | 9 + n |
//! | gravity, shell top, overflow, floor, rise, fall: f32 | 24 |
//! | flags u8: 1 closed, 2 provisional | 1 |
//! | liquid: band 3 f32; table uncertainty f32, points u8, 2 f32 each; temperature sensor u8 (0 or 1, then 3 f32); layers u8, 5 f32 each; products u8, 3 f32 each | |
//! | gas: lowest, nominal, highest f32 | 12 |
//! | outside u8, 5 f32 each (highest, lowest, band) | |
//! | level sensor, see the code | |
//! | alarm: warn, alarm, inward (u8 0 or 1 first); each 2 f32, 2 u32, u8; response, sounds again u32 | |
//! | logging: 3 u32 | 12 |
//! | parts u8, each: see the code | |
//! | names: one per part, length u8, UTF-8 bytes; then the tank's name | |
//! | sections, each at most once, by rising tag: tag u8, length u16, bytes; none need stand | |
//! | section 1, filling: window u32; limit levels u8, rows u8; f32 per limit, 2 f32 per row | |
//! | section 2, why a short margin was accepted: UTF-8 | |
//!
//! A reader that meets another format refuses; formats are never reused.

mod parts;
mod reader;
mod sections;

pub use sections::{REASON_BYTES_MAX, accepted_margin, append_accepted_margin};

use super::{
    AlarmPlan, LevelPlan, LevelSensor, LiquidPlan, LoggingPlan, NAME_BYTES_MAX, Plan, PlanError,
    PlanHeader, Reference, SignalKind, TemperaturePlan, ThresholdPlan,
};
pub use crate::cursor::Fetch;
use crate::cursor::Sink;
use crate::liquid::{Band, DensityTable, Gas, Layer, Outside};
use heapless::Vec;
use reader::Reader;

/// Most bytes of a plan: it fits one journal sector beside a slot header.
pub const PLAN_BYTES_MAX: usize = 3840;
/// A name: of a part, a tank or a device.
pub type Name = heapless::String<NAME_BYTES_MAX>;
/// Format number in the fourth byte.
pub const PLAN_FORMAT: u8 = 1;
const MAGIC: [u8; 3] = *b"SKP";

/// Writes a plan with its names; gives the number of bytes.
///
/// # Errors
/// [`PlanError::TooLarge`] when it does not fit `out`; whatever [`Plan::check`] finds.
pub fn encode(
    header: &PlanHeader,
    plan: &Plan,
    tank_name: &str,
    part_names: &[&str],
    out: &mut [u8],
) -> Result<usize, PlanError> {
    plan.check()?;
    if part_names.len() != plan.parts.len() {
        return Err(PlanError::Names);
    }
    let mut sink = Sink::new(out);
    sink.bytes(&MAGIC);
    sink.u8(PLAN_FORMAT);
    sink.u64(header.serial);
    text(&mut sink, &header.device_id)?;
    put_site(&mut sink, plan, header.provisional);
    put_liquid(&mut sink, &plan.liquid)?;
    put_surroundings(&mut sink, plan)?;
    put_level(&mut sink, &plan.level);
    put_alarm(&mut sink, &plan.alarm);
    for number in
        [plan.logging.interval_ms, plan.logging.idle_interval_ms, plan.logging.flush_after_ms]
    {
        sink.u32(number);
    }
    sink.u8(count(plan.parts.len())?);
    for part in &plan.parts {
        parts::put(&mut sink, part, &plan.numbers)?;
    }
    for name in part_names {
        text(&mut sink, name)?;
    }
    text(&mut sink, tank_name)?;
    sections::put(&mut sink, plan)?;
    sink.finish().filter(|&used| used <= PLAN_BYTES_MAX).ok_or(PlanError::TooLarge)
}

/// Reads a plan and checks it. Names are left out; [`names`] reads them.
///
/// # Errors
/// What is wrong with the bytes or the numbers; never a guess.
pub fn decode(bytes: &[u8]) -> Result<(PlanHeader, Plan), PlanError> {
    if bytes.len() > PLAN_BYTES_MAX {
        return Err(PlanError::TooLarge);
    }
    let mut plan = Plan::empty();
    let header = decode_with(&mut { bytes }, &mut plan, take_text)?;
    Ok((header, plan))
}

/// Reads a plan from wherever its bytes come, over what `plan` holds, and checks it. The device has
/// no room for a second plan or for all the bytes; after an error it reads the old one again. It
/// asks for no text: the header's device is left empty, the names are passed over.
///
/// # Errors
/// What is wrong with the bytes or the numbers. `plan` is then no plan.
pub fn decode_into(bytes: &mut dyn Fetch, plan: &mut Plan) -> Result<PlanHeader, PlanError> {
    decode_with(bytes, plan, pass_text)
}

/// Takes a name, or only its bytes.
type TakeText = fn(&mut Reader<'_>) -> Option<Name>;

fn decode_with(
    bytes: &mut dyn Fetch,
    plan: &mut Plan,
    text: TakeText,
) -> Result<PlanHeader, PlanError> {
    let mut source = Reader::new(bytes);
    let mut start = [0; 4];
    source.fill(&mut start);
    source.whole().ok_or(PlanError::NotAPlan)?;
    let [m0, m1, m2, format] = start;
    if [m0, m1, m2] != MAGIC {
        return Err(PlanError::NotAPlan);
    }
    if format != PLAN_FORMAT {
        return Err(PlanError::Format);
    }
    let header = take(&mut source, plan, text).ok_or(PlanError::Damaged)?;
    for _ in 0..=plan.parts.len() {
        text(&mut source).ok_or(PlanError::Names)?;
    }
    source.whole().ok_or(PlanError::Names)?;
    sections::take(&mut source, plan).ok_or(PlanError::Damaged)?;
    plan.check()?;
    Ok(header)
}

fn take(source: &mut Reader<'_>, plan: &mut Plan, text: TakeText) -> Option<PlanHeader> {
    let mut header =
        PlanHeader { serial: source.u64(), device_id: text(source)?, provisional: false };
    plan.gravity_m_s2 = source.f32();
    plan.shell_top_m = source.f32();
    plan.overflow_m = source.f32();
    plan.floor_m = source.f32();
    plan.highest_rise_m_s = source.f32();
    plan.highest_fall_m_s = source.f32();
    let flags = source.u8();
    if flags > 0b11 {
        return None;
    }
    plan.closed = flags & 1 != 0;
    header.provisional = flags & 2 != 0;
    plan.liquid = take_liquid(source)?;
    plan.gas = Gas { lowest_pa: source.f32(), nominal_pa: source.f32(), highest_pa: source.f32() };
    plan.outside = take_list(source, |source| {
        Some(Outside {
            highest_m: source.f32(),
            lowest_m: source.f32(),
            density: take_band(source),
        })
    })?;
    plan.level = take_level(source)?;
    plan.alarm = take_alarm(source)?;
    plan.logging = LoggingPlan {
        interval_ms: source.u32(),
        idle_interval_ms: source.u32(),
        flush_after_ms: source.u32(),
    };
    plan.parts.clear();
    plan.numbers.clear();
    for _ in 0..source.u8() {
        plan.parts.push(parts::take(source, &mut plan.numbers)?).ok()?;
    }
    source.whole().map(|()| header)
}

/// The names in a plan's bytes: calls `part` with each part's index and name, and gives the tank's.
///
/// # Errors
/// What is wrong with the bytes; see [`decode`].
pub fn names(bytes: &[u8], part: impl FnMut(usize, &str)) -> Result<Name, PlanError> {
    decode(bytes)?;
    Ok(names_and_rest(bytes, part)?.0)
}

/// The tank's name, and what stands behind it.
fn names_and_rest(
    bytes: &[u8],
    mut part: impl FnMut(usize, &str),
) -> Result<(Name, &[u8]), PlanError> {
    let mut plan = Plan::empty();
    let mut rest = bytes.get(4..).ok_or(PlanError::NotAPlan)?;
    let mut source = Reader::new(&mut rest);
    take(&mut source, &mut plan, take_text).ok_or(PlanError::Damaged)?;
    for index in 0..plan.parts.len() {
        let name: Name = take_text(&mut source).ok_or(PlanError::Names)?;
        part(index, &name);
    }
    let tank = take_text(&mut source).ok_or(PlanError::Names)?;
    source.whole().ok_or(PlanError::Names)?;
    Ok((tank, rest))
}

fn text(sink: &mut Sink<'_>, text: &str) -> Result<(), PlanError> {
    if text.len() > NAME_BYTES_MAX {
        return Err(PlanError::Names);
    }
    sink.u8(count(text.len())?);
    sink.bytes(text.as_bytes());
    Ok(())
}

fn take_text(source: &mut Reader<'_>) -> Option<Name> {
    let mut bytes = [0; NAME_BYTES_MAX];
    let text = bytes.get_mut(..usize::from(source.u8()))?;
    source.fill(text);
    core::str::from_utf8(text).ok()?.try_into().ok()
}

/// Passes over a name.
fn pass_text(source: &mut Reader<'_>) -> Option<Name> {
    let mut bytes = [0; NAME_BYTES_MAX];
    let text = bytes.get_mut(..usize::from(source.u8()))?;
    source.fill(text);
    Some(Name::new())
}

fn count(length: usize) -> Result<u8, PlanError> {
    u8::try_from(length).map_err(|_| PlanError::TooLarge)
}

fn take_list<T, const N: usize>(
    source: &mut Reader<'_>,
    mut take: impl FnMut(&mut Reader<'_>) -> Option<T>,
) -> Option<Vec<T, N>> {
    let mut list = Vec::new();
    for _ in 0..source.u8() {
        list.push(take(source)?).ok()?;
    }
    Some(list)
}

fn flag(source: &mut Reader<'_>) -> Option<bool> {
    match source.u8() {
        0 => Some(false),
        1 => Some(true),
        _ => None,
    }
}

fn put_band(sink: &mut Sink<'_>, band: &Band) {
    sink.f32(band.estimate_kg_m3);
    sink.f32(band.low_kg_m3);
    sink.f32(band.high_kg_m3);
}

fn take_band(source: &mut Reader<'_>) -> Band {
    Band { estimate_kg_m3: source.f32(), low_kg_m3: source.f32(), high_kg_m3: source.f32() }
}

fn put_site(sink: &mut Sink<'_>, plan: &Plan, provisional: bool) {
    for number in [
        plan.gravity_m_s2,
        plan.shell_top_m,
        plan.overflow_m,
        plan.floor_m,
        plan.highest_rise_m_s,
        plan.highest_fall_m_s,
    ] {
        sink.f32(number);
    }
    sink.u8(u8::from(plan.closed) | u8::from(provisional) << 1);
}

fn put_liquid(sink: &mut Sink<'_>, liquid: &LiquidPlan) -> Result<(), PlanError> {
    put_band(sink, &liquid.top);
    sink.f32(liquid.table_uncertainty);
    sink.u8(count(liquid.table.points().len())?);
    for &(temperature_c, density_kg_m3) in liquid.table.points() {
        sink.f32(temperature_c);
        sink.f32(density_kg_m3);
    }
    sink.u8(u8::from(liquid.temperature.is_some()));
    if let Some(sensor) = &liquid.temperature {
        sink.f32(sensor.celsius_at_zero);
        sink.f32(sensor.celsius_per_count_16);
        sink.f32(sensor.uncertainty_k);
    }
    sink.u8(count(liquid.below.len())?);
    for layer in &liquid.below {
        sink.f32(layer.surface_m);
        sink.f32(layer.surface_uncertainty_m);
        put_band(sink, &layer.density);
    }
    sink.u8(count(liquid.products.len())?);
    for product in &liquid.products {
        put_band(sink, product);
    }
    Ok(())
}

fn take_liquid(source: &mut Reader<'_>) -> Option<LiquidPlan> {
    let top = take_band(source);
    let table_uncertainty = source.f32();
    let points: Vec<(f32, f32), 8> =
        take_list(source, |source| Some((source.f32(), source.f32())))?;
    let temperature = if flag(source)? {
        Some(TemperaturePlan {
            celsius_at_zero: source.f32(),
            celsius_per_count_16: source.f32(),
            uncertainty_k: source.f32(),
        })
    } else {
        None
    };
    let below = take_list(source, |source| {
        Some(Layer {
            surface_m: source.f32(),
            surface_uncertainty_m: source.f32(),
            density: take_band(source),
        })
    })?;
    let products = take_list(source, |source| Some(take_band(source)))?;
    let table = DensityTable::new(&points)?;
    Some(LiquidPlan { top, table, table_uncertainty, temperature, below, products })
}

fn put_surroundings(sink: &mut Sink<'_>, plan: &Plan) -> Result<(), PlanError> {
    sink.f32(plan.gas.lowest_pa);
    sink.f32(plan.gas.nominal_pa);
    sink.f32(plan.gas.highest_pa);
    sink.u8(count(plan.outside.len())?);
    for outside in &plan.outside {
        sink.f32(outside.highest_m);
        sink.f32(outside.lowest_m);
        put_band(sink, &outside.density);
    }
    Ok(())
}

fn put_level(sink: &mut Sink<'_>, level: &LevelPlan) {
    match level.sensor {
        LevelSensor::Surface => sink.u8(0),
        LevelSensor::Head { at_m, reference: Reference::GasSpace } => {
            sink.u8(1);
            sink.f32(at_m);
        }
        LevelSensor::Head { at_m, reference: Reference::Atmosphere { offset_pa } } => {
            sink.u8(2);
            sink.f32(at_m);
            for offset in offset_pa {
                sink.f32(offset);
            }
        }
    }
    match level.signal {
        SignalKind::CurrentLoop => sink.u8(0),
        SignalKind::Register { unit, function, register, coding } => {
            sink.u8(1);
            sink.u8(unit);
            sink.u8(function);
            sink.u16(register);
            sink.u8(coding);
        }
    }
    sink.i32(level.zero_count_16);
    for number in [
        level.value_at_zero,
        level.value_per_count_16,
        level.uncertainty,
        level.uncertainty_per_distance,
        level.reference_m,
    ] {
        sink.f32(number);
    }
    sink.u32(level.failed_after_ms);
}

fn take_level(source: &mut Reader<'_>) -> Option<LevelPlan> {
    let sensor = match source.u8() {
        0 => LevelSensor::Surface,
        1 => LevelSensor::Head { at_m: source.f32(), reference: Reference::GasSpace },
        2 => {
            let at_m = source.f32();
            let offset_pa = [source.f32(), source.f32(), source.f32()];
            LevelSensor::Head { at_m, reference: Reference::Atmosphere { offset_pa } }
        }
        _ => return None,
    };
    let signal = match source.u8() {
        0 => SignalKind::CurrentLoop,
        1 => SignalKind::Register {
            unit: source.u8(),
            function: source.u8(),
            register: source.u16(),
            coding: source.u8(),
        },
        _ => return None,
    };
    Some(LevelPlan {
        sensor,
        signal,
        zero_count_16: source.i32(),
        value_at_zero: source.f32(),
        value_per_count_16: source.f32(),
        uncertainty: source.f32(),
        uncertainty_per_distance: source.f32(),
        reference_m: source.f32(),
        failed_after_ms: source.u32(),
    })
}

fn put_threshold(sink: &mut Sink<'_>, threshold: &ThresholdPlan) {
    sink.f32(threshold.utilisation);
    sink.f32(threshold.deadband);
    sink.u32(threshold.on_delay_ms);
    sink.u32(threshold.off_delay_ms);
    sink.u8(u8::from(threshold.latch));
}

fn take_threshold(source: &mut Reader<'_>) -> Option<ThresholdPlan> {
    Some(ThresholdPlan {
        utilisation: source.f32(),
        deadband: source.f32(),
        on_delay_ms: source.u32(),
        off_delay_ms: source.u32(),
        latch: flag(source)?,
    })
}

fn put_alarm(sink: &mut Sink<'_>, alarm: &AlarmPlan) {
    put_threshold(sink, &alarm.warn);
    put_threshold(sink, &alarm.alarm);
    sink.u8(u8::from(alarm.inward.is_some()));
    if let Some(inward) = &alarm.inward {
        put_threshold(sink, inward);
    }
    sink.u32(alarm.response_time_ms);
    sink.u32(alarm.sounds_again_after_ms);
}

fn take_alarm(source: &mut Reader<'_>) -> Option<AlarmPlan> {
    Some(AlarmPlan {
        warn: take_threshold(source)?,
        alarm: take_threshold(source)?,
        inward: if flag(source)? { Some(take_threshold(source)?) } else { None },
        response_time_ms: source.u32(),
        sounds_again_after_ms: source.u32(),
    })
}

#[cfg(test)]
mod tests;
