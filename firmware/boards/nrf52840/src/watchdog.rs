//! The watchdog (product specification, WDT). Once started it cannot be stopped; it runs in sleep,
//! and stands only while a debugger halts the processor.

use nrf52840_hal::pac::WDT;
use nrf52840_hal::wdt::{Parts, Watchdog, WatchdogHandle, count, handles::Hdl0};
use strake_firmware::board::Watchdog as Feeding;

/// Many times what the slowest cycle takes, which waits for a silent sensor.
const PATIENCE_MS: u32 = 60_000;
/// Of the 32,768 Hz clock.
const PATIENCE_TICKS: u32 = PATIENCE_MS / 1000 * 32_768;

/// A watchdog that counts.
pub struct Running(WatchdogHandle<Hdl0>);

/// Starts the count; one that a restart left running goes on. `None` when that one has another
/// number of feeders, which no version of this program starts.
pub(crate) fn start(peripheral: WDT) -> Option<Running> {
    let started = match Watchdog::try_new(peripheral) {
        Ok(mut watchdog) => {
            watchdog.set_lfosc_ticks(PATIENCE_TICKS);
            watchdog.run_during_sleep(true);
            watchdog.run_during_debug_halt(false);
            watchdog.activate::<count::One>()
        }
        Err(peripheral) => Watchdog::try_recover::<count::One>(peripheral).ok()?,
    };
    let Parts { handles: (handle,), .. } = started;
    Some(Running(handle))
}

impl Feeding for Running {
    fn patience_ms(&self) -> u64 {
        PATIENCE_MS.into()
    }

    fn feed(&mut self) {
        self.0.pet();
    }
}
