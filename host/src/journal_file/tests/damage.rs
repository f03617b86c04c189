//! Damaged places are located and counted, the rest is used.

use super::{file, head, identity, plan, read, sector};
use crate::journal_file::record::frame;
use crate::journal_file::{Damage, DamageKind, MAGIC, Record};
use proptest::prelude::*;

fn whole() -> Vec<u8> {
    let content: Vec<u8> = (0..=255).cycle().take(700).collect();
    file(&[
        identity(),
        plan(),
        sector(1, &content),
        sector(2, &content[3..]),
        sector(3, &content[9..]),
        Record::Head(head()),
    ])
}

#[test]
fn one_flipped_byte_costs_its_record_and_no_other() {
    let whole = whole();
    for place in MAGIC.len()..whole.len() {
        let mut bytes = whole.clone();
        bytes[place] ^= 0x40;
        let file = read(&bytes).unwrap();
        let [damage] = file.damage() else { panic!("{:?} at {place}", file.damage()) };
        assert!((damage.offset..damage.offset + damage.length).contains(&(place as u64)));
        let kept = file.sectors().count()
            + file.plans().count()
            + usize::from(file.identity().is_some())
            + usize::from(file.head().is_some());
        assert_eq!(kept, 5, "at {place}");
    }
}

#[test]
fn a_file_cut_anywhere_keeps_what_is_before() {
    let whole = whole();
    let mut most = 0;
    for length in MAGIC.len()..whole.len() {
        let file = read(&whole[..length]).unwrap();
        let sectors = file.sectors().count();
        assert!(sectors >= most && file.head().is_none());
        most = sectors;
        let ended = file.sound_end();
        if ended < length as u64 {
            let damage = Damage {
                offset: ended,
                length: length as u64 - ended,
                kind: DamageKind::Truncated,
            };
            assert_eq!(file.damage(), [damage]);
        } else {
            assert_eq!(file.damage(), []);
        }
    }
    assert_eq!(most, 3);
}

#[test]
fn rubbish_between_records_is_passed_over() {
    let mut bytes = file(&[identity()]);
    let offset = bytes.len() as u64;
    bytes.extend([3, 0, 1, 0, 0, 9, 9, 9]);
    bytes.extend(vec![0xFF; 100_000]);
    let length = bytes.len() as u64 - offset;
    bytes.extend(sector(7, &[1, 2]).encode());
    let file = read(&bytes).unwrap();
    assert_eq!(file.damage(), [Damage { offset, length, kind: DamageKind::NoRecord }]);
    assert_eq!(
        file.damage()[0].to_string(),
        "at byte 35: 100008 bytes are damaged and passed over"
    );
    assert_eq!(file.sectors().collect::<Vec<_>>(), [(7, 2)]);
}

#[test]
fn a_record_of_a_later_version_is_named() {
    let mut bytes = file(&[identity()]);
    bytes.extend(frame(9, &[1, 2, 3]));
    // A sector whose own length does not agree with its record, under a right check.
    bytes.extend(frame(3, &[1, 0, 0, 0, 5, 0, 1]));
    bytes.extend(plan().encode());
    let file = read(&bytes).unwrap();
    let texts: Vec<String> = file.damage().iter().map(ToString::to_string).collect();
    assert_eq!(
        texts,
        [
            "at byte 35: a record of 12 bytes with tag 9 that this version does not know",
            "at byte 47: a record of 16 bytes with tag 3 that this version does not know",
        ]
    );
    assert_eq!(file.plans().count(), 1);
}

proptest! {
    #[test]
    fn any_bytes_are_read_to_their_end(
        bytes in proptest::collection::vec(prop_oneof![Just(0_u8), 0_u8..5, any::<u8>()], 0..3000),
    ) {
        let mut all = MAGIC.to_vec();
        all.extend(&bytes);
        let mut file = read(&all).unwrap();
        let damaged: u64 = file.damage().iter().map(|damage| damage.length).sum();
        prop_assert!(damaged <= bytes.len() as u64);
        let mut after = None;
        while let Some(sector) = file.sector_after(after).unwrap() {
            after = Some(sector.sequence);
        }
    }

    #[test]
    fn a_file_with_many_wounds_gives_only_what_was_written(
        wounds in proptest::collection::vec((0_usize..2400, any::<u8>()), 1..12),
    ) {
        let whole = whole();
        let mut sound = read(&whole).unwrap();
        let mut bytes = whole.clone();
        for (place, byte) in wounds {
            let place = MAGIC.len() + place % (bytes.len() - MAGIC.len());
            bytes[place] = byte;
        }
        let mut file = read(&bytes).unwrap();
        for sequence in 0..5 {
            if let Some(found) = file.sector(sequence).unwrap() {
                prop_assert_eq!(Some(found), sound.sector(sequence).unwrap());
            }
        }
    }
}
