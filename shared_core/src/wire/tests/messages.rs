//! Every message: its bytes pinned, equal to those of the postcard crate, and read back.

use super::hex;
use crate::wire::{
    Acknowledge, ClockSet, Done, ErrorReply, FaultStatus, FaultStatusRequest, FillingRequest,
    FillingStatus, Head, HeadRequest, Hello, Identity, JournalBounds, JournalBoundsRequest, Kind,
    LinkCounters, LoadValue, Malformed, Message, PartStatus, PartStatusRequest, PlanBegin,
    PlanChunk, PlanCommit, PlanData, PlanEntry, PlanList, PlanListRequest, PlanRead, PlanReply,
    REPLY_FRAME_BYTES, REQUEST_FRAME_BYTES, SectorData, SectorEnd, SectorRequest, Status,
    StatusRequest, Text, Writer, frame,
};
use std::fmt::Debug;

/// Checks one message in all ways and returns its line of the table.
fn line<'a, M: Message<'a> + serde::Serialize + PartialEq + Debug>(
    message: &M,
    body: &'a mut [u8; 1100],
) -> String {
    let crate_bytes = postcard::to_slice(message, body).unwrap().len();
    let mut ours = [0; 1100];
    let mut writer = Writer::new(&mut ours);
    message.put(&mut writer);
    assert_eq!(writer.written().unwrap(), &body[..crate_bytes], "{message:?}");

    let mut framed = [0; REPLY_FRAME_BYTES];
    let length = message.encode(&mut framed).unwrap();
    assert_eq!(framed[..length].iter().position(|byte| *byte == 0), Some(length - 1));
    if M::KIND.number() < 0x80 {
        assert!(length < REQUEST_FRAME_BYTES, "{message:?} is {length} bytes");
    }
    let opened = frame::open(&mut framed[..length - 1]).unwrap();
    assert_eq!((opened.kind, opened.body), (M::KIND.number(), &body[..crate_bytes]));

    let body: &'a [u8] = body;
    assert_eq!(M::decode(&body[..crate_bytes]).as_ref(), Ok(message));
    assert_eq!(M::decode(&body[..=crate_bytes]).is_ok(), M::APPENDABLE);
    if crate_bytes > 0 {
        assert_eq!(M::decode(&body[..crate_bytes - 1]), Err(Malformed));
    }
    let digits: Vec<String> =
        body[..crate_bytes].iter().take(72).map(|byte| format!("{byte:02X}")).collect();
    format!("{:?}: {}", M::KIND, digits.join(" "))
}

macro_rules! table {
    ($($message:expr),* $(,)?) => { vec![$( line(&$message, &mut [0; 1100]) ),*] };
}

fn status() -> Status {
    Status {
        output: 2,
        level_reading: 1,
        level_m: 5.5,
        level_low_m: 5.25,
        level_high_m: 5.75,
        governing_part: 3,
        utilisation_bound: 0.875,
        parts: 12,
        alarms: 1,
        faults: 0,
        battery_mv: 3600,
        clock_set: true,
        utc_s: 1_800_000_000,
        boot: 7,
        tick_ms: 86_400_000,
        samples: 8640,
        journal: JournalBounds { oldest: 1, newest: 130, newest_used: 1536 },
        link: LinkCounters { bytes_in: 100, bytes_out: 200, bad_frames: 1 },
    }
}

fn part_status() -> PartStatus {
    let load = LoadValue { load: 2, estimate: 1.0e5, bound: 1.25e5 };
    PartStatus {
        part: 3,
        utilisation: 0.75,
        utilisation_bound: 0.875,
        utilisation_inward: 0.0,
        inward_judged: false,
        alarms: [1, 0, 0],
        loads: [load, LoadValue::default(), LoadValue::default(), LoadValue::default()],
        opening: 0x81,
    }
}

fn fault_status() -> FaultStatus {
    let mut status = FaultStatus::default();
    status.states[2] = 1;
    status.counts[2] = 300;
    status
}

fn identity() -> Identity {
    Identity {
        protocol: 1,
        journal_format: 2,
        plan_format: 3,
        firmware: Text::new("0.1.0").unwrap(),
        device_id: Text::new("tank-7").unwrap(),
        boot: 7,
        tick_ms: 86_400_000,
        plan_fingerprint: 0x0123_4567_89AB_CDEF,
        plan_serial: 1_800_000_000,
        word_bytes: 4,
        sectors: 2048,
    }
}

fn plan_list() -> PlanList {
    let entry = PlanEntry { serial: 1_800_000_000, fingerprint: u64::MAX, length: 1500 };
    PlanList { plans: [entry, PlanEntry::default(), PlanEntry::default(), PlanEntry::default()] }
}

#[test]
fn bytes_are_pinned_and_equal_to_the_crates() {
    let (serial, fingerprint) = (1_800_000_000, 0x0123_4567_89AB_CDEF);
    let device_id = Text::new("tank-7").unwrap();
    let head = Head {
        newest: 130,
        used: 1536,
        next_entry: 70_000,
        running_hash: fingerprint,
        boot: 7,
        tick_ms: 86_400_000,
    };
    let sector_request = SectorRequest { ticket: 200, sequence: 130, wanted: 0xF0, frame_units: 8 };
    let table = table![
        Hello { protocol: 1 },
        StatusRequest {},
        PartStatusRequest { part: 3 },
        FaultStatusRequest {},
        FillingRequest {},
        PlanBegin { length: 1500, serial, fingerprint, device_id },
        PlanChunk { offset: 192, bytes: &[1, 0, 255] },
        PlanCommit { fingerprint },
        PlanListRequest {},
        PlanRead { fingerprint, offset: 512, length: 512 },
        ClockSet { token: 1, utc_s: 1_800_000_000 },
        Acknowledge { token: 300 },
        JournalBoundsRequest {},
        HeadRequest {},
        sector_request,
        identity(),
        status(),
        part_status(),
        fault_status(),
        FillingStatus { state: 3, alarm: 1, time_s: 900.0, inflow_m3_s: 0.01 },
        PlanReply { fingerprint, received: 192, in_force: false },
        plan_list(),
        PlanData { fingerprint, offset: 512, bytes: &[0, 0, 7] },
        Done { token: 300 },
        JournalBounds { oldest: 1, newest: 130, newest_used: 1536 },
        head,
        SectorData { ticket: 200, unit: 31, bytes: &[0xFF, 0, 1] },
        SectorEnd { ticket: 200, code: 15, used: 4096 },
        ErrorReply { to: 0x11, code: 5, detail: 384 },
    ];
    assert_eq!(table.join("\n"), include_str!("messages.txt").trim_end());
    assert_eq!(table.len(), Kind::ALL.len());
}

#[test]
fn the_longest_of_each_fit_their_buffers() {
    let device_id = Text::new("12345678901234567890123456789012").unwrap();
    let most = u64::MAX;
    let payload = [0x55; 1024];
    table![
        PlanBegin { length: u32::MAX, serial: most, fingerprint: most, device_id },
        PlanChunk { offset: u32::MAX, bytes: &payload[..crate::wire::PLAN_CHUNK_BYTES] },
        PlanRead { fingerprint: most, offset: u32::MAX, length: u16::MAX },
        SectorRequest { ticket: 255, sequence: u32::MAX, wanted: u32::MAX, frame_units: 255 },
        SectorData { ticket: 255, unit: 255, bytes: &payload },
        PlanData { fingerprint: most, offset: u32::MAX, bytes: &payload[..512] },
        FaultStatus { states: [255; 16], counts: [u16::MAX; 16] },
        Identity { firmware: device_id, device_id, plan_fingerprint: most, ..identity() },
    ];
}

/// Worked out from the format with a CRC-32 of another make: kind 21, token 1, check, no zero in
/// it, so one block of six bytes.
#[test]
fn a_whole_frame_is_pinned() {
    let mut out = [0; 64];
    let length = Acknowledge { token: 1 }.encode(&mut out).unwrap();
    assert_eq!(out[..length], hex("07 21 01 8A 37 41 BA 00"));
}

#[test]
fn an_answer_of_a_later_version_is_understood() {
    let mut body = [0; 1100];
    let length = postcard::to_slice(&identity(), &mut body).unwrap().len();
    body[length..length + 3].copy_from_slice(&[9, 9, 9]);
    assert_eq!(Identity::decode(&body[..length + 3]), Ok(identity()));
    assert_eq!(Done::decode(&[1, 9]), Err(Malformed));
}

#[test]
fn a_short_buffer_is_told() {
    for length in 0..60 {
        let mut out = vec![0; length];
        let encoded = identity().encode(&mut out);
        assert!(encoded.is_none_or(|encoded| encoded <= length));
    }
    assert_eq!(SectorData { ticket: 0, unit: 0, bytes: &[0; 1024] }.encode(&mut [0; 1000]), None);
}
