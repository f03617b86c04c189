//! The image for the board with the nRF52840: built, read and held to its limits, never run.

use std::sync::Arc;

use object::{Object as _, ObjectSection as _};

use crate::image::Image;
use crate::panics::ways_to_panic;
use crate::toolchain::{NRF52840, image_of};
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] = tests![
    nrf52840_image_keeps_its_limits,
    nrf52840_image_has_no_way_to_panic,
    nrf52840_way_to_panic_is_found_where_there_is_one,
];

fn image(feature: &'static str) -> Result<Arc<Image>, Box<dyn std::error::Error>> {
    image_of(NRF52840, "nrf52840", feature)
}

fn nrf52840_image_has_no_way_to_panic() -> Outcome {
    let image = image("")?;
    let found = ways_to_panic(&image, ALLOWED, LOGGER)?;
    println!("nrf52840, ways to panic: {} beside the allowed ones  {}", found.len(), image.sha256);
    same(&found, &Vec::new())
}

fn nrf52840_way_to_panic_is_found_where_there_is_one() -> Outcome {
    let found = ways_to_panic(&image("_unwrap")?, ALLOWED, LOGGER)?;
    hold(found.iter().any(|name| name.contains("main")), &format!("{found:?}"))
}

/// The handler and what leads to it from interrupts that nobody enables.
const ALLOWED: &[&str] = &[
    "rust_begin_unwind",
    "core..panicking",
    "_defmt_panic",
    "__defmt_default_panic",
    "DefaultHandler",
];

/// The log's crate panics when a frame is begun within another or ended without one. That is so in
/// a panic within a frame alone, and the second end of a run goes straight to the reset.
const LOGGER: &[&str] = &["_defmt_acquire", "_defmt_release"];

/// First address of the guard below the stack, and its bytes (src/mpu.rs of the board).
const GUARD: (u64, u64) = (0x2003_8000, 16 << 10);
/// The end of RAM, where the stack begins, and the stack's bytes (limits.x of the board).
const STACK: (u64, u64) = (0x2004_0000, 16 << 10);
/// The exceptions and the chip's 48 interrupts, 4 bytes each.
const VECTOR_BYTES: u64 = (16 + 48) * 4;
/// Program and constants stay below the plan slots by far: 96 KiB are linked, some less are used.
const FLASH_BUDGET: u64 = 88 << 10;
const RAM_BUDGET: u64 = 17 << 10;

fn nrf52840_image_keeps_its_limits() -> Outcome {
    let image = image("")?;
    let file = object::File::parse(&*image.elf)?;
    println!("image for the nRF52840, not run  {}", image.sha256);
    for name in [".vector_table", ".text", ".rodata", ".data", ".bss", ".uninit"] {
        let section = file.section_by_name(name).ok_or(format!("no section {name}"))?;
        println!("{name:<16}{:>9} B at {:#010x}", section.size(), section.address());
    }
    let footprint = image.footprint()?;
    println!("flash {} B of {FLASH_BUDGET}, static RAM {} B of {RAM_BUDGET}", footprint.flash, {
        footprint.ram
    });
    hold(footprint.flash <= FLASH_BUDGET, "more flash than its budget")?;
    hold(footprint.ram <= RAM_BUDGET, "more static RAM than its budget")?;

    let (stack_start, _) = image.symbol("_stack_start")?;
    let (stack_end, _) = image.symbol("_stack_end")?;
    same(&(stack_start, stack_start - stack_end), &STACK)?;
    // The guard fills what is just below it, and the static data ends before that.
    same(&(GUARD.0 + GUARD.1), &stack_end)?;
    let statics = file.section_by_name(".uninit").ok_or("no retained memory")?;
    hold(statics.address() + statics.size() <= GUARD.0, "static data reaches into the guard")?;

    let vectors = file.section_by_name(".vector_table").ok_or("no vectors")?;
    same(&(vectors.address(), vectors.size()), &(0, VECTOR_BYTES))?;
    let text = file.section_by_name(".text").ok_or("no code")?;
    let code = text.address()..text.address() + text.size();
    let words = vectors.data()?.as_chunks::<4>().0.iter().map(|word| u32::from_le_bytes(*word));
    let words: Vec<u64> = words.map(u64::from).collect();
    same(&words[0], &stack_start)?;
    // Reserved ones are zero; every other leads to code, in Thumb state.
    let led = words[1..].iter().filter(|word| **word != 0);
    let astray: Vec<_> =
        led.clone().filter(|word| *word & 1 == 0 || !code.contains(*word)).collect();
    hold(astray.is_empty(), &format!("vectors that lead nowhere: {astray:x?}"))?;
    // These have a handler of their own, by the number of their vector.
    let (default, _) = image.symbol("DefaultHandler")?;
    let faults = [("Reset", 1), ("HardFault", 3), ("MemoryManagement", 4)];
    let interrupts = [("UARTE0_UART0", 2), ("GPIOTE", 6), ("RTC1", 17), ("UARTE1", 40)];
    let interrupts = interrupts.map(|(name, number)| (name, number + 16));
    for (name, vector) in faults.into_iter().chain(interrupts) {
        let (handler, _) = image.symbol(name)?;
        same(&(words[vector] & !1), &handler)?;
        hold(handler != default, &format!("{name} has no handler of its own"))?;
    }
    Ok(())
}
