//! The server against a scripted link: what it answers, how much it does at once, what it survives.

mod app;
mod link;

use app::App;
use link::Link;
use strake_core::wire::{
    Acknowledge, ClockSet, ErrorCode, ErrorReply, Hello, Identity, Kind, Message, PlanBegin,
    PlanChunk, PlanCommit, PlanReply, SectorData, SectorEnd, SectorRequest, Status, StatusRequest,
    Text,
};

use super::Server;

/// A server with its link and application.
#[derive(Default)]
struct Device {
    server: Server,
    link: Link,
    app: App,
}

impl Device {
    /// Sends a request and returns the kind and body of every answer.
    fn ask<'m>(&mut self, request: &impl Message<'m>) -> Vec<(u8, Vec<u8>)> {
        self.link.push(request);
        self.run()
    }

    fn run(&mut self) -> Vec<(u8, Vec<u8>)> {
        for _ in 0..4000 {
            self.server.poll(&mut self.link, &mut self.app).unwrap();
        }
        assert!(self.server.is_idle());
        self.link.frames()
    }

    fn ask_one<'m>(&mut self, request: &impl Message<'m>) -> (u8, Vec<u8>) {
        let mut answers = self.ask(request);
        assert_eq!(answers.len(), 1, "{answers:?}");
        answers.remove(0)
    }

    fn refused<'m>(&mut self, request: &impl Message<'m>) -> ErrorReply {
        let (kind, body) = self.ask_one(request);
        assert_eq!(kind, Kind::ErrorReply.number());
        ErrorReply::decode(&body).unwrap()
    }

    fn plan_reply<'m>(&mut self, request: &impl Message<'m>) -> PlanReply {
        let (kind, body) = self.ask_one(request);
        assert_eq!(kind, Kind::PlanReply.number(), "{body:?}");
        PlanReply::decode(&body).unwrap()
    }
}

#[test]
fn greets_and_counts_the_link() {
    let mut device = Device::default();
    let (kind, body) = device.ask_one(&Hello { protocol: 1 });
    assert_eq!(kind, Kind::Identity.number());
    assert_eq!(Identity::decode(&body).unwrap().device_id.as_str(), "tank-7");
    // Hello is 01 01 and a check: six bytes, stuffed seven, closed eight.
    let (_, body) = device.ask_one(&StatusRequest {});
    let link = Status::decode(&body).unwrap().link;
    assert_eq!((link.bytes_in, link.bad_frames), (8 + 7, 0));
    assert_eq!(link.bytes_out, device.link.taken_before_last());
}

#[test]
fn finds_the_next_frame_after_garbage() {
    let mut device = Device::default();
    device.link.incoming.extend([5; 700]);
    device.link.incoming.extend([0, 0, 3, 1, 0]);
    let answers = device.ask(&Hello { protocol: 1 });
    assert_eq!(answers.len(), 1);
    assert_eq!(device.server.counters().bad_frames, 2);
}

#[test]
fn refuses_what_it_does_not_know() {
    let mut device = Device::default();
    let reply = |answers: Vec<(u8, Vec<u8>)>| ErrorReply::decode(&answers[0].1).unwrap();
    for kind in [0x00, 0x06, 0x7F, 0x80, Kind::Status.number(), 0xFE] {
        device.link.push_raw(kind, &[1, 2]);
        assert_eq!(reply(device.run()), ErrorCode::UnknownKind.reply(kind, u32::from(kind)));
    }
    for kind in [Kind::PartStatusRequest, Kind::ClockSet, Kind::PlanChunk, Kind::SectorRequest] {
        let kind = kind.number();
        device.link.push_raw(kind, &[]);
        assert_eq!(reply(device.run()), ErrorCode::Malformed.reply(kind, u32::from(kind)));
    }
}

#[test]
fn does_an_order_once_until_the_next_greeting() {
    let mut device = Device::default();
    for token in [7, 7, 8, 7] {
        device.ask_one(&ClockSet { token, utc_s: 1_800_000_000 });
    }
    assert_eq!(device.app.clock_sets, 3);
    device.ask_one(&Acknowledge { token: 7 });
    device.ask_one(&Acknowledge { token: 7 });
    device.ask_one(&Hello { protocol: 1 });
    device.ask_one(&Acknowledge { token: 7 });
    assert_eq!(device.app.acknowledged, 2);
}

#[test]
fn takes_a_plan_in_order_and_repeated_frames() {
    let mut device = Device::default();
    let begin = PlanBegin { length: 6, serial: 9, fingerprint: 77, device_id: Text::default() };
    assert_eq!(device.refused(&PlanCommit { fingerprint: 77 }).code, 5);
    assert_eq!(device.refused(&PlanChunk { offset: 0, bytes: &[1] }).code, 5);
    assert_eq!(device.plan_reply(&begin).received, 0);
    let late = device.refused(&PlanChunk { offset: 1, bytes: &[2] });
    assert_eq!((late.code, late.detail), (5, 0));
    assert_eq!(device.plan_reply(&PlanChunk { offset: 0, bytes: &[1, 2, 3, 4] }).received, 4);
    assert_eq!(device.plan_reply(&PlanChunk { offset: 0, bytes: &[1, 2] }).received, 4);
    assert_eq!(device.refused(&PlanCommit { fingerprint: 77 }).detail, 4);
    assert_eq!(device.refused(&PlanChunk { offset: 4, bytes: &[5, 6, 7] }).code, 5);
    assert_eq!(device.plan_reply(&PlanChunk { offset: 2, bytes: &[3, 4, 5, 6] }).received, 6);
    assert_eq!(device.app.plan, [1, 2, 3, 4, 5, 6]);
    device.app.busy = true;
    assert_eq!(device.refused(&PlanCommit { fingerprint: 77 }).code, 4);
    device.app.busy = false;
    for _ in 0..2 {
        assert!(device.plan_reply(&PlanCommit { fingerprint: 77 }).in_force);
    }
    assert_eq!(device.app.commits, 1);
}

#[test]
fn streams_the_units_asked_for() {
    let mut device = Device::default();
    let wanted = (0b111 << 1) | (1 << 5) | (1 << 12) | (1 << 31);
    let request = SectorRequest { ticket: 9, sequence: 4, wanted, frame_units: 2 };
    let answers = device.ask(&request);
    let (end, data) = answers.split_last().unwrap();
    let data: Vec<_> = data.iter().map(|(_, body)| SectorData::decode(body).unwrap()).collect();
    // 1600 bytes in use: unit 12 has 64 of them, unit 31 none.
    let shape: Vec<_> =
        data.iter().map(|data| (data.ticket, data.unit, data.bytes.len())).collect();
    assert_eq!(shape, [(9, 1, 256), (9, 3, 128), (9, 5, 128), (9, 12, 64)]);
    assert!(data.iter().all(|data| data.bytes.iter().all(|byte| *byte == data.unit)
        || data.bytes.len() == 256));
    let expected = SectorEnd { ticket: 9, code: 0, used: 1600 };
    assert_eq!((end.0, SectorEnd::decode(&end.1)), (Kind::SectorEnd.number(), Ok(expected)));
}

#[test]
fn a_sector_that_is_not_there_is_told_apart() {
    let mut device = Device::default();
    for (sequence, code) in [(3, ErrorCode::SectorGone), (5, ErrorCode::SectorNotYet)] {
        let request = SectorRequest { ticket: 1, sequence, wanted: 1, frame_units: 8 };
        let end = SectorEnd::decode(&device.ask_one(&request).1).unwrap();
        assert_eq!(end.code, code.number());
    }
    device.app.torn = true;
    let request = SectorRequest { ticket: 1, sequence: 4, wanted: 1, frame_units: 8 };
    let end = SectorEnd::decode(&device.ask_one(&request).1).unwrap();
    assert_eq!(end.code, ErrorCode::StorageFailed.number());
}

#[test]
fn another_request_ends_a_stream_and_too_many_are_dropped() {
    let mut device = Device::default();
    for ticket in 0..12 {
        let wanted = u32::MAX;
        device.link.push(&SectorRequest { ticket, sequence: 4, wanted, frame_units: 8 });
    }
    let answers = device.run();
    let ends = answers.iter().filter(|(kind, _)| *kind == Kind::SectorEnd.number()).count();
    assert!((8..12).contains(&ends), "{ends}");

    for ticket in 0..8 {
        let wanted = u32::MAX;
        device.link.push(&SectorRequest { ticket, sequence: 4, wanted, frame_units: 1 });
    }
    let answers = device.ask(&StatusRequest {});
    assert_eq!(answers.last().unwrap().0, Kind::Status.number());
    assert!(answers.len() < 20, "{}", answers.len());
}

#[test]
fn one_call_takes_and_builds_a_bounded_amount() {
    let mut device = Device::default();
    device.link.incoming.extend([7; 1000]);
    device.server.poll(&mut device.link, &mut device.app).unwrap();
    assert_eq!(device.link.incoming.len(), 1000 - 64);
    // A link that takes nothing holds nothing up, and loses nothing.
    let mut device = Device::default();
    device.link.full = true;
    device.link.push(&Hello { protocol: 1 });
    device.link.push(&StatusRequest {});
    for _ in 0..10 {
        device.server.poll(&mut device.link, &mut device.app).unwrap();
    }
    assert!(!device.server.is_idle() && device.link.outgoing.is_empty());
    device.link.full = false;
    assert_eq!(device.run().len(), 2);
    assert!(size_of::<Server>() <= 2560, "{}", size_of::<Server>());
}

#[test]
fn any_bytes_are_survived() {
    let mut state = 1_u64;
    let mut next = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1);
        u8::try_from(state >> 56).unwrap()
    };
    let mut device = Device::default();
    for _ in 0..3000 {
        // Bodies of any content under a right check reach every arm.
        let kind = Kind::ALL[usize::from(next()) % Kind::ALL.len()].number();
        let length = usize::from(next()) % 40;
        let body: Vec<u8> = (0..length).map(|_| next() >> (next() % 8)).collect();
        device.link.push_raw(kind, &body);
        device.link.incoming.extend((0..next() % 4).map(|_| next()));
        for _ in 0..50 {
            device.server.poll(&mut device.link, &mut device.app).unwrap();
        }
        device.link.outgoing.clear();
    }
    device.run();
    device.link.incoming.push_back(0);
    assert_eq!(device.ask_one(&Hello { protocol: 1 }).0, Kind::Identity.number());
}
