//! Any bytes at all: an error or a message, never a panic, and never a wrong frame.

use crate::wire::{
    Acknowledge, ClockSet, Done, ErrorReply, FaultStatus, FillingStatus, FrameError, Head,
    HeadRequest, Hello, Identity, JournalBounds, JournalBoundsRequest, Kind, Message, PartStatus,
    PartStatusRequest, PlanBegin, PlanChunk, PlanCommit, PlanData, PlanList, PlanListRequest,
    PlanRead, PlanReply, Receiver, SectorData, SectorEnd, SectorRequest, Status, StatusRequest,
    frame,
};
use proptest::prelude::*;

/// Decodes a body as every message; what decodes must encode to the same bytes.
fn every_way(body: &[u8]) {
    fn way<'a, M: Message<'a>>(body: &'a [u8]) {
        if let Ok(message) = M::decode(body) {
            let mut out = [0; 2200];
            let length = message.encode(&mut out).unwrap();
            let opened = frame::open(&mut out[..length - 1]).unwrap();
            assert_eq!(opened.kind, M::KIND.number());
            // A varint may be written longer than it need be; ours never is.
            assert!(opened.body.len() <= body.len());
        }
    }
    way::<Hello>(body);
    way::<Identity>(body);
    way::<StatusRequest>(body);
    way::<Status>(body);
    way::<PartStatusRequest>(body);
    way::<PartStatus>(body);
    way::<FaultStatus>(body);
    way::<FillingStatus>(body);
    way::<PlanBegin>(body);
    way::<PlanChunk<'_>>(body);
    way::<PlanCommit>(body);
    way::<PlanReply>(body);
    way::<PlanListRequest>(body);
    way::<PlanList>(body);
    way::<PlanRead>(body);
    way::<PlanData<'_>>(body);
    way::<ClockSet>(body);
    way::<Acknowledge>(body);
    way::<Done>(body);
    way::<JournalBoundsRequest>(body);
    way::<JournalBounds>(body);
    way::<HeadRequest>(body);
    way::<Head>(body);
    way::<SectorRequest>(body);
    way::<SectorData<'_>>(body);
    way::<SectorEnd>(body);
    way::<ErrorReply>(body);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    #[test]
    fn bodies(body in proptest::collection::vec(any::<u8>(), 0..300)) {
        every_way(&body);
    }

    #[test]
    fn small_bodies(body in proptest::collection::vec(0_u8..4, 0..120)) {
        every_way(&body);
    }

    /// A mutated body under a right check reaches the decoders behind it.
    #[test]
    fn mended_frames(
        kind in any::<u8>(),
        place in 0_usize..60,
        byte in any::<u8>(),
        cut in 0_usize..60,
    ) {
        let status = Status { samples: 70_000, utc_s: 1 << 40, ..Status::default() };
        let mut buffer = [0; 300];
        let length = status.encode(&mut buffer).unwrap();
        let mut body = frame::open(&mut buffer[..length - 1]).unwrap().body.to_vec();
        if let Some(slot) = body.get_mut(place) {
            *slot = byte;
        }
        body.truncate(body.len() - cut.min(body.len()));
        let mut out = [0; 300];
        let length = frame::build(kind, &mut out, &mut |writer| writer.raw(&body)).unwrap();
        let opened = frame::open(&mut out[..length - 1]).unwrap();
        prop_assert_eq!((opened.kind, opened.body), (kind, body.as_slice()));
        every_way(opened.body);
    }

    #[test]
    fn streams(
        bytes in proptest::collection::vec(prop_oneof![3 => any::<u8>(), 1 => Just(0)], 0..600),
    ) {
        let mut receiver = Receiver::<64>::new();
        for byte in &bytes {
            if let Some(Ok(frame)) = receiver.accept(*byte) {
                every_way(frame.body);
            }
        }
        // Whatever came before: the next frame behind a zero is found.
        let mut out = [0; 64];
        let length = Done { token: 9 }.encode(&mut out).unwrap();
        receiver.accept(0);
        let mut sound = |byte: &u8| receiver.accept(*byte).map(|frame| frame.is_ok());
        let found = out[..length].iter().filter_map(&mut sound);
        prop_assert_eq!(found.collect::<Vec<_>>(), [true]);
        prop_assert_eq!(receiver.last().map(|frame| frame.kind), Some(Kind::Done.number()));
    }
}

#[test]
fn every_single_bit_error_is_found() {
    let mut out = [0; 300];
    let length = Status::default().encode(&mut out).unwrap();
    let mut refused = 0;
    for bit in 0..(length - 1) * 8 {
        let mut bytes = out[..length - 1].to_vec();
        bytes[bit / 8] ^= 1 << (bit % 8);
        refused += usize::from(frame::open(&mut bytes).is_err());
    }
    assert_eq!(refused, (length - 1) * 8);
}

#[test]
fn a_frame_longer_than_the_buffer_is_told_and_passed_over() {
    let mut receiver = Receiver::<16>::new();
    let mut results = Vec::new();
    for byte in std::iter::repeat_n(1, 40).chain([0, 2, 1, 0]) {
        if let Some(Err(error)) = receiver.accept(byte) {
            results.push(error);
        }
    }
    assert_eq!(results, [FrameError::TooLong, FrameError::Framing]);
}
