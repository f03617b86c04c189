//! Single exchanges, on a perfect and on a bad line.

use super::fake::{FakeDevice, in_process, random_bytes, shared};
use crate::link::{Client, LinkError, Noisy};
use strake_core::wire::{ErrorCode, Text};

#[test]
fn asks_and_orders_over_a_perfect_line() {
    let device = shared(FakeDevice::new(5, 2));
    let mut client = Client::connect(in_process(&device)).unwrap();
    assert_eq!(client.identity(), &device.borrow().identity);
    let status = client.status().unwrap();
    assert_eq!((status.level_m.to_bits(), status.samples), (4.25_f32.to_bits(), 77));
    assert!(status.link.bytes_in > 0 && status.link.bytes_out > 0);
    assert_eq!(client.part_status(2).unwrap().part, 2);
    assert_eq!(client.fault_status().unwrap().counts[2], 513);
    client.set_clock(1_800_000_000).unwrap();
    client.acknowledge().unwrap();
    client.acknowledge().unwrap();
    let bounds = client.journal_bounds().unwrap();
    assert_eq!((bounds.oldest, bounds.newest, bounds.newest_used), (5, 7, 1700));
    assert_eq!(device.borrow().clock, [1_800_000_000]);
    assert_eq!(device.borrow().acknowledged, 2);
}

#[test]
fn loads_a_plan_and_reads_it_back() {
    let device = shared(FakeDevice::new(0, 0));
    device.borrow_mut().busy = 3;
    let mut client = Client::connect(in_process(&device)).unwrap();
    let plan = random_bytes(8, 3001);
    client.load_plan(&plan, 1_800_000_000, 0xFEED, Text::new("tank-7").unwrap()).unwrap();
    assert_eq!(client.identity().plan_fingerprint, 0xFEED);
    assert_eq!(client.plans().unwrap()[0].length, 3001);
    assert_eq!(client.read_plan(0xFEED).unwrap(), plan);
}

#[test]
fn loads_a_plan_over_a_bad_line_and_acts_once() {
    for seed in 0..4 {
        let device = shared(FakeDevice::new(0, 0));
        let line = Noisy::new(in_process(&device), 1e-3, 1e-4, seed);
        let mut client = Client::connect(line).unwrap();
        let plan = random_bytes(8, 3001);
        client.load_plan(&plan, 1_800_000_000, 0xFEED, Text::default()).unwrap();
        client.set_clock(1_800_000_000).unwrap();
        client.acknowledge().unwrap();
        assert_eq!(client.read_plan(0xFEED).unwrap(), plan);
        assert!(client.port.bits_flipped() > 0);
        assert_eq!(device.borrow().clock, [1_800_000_000]);
        assert_eq!(device.borrow().acknowledged, 1);
        assert_eq!(device.borrow().plans.len(), 3);
    }
}

#[test]
fn a_refusal_says_what_to_do() {
    let device = shared(FakeDevice::new(0, 0));
    device.borrow_mut().pressed = false;
    let mut client = Client::connect(in_process(&device)).unwrap();
    assert_eq!(
        client.acknowledge().unwrap_err().to_string(),
        "acknowledging: somebody must stand at the device; press its button and repeat this"
    );
    let error = client.part_status(9).unwrap_err();
    assert!(matches!(error, LinkError::Refused { code: ErrorCode::NoSuchPart, .. }), "{error}");
    let error = client.load_plan(&[0; 9000], 1, 1, Text::default()).unwrap_err();
    assert_eq!(
        error.to_string(),
        "loading the plan: the plan is longer than the device can store; shorten it and seal it \
         again (at most 8192 bytes)"
    );
    let error = client.read_plan(0xBAD).unwrap_err();
    assert!(matches!(error, LinkError::Refused { code: ErrorCode::PlanUnknown, .. }), "{error}");
}
