//! Byte stuffing against published values.

use super::hex;
use crate::wire::cobs::{decode_in_place, encode_in_place, overhead};
use proptest::prelude::*;

fn encode(raw: &[u8]) -> Vec<u8> {
    let start = overhead(raw.len());
    let mut buffer = vec![0xAA; start + raw.len()];
    buffer[start..].copy_from_slice(raw);
    let length = encode_in_place(&mut buffer, start, raw.len()).unwrap();
    buffer[..length].to_vec()
}

fn decode(encoded: &[u8]) -> Option<Vec<u8>> {
    let mut buffer = encoded.to_vec();
    let length = decode_in_place(&mut buffer)?;
    Some(buffer[..length].to_vec())
}

#[test]
fn published_values() {
    // First row: the worked example of Cheshire and Baker 1999; the others are short cases worked
    // out by the paper's rules.
    for (raw, encoded) in [
        ("45 00 00 2C 4C 79 00 00 40 06 4F 37", "02 45 01 04 2C 4C 79 01 05 40 06 4F 37"),
        ("", "01"),
        ("00", "01 01"),
        ("00 00", "01 01 01"),
        ("00 11 00", "01 02 11 01"),
        ("11 22 00 33", "03 11 22 02 33"),
        ("11 22 33 44", "05 11 22 33 44"),
        ("11 00 00 00", "02 11 01 01 01"),
    ] {
        assert_eq!(encode(&hex(raw)), hex(encoded), "{raw}");
        assert_eq!(decode(&hex(encoded)).unwrap(), hex(raw), "{encoded}");
    }
}

#[test]
fn full_blocks() {
    let up_to = |last: u8| (1..=last).collect::<Vec<u8>>();
    let full = encode(&up_to(254));
    assert_eq!((full.len(), full[0]), (255, 0xFF));
    let more = encode(&up_to(255));
    assert_eq!((more.len(), more[0], &more[255..]), (257, 0xFF, &[0x02, 0xFF][..]));
    let mut zero_first = vec![0];
    zero_first.extend(up_to(254));
    assert_eq!(encode(&zero_first)[..3], [0x01, 0xFF, 0x01]);
    let mut zero_last = up_to(254);
    zero_last.push(0);
    assert_eq!(encode(&zero_last)[253..], [0xFD, 0xFE, 0x01, 0x01]);
}

#[test]
fn broken_stuffing_is_refused() {
    for broken in ["", "00", "01 00", "03 11", "FF 11", "02 00 01"] {
        assert_eq!(decode(&hex(broken)), None, "{broken}");
    }
}

#[test]
fn a_buffer_without_room_is_refused() {
    let mut buffer = [7; 300];
    assert_eq!(encode_in_place(&mut buffer, 0, 10), None);
    assert_eq!(encode_in_place(&mut buffer, 1, 254), None);
    assert_eq!(encode_in_place(&mut buffer, 2, 299), None);
    assert_eq!(encode_in_place(&mut buffer, 301, 0), None);
    assert!(encode_in_place(&mut buffer, 2, 298).is_some());
}

proptest! {
    #[test]
    fn every_content_comes_back(raw in proptest::collection::vec(
        prop_oneof![Just(0_u8), 1_u8.., Just(1_u8)], 0..1100))
    {
        let encoded = encode(&raw);
        prop_assert!(!encoded.contains(&0));
        prop_assert!(encoded.len() <= raw.len() + overhead(raw.len()));
        prop_assert_eq!(decode(&encoded).unwrap(), raw);
    }
}
