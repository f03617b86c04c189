use core::cell::Cell;
use core::convert::Infallible;
use std::collections::VecDeque;

use embedded_io::ErrorType;

use super::*;

/// A line that answers each question with a script; time passes as it is asked for.
struct Line {
    script: VecDeque<Vec<u8>>,
    incoming: VecDeque<u8>,
    sent: Vec<u8>,
}

struct Ticking(Cell<u64>);

impl Clock for Ticking {
    fn now_ms(&self) -> u64 {
        self.0.set(self.0.get() + 1);
        self.0.get()
    }
}

impl ErrorType for Line {
    type Error = Infallible;
}

impl ReadReady for Line {
    fn read_ready(&mut self) -> Result<bool, Infallible> {
        Ok(!self.incoming.is_empty())
    }
}

impl Read for Line {
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Infallible> {
        out[0] = self.incoming.pop_front().expect("asked for a byte that is not there");
        Ok(1)
    }
}

impl Write for Line {
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Infallible> {
        self.sent.extend(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> Result<(), Infallible> {
        self.incoming.extend(self.script.pop_front().unwrap_or_default());
        Ok(())
    }
}

const LEVEL: Place = Place { unit: 0x11, function: Function::Input, register: 8, form: Form::U16 };
const WAITS: Waits = Waits { answer_ms: 100, silence_ms: 4 };

fn source(place: Place, script: &[&[u8]]) -> ModbusSource<Line, Ticking> {
    let script = script.iter().map(|answer| answer.to_vec()).collect();
    let line = Line { script, incoming: VecDeque::new(), sent: Vec::new() };
    ModbusSource::new(line, Ticking(Cell::new(0)), place, WAITS)
}

/// The generating procedure of Modbus over Serial Line V1.02, 6.2.2, bit by bit.
fn check_sum(bytes: &[u8]) -> [u8; 2] {
    let mut crc = 0xFFFF_u16;
    for byte in bytes {
        crc ^= u16::from(*byte);
        for _ in 0..8 {
            crc = if crc & 1 == 1 { (crc >> 1) ^ 0xA001 } else { crc >> 1 };
        }
    }
    crc.to_le_bytes()
}

fn framed(body: &[u8]) -> Vec<u8> {
    [body, &check_sum(body)].concat()
}

#[test]
fn check_sums_are_those_of_the_specification() {
    // Modbus over Serial Line V1.02, 6.2.2: the frame 02 07 ends in 41 12.
    assert_eq!(CRC.checksum(&[0x02, 0x07]).to_le_bytes(), [0x41, 0x12]);
    assert_eq!(check_sum(&[0x02, 0x07]), [0x41, 0x12]);
    assert_eq!(question(LEVEL), [0x11, 0x04, 0x00, 0x08, 0x00, 0x01, 0xB2, 0x98]);
}

#[test]
fn values_of_every_form() {
    let cases: [(Form, &[u8], Result<i32, SensorError>); 5] = [
        (Form::U16, &[0xFF, 0xFE], Ok(65_534)),
        (Form::I16, &[0xFF, 0xFE], Ok(-2)),
        (Form::U32, &[0x00, 0x01, 0x00, 0x02], Ok(65_538)),
        (Form::U32, &[0x7F, 0xFF, 0xFF, 0xFF], Ok(i32::MAX)),
        (Form::U32, &[0x80, 0x00, 0x00, 0x00], Err(SensorError::Unexpected)),
    ];
    for (form, data, expected) in cases {
        let count = u8::try_from(data.len()).unwrap();
        let answer = framed(&[&[0x11, 0x04, count], data].concat());
        let mut source = source(Place { form, ..LEVEL }, &[&answer]);
        assert_eq!(source.read_count(), expected, "{form:?} {data:?}");
        assert_eq!(source.line.sent[5], form.registers());
    }
}

#[test]
fn each_fault_has_its_name() {
    let good = framed(&[0x11, 0x04, 2, 0x12, 0x34]);
    let mut flipped = good.clone();
    flipped[4] ^= 1;
    let cases: [(&[u8], Result<i32, SensorError>); 11] = [
        (&good, Ok(0x1234)),
        (&[], Err(SensorError::Silent)),
        (&good[..6], Err(SensorError::Garbled)),
        (&flipped, Err(SensorError::Garbled)),
        (&[&good[..], &[1]].concat(), Err(SensorError::Garbled)),
        // A zero behind a good frame leaves the check sum right, whatever the frame.
        (&[&good[..], &[0]].concat(), Err(SensorError::Unexpected)),
        (&framed(&[0x12, 0x04, 2, 0x12, 0x34]), Err(SensorError::Unexpected)),
        (&framed(&[0x11, 0x03, 2, 0x12, 0x34]), Err(SensorError::Unexpected)),
        (&framed(&[0x11, 0x04, 4, 0x12, 0x34, 0, 0]), Err(SensorError::Unexpected)),
        (&framed(&[0x11, 0x84, 0x02]), Err(SensorError::Exception)),
        // A right check sum over too little: a decoder once read beyond such a frame.
        (&framed(&[0x11, 0x04, 0x22]), Err(SensorError::Unexpected)),
    ];
    for (answer, expected) in cases {
        assert_eq!(source(LEVEL, &[answer]).read_count(), expected, "{answer:02x?}");
    }
}

#[test]
fn a_late_answer_is_not_taken_for_the_next() {
    let (first, second) = (framed(&[0x11, 0x04, 2, 0, 1]), framed(&[0x11, 0x04, 2, 0, 2]));
    let mut source = source(LEVEL, &[&[], &second]);
    assert_eq!(source.read_count(), Err(SensorError::Silent));
    source.line.incoming.extend(&first);
    assert_eq!(source.read_count(), Ok(2));
}

#[test]
fn a_line_that_never_falls_silent_is_left() {
    let mut source = source(LEVEL, &[&[0x55; 5000]]);
    assert_eq!(source.read_count(), Err(SensorError::Garbled));
    assert!(source.clock.0.get() < 200, "waited {} ms", source.clock.0.get());
}

/// Marsaglia's xorshift32 (Journal of Statistical Software 8(14), 2003).
struct Random(u32);

impl Random {
    fn below(&mut self, limit: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 17;
        self.0 ^= self.0 << 5;
        usize::try_from(self.0).unwrap() % limit
    }

    fn byte(&mut self) -> u8 {
        u8::try_from(self.below(256)).unwrap()
    }

    /// A reply near to a good one: each part of it is sometimes wrong.
    fn reply(&mut self) -> Vec<u8> {
        let unit = if self.below(4) == 0 { self.byte() } else { LEVEL.unit };
        let function = [4, 4, 4, 4, 3, 0x84, 0x83, self.byte()][self.below(8)];
        let count = [2, 2, 2, 2, 4, 0, 1, self.byte()][self.below(8)];
        let length = if self.below(3) == 0 { self.below(20) } else { usize::from(count.min(20)) };
        let mut body = vec![unit, function, count];
        body.extend((0..length).map(|_| self.byte()));
        body.truncate(if self.below(8) == 0 { self.below(body.len()) } else { body.len() });
        let mut reply = if self.below(3) == 0 { body } else { framed(&body) };
        if self.below(8) == 0 && !reply.is_empty() {
            let place = self.below(reply.len());
            reply[place] = self.byte();
        }
        reply
    }
}

#[test]
fn no_reply_panics_and_no_wrong_one_is_accepted() {
    let mut random = Random(0x1D87_2B41);
    let (mut accepted, mut refused) = (0, 0);
    for _ in 0..2_000_000 {
        let reply = random.reply();
        let good = match reply[..] {
            [0x11, 0x04, 2, high, low, ..] if reply.len() == 7 => (check_sum(&reply[..5])
                == reply[5..])
                .then(|| i32::from(high) * 256 + i32::from(low)),
            _ => None,
        };
        match (source(LEVEL, &[&reply]).read_count(), good) {
            (Ok(value), Some(expected)) => {
                assert_eq!(value, expected, "{reply:02x?}");
                accepted += 1;
            }
            (Err(_), None) => refused += 1,
            (result, _) => panic!("{result:?} for {reply:02x?}"),
        }
    }
    assert!(accepted > 100_000 && refused > 100_000, "{accepted} accepted, {refused} refused");
}

#[test]
fn a_plan_names_the_register() {
    let preset = Place { unit: 1, function: Function::Input, register: 0, form: Form::U16 };
    let register =
        |function, coding| SignalKind::Register { unit: 9, function, register: 7, coding };
    let named = [
        (0, Function::Holding, Form::U16),
        (1, Function::Holding, Form::I16),
        (2, Function::Input, Form::U32),
    ];
    let mut source = source(preset, &[]);
    for (coding, function, form) in named {
        source.read_from(register(function as u8, coding));
        assert_eq!(source.place, Some(Place { unit: 9, function, register: 7, form }));
    }
    // Unknown numbers: no guess.
    for signal in [register(3, 3), register(5, 0)] {
        source.read_from(signal);
        assert_eq!(source.read_count(), Err(SensorError::Silent));
        assert!(source.line.sent.is_empty(), "nothing is asked");
    }
    source.read_from(SignalKind::CurrentLoop);
    assert_eq!(source.place, Some(preset));
}
