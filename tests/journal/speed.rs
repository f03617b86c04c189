//! How fast samples are decoded, beside codec 0 and a plain copy. Printed, never judged: run
//! `cargo test --release -p strake --test journal -- --ignored --nocapture decoding`.

use crate::recorded::sectors;
use crate::series::{Logged, slow};
use std::hint::black_box;
use std::time::Instant;
use strake_core::journal::block::encode_samples;
use strake_core::journal::samples::Chain;
use strake_core::journal::{Entry, Item, PAGE_BYTES, PageReader, Place, Sample, Word};

/// Passes over the input.
const PASSES: u32 = 200;

/// Samples of six to a block, as pages of a sector without header.
fn pages(samples: &[Sample], wait: usize) -> Vec<[u8; PAGE_BYTES]> {
    let (mut pages, mut chain, mut offset) = (vec![[0xFF; PAGE_BYTES]], Chain::default(), 0_u16);
    for part in samples.chunks(wait) {
        let mut rest = part;
        while !rest.is_empty() {
            let mut out = [0; PAGE_BYTES];
            let place = Place { sequence: 0, offset, word: Word::Four };
            if let Some(encoded) = encode_samples(place, rest, &mut chain, &mut out) {
                let at = usize::from(offset);
                pages.last_mut().unwrap()[at..at + encoded.len]
                    .copy_from_slice(&out[..encoded.len]);
                offset += u16::try_from(encoded.len).unwrap();
                rest = &rest[encoded.taken..];
            } else {
                offset = 256;
            }
            if offset == 256 {
                pages.push([0xFF; PAGE_BYTES]);
                chain.turn_page();
                offset = 0;
            }
        }
    }
    pages
}

/// Entries a second and the entries of one pass.
fn rate(mut pass: impl FnMut() -> u64) -> (f64, u64) {
    let entries = pass();
    let begin = Instant::now();
    for _ in 0..PASSES {
        black_box(pass());
    }
    #[expect(clippy::cast_precision_loss, reason = "a few million")]
    let all = (entries * u64::from(PASSES)) as f64;
    (all / begin.elapsed().as_secs_f64(), entries)
}

fn count<'a>(items: impl Iterator<Item = Item<'a>>) -> u64 {
    let mut entries = 0;
    for item in items {
        match item {
            Item::Entry(Entry::Sample(sample)) => {
                black_box(sample);
                entries += 1;
            }
            Item::Entry(_) => entries += 1,
            Item::State { .. } | Item::Damage(_) => {}
        }
    }
    entries
}

#[test]
#[ignore = "a measurement; it prints"]
fn decoding() {
    let samples = slow("tide_newlondon_6min.csv", Logged::WithNoise);
    for wait in [6, 30] {
        let pages = pages(&samples, wait);
        let (per_s, entries) = rate(|| {
            let place = Place { sequence: 0, offset: 0, word: Word::Four };
            pages.iter().map(|page| count(PageReader::at(page, 0, place))).sum()
        });
        assert_eq!(entries, samples.len() as u64);
        println!("tide, {wait} to a block: {:.1} million samples/s", per_s / 1e6);
    }
    let (copied_per_s, _) = rate(|| black_box(samples.clone()).len() as u64);
    println!("copying decoded samples: {:.1} million/s", copied_per_s / 1e6);
    for file in ["codec_0.strake-journal", "codec_1.strake-journal"] {
        let sectors = sectors(file);
        let (per_s, entries) = rate(|| {
            let readers = sectors.iter().map(|s| strake_core::journal::SectorReader::new(s));
            readers.map(|reader| count(reader.unwrap())).sum()
        });
        println!("{file}: {:.1} million entries/s, {entries} entries", per_s / 1e6);
    }
}
