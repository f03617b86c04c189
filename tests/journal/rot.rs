//! Bit rot: random flips over the flash of a device that ran for days. Entries lost per flip, and
//! none accepted that is not the one that was written.
#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    clippy::cast_sign_loss,
    reason = "counts of entries and flips are small and positive"
)]

use crate::bench::{Bench, held_as, op};
use std::fmt::Write as _;
use strake::sim::nor::Nor;
use strake_core::journal::{Entry, Item, SectorReader};

const SECTOR: usize = 4096;
/// Flips per bit, and how many images are spoiled at that rate.
const RATES: [(f64, u32); 5] = [(1e-6, 400), (1e-5, 200), (1e-4, 60), (1e-3, 20), (1e-2, 10)];

/// Readable entries per sector of the image.
fn entries(image: &[u8]) -> Vec<Vec<Entry>> {
    image
        .chunks(SECTOR)
        .map(|bytes| {
            let Ok(reader) = SectorReader::new(bytes) else { return Vec::new() };
            reader
                .filter_map(|item| match item {
                    Item::Entry(entry) => Some(entry),
                    Item::State { .. } | Item::Damage(_) => None,
                })
                .collect()
        })
        .collect()
}

/// Accepted entries that are not those that were written, in order.
fn wrong(accepted: &[Entry], written: &[Entry]) -> u64 {
    let mut rest = written.iter();
    let mut wrong = 0;
    for entry in accepted {
        let before = rest.clone();
        if !rest.any(|one| one == entry) {
            rest = before;
            wrong += 1;
        }
    }
    wrong
}

struct Random(u64);

impl Random {
    /// xorshift64 (Marsaglia, Journal of Statistical Software 8 (2003) 14).
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        self.0
    }

    /// Bits until the next flip at this rate.
    fn gap(&mut self, rate: f64) -> usize {
        let share = (self.next() >> 11) as f64 / (1_u64 << 53) as f64;
        ((1.0 - share).ln() / (1.0 - rate).ln()) as usize
    }
}

#[derive(Default)]
struct Rot {
    flips: u64,
    lost: u64,
    wrong: u64,
}

fn rot(image: &[u8], written: &[Vec<Entry>], rate: f64, images: u32) -> Rot {
    let mut random = Random(0x9E37_79B9 + u64::from(images));
    let mut rot = Rot::default();
    for _ in 0..images {
        let mut spoiled = image.to_vec();
        let mut at = random.gap(rate);
        while at < spoiled.len() * 8 {
            spoiled[at / 8] ^= 1 << (at % 8);
            rot.flips += 1;
            at += 1 + random.gap(rate);
        }
        for (accepted, written) in entries(&spoiled).iter().zip(written) {
            let false_ones = wrong(accepted, written);
            rot.wrong += false_ones;
            rot.lost += written.len() as u64 + false_ones - accepted.len() as u64;
        }
    }
    rot
}

fn table<const WORD: usize>(out: &mut String)
where
    Nor<WORD>: crate::bench::Medium,
{
    let mut bench = Bench::new(Nor::<WORD>::new(8), 200);
    (0..6_000).for_each(|index| bench.run(op(index)).unwrap());
    bench.flush().unwrap();
    let image = bench.journal.flash().image();
    let written = entries(&image);
    let count: usize = written.iter().map(Vec::len).sum();
    let page = count as f64 / (image.len() / 256) as f64;
    writeln!(out, "W = {WORD}: {count} entries in 8 sectors, {page:.1} in a page").unwrap();
    for (rate, images) in RATES {
        let rot = rot(&image, &written, rate, images);
        let per_flip = rot.lost as f64 / rot.flips.max(1) as f64;
        let share = rot.lost as f64 / (count as f64 * f64::from(images));
        writeln!(
            out,
            "  {rate:7.0e} per bit: {:6} flips, {:6} entries lost, {per_flip:6.2} per flip, \
             {:6.2} % of all, {} accepted wrong",
            rot.flips,
            rot.lost,
            100.0 * share,
            rot.wrong
        )
        .unwrap();
        assert_eq!(rot.wrong, 0, "{out}");
        assert!(rot.flips > 50, "{out}");
        // A flip costs the rest of its page; one in 104 bytes of 4,096 a whole sector, through the
        // header.
        let whole_sector = count as f64 / 8.0 * 104.0 / 4096.0;
        assert!(per_flip <= page + whole_sector, "{out}");
    }
}

#[test]
fn flips_cost_their_page_and_invent_nothing() {
    let mut out = String::new();
    table::<4>(&mut out);
    table::<1>(&mut out);
    println!("{out}");
    held_as("rot.txt", &out);
}

/// A control: where the checks are mended after the flips, wrong entries are seen.
#[test]
fn the_count_sees_wrong_entries() {
    let fault = |detail| Entry::ClockFix { tick_ms: detail, utc_s: detail };
    let written = [fault(1), fault(2), fault(3)];
    assert_eq!(wrong(&[fault(1), fault(3)], &written), 0);
    assert_eq!(wrong(&[fault(1), fault(4), fault(3)], &written), 1);
    assert_eq!(wrong(&[fault(2), fault(1)], &written), 1);
}
