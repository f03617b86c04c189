//! Starts without a sample between them share one entry, and fill no page each.

use crate::random::Random;
use crate::visit::Visitor;
use crate::world;
use std::cell::RefCell;
use std::rc::Rc;
use strake::sim::machine::Happening;
use strake_core::journal::{Entry, Item, SectorReader};

fn start_ups(image: &[u8]) -> Vec<(u16, u16)> {
    let sectors = image.chunks(4096).filter_map(|bytes| SectorReader::new(bytes).ok());
    sectors
        .flatten()
        .filter_map(|item| match item {
            Item::Entry(Entry::StartUp { boot, count, .. }) => Some((boot, count)),
            _ => None,
        })
        .collect()
}

#[test]
fn starts_without_a_sample_share_an_entry() {
    let (machine, _) = world::device(&mut Random::new(1), 1, 20);
    let bench = machine.bench().clone();
    let machine = Rc::new(RefCell::new(machine));
    Visitor::new(&bench, machine.clone(), 1).load(&world::sealed(0)).unwrap();
    let image = || bench.journal.with(|flash| flash.image());
    machine.borrow_mut().run_until(60_000);
    let before = image();
    assert_eq!(start_ups(&before), [(1, 1)]);

    for _ in 0..5 {
        machine.borrow_mut().happen(Happening::WarmRestart);
    }
    // What waited was carried over by the first of them; nothing else is written.
    let pages = |image: &[u8]| image.chunks(256).filter(|page| page[0] != 0xFF).count();
    assert!(pages(&image()) <= pages(&before) + 1);
    assert_eq!(start_ups(&image()), [(1, 1)]);
    machine.borrow_mut().run_until(120_000);
    assert_eq!(start_ups(&image()), [(1, 1), (2, 5)]);

    // Without power the count is lost with the RAM: one start is told.
    machine.borrow_mut().happen(Happening::WarmRestart);
    machine.borrow_mut().happen(Happening::PowerOff);
    machine.borrow_mut().happen(Happening::PowerOn);
    machine.borrow_mut().run_until(180_000);
    assert_eq!(start_ups(&image()), [(1, 1), (2, 5), (3, 1)]);
}
