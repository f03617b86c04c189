//! Events: every entry that is no sample. One byte [`Entry::number`], then the fields.
//!
//! `v` is a varint, `s` a signed varint, a number the bytes of a fixed field.
//!
//! | number | entry | fields |
//! | --- | --- | --- |
//! | 2 | transition | tick v, machine 1, state before in the low and after in the high nibble 1, cause 1, utilisation f32 4, hash 8 |
//! | 3 | fault | tick v, cause 1, count v, detail s |
//! | 4 | start-up | tick v, boot v, cause 1, carried 1, missing ms v, count v |
//! | 5 | clock fix | tick v, UTC seconds v |
//! | 6 | plan change | tick v, fingerprint 8, serial v |
//! | 10 | acknowledgement | tick v, presser 1 |
//! | 11 | gap | tick v, missing samples v |

use super::TICK_LIMIT_MS;
use super::bytes::{Sink, Source};
use super::entry::{Entry, Presser, ResetCause, Transition, TransitionCause};
use crate::alarm::{AlarmState, FaultCause, MachineId};

/// Most bytes one event takes: a start-up or a clock fix stays below a transition's 23.
pub const EVENT_BYTES_MAX: usize = 24;

/// Writes an event. A sample has no place here and is passed over by the caller.
pub(super) fn write(entry: &Entry, sink: &mut Sink<'_>) {
    sink.byte(entry.number());
    sink.varint(entry.tick_ms() % TICK_LIMIT_MS);
    match *entry {
        Entry::Sample(_) => {}
        Entry::Transition(Transition { machine, from, to, cause, utilisation, hash, .. }) => {
            sink.byte(machine.number());
            sink.byte(from.number() | to.number() << 4);
            sink.byte(cause as u8);
            sink.bytes(&utilisation.to_le_bytes());
            sink.bytes(&hash.to_le_bytes());
        }
        Entry::Fault { cause, count, detail, .. } => {
            sink.byte(cause.number());
            sink.varint(count.into());
            sink.signed(detail.into());
        }
        Entry::StartUp { boot, cause, carried, missing_ms_max, count, .. } => {
            sink.varint(boot.into());
            sink.byte(cause as u8);
            sink.byte(carried);
            sink.varint(missing_ms_max.into());
            sink.varint(count.into());
        }
        Entry::ClockFix { utc_s, .. } => sink.varint(utc_s),
        Entry::PlanChange { fingerprint, serial, .. } => {
            sink.bytes(&fingerprint.to_le_bytes());
            sink.varint(serial);
        }
        Entry::Acknowledge { by, .. } => sink.byte(by as u8),
        Entry::Gap { missing, .. } => sink.varint(missing.into()),
    }
}

/// Reads an event; `None` when no writer can have written these bytes.
pub(super) fn read(source: &mut Source<'_>) -> Option<Entry> {
    let number = source.byte()?;
    let tick_ms = source.varint().filter(|&tick_ms| tick_ms < TICK_LIMIT_MS)?;
    Some(match number {
        2 => Entry::Transition(read_transition(tick_ms, source)?),
        3 => Entry::Fault {
            tick_ms,
            cause: FaultCause::from_number(source.byte()?)?,
            count: source.narrow()?,
            detail: source.narrow_signed()?,
        },
        4 => Entry::StartUp {
            tick_ms,
            boot: source.narrow()?,
            cause: ResetCause::from_number(source.byte()?)?,
            carried: source.byte()?,
            missing_ms_max: source.narrow()?,
            count: source.narrow()?,
        },
        5 => Entry::ClockFix { tick_ms, utc_s: source.varint()? },
        6 => Entry::PlanChange {
            tick_ms,
            fingerprint: u64::from_le_bytes(source.array()?),
            serial: source.varint()?,
        },
        10 => Entry::Acknowledge { tick_ms, by: Presser::from_number(source.byte()?)? },
        11 => Entry::Gap { tick_ms, missing: source.narrow()? },
        _ => return None,
    })
}

fn read_transition(tick_ms: u64, source: &mut Source<'_>) -> Option<Transition> {
    let machine = MachineId::from_number(source.byte()?)?;
    let states = source.byte()?;
    Some(Transition {
        tick_ms,
        machine,
        from: AlarmState::from_number(states & 0x0F)?,
        to: AlarmState::from_number(states >> 4)?,
        cause: TransitionCause::from_number(source.byte()?)?,
        utilisation: f32::from_le_bytes(source.array()?),
        hash: u64::from_le_bytes(source.array()?),
    })
}
