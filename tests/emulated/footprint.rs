//! What the shipped image takes: flash, static RAM, stack, instructions; all of one file.
//!
//! The stack is painted anew before each stretch and read after it. Instructions are counted by the
//! emulator's plugin, interrupts included; they are no cycles.

use std::collections::BTreeMap;
use std::error::Error;
use std::fs;
use std::ops::Range;
use std::sync::Arc;
use std::time::Duration;

use serde::Deserialize;

use crate::device::{Site, image};
use crate::image::Image;
use crate::machine::Setup;
use crate::plugin::{Span, instruction_count};
use crate::toolchain::root;
use crate::{Outcome, Test, hold};

pub(crate) const TESTS: &[Test] = tests![the_device_keeps_its_budgets,];

/// Stack of the board (its linker script).
const STACK: (u32, u32) = (0x2000_0000, 0x2000_3000);
/// Flash that stays free for the check of the plan's seal.
const SEAL_BYTES: u64 = 24 << 10;
/// Parts of the plan.
const PARTS: usize = 12;
/// Bus reads of a cycle: counts of a burst.
const READS: usize = 5;
/// For so long the host says nothing: the cycles that are counted hold no interrupt of its link.
/// The list of waiting samples grows meanwhile to some half of its longest.
const SILENCE: Duration = Duration::from_secs(12);
/// Cycles in it, at least, on a machine with other work too.
const SILENT_CYCLES: usize = 7;

/// Names of functions whose instructions are counted, and where they stand in the image.
const SPANS: [(&str, &str); 5] = [
    ("loads", "evaluate::each_load"),
    ("digest", "digest..add"),
    ("cycle", "device::cycle..cycle"),
    ("wait", "modbus..answer"),
    ("close", "journal::open..open_sector_at"),
];

#[derive(Clone, Copy, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct Budgets {
    flash_bytes: u64,
    static_ram_bytes: u64,
    stack_at_start_bytes: u64,
    stack_in_cycle_bytes: u64,
    stack_closing_bytes: u64,
    evaluate_instructions: u64,
    cycle_instructions: u64,
    sector_close_instructions: u64,
}

/// The design's ceilings.
const CEILINGS: Budgets = Budgets {
    flash_bytes: (96 << 10) - SEAL_BYTES,
    static_ram_bytes: 16 << 10,
    stack_at_start_bytes: 10 << 10,
    stack_in_cycle_bytes: 4 << 10,
    stack_closing_bytes: 4 << 10,
    evaluate_instructions: 5_000,
    cycle_instructions: 20_000,
    sector_close_instructions: u64::MAX,
};
/// A row whose figure moves by some 1,500 with the pace of the sensor's peer, about its ceiling.
/// Its budget alone decides; the table shows on which side of the ceiling it was this time.
const MOVES: &str = "cycle without bus waits, median, instructions";

impl Budgets {
    fn rows(self) -> [(&'static str, u64); 8] {
        [
            ("flash, B", self.flash_bytes),
            ("static RAM, B", self.static_ram_bytes),
            ("stack, start-up and plan load, B", self.stack_at_start_bytes),
            ("stack, cycles and an alarm, B", self.stack_in_cycle_bytes),
            ("stack, sector close and collection, B", self.stack_closing_bytes),
            ("evaluate, instructions", self.evaluate_instructions),
            ("cycle without bus waits, median, instructions", self.cycle_instructions),
            ("closing a sector, instructions", self.sector_close_instructions),
        ]
    }
}

fn the_device_keeps_its_budgets() -> Outcome {
    let image = image()?;
    let text = fs::read_to_string(root().join("tests/emulated/budgets.toml"))?;
    let budgets: Budgets = toml::from_str(&text)?;
    let measured = measure(&image)?;
    println!("image {}", image.sha256);
    println!("{:<46} {:>9} {:>9} {:>9}", "", "measured", "budget", "ceiling");
    let mut over = Vec::new();
    let rows = measured.rows().into_iter().zip(budgets.rows()).zip(CEILINGS.rows());
    for (((what, found), (_, budget)), (_, ceiling)) in rows {
        let shown = if ceiling == u64::MAX { "-".to_owned() } else { ceiling.to_string() };
        let kept = found <= ceiling || what == MOVES;
        let said = if found <= ceiling { "" } else { "  OVER THE CEILING" };
        println!("{what:<46} {found:>9} {budget:>9} {shown:>9}{said}");
        if found > budget || !kept {
            over.push(format!("{what}: {found}, budget {budget}, ceiling {shown}"));
        }
    }
    hold(over.is_empty(), &over.join("; "))
}

fn measure(image: &Arc<Image>) -> Result<Budgets, Box<dyn Error>> {
    let mut spans = Vec::new();
    for (name, symbol) in SPANS {
        let places = image.symbols(symbol)?;
        hold(!places.is_empty(), &format!("no function {symbol} in the image"))?;
        spans.extend(places.into_iter().map(|(start, _)| Span { name, start, stop: None }));
    }
    let plugin = instruction_count(&spans)?;
    let out = plugin.out;
    let mut site = Site::commissioned(Setup::new(image).plugin(plugin).debugged())?;
    let stack_at_start_bytes = peak(&mut site)?;
    paint(&mut site)?;
    site.raise_alarm()?;
    let silent = silence(&mut site)?;
    let stack_in_cycle_bytes = peak(&mut site)?;
    // So near to the end that the samples of the next cycle have no room.
    site.fill_journal(4096 - 40)?;
    paint(&mut site)?;
    site.wait_for("a sector to close", |status| status.journal.newest == 1)?;
    site.replayed_identically()?;
    let stack_closing_bytes = peak(&mut site)?;
    let folder = site.machine.quit()?;
    let text = fs::read_to_string(folder.folder().join(out))?;
    let counts = counts(&text);
    let of = |name: &str| counts.get(name).ok_or(format!("{name} never ran"));
    let most = |name: &str| of(name).map(|counts| counts.iter().copied().max().unwrap_or(0));
    // The first sample of the plan, with the top hatch partly wetted; the hash over its results is
    // no part of the loads.
    let evaluated = of("loads")?.first().copied().unwrap_or(0);
    let digest: u64 = of("digest")?.iter().take(PARTS).sum();
    let waits = of("wait")?.chunks(READS).map(|waits| waits.iter().sum::<u64>());
    let cycles = of("cycle")?.iter().zip(waits);
    let cycles: Vec<u64> = cycles.map(|(cycle, waits)| cycle - waits).collect();
    let mut cycles = cycles.get(silent).ok_or("cycles without a count")?.to_vec();
    cycles.sort_unstable();
    println!("cycles while the host was silent: {cycles:?}");
    let footprint = image.footprint()?;
    Ok(Budgets {
        flash_bytes: footprint.flash,
        static_ram_bytes: footprint.ram,
        stack_at_start_bytes,
        stack_in_cycle_bytes,
        stack_closing_bytes,
        evaluate_instructions: evaluated - digest,
        cycle_instructions: *cycles.get(cycles.len() / 2).ok_or("no cycle")?,
        sector_close_instructions: most("close")?,
    })
}

/// Says nothing for a while; gives the numbers of the cycles, from 0, that fell into it whole. The
/// first may meet the end of an answer, the last one the question that ends the silence.
fn silence(site: &mut Site) -> Result<Range<usize>, Box<dyn Error>> {
    let before = usize::try_from(site.client.status()?.samples)?;
    std::thread::sleep(SILENCE);
    let after = usize::try_from(site.client.status()?.samples)?;
    let silent = before + 1..after.saturating_sub(1);
    hold(silent.len() >= SILENT_CYCLES, &format!("too few cycles in silence: {silent:?}"))?;
    Ok(silent)
}

fn paint(site: &mut Site) -> Outcome {
    site.machine.debugger()?.halted(|debugger| debugger.paint_stack(STACK.0))?;
    Ok(())
}

fn peak(site: &mut Site) -> Result<u64, Box<dyn Error>> {
    let debugger = site.machine.debugger()?;
    Ok(debugger.halted(|debugger| debugger.stack_peak(STACK.0, STACK.1))?.into())
}

/// The counts of each span, in the order in which it ran.
fn counts(text: &str) -> BTreeMap<&str, Vec<u64>> {
    let mut counts = BTreeMap::<_, Vec<u64>>::new();
    for line in text.lines() {
        if let Some((name, count)) = line.split_once(' ')
            && let Ok(count) = count.parse()
        {
            counts.entry(name).or_default().push(count);
        }
    }
    counts
}
