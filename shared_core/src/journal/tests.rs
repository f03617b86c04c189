//! The bytes of the format, pinned; and that every reader is total.
//!
//! The pinned bytes were put together from the tables in the module heads by an encoder of its own
//! in another language, with that language's CRC-32.

use super::block::{Place, Word, encode_events, encode_state};
use super::checkpoint::Collector;
use super::entry::{Entry, Presser, ResetCause, Transition, TransitionCause};
use super::{
    HeaderError, Item, PAGE_BYTES, PageReader, SECTOR_BYTES, STATE_BYTES_MAX, SectorHeader,
    SectorReader,
};
use crate::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use proptest::prelude::*;

pub(super) fn hex(text: &str) -> Vec<u8> {
    let digits: Vec<u8> = text.bytes().filter(|byte| !byte.is_ascii_whitespace()).collect();
    digits
        .chunks(2)
        .map(|pair| u8::from_str_radix(std::str::from_utf8(pair).unwrap(), 16).unwrap())
        .collect()
}

pub(super) fn header() -> SectorHeader {
    SectorHeader {
        sequence: 7,
        plan_fingerprint: 0x0102_0304_0506_0708,
        first_entry: 1000,
        boot: 3,
        word: Word::Four,
        closed_by_restart: true,
        tick_ms: 123_456_789,
        utc_s: Some(1_754_000_000),
        previous_signature: None,
    }
}

pub(super) fn place(offset: u16, word: Word) -> Place {
    Place { sequence: 7, offset, word }
}

/// One of each event, with the bytes it takes.
fn events() -> [(Entry, &'static str); 7] {
    let tick_ms = 20_000;
    let transition = Transition {
        tick_ms,
        machine: MachineId::of_part(1, Threshold::Inward).unwrap(),
        from: AlarmState::Normal,
        to: AlarmState::Unacknowledged,
        cause: TransitionCause::Raised,
        utilisation: 0.75,
        hash: 0x1122_3344_5566_7788,
    };
    let start_up = Entry::StartUp {
        tick_ms: 15,
        boot: 300,
        cause: ResetCause::Watchdog,
        carried: 6,
        missing_ms_max: 60_000,
        count: 1,
    };
    let plan_change =
        Entry::PlanChange { tick_ms, fingerprint: 0x0102_0304_0506_0708, serial: 1_753_999_000 };
    let fault = Entry::Fault { tick_ms, cause: FaultCause::WireBreak, count: 7, detail: -3 };
    [
        (Entry::Transition(transition), "02a09c010510010000403f8877665544332211"),
        (fault, "03a09c01020705"),
        (start_up, "040fac020206e0d40301"),
        (Entry::ClockFix { tick_ms, utc_s: 1_754_000_000 }, "05a09c0180d5afc406"),
        (plan_change, "06a09c01080706050403020198cdafc406"),
        (Entry::Acknowledge { tick_ms, by: Presser::Button }, "0aa09c0101"),
        (Entry::Gap { tick_ms, missing: 12 }, "0ba09c010c"),
    ]
}

#[test]
fn pinned_header() {
    let expected = hex("534b4a01070000000807060504030201e80300000300120015cd5b07000080ea
         8b680000ffffffffffffffffffffffffffffffffffffffffffffffffffffffff
         ffffffffffffffffffffffffffffffffffffffffffffffffffffffffffffffff
         ffffffffa620b4c1");
    assert_eq!(header().encode()[..], expected);
    assert_eq!(SectorHeader::decode(&expected), Ok(header()));
}

#[test]
fn pinned_events() {
    let mut out = [0; PAGE_BYTES];
    let entries = events().map(|(entry, _)| entry);
    let encoded = encode_events(place(512, Word::Four), &entries, &mut out).unwrap();
    let payload: String = events().map(|(_, bytes)| bytes).concat();
    assert_eq!(out[..encoded.len], hex(&format!("1446{payload}ffff3ee68b44")));
    assert_eq!(items(&out[..encoded.len], place(512, Word::Four)), entries.map(Item::Entry));
}

#[test]
fn pinned_checkpoint() {
    let mut out = [0; PAGE_BYTES];
    let encoded = encode_state(place(104, Word::Four), 0, 5, b"abcde", &mut out).unwrap();
    assert_eq!(out[..encoded.len], hex("046005006162636465ffffff8642b662"));
}

pub(super) fn items(page: &[u8], place: Place) -> Vec<Item<'_>> {
    PageReader::at(page, 0, place).collect()
}

#[test]
fn a_block_passes_only_where_it_was_written() {
    let mut page = [0xFF; PAGE_BYTES];
    let entries = events().map(|(entry, _)| entry);
    encode_events(place(512, Word::Four), &entries, &mut page).unwrap();
    for other in [
        Place { sequence: 8, ..place(512, Word::Four) },
        place(768, Word::Four),
        place(512, Word::One),
    ] {
        assert!(items(&page, other).iter().all(|item| matches!(item, Item::Damage(_))));
    }
}

#[test]
fn blank_and_damaged_headers_are_told_apart() {
    assert_eq!(SectorHeader::decode(&[0xFF; 104]), Err(HeaderError::Blank));
    assert_eq!(SectorHeader::decode(&header().encode()[..103]), Err(HeaderError::Damaged));
    for bit in 0..104 * 8 {
        let mut bytes = header().encode();
        bytes[bit / 8] ^= 1 << (bit % 8);
        assert_eq!(SectorHeader::decode(&bytes), Err(HeaderError::Damaged));
    }
}

/// A block of an unknown form with a right check: passed over, and what follows is still read.
#[test]
fn unknown_forms_are_passed_over() {
    let mut page = [0xFF; PAGE_BYTES];
    let body = [3, 5 << 5, 1, 2, 3, 4, 5, 6];
    page[..8].copy_from_slice(&body);
    page[8..12].copy_from_slice(&super::check::block_check(7, 256, &body).to_le_bytes());
    let mut next = [0; PAGE_BYTES];
    let entries = events().map(|(entry, _)| entry);
    let encoded = encode_events(place(268, Word::Four), &entries, &mut next).unwrap();
    page[12..12 + encoded.len].copy_from_slice(&next[..encoded.len]);
    let found = items(&page, place(256, Word::Four));
    assert!(matches!(found[0], Item::Damage(_)));
    assert_eq!(found[1..], entries.map(Item::Entry));
}

fn any_event() -> impl Strategy<Value = Entry> {
    let tick = 0_u64..1 << 48;
    let machine = (0_u8..109).prop_filter_map("no machine", MachineId::from_number);
    let state = || (0_u8..9).prop_filter_map("no state", AlarmState::from_number);
    let moved = (1_u8..6).prop_filter_map("no cause", TransitionCause::from_number);
    let reset = (1_u8..6).prop_filter_map("no cause", ResetCause::from_number);
    let fault = (0_u8..13).prop_filter_map("no cause", FaultCause::from_number);
    prop_oneof![
        (tick.clone(), machine, state(), state(), moved, -1e9_f32..1e9, any::<u64>()).prop_map(
            |(tick_ms, machine, from, to, cause, utilisation, hash)| {
                Entry::Transition(Transition {
                    tick_ms,
                    machine,
                    from,
                    to,
                    cause,
                    utilisation,
                    hash,
                })
            }
        ),
        (tick.clone(), fault, any::<u16>(), any::<i32>()).prop_map(
            |(tick_ms, cause, count, detail)| Entry::Fault { tick_ms, cause, count, detail }
        ),
        (tick.clone(), any::<u16>(), reset, any::<u8>(), any::<u32>(), any::<u16>()).prop_map(
            |(tick_ms, boot, cause, carried, missing_ms_max, count)| Entry::StartUp {
                tick_ms,
                boot,
                cause,
                carried,
                missing_ms_max,
                count
            }
        ),
        (tick.clone(), any::<u64>())
            .prop_map(|(tick_ms, utc_s)| Entry::ClockFix { tick_ms, utc_s }),
        (tick.clone(), any::<u64>(), any::<u64>()).prop_map(|(tick_ms, fingerprint, serial)| {
            Entry::PlanChange { tick_ms, fingerprint, serial }
        }),
        (tick.clone(), 1_u8..3).prop_map(|(tick_ms, by)| Entry::Acknowledge {
            tick_ms,
            by: Presser::from_number(by).unwrap()
        }),
        (tick, any::<u32>()).prop_map(|(tick_ms, missing)| Entry::Gap { tick_ms, missing }),
    ]
}

pub(super) fn any_word() -> impl Strategy<Value = Word> {
    prop_oneof![Just(Word::One), Just(Word::Four)]
}

proptest! {
    #[test]
    fn events_come_back(events in prop::collection::vec(any_event(), 1..8), word in any_word()) {
        let mut page = [0xFF; PAGE_BYTES];
        let place = place(1024, word);
        let encoded = encode_events(place, &events, &mut page).unwrap();
        prop_assert_eq!(encoded.taken, events.len());
        let found = items(&page, place);
        prop_assert_eq!(found, events.into_iter().map(Item::Entry).collect::<Vec<_>>());
    }

    #[test]
    fn checkpoints_come_back(
        state in prop::collection::vec(any::<u8>(), 0..=STATE_BYTES_MAX), word in any_word()
    ) {
        let mut sector = vec![0xFF; SECTOR_BYTES];
        let mut first = header();
        first.word = word;
        sector[..104].copy_from_slice(&first.encode());
        let (mut offset, mut part, mut rest) = (104_u16, 0, &state[..]);
        let total = u16::try_from(state.len()).unwrap();
        loop {
            let mut out = [0; PAGE_BYTES];
            let encoded = encode_state(place(offset, word), part, total, rest, &mut out).unwrap();
            let at = usize::from(offset);
            sector[at..at + encoded.len].copy_from_slice(&out[..encoded.len]);
            rest = &rest[encoded.taken..];
            if rest.is_empty() {
                break;
            }
            (part, offset) = (part + 1, (offset | 255) + 1);
        }
        let mut out = [0; STATE_BYTES_MAX];
        let reader = SectorReader::new(&sector).unwrap();
        prop_assert_eq!(reader.checkpoint(&mut out), Some(&state[..]));
        // One byte of any part spoilt: no checkpoint.
        sector[usize::from(offset) + 2] ^= 1;
        let mut out = [0; STATE_BYTES_MAX];
        prop_assert_eq!(SectorReader::new(&sector).unwrap().checkpoint(&mut out), None);
    }

    #[test]
    fn any_bytes_are_read_to_the_end(
        bytes in prop::collection::vec(any::<u8>(), 0..=SECTOR_BYTES), word in any_word()
    ) {
        let _ = SectorReader::new(&bytes);
        let mut sector = bytes;
        let mut first = header();
        first.word = word;
        sector.splice(..sector.len().min(104), first.encode());
        let mut state = [0; 64];
        let reader = SectorReader::new(&sector).unwrap();
        let _ = reader.checkpoint(&mut state);
        prop_assert!(reader.take(SECTOR_BYTES).count() < SECTOR_BYTES);
    }

    /// Bytes with a right check reach the decoders behind it.
    #[test]
    fn any_payload_with_a_right_check_is_read(
        payload in prop::collection::vec(any::<u8>(), 1..248), form_count: u8
    ) {
        let mut block = vec![0, form_count];
        block.extend(payload);
        block[0] = u8::try_from(block.len() + 4).unwrap();
        let check = super::check::block_check(7, 256, &block);
        block.extend(check.to_le_bytes());
        let mut state = [0; 100];
        let mut collector = Collector::new(&mut state);
        for item in items(&block, place(256, Word::One)) {
            if let Item::State { part, payload } = item {
                collector.take(part, payload);
            }
        }
        prop_assert!(items(&block, place(256, Word::One)).len() <= 32);
    }

    #[test]
    fn no_flipped_bit_passes(bit in 0_usize..80 * 8) {
        let mut page = [0xFF; PAGE_BYTES];
        let entries = events().map(|(entry, _)| entry);
        encode_events(place(512, Word::Four), &entries, &mut page).unwrap();
        page[bit / 8] ^= 1 << (bit % 8);
        let found = items(&page, place(512, Word::Four));
        prop_assert!(found.iter().all(|item| matches!(item, Item::Damage(_))));
    }
}
