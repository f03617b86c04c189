//! No way to panic is linked into the device's image, but for one.
//!
//! The image searched is the shipped one itself, the same whose size and stack are held to their
//! budgets. From the panic handler backwards every function is found that calls or jumps to it,
//! directly or through others. What remains is a way to panic: the compiler could not rule it out.
//! The one allowed is the handler of interrupts that nobody enables.
//!
//! What this does not show: endless loops, faults of the processor, undefined instructions that the
//! compiler puts where the program never comes; and calls by an address that is neither in the code
//! of a call nor a word of the image (an address built by two instructions).

use std::collections::BTreeSet;
use std::error::Error;
use std::sync::Arc;

use crate::image::Image;
use crate::toolchain::{image, image_with};
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] =
    tests![no_panic_is_reachable_in_the_device, a_way_to_panic_is_found_where_there_is_one,];

/// The handler itself and what leads to it from the one place where it may be called.
const ALLOWED: &[&str] = &[
    "rust_begin_unwind",
    "core..panicking",
    "_defmt_panic",
    "__defmt_default_panic",
    "interrupts..unexpected",
];

fn no_panic_is_reachable_in_the_device() -> Outcome {
    let image = image("device")?;
    let found = ways_to_panic(&image, ALLOWED, &[])?;
    println!("ways to panic: {} beside the allowed one  {}", found.len(), image.sha256);
    same(&found, &Vec::new())
}

fn a_way_to_panic_is_found_where_there_is_one() -> Outcome {
    for feature in ["_index", "_unwrap"] {
        let found = ways_to_panic(&image_with("device", feature)?, ALLOWED, &[])?;
        hold(found.iter().any(|name| name.contains("main")), &format!("{feature}: {found:?}"))?;
    }
    Ok(())
}

/// Names of the functions from which the panic handler can be reached, those allowed left out. What
/// leads to it through one of `excused` alone is not among them.
pub(crate) fn ways_to_panic(
    image: &Arc<Image>,
    allowed: &[&str],
    excused: &[&str],
) -> Result<Vec<String>, Box<dyn Error>> {
    let functions = image.functions()?;
    let content = image.content()?;
    let around = |address: u32| {
        functions.iter().find(|(start, size, _)| (*start..start + size).contains(&address))
    };
    let mut calls = BTreeSet::new();
    for (base, bytes) in &content {
        for (offset, pair) in (0_u32..).step_by(2).zip(halves(bytes)) {
            let from = base + offset;
            let targets = [branch_target(from, pair), Some(word(pair)).filter(|it| it & 1 == 1)];
            for target in targets.into_iter().flatten() {
                // A word names a function by its first address only.
                let is_word = target & 1 == 1;
                let Some((start, ..)) = around(target & !1) else { continue };
                if !is_word || *start == target & !1 {
                    calls.insert((around(from).map(|(start, ..)| *start), *start));
                }
            }
        }
    }
    let handler = functions.iter().find(|(.., name)| name.contains("rust_begin_unwind"));
    let (handler, ..) = handler.ok_or("the image has no panic handler")?;
    let cut = functions.iter().filter(|(.., name)| is_named(name, excused));
    let cut: Vec<u32> = cut.map(|(start, ..)| *start).collect();
    same(&cut.len(), &excused.len())?;
    let mut reaching = BTreeSet::from([*handler]);
    let mut count = 0;
    while count < reaching.len() {
        count = reaching.len();
        for (from, to) in &calls {
            if let Some(from) = from.filter(|from| reaching.contains(to) && !cut.contains(from)) {
                reaching.insert(from);
            }
        }
    }
    hold(reaching.len() > 1, "nothing calls the panic handler, not even what is allowed to")?;
    // One function may have several names.
    for (start, ..) in functions.iter().filter(|(.., name)| is_named(name, allowed)) {
        reaching.remove(start);
    }
    let names = functions.iter().filter(|(start, ..)| reaching.contains(start));
    Ok(names.map(|(.., name)| name.clone()).collect())
}

fn is_named(name: &str, allowed: &[&str]) -> bool {
    allowed.iter().any(|allowed| allowed.split("..").all(|piece| name.contains(piece)))
}

/// Each two neighbouring half-words.
fn halves(bytes: &[u8]) -> impl Iterator<Item = (u16, u16)> {
    let half = |pair: &[u8]| pair.first_chunk().map_or(0, |pair| u16::from_le_bytes(*pair));
    bytes.windows(4).step_by(2).map(move |four| (half(four), half(&four[2..])))
}

fn word((low, high): (u16, u16)) -> u32 {
    u32::from(high) << 16 | u32::from(low)
}

/// Where a call or a jump leads (BL and B, encodings T4 of B.W and T1 of BL; Armv7-M, A7.7.12 and
/// A7.7.18).
fn branch_target(address: u32, (first, second): (u16, u16)) -> Option<u32> {
    let is_call = second & 0xD000 == 0xD000;
    let is_jump = second & 0xD000 == 0x9000;
    if first & 0xF800 != 0xF000 || !(is_call || is_jump) {
        return None;
    }
    let bit = |half: u16, at: u32| u32::from(half) >> at & 1;
    let sign = bit(first, 10);
    let (i1, i2) = (1 ^ bit(second, 13) ^ sign, 1 ^ bit(second, 11) ^ sign);
    let offset = sign << 24
        | i1 << 23
        | i2 << 22
        | u32::from(first & 0x3FF) << 12
        | u32::from(second & 0x7FF) << 1;
    // 25 bits with their sign.
    let offset = (offset << 7).cast_signed() >> 7;
    Some(address.wrapping_add(4).wrapping_add_signed(offset))
}
