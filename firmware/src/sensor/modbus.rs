//! One register of a Modbus RTU sensor as a count.
//!
//! Modbus Application Protocol V1.1b3, 6.3 and 6.4 (functions 3 and 4), 7 (exceptions); Modbus over
//! Serial Line V1.02, 2.5.1 (RTU frame), 6.2.2 (CRC). A *unit* is the address of a sensor on the
//! line. An answer counts only as a whole: its check sum, unit, function, byte count and length are
//! compared with the question before a byte of it is used. Every wait ends.

use crc::{CRC_16_MODBUS, Crc};
use embedded_io::{Read, ReadReady, Write};
use strake_core::plan::SignalKind;

use crate::board::{Clock, CountSource, SensorError};

/// By a table: 512 bytes of flash save some two thousand instructions in each cycle.
const CRC: Crc<u16> = Crc::<u16>::new(&CRC_16_MODBUS);

/// Bytes kept of an answer; the longest good one has nine.
const FRAME_BYTES: usize = 16;

/// Bytes thrown away before a question, at most.
const STALE_BYTES: usize = 256;

/// Which table of the sensor is read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[repr(u8)]
pub enum Function {
    /// Read holding registers.
    Holding = 3,
    /// Read input registers.
    Input = 4,
}

/// How the number lies in the registers. A plan names it by the number of its place here, from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// One register without sign.
    U16,
    /// One register in two's complement.
    I16,
    /// Two registers without sign, the higher half first.
    U32,
}

impl Form {
    const fn registers(self) -> u8 {
        match self {
            Self::U16 | Self::I16 => 1,
            Self::U32 => 2,
        }
    }
}

/// Where a count stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Place {
    /// Address of the sensor on the line, 1 to 247.
    pub unit: u8,
    /// Table.
    pub function: Function,
    /// Number of the first register, counted from zero as on the line.
    pub register: u16,
    /// Form of the number.
    pub form: Form,
}

impl Place {
    /// Where a plan says that the count stands; `None` when it names no register, or one in a form
    /// that this driver does not know.
    #[must_use]
    pub const fn of(signal: SignalKind) -> Option<Self> {
        let SignalKind::Register { unit, function, register, coding } = signal else { return None };
        let function = match function {
            3 => Function::Holding,
            4 => Function::Input,
            _ => return None,
        };
        let form = match coding {
            0 => Form::U16,
            1 => Form::I16,
            2 => Form::U32,
            _ => return None,
        };
        Some(Self { unit, function, register, form })
    }
}

/// How long the driver waits.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Waits {
    /// From the question to the end of the answer, milliseconds.
    pub answer_ms: u64,
    /// Silence that ends a frame, milliseconds: 3.5 characters or more (4 at 9,600 baud).
    pub silence_ms: u64,
}

/// A sensor's register, read over a line.
///
/// While it waits the driver asks the line again and again; a line may doze for a fraction of a
/// millisecond in `read_ready`.
#[derive(Debug)]
pub struct ModbusSource<L, C> {
    line: L,
    clock: C,
    /// Where the count stands unless a plan says otherwise.
    preset: Place,
    /// Where the count is read; `None` when the plan names a place that this driver cannot ask for.
    place: Option<Place>,
    waits: Waits,
}

impl<L: Read + ReadReady + Write, C: Clock> ModbusSource<L, C> {
    /// A source that reads `place` over `line`, unless a plan names another register.
    pub const fn new(line: L, clock: C, place: Place, waits: Waits) -> Self {
        Self { line, clock, preset: place, place: Some(place), waits }
    }

    fn next_byte(&mut self) -> Result<Option<u8>, SensorError> {
        if !self.line.read_ready().map_err(|_| SensorError::Converter)? {
            return Ok(None);
        }
        let mut byte = [0];
        let count = self.line.read(&mut byte).map_err(|_| SensorError::Converter)?;
        let [byte] = byte;
        Ok((count == 1).then_some(byte))
    }

    fn ask(&mut self, place: Place) -> Result<(), SensorError> {
        for _ in 0..STALE_BYTES {
            if self.next_byte()?.is_none() {
                break;
            }
        }
        let question = question(place);
        let mut rest = &question[..];
        while !rest.is_empty() {
            let taken = self.line.write(rest).map_err(|_| SensorError::Converter)?;
            // A line that takes nothing, or more than it was given, is none.
            rest = rest.get(taken..).filter(|_| taken > 0).ok_or(SensorError::Converter)?;
        }
        self.line.flush().map_err(|_| SensorError::Converter)
    }

    /// Gathers bytes until a frame is whole and the line silent, or the time is over.
    // One function in every image, so that the instructions of this wait can be told apart.
    #[inline(never)]
    fn answer(&mut self) -> Result<Answer, SensorError> {
        let asked_ms = self.clock.now_ms();
        let mut heard_ms = asked_ms;
        let mut answer = Answer::default();
        loop {
            let byte = self.next_byte()?;
            let now_ms = self.clock.now_ms();
            if let Some(byte) = byte {
                answer.push(byte);
                heard_ms = now_ms;
            }
            let silent = now_ms.saturating_sub(heard_ms) >= self.waits.silence_ms;
            let late = now_ms.saturating_sub(asked_ms) >= self.waits.answer_ms;
            if late || (silent && answer.is_whole()) {
                return Ok(answer);
            }
        }
    }
}

impl<L: Read + ReadReady + Write, C: Clock> CountSource for ModbusSource<L, C> {
    /// The register's value. A 32-bit value above the largest `i32` is an unexpected answer.
    fn read_count(&mut self) -> Result<i32, SensorError> {
        let place = self.place.ok_or(SensorError::Silent)?;
        self.ask(place)?;
        let answer = self.answer()?;
        if answer.heard == 0 {
            return Err(SensorError::Silent);
        }
        // More than was kept is no frame that can be checked.
        let frame = answer.bytes.get(..answer.heard).ok_or(SensorError::Garbled)?;
        value(place, frame)
    }

    fn read_from(&mut self, signal: SignalKind) {
        self.place = match signal {
            SignalKind::CurrentLoop => Some(self.preset),
            SignalKind::Register { .. } => Place::of(signal),
        };
    }
}

/// Bytes heard since the question; those beyond the room are counted only.
#[derive(Default)]
struct Answer {
    bytes: [u8; FRAME_BYTES],
    heard: usize,
}

impl Answer {
    fn push(&mut self, byte: u8) {
        if let Some(slot) = self.bytes.get_mut(self.heard) {
            *slot = byte;
        }
        self.heard = self.heard.saturating_add(1);
    }

    /// Whether as many bytes came as the head of the frame announces.
    fn is_whole(&self) -> bool {
        let [_, function, third, ..] = self.bytes;
        let announced = if function & 0x80 == 0 { usize::from(third) + 5 } else { 5 };
        self.heard >= 3 && self.heard >= announced
    }
}

fn question(place: Place) -> [u8; 8] {
    let [high, low] = place.register.to_be_bytes();
    let [unit, function, count] = [place.unit, place.function as u8, place.form.registers()];
    let check = CRC.checksum(&[unit, function, high, low, 0, count]);
    let [check_low, check_high] = check.to_le_bytes();
    [unit, function, high, low, 0, count, check_low, check_high]
}

/// The value that a frame carries, if it is the answer to the question about `place`.
fn value(place: Place, frame: &[u8]) -> Result<i32, SensorError> {
    let (body, check) = frame.split_last_chunk::<2>().ok_or(SensorError::Garbled)?;
    if CRC.checksum(body) != u16::from_le_bytes(*check) {
        return Err(SensorError::Garbled);
    }
    let (head, data) = body.split_first_chunk::<3>().ok_or(SensorError::Garbled)?;
    let &[unit, function, third] = head;
    let asked = place.function as u8;
    if unit != place.unit {
        return Err(SensorError::Unexpected);
    }
    if function == asked | 0x80 && data.is_empty() {
        return Err(SensorError::Exception);
    }
    if function != asked || usize::from(third) != data.len() {
        return Err(SensorError::Unexpected);
    }
    match (place.form, data) {
        (Form::U16, &[high, low]) => Some(i32::from(u16::from_be_bytes([high, low]))),
        (Form::I16, &[high, low]) => Some(i32::from(i16::from_be_bytes([high, low]))),
        (Form::U32, &[a, b, c, d]) => i32::try_from(u32::from_be_bytes([a, b, c, d])).ok(),
        _ => None,
    }
    .ok_or(SensorError::Unexpected)
}

#[cfg(test)]
mod tests;
