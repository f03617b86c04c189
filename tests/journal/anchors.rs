//! A control: a page without its anchor. The second block of samples stands where the first did,
//! its check mended, as if the writer had chained across the page. A reader of such a page must
//! lose or invent, in every page; so the anchor is what keeps pages apart.

use crate::bench::{Bench, op};
use std::ops::Range;
use strake::sim::nor::Nor;
use strake_core::journal::block::Place;
use strake_core::journal::check::block_check;
use strake_core::journal::{Entry, Item, PageReader, Word};

/// Whether the block holds samples, in either codec.
fn has_samples(block: &[u8]) -> bool {
    block[1] >> 5 < 2
}

/// Places of the blocks of a page.
fn blocks(page: &[u8]) -> Vec<Range<usize>> {
    let mut found = Vec::new();
    let mut at = 0;
    while at < page.len() && page[at] != 0xFF {
        let end = at + usize::from(page[at]) * 4;
        found.push(at..end);
        at = end;
    }
    found
}

fn samples(page: &[u8], place: Place) -> Vec<Entry> {
    let items = PageReader::at(page, 0, place);
    items
        .filter_map(|item| match item {
            Item::Entry(entry @ Entry::Sample(_)) => Some(entry),
            _ => None,
        })
        .collect()
}

#[test]
fn a_page_without_its_anchor_loses_or_invents() {
    let mut bench = Bench::new(Nor::<4>::new(6), 100);
    (0..4_000).for_each(|index| bench.run(op(index)).unwrap());
    bench.flush().unwrap();
    let (mut pages, mut invented, mut lost) = (0, 0, 0);
    for sequence in bench.journal.oldest_sequence()..bench.journal.newest_sequence().unwrap() {
        for index in 1_u16..16 {
            let place = Place { sequence, offset: index * 256, word: Word::Four };
            let mut page = [0; 256];
            bench.journal.read_sector(sequence, place.offset, &mut page).unwrap();
            let held = blocks(&page);
            let [first, second, ..] = &held[..] else { continue };
            if !has_samples(&page[first.clone()]) || !has_samples(&page[second.clone()]) {
                continue;
            }
            let right = samples(&page, place);
            let first_count = usize::from(page[first.start + 1] & 0x1F) + 1;
            let second_count = usize::from(page[second.start + 1] & 0x1F) + 1;
            let should = &right[first_count..first_count + second_count];

            let mut moved = vec![0xFF; 256];
            let body = second.len() - 4;
            moved[..body].copy_from_slice(&page[second.start..second.end - 4]);
            let check = block_check(sequence, place.offset, &moved[..body]);
            moved[body..body + 4].copy_from_slice(&check.to_le_bytes());
            let read = samples(&moved, place);
            pages += 1;
            invented += u32::from(read.iter().any(|entry| !right.contains(entry)));
            lost += u32::from(should.iter().any(|entry| !read.contains(entry)));
            assert_ne!(read, should, "sector {sequence}, page {index}");
        }
    }
    println!(
        "anchor missing: {pages} pages, {invented} with invented samples, {lost} with lost ones"
    );
    assert!(pages > 20 && lost == pages, "{pages} {invented} {lost}");
}
