//! A block that rots before the device starts again in the same sector. The numbers in headers and
//! head count on from what the device could read; what was written behind the block gives it away.

use crate::changed::SAMPLES;
use std::cell::RefCell;
use std::ops::{ControlFlow, Range};
use std::rc::Rc;
use strake::compile::{self, fingerprint};
use strake::journal_file::{JournalFile, PartFile};
use strake::link::{Client, InProcess, collect};
use strake::replay::{Replay, replay};
use strake::sim::board::Bench;
use strake::sim::machine::{Happening, Machine};
use strake::sim::sensor::{Level, Sensor};
use strake::verify::{Report, What, verify};
use strake_core::wire::Text;

const SERIAL: u64 = 1_780_000_000;

/// Passes warning and alarm of the day tank within two hours.
#[derive(Debug)]
struct Rising;

impl Level for Rising {
    fn level_m(&self, now_ms: u64) -> f64 {
        (6.0 + f64::from(u32::try_from(now_ms / 1000).unwrap()) * 4e-4).min(8.9)
    }
}

/// The place of a block in its page, and whether it holds samples.
type Block = (Range<usize>, bool);

/// Gives the byte of a page in which a bit is to turn, if its blocks suit.
type Choose = fn(&[Block]) -> Option<usize>;

fn blocks(page: &[u8]) -> Vec<Block> {
    let mut found = Vec::new();
    let mut at = 0;
    while at < page.len() && page[at] != 0xFF {
        let end = at + usize::from(page[at]) * 4;
        found.push((at..end, page[at + 1] >> 5 == SAMPLES));
        at = end;
    }
    found
}

/// Two hours of a device, a change of its first sector, a cold start, a quarter of an hour more.
/// Without `choose` no bit turns; the power is lost in the middle of a write instead.
fn taken_home(choose: Option<Choose>) -> (Report, Replay) {
    let text = include_bytes!("../../configs/brine_day_tank.toml");
    let compiled = compile::for_device(&strake::tank::parse("tank.toml", text).unwrap()).unwrap();
    let bench = Bench::new(Sensor::new(&compiled.plan, Box::new(Rising), 20.0, 3), 8);
    let machine = Rc::new(RefCell::new(Machine::new(bench.clone(), Text::new("rot").unwrap())));
    let turning = machine.clone();
    let port = InProcess::new(&bench.wire, move || turning.borrow_mut().poll());
    let mut client = Client::connect(port).unwrap();
    let plan = compiled.encode(SERIAL).unwrap();
    client.load_plan(&plan, SERIAL, fingerprint(&plan), Text::default()).unwrap();
    client.set_clock(SERIAL + 10).unwrap();
    machine.borrow_mut().run_until(7_200_000);
    machine.borrow_mut().happen(Happening::PowerOff);
    let image = bench.journal.with(|flash| flash.image());
    assert_ne!(image[0], 0xFF);
    assert_eq!(image[4096], 0xFF, "all stands in the first sector");
    let used = (1..16).take_while(|page| image[page * 256] != 0xFF).collect::<Vec<_>>();
    if let Some(choose) = choose {
        // Neither the first nor the last page.
        let (page, byte) = used[1..used.len() - 1]
            .iter()
            .find_map(|page| Some((page, choose(&blocks(&image[page * 256..][..256]))?)))
            .unwrap();
        let address = u32::try_from(page * 256 + byte).unwrap();
        bench.journal.with(|flash| flash.corrupt(address, 1, |byte| byte ^ 0x04));
    } else {
        // The last block as a cut write left it: its check is not there.
        let page = used[used.len() - 1] * 256;
        let (last, _) = blocks(&image[page..][..256]).pop().unwrap();
        let check = u32::try_from(page + last.end - 4).unwrap();
        bench.journal.with(|flash| flash.corrupt(check, 4, |_| 0xFF));
    }
    machine.borrow_mut().happen(Happening::PowerOn);
    machine.borrow_mut().run_until(8_100_000);
    client.hello().unwrap();
    let folder = tempfile::tempdir().unwrap();
    let mut part = PartFile::open(&folder.path().join("part")).unwrap();
    let all = &mut |_: &_| ControlFlow::Continue(());
    let collected = collect(&mut client, &mut part, None, all).unwrap();
    let path = folder.path().join("journal");
    part.finish(&collected.head, &path, false).unwrap();
    let report = verify(&mut JournalFile::open(&path).unwrap()).unwrap();
    (report, replay(&mut JournalFile::open(&path).unwrap()).unwrap())
}

fn is_told(report: &Report, replayed: &Replay) {
    assert_eq!(report.damage.len(), 1, "{report:?}");
    assert_eq!(report.damage[0].what, What::Decayed);
    assert_eq!(report.damage[0].missing.entries, None);
    assert!(report.contradictions.is_empty(), "{report:?}");
    assert!(report.conclusion().contains("Entries are missing"), "{}", report.conclusion());
    assert_eq!(report.damage, replayed.damage);
    let verdict = &replayed.engine.verdict;
    assert_eq!(verdict.first_difference, None, "what is missing is no other decision");
}

#[test]
fn a_block_with_others_behind_it_was_whole() {
    let (report, replayed) = taken_home(Some(|blocks| match blocks {
        [(first, true), _, ..] => Some(first.start + 8),
        _ => None,
    }));
    is_told(&report, &replayed);
}

#[test]
fn a_last_block_that_no_start_follows_was_whole() {
    let (report, replayed) = taken_home(Some(|blocks| match blocks {
        [_, .., (last, true)] => Some(last.start + 8),
        _ => None,
    }));
    is_told(&report, &replayed);
}

#[test]
fn a_write_that_the_power_tore_took_nothing_along() {
    let (report, replayed) = taken_home(None);
    assert_eq!(report.damage.len(), 1, "{report:?}");
    assert!(matches!(report.damage[0].what, What::Block(_)), "{report:?}");
    assert_eq!(report.damage[0].missing.entries, Some(0));
    assert!(replayed.engine.verdict.identical(), "{:?}", replayed.engine.verdict);
}
