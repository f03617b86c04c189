//! The bookkeeping of a bulk transfer, frame by frame.

use crate::link::transfer::{Finished, Transfer};
use strake_core::wire::{ErrorCode, SectorData, SectorEnd, SectorRequest};

const UNIT: [u8; 128] = [0x5A; 128];

fn requests(transfer: &mut Transfer) -> Vec<SectorRequest> {
    std::iter::from_fn(|| transfer.next_request()).collect()
}

fn data(transfer: &mut Transfer, ticket: u8, unit: u8, units: usize) -> bool {
    transfer.data(&SectorData { ticket, unit, bytes: &UNIT.repeat(units) })
}

fn end(transfer: &mut Transfer, ticket: u8, used: u16) -> bool {
    transfer.end(SectorEnd { ticket, code: 0, used })
}

#[test]
fn what_was_lost_is_asked_for_again_and_nothing_else() {
    let mut transfer = Transfer::new(vec![7, 8, 9], None);
    let first = requests(&mut transfer);
    assert_eq!(first.iter().map(|r| r.sequence).collect::<Vec<_>>(), [7, 8], "8 KiB ahead");
    assert!(first.iter().all(|request| request.wanted == u32::MAX && request.frame_units == 8));
    // Of sector 7 the second and the last frame are lost, and its end.
    assert!(data(&mut transfer, 1, 0, 8) && data(&mut transfer, 1, 16, 8));
    assert!(data(&mut transfer, 2, 0, 8), "the next ticket tells that the first is through");
    let again = transfer.next_request().unwrap();
    assert_eq!((again.sequence, again.wanted), (7, 0xFF00_FF00));
    assert!(again.frame_units < 8, "frames get shorter with losses");
    assert_eq!(transfer.lost_frames(), 2);
    for unit in [8, 16, 24] {
        assert!(data(&mut transfer, 2, unit, 8));
    }
    assert!(end(&mut transfer, 2, 4096));
    assert_eq!(transfer.take_finished(), None, "the order of the list is kept");
    assert!(data(&mut transfer, again.ticket, 8, 8) && data(&mut transfer, again.ticket, 24, 8));
    assert!(end(&mut transfer, again.ticket, 4096));
    for sequence in [7, 8] {
        let bytes = vec![0x5A; 4096];
        assert_eq!(transfer.take_finished(), Some(Finished::Sector { sequence, bytes }));
    }
    assert!(!transfer.is_done());
}

#[test]
fn what_brings_nothing_new_is_not_progress() {
    let mut transfer = Transfer::new(vec![7], None);
    let ticket = transfer.next_request().unwrap().ticket;
    assert!(!data(&mut transfer, ticket.wrapping_add(9), 0, 1), "no such ticket");
    assert!(!data(&mut transfer, ticket, 31, 2), "beyond the sector");
    assert!(!data(&mut transfer, ticket, 0, 0), "empty");
    assert!(!end(&mut transfer, ticket, 4097), "more than a sector");
    assert!(data(&mut transfer, ticket, 0, 1) && !data(&mut transfer, ticket, 0, 1));
    assert!(end(&mut transfer, ticket, 4096));
    let ticket = transfer.next_request().unwrap().ticket;
    assert!(!end(&mut transfer, ticket, 4096), "the device passed over what it has");
    let ticket = transfer.next_request().unwrap().ticket;
    assert!(!end(&mut transfer, ticket, 100), "a sector in use does not shrink");
}

#[test]
fn what_was_given_up_is_still_welcome() {
    let mut transfer = Transfer::new(vec![7], None);
    let late = transfer.next_request().unwrap().ticket;
    assert_eq!(transfer.next_request(), None);
    for _ in 0..300 {
        transfer.give_up_issued();
        assert!(transfer.next_request().is_some());
    }
    assert!(!data(&mut transfer, late, 0, 8), "long forgotten");
    let ticket = 45; // 301 requests, counted in a byte
    assert!(data(&mut transfer, ticket, 0, 8));
    transfer.give_up_issued();
    assert!(data(&mut transfer, ticket, 8, 8));
    assert_eq!(transfer.next_request().unwrap().wanted, 0xFFFF_0000);
}

#[test]
fn a_sector_begun_is_completed_and_a_busy_device_asked_again() {
    let mut transfer = Transfer::new(vec![7], Some(&UNIT.repeat(3)[..300]));
    let request = transfer.next_request().unwrap();
    assert_eq!(request.wanted, !0b11, "two whole units are here");
    let busy = SectorEnd { ticket: request.ticket, code: ErrorCode::Busy.number(), used: 0 };
    assert!(!transfer.end(busy));
    let ticket = transfer.next_request().unwrap().ticket;
    assert!(end(&mut transfer, ticket, 310));
    let request = transfer.next_request().unwrap();
    assert_eq!(request.wanted, 0b100);
    assert!(transfer.data(&SectorData { ticket: request.ticket, unit: 2, bytes: &UNIT[..54] }));
    let bytes = vec![0x5A; 310];
    assert_eq!(transfer.take_finished(), Some(Finished::Sector { sequence: 7, bytes }));
    assert!(transfer.is_done());
}
