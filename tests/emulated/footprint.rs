//! Footprint.
use crate::device::{Site, UTC_S, image};
use crate::machine::Setup;
use crate::plugin::{Span, instruction_count};
use crate::{Outcome, Test, hold};

pub(crate) const TESTS: &[Test] = tests![footprint_trial,];
fn footprint_trial() -> Outcome {
    let image = image()?;
    let addr = |n: &str| image.symbol(n).map(|p| p.0);
    let l = image.symbols("evaluate::loads")?;
    let spans = [
        Span { name: "loads", start: l[0].0, stop: None },
        Span { name: "loads", start: l[1].0, stop: None },
        Span { name: "digest", start: addr("digest..add")?, stop: None },
        Span { name: "cycle", start: addr("device::cycle..cycle")?, stop: None },
    ];
    let plugin = instruction_count(&spans)?;
    let out = plugin.out;
    let mut site = Site::commissioned(Setup::new(&image).plugin(plugin).debugged())?;
    let (lo, hi) = (0x2000_0000, 0x2000_3000);
    let peak = site.machine.debugger()?.halted(|d| d.stack_peak(lo, hi))?;
    println!("start+plan {peak}");
    site.machine.debugger()?.halted(|d| d.paint_stack(lo))?;
    std::thread::sleep(std::time::Duration::from_secs(5));
    let peak = site.machine.debugger()?.halted(|d| d.stack_peak(lo, hi))?;
    println!("cycles {peak}");
    site.raise_alarm()?;
    while site.client.journal_bounds()?.newest_used < 4040 {
        site.client.set_clock(UTC_S)?;
    }
    site.machine.debugger()?.halted(|d| d.paint_stack(lo))?;
    site.wait_for("x", |s| s.journal.newest == 1)?;
    let peak = site.machine.debugger()?.halted(|d| d.stack_peak(lo, hi))?;
    println!("close {peak}");
    site.replayed_identically()?;
    let flash = site.machine.quit()?;
    let c = std::fs::read_to_string(flash.folder().join(out))?;
    for n in ["loads", "digest", "cycle"] {
        let v: Vec<&str> = c.lines().filter(|l| l.starts_with(n)).collect();
        println!("{} {:?}", v.len(), &v[..v.len().min(40)]);
    }
    hold(true, "")
}
