//! The other end of the sensor bus: a Modbus RTU sensor whose registers the test sets.
//!
//! Written from Modbus Application Protocol V1.1b3, 6.3, 6.4 and 7, apart from the device's driver.

use std::collections::BTreeMap;
use std::io::{self, Read as _, Write as _};
use std::net::TcpStream;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::thread;

/// How the sensor answers.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(crate) enum Mood {
    #[default]
    Well,
    /// Says nothing.
    Silent,
    /// Answers with this exception code.
    Exception(u8),
    /// Answers with one bit of the check sum turned.
    Garbled,
    /// Answers under another unit's address.
    OtherUnit,
}

#[derive(Debug, Default)]
struct State {
    /// Values of unit 1 by register number, the same for functions 3 and 4.
    registers: BTreeMap<u16, u16>,
    mood: Mood,
    questions: u64,
}

/// Handle to the sensor; it answers on a thread of its own until the line closes.
#[derive(Clone, Debug, Default)]
pub(crate) struct Sensor(Arc<Mutex<State>>);

const UNIT: u8 = 1;

impl Sensor {
    fn state(&self) -> MutexGuard<'_, State> {
        self.0.lock().unwrap_or_else(PoisonError::into_inner)
    }

    pub(crate) fn set_register(&self, register: u16, value: u16) {
        self.state().registers.insert(register, value);
    }

    pub(crate) fn set_mood(&self, mood: Mood) {
        self.state().mood = mood;
    }

    /// Questions heard so far, whoever they were for.
    pub(crate) fn questions(&self) -> u64 {
        self.state().questions
    }

    /// Answers on `line` from now on.
    pub(crate) fn serve(&self, mut line: TcpStream) {
        let sensor = self.clone();
        thread::spawn(move || {
            let mut question = [0; 8];
            // Every question that the device asks has eight bytes.
            while line.read_exact(&mut question).is_ok() {
                if sensor.reply(&mut line, question).is_err() {
                    break;
                }
            }
        });
    }

    fn reply(&self, line: &mut TcpStream, question: [u8; 8]) -> io::Result<()> {
        let mut state = self.state();
        state.questions += 1;
        let [unit, function, high, low, count_high, count_low, check @ ..] = question;
        if check_sum(&question[..6]) != check || unit != UNIT || state.mood == Mood::Silent {
            return Ok(());
        }
        let first = u16::from_be_bytes([high, low]);
        let count = u16::from_be_bytes([count_high, count_low]);
        let mut answer = match (state.mood, state.values(function, first, count)) {
            (Mood::Exception(code), _) | (_, Err(code)) => vec![unit, function | 0x80, code],
            (_, Ok(data)) => {
                let length = u8::try_from(data.len()).unwrap_or(0);
                [&[unit, function, length], &data[..]].concat()
            }
        };
        if state.mood == Mood::OtherUnit {
            answer[0] = UNIT + 1;
        }
        let mut check = check_sum(&answer);
        if state.mood == Mood::Garbled {
            check[0] ^= 0x10;
        }
        answer.extend(check);
        line.write_all(&answer)
    }
}

impl State {
    /// The registers asked for, or the exception code of Modbus Application Protocol V1.1b3, 7.
    fn values(&self, function: u8, first: u16, count: u16) -> Result<Vec<u8>, u8> {
        const ILLEGAL_FUNCTION: u8 = 1;
        const ILLEGAL_ADDRESS: u8 = 2;
        const ILLEGAL_VALUE: u8 = 3;
        if function != 3 && function != 4 {
            return Err(ILLEGAL_FUNCTION);
        }
        if !(1..=125).contains(&count) {
            return Err(ILLEGAL_VALUE);
        }
        let mut data = Vec::new();
        for offset in 0..count {
            let register = first.checked_add(offset).ok_or(ILLEGAL_ADDRESS)?;
            let value = self.registers.get(&register).ok_or(ILLEGAL_ADDRESS)?;
            data.extend(value.to_be_bytes());
        }
        Ok(data)
    }
}

/// Modbus over Serial Line V1.02, 6.2.2: the low byte goes first.
fn check_sum(bytes: &[u8]) -> [u8; 2] {
    let crc = bytes.iter().fold(0xFFFF_u16, |crc, byte| {
        (0..8).fold(crc ^ u16::from(*byte), |crc, _| {
            if crc & 1 == 1 { (crc >> 1) ^ 0xA001 } else { crc >> 1 }
        })
    });
    crc.to_le_bytes()
}
