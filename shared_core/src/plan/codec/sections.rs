//! Sections behind the names: what later versions added to the format.
//!
//! A plan ends with its names, or with sections `tag u8, length u16, bytes`, by rising tag. A tag
//! that is not known here is refused: the plan asks for something that would not be done.

use super::reader::Reader;
use super::{PlanError, count, names_and_rest};
use crate::cursor::Sink;
use crate::plan::{Filling, Plan};

const FILLING: u8 = 1;
const ACCEPTED_MARGIN: u8 = 2;
/// Most bytes of the reason why a short margin was accepted.
pub const REASON_BYTES_MAX: usize = 120;

/// Writes the section of the volume curve, if there is one.
pub(super) fn put(sink: &mut Sink<'_>, plan: &Plan) -> Result<(), PlanError> {
    if !plan.filling.is_stated() {
        return Ok(());
    }
    let (limits, rows) = (count(plan.limits_m().len())?, count(plan.curve().len())?);
    sink.u8(FILLING);
    sink.u16(6 + 4 * u16::from(limits) + 8 * u16::from(rows));
    sink.u32(plan.filling.window_ms);
    sink.u8(limits);
    sink.u8(rows);
    for &number in plan.limits_m().iter().chain(plan.curve().as_flattened()) {
        sink.f32(number);
    }
    Ok(())
}

/// Reads the sections up to the end of the bytes.
pub(super) fn take(source: &mut Reader<'_>, plan: &mut Plan) -> Option<()> {
    plan.filling = Filling::NONE;
    let mut last = 0;
    // Nothing behind the names, or behind a section, is the end.
    while let Some(tag) = source.more() {
        let length = source.u16();
        if tag <= last {
            return None;
        }
        last = tag;
        match tag {
            FILLING => take_filling(source, length, plan)?,
            ACCEPTED_MARGIN => {
                for _ in 0..length {
                    source.u8();
                }
            }
            _ => return None,
        }
        source.whole()?;
    }
    Some(())
}

fn take_filling(source: &mut Reader<'_>, length: u16, plan: &mut Plan) -> Option<()> {
    let first = u16::try_from(plan.numbers.len()).ok()?;
    let (window_ms, limits, rows) = (source.u32(), source.u8(), source.u8());
    let numbers = u16::from(limits) + 2 * u16::from(rows);
    if length != 6 + 4 * numbers || rows == 0 {
        return None;
    }
    for _ in 0..numbers {
        plan.numbers.push(source.f32()).ok()?;
    }
    plan.filling = Filling { window_ms, first, limits, rows };
    Some(())
}

/// Appends why a short margin was accepted to the `used` bytes of a plan; gives their number then.
///
/// # Errors
/// [`PlanError::Names`] for a reason that is empty or too long, [`PlanError::TooLarge`] when it
/// does not fit `bytes`.
pub fn append_accepted_margin(
    bytes: &mut [u8],
    used: usize,
    reason: &str,
) -> Result<usize, PlanError> {
    let length = u16::try_from(reason.len()).map_err(|_| PlanError::Names)?;
    if length == 0 || reason.len() > REASON_BYTES_MAX {
        return Err(PlanError::Names);
    }
    let mut sink = Sink::new(bytes.get_mut(used..).ok_or(PlanError::TooLarge)?);
    sink.u8(ACCEPTED_MARGIN);
    sink.u16(length);
    sink.bytes(reason.as_bytes());
    let more = sink.finish().ok_or(PlanError::TooLarge)?;
    Some(used + more).filter(|&used| used <= super::PLAN_BYTES_MAX).ok_or(PlanError::TooLarge)
}

/// Why a short margin was accepted; `None` for a plan that says nothing of it.
///
/// # Errors
/// What is wrong with the bytes; see [`super::decode`].
pub fn accepted_margin(bytes: &[u8]) -> Result<Option<&str>, PlanError> {
    super::decode(bytes)?;
    let (_, mut rest) = names_and_rest(bytes, |_, _| {})?;
    while let [tag, low, high, section @ ..] = rest {
        let length = usize::from(u16::from_le_bytes([*low, *high]));
        let (section, behind) = section.split_at_checked(length).ok_or(PlanError::Damaged)?;
        if *tag == ACCEPTED_MARGIN {
            return core::str::from_utf8(section).map(Some).map_err(|_| PlanError::Damaged);
        }
        rest = behind;
    }
    Ok(None)
}

#[cfg(test)]
mod tests;
