//! The bytes that DEVELOPERS.md shows are what the encoders write.
//!
//! The formats themselves are pinned beside their code, against an encoder in another language;
//! here only the document is held.

use std::fmt::Write as _;

use strake::journal_file::{DeviceIdentity, Record};
use strake::{compile, plan_file, tank};
use strake_core::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use strake_core::journal::block::{Encoded, encode_events, encode_samples, encode_state};
use strake_core::journal::entry::{Presser, ResetCause, Transition, TransitionCause};
use strake_core::journal::samples::Chain;
use strake_core::journal::{Entry, PAGE_BYTES, Place, Sample, SectorHeader, Word};
use strake_core::plan_slot::SlotHeader;
use strake_core::signal::{Channel, Quality, SensorError};
use strake_core::wire::{Hello, Message, StatusRequest};

use crate::files;
use crate::none;

/// Serial of the plan that is shown: 2026-01-01.
const SERIAL: u64 = 1_767_225_600;
/// Bytes of the plan before its liquid.
const PLAN_START_BYTES: usize = 50;

fn place(offset: u16) -> Place {
    Place { sequence: 7, offset, word: Word::Four }
}

fn block(encode: impl FnOnce(&mut [u8; PAGE_BYTES]) -> Option<Encoded>) -> Vec<u8> {
    let mut out = [0; PAGE_BYTES];
    let encoded = encode(&mut out).expect("it fits a page");
    out[..encoded.len].to_vec()
}

fn header() -> Vec<u8> {
    let header = SectorHeader {
        sequence: 7,
        plan_fingerprint: 0x0102_0304_0506_0708,
        first_entry: 1000,
        boot: 3,
        word: Word::Four,
        closed_by_restart: true,
        tick_ms: 123_456_789,
        utc_s: Some(1_754_000_000),
        previous_signature: None,
    };
    header.encode().to_vec()
}

fn samples() -> Vec<u8> {
    let silent = Quality::Failed(SensorError::Silent);
    let samples = [
        (10_000, 160_000, Quality::Good, 4700, Quality::Good, 3600),
        (20_000, 160_003, Quality::Good, 4699, Quality::Sparse, 3598),
        (30_000, 0, silent, 4699, Quality::Good, 3598),
    ]
    .map(|(tick_ms, level, level_quality, temperature, quality, battery_mv)| Sample {
        tick_ms,
        level: Channel { count_16: level, quality: level_quality },
        temperature: Channel { count_16: temperature, quality },
        battery_mv,
    });
    block(|out| encode_samples(place(256), &samples, &mut Chain::default(), out))
}

/// Payloads of one event each, without what the block puts around them.
fn events() -> Vec<Vec<u8>> {
    let tick_ms = 20_000;
    let transition = Transition {
        tick_ms,
        machine: MachineId::of_part(1, Threshold::Inward).expect("a machine"),
        from: AlarmState::Normal,
        to: AlarmState::Unacknowledged,
        cause: TransitionCause::Raised,
        utilisation: 0.75,
        hash: 0x1122_3344_5566_7788,
    };
    let events = [
        Entry::Transition(transition),
        Entry::Fault { tick_ms, cause: FaultCause::WireBreak, count: 7, detail: -3 },
        Entry::StartUp {
            tick_ms: 15,
            boot: 300,
            cause: ResetCause::Watchdog,
            carried: 6,
            missing_ms_max: 60_000,
            count: 1,
        },
        Entry::ClockFix { tick_ms, utc_s: 1_754_000_000 },
        Entry::PlanChange { tick_ms, fingerprint: 0x0102_0304_0506_0708, serial: 1_753_999_000 },
        Entry::Acknowledge { tick_ms, by: Presser::Button },
        Entry::Gap { tick_ms, missing: 12 },
    ];
    let one = |event: &Entry| {
        // Words of one byte need no padding: what is left is the payload alone.
        let place = Place { word: Word::One, ..place(512) };
        let whole = block(|out| encode_events(place, [event], out));
        whole[2..whole.len() - 4].to_vec()
    };
    events.iter().map(one).collect()
}

fn plan() -> Vec<u8> {
    let file = files::named("configs/brine_day_tank.toml");
    let tank = tank::parse(&file.path, file.text.as_bytes()).expect("a tank file");
    let compiled = compile::for_device(&tank).expect("a plan");
    compiled.encode(SERIAL).expect("it fits")
}

fn frame(message: &impl Message<'static>) -> Vec<u8> {
    let mut out = [0; 64];
    let length = message.encode(&mut out).expect("it fits");
    out[..length].to_vec()
}

fn slot() -> Vec<u8> {
    let header = SlotHeader { sequence: 7, serial: 0x0102, fingerprint: 0xA1B2_C3D4, length: 300 };
    header.encode().to_vec()
}

fn examples() -> Vec<(&'static str, Vec<u8>)> {
    let plan = plan();
    let identity = DeviceIdentity {
        device_id: "tank-7".into(),
        firmware: "0.1.0".into(),
        word_bytes: 4,
        sectors: 2048,
    };
    let file = plan_file::write(&plan).expect("it fits");
    let mut examples = vec![
        ("sector header", header()),
        ("samples", samples()),
        ("checkpoint", block(|out| encode_state(place(104), 0, 5, b"abcde", out))),
        ("plan slot", slot()),
        ("plan", plan[..PLAN_START_BYTES].to_vec()),
        ("plan file, before the plan", file[..12].to_vec()),
        ("plan file, check", file[file.len() - 4..].to_vec()),
        ("identity", Record::Identity(identity).encode()),
        ("hello", frame(&Hello { protocol: 1 })),
        ("status request", frame(&StatusRequest {})),
    ];
    examples.extend(events().into_iter().map(|event| ("event", event)));
    examples
}

fn hex(bytes: &[u8]) -> String {
    let mut text = String::new();
    for byte in bytes {
        write!(text, "{byte:02x}").expect("a string takes everything");
    }
    text
}

#[test]
fn examples_of_the_guide_are_what_is_written() {
    // Blanks and line ends only make the bytes easier to read.
    let text = &files::named("DEVELOPERS.md").text;
    let squeezed: String = text.split_whitespace().collect();
    let mut missing = Vec::new();
    for (name, bytes) in examples() {
        let hex = hex(&bytes);
        if !squeezed.contains(&hex) {
            missing.push(format!("{name}: {hex}"));
        }
    }
    none("not in DEVELOPERS.md as the encoder writes it", &missing);
}
