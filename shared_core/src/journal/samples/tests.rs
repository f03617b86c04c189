//! Both codecs: pinned bytes, any samples come back, any bytes are read to the end.
//!
//! The pinned bytes of codec 0 were put together from its table by an encoder in another language.
//! Those of codec 1 are checked by the journal reader of the tests, in another language too.

use super::Chain;
use crate::journal::block::{ENTRIES_MAX, Place, Word, encode_samples};
use crate::journal::check::block_check;
use crate::journal::tests::{any_word, header, hex, items, place};
use crate::journal::{Entry, Item, PAGE_BYTES, SECTOR_BYTES, Sample, SectorReader};
use crate::signal::{Channel, Quality, SensorError};
use core::mem::size_of;
use proptest::prelude::*;

fn channel(count_16: i32, quality: Quality) -> Channel {
    Channel { count_16, quality }
}

fn three_samples() -> [Sample; 3] {
    let silent = Quality::Failed(SensorError::Silent);
    [
        (10_000, channel(160_000, Quality::Good), channel(4700, Quality::Good), 3600),
        (20_000, channel(160_003, Quality::Good), channel(4699, Quality::Sparse), 3598),
        (30_000, channel(0, silent), channel(4699, Quality::Good), 3598),
    ]
    .map(|(tick_ms, level, temperature, battery_mv)| Sample {
        tick_ms,
        level,
        temperature,
        battery_mv,
    })
}

/// Ten seconds apart, counts about a slope, nothing else moves.
fn calm(numbers: impl Iterator<Item = i32>) -> Vec<Sample> {
    numbers
        .map(|number| Sample {
            tick_ms: 3_000_000_000 + 10_000 * u64::from(number.unsigned_abs()),
            level: Channel::good(16 * (2000 + number + 3 * (number % 2))),
            temperature: Channel::good(16 * (1500 + number % 3)),
            battery_mv: 3600,
        })
        .collect()
}

fn encode(samples: &[Sample], place: Place, chain: &mut Chain) -> Vec<u8> {
    let mut out = [0; PAGE_BYTES];
    let encoded = encode_samples(place, samples, chain, &mut out).unwrap();
    assert_eq!(encoded.taken, samples.len());
    out[..encoded.len].to_vec()
}

fn as_items(samples: &[Sample]) -> Vec<Item<'static>> {
    samples.iter().map(|sample| Item::Entry(Entry::Sample(*sample))).collect()
}

const PLAIN_FOUR: &str = "0802a09c0180c41311b849a03800062101030085c413130000ffffff0b216873";
const PLAIN_ONE: &str = "1d02a09c0180c41311b849a03800062101030085c4131300003ef65b6f";

const PACKED_FOUR: &str = "07220ec45950c209409c1038b8044238c8283537fcffffff4182019b";
const PACKED_ONE: &str = "19220ec45950c209409c1038b8044238c8283537fc4d2490e3";

#[test]
fn pinned_codec_0() {
    for (word, bytes) in [(Word::Four, PLAIN_FOUR), (Word::One, PLAIN_ONE)] {
        assert_eq!(items(&hex(bytes), place(256, word)), as_items(&three_samples()));
    }
}

#[test]
fn pinned_codec_1() {
    for (word, expected) in [(Word::Four, PACKED_FOUR), (Word::One, PACKED_ONE)] {
        let bytes = encode(&three_samples(), place(256, word), &mut Chain::default());
        assert_eq!(bytes, hex(expected));
        assert_eq!(items(&bytes, place(256, word)), as_items(&three_samples()));
    }
}

/// Each codec has an anchor of its own, so a page may hold both.
#[test]
fn both_codecs_in_one_page() {
    let mut page = hex(PLAIN_FOUR);
    let mut chain = Chain::default();
    let samples = calm(0..12);
    for part in samples.chunks(6) {
        let offset = 256 + u16::try_from(page.len()).unwrap();
        page.extend(encode(part, place(offset, Word::Four), &mut chain));
    }
    let expected = [as_items(&three_samples()), as_items(&samples)].concat();
    assert_eq!(items(&page, place(256, Word::Four)), expected);
}

/// What is as predicted is nearly free: six samples of a calm series in 12 bytes of flash.
#[test]
fn calm_blocks_are_short() {
    let mut chain = Chain::default();
    let samples = calm(0..60);
    let lengths: Vec<_> = samples
        .chunks(6)
        .map(|part| encode(part, place(256, Word::Four), &mut chain).len())
        .collect();
    assert!(lengths[0] <= 28, "{lengths:?}");
    assert!(lengths[2..].iter().all(|&length| length <= 12), "{lengths:?}");
}

#[test]
fn the_state_of_the_codec_is_small() {
    println!("chain: {} bytes", size_of::<Chain>());
    assert!(size_of::<Chain>() <= 192);
}

/// Samples that no predictor likes: every field as far off as it gets.
#[test]
fn a_page_has_room_for_the_worst_samples() {
    let wild = |index: u64| {
        let far = index.is_multiple_of(2);
        let count_16 = if far { i32::MIN } else { i32::MAX };
        let failed = |cause| channel(count_16, Quality::Failed(cause));
        let cause = if far { SensorError::Silent } else { SensorError::Garbled };
        Sample {
            tick_ms: if far { 0 } else { (1 << 48) - 1 - index },
            level: failed(cause),
            temperature: failed(cause),
            battery_mv: if far { 0 } else { u16::MAX },
        }
    };
    let samples: Vec<_> = (0..ENTRIES_MAX as u64).map(wild).collect();
    let mut out = [0; PAGE_BYTES];
    let encoded =
        encode_samples(place(256, Word::One), &samples, &mut Chain::default(), &mut out).unwrap();
    println!("{} of the worst samples in a page", encoded.taken);
    assert!(encoded.taken >= super::PAGE_SAMPLES_MIN);
}

fn any_quality() -> impl Strategy<Value = Quality> {
    (0_u8..8).prop_map(|number| Quality::from_number(number).unwrap())
}

fn any_sample() -> impl Strategy<Value = Sample> {
    let channel =
        || (any::<i32>(), any_quality()).prop_map(|(count_16, quality)| channel(count_16, quality));
    (0_u64..1 << 48, channel(), channel(), any::<u16>()).prop_map(
        |(tick_ms, level, temperature, battery_mv)| Sample {
            tick_ms,
            level,
            temperature,
            battery_mv,
        },
    )
}

/// Samples as a device makes them: mostly as before, now and then anything.
fn likely_samples() -> impl Strategy<Value = Vec<Sample>> {
    let one = (any::<u8>(), -40_i32..40, -3_i32..4, 1_i32..40, any_sample());
    prop::collection::vec(one, 0..150).prop_map(|moves| {
        let mut now = calm(0..1)[0];
        moves
            .into_iter()
            .map(|(what, level, temperature, step, any)| {
                now.tick_ms = (now.tick_ms + if what % 32 == 0 { 57 } else { 10_000 }) % (1 << 48);
                let by = if what == 99 { 1 } else { 16 };
                let moved = |channel: Channel, steps: i32| Channel {
                    count_16: channel.count_16.wrapping_add(by * steps),
                    ..channel
                };
                match what {
                    0..3 => now = any,
                    3..30 => now.level = Channel::failed(SensorError::Silent),
                    30..50 => now.level = Channel::good(by * step),
                    50..60 => now.temperature = Channel::default(),
                    60..70 => now.temperature = Channel::good(by * step),
                    70..80 => now.battery_mv ^= 0b1010,
                    _ if now.level.count_16 != 0 => now.level = moved(now.level, level),
                    _ => now.temperature = moved(now.temperature, temperature),
                }
                now
            })
            .collect()
    })
}

/// Writes samples into pages from offset 256 on, as the device does.
fn pages_of(samples: &[Sample], word: Word, wait: usize) -> Vec<u8> {
    let mut sector = vec![0xFF; SECTOR_BYTES];
    let mut first = header();
    first.word = word;
    sector[..104].copy_from_slice(&first.encode());
    let (mut offset, mut chain, mut rest) = (256_u16, Chain::default(), samples);
    while !rest.is_empty() {
        let mut out = [0; PAGE_BYTES];
        let some = &rest[..rest.len().min(wait)];
        match encode_samples(place(offset, word), some, &mut chain, &mut out) {
            Some(encoded) => {
                let at = usize::from(offset);
                sector[at..at + encoded.len].copy_from_slice(&out[..encoded.len]);
                offset += u16::try_from(encoded.len).unwrap();
                rest = &rest[encoded.taken..];
            }
            None => offset = offset.next_multiple_of(256),
        }
        if offset.is_multiple_of(256) {
            chain.turn_page();
        }
    }
    sector
}

fn come_back(samples: &[Sample], word: Word, wait: usize) -> Result<(), TestCaseError> {
    let sector = pages_of(samples, word, wait);
    let found: Vec<_> = SectorReader::new(&sector).unwrap().collect();
    prop_assert_eq!(found, as_items(samples));
    Ok(())
}

proptest! {
    #[test]
    fn any_samples_come_back(
        samples in prop::collection::vec(any_sample(), 0..70),
        word in any_word(),
        wait in 1_usize..33,
    ) {
        come_back(&samples, word, wait)?;
    }

    #[test]
    fn likely_samples_come_back(
        samples in likely_samples(), word in any_word(), wait in 1_usize..33
    ) {
        come_back(&samples, word, wait)?;
    }

    /// Bits with a right check, as an anchor and behind one: read to the end, within bounds.
    #[test]
    fn any_bits_are_read_to_the_end(
        first in prop::collection::vec(any::<u8>(), 1..120),
        second in prop::collection::vec(any::<u8>(), 1..120),
        sound in any::<bool>(),
        form_count in 0_u8..64,
    ) {
        let mut chain = Chain::default();
        let mut page =
            if sound { encode(&calm(0..6), place(256, Word::One), &mut chain) } else { Vec::new() };
        for payload in [first, second] {
            let length = u8::try_from(payload.len() + 6).unwrap();
            if page.len() + usize::from(length) > PAGE_BYTES {
                break;
            }
            let body = [&[length, form_count][..], &payload].concat();
            let offset = 256 + u16::try_from(page.len()).unwrap();
            page.extend(&body);
            page.extend(block_check(7, offset, &body).to_le_bytes());
        }
        for item in items(&page, place(256, Word::One)) {
            if let Item::Entry(Entry::Sample(sample)) = item {
                prop_assert!(sample.tick_ms < 1 << 48);
            }
        }
    }
}
