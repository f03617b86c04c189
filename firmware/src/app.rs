//! The application: one call in a loop.
//!
//! [`App::poll`] never waits. It takes a cycle when one is due, answers the link, does what is left
//! to do while idle, feeds the watchdog and says when it wants to be called again; in between the
//! board sleeps. A byte on the link or the button may wake it earlier.
//!
//! The watchdog is fed at the end of a poll, and only while the last completed cycle began no
//! longer ago than the plan's longest interval: a program that runs but measures no more is
//! restarted, and so is one that hangs in a cycle. Where the pause between two cycles is longer
//! than the watchdog's patience, the application asks to be called in between.

use crate::board::{Board, Clock, Hardware, Watchdog};
use crate::device::Device;
use crate::rooms::Rooms;
use crate::serve::Server;
use core::fmt;
use strake_core::wire::LinkCounters;

/// The watchdog is fed at least this often within its patience.
const PATIENCE_SHARE: u64 = 4;

/// The device application.
pub struct App<B: Board> {
    device: Device<B>,
    server: B::Room<Server>,
    link: B::Link,
    watchdog: B::Watchdog,
}

impl<B: Board> App<B> {
    /// Starts: finds the plan and the journal's end, restores the alarms, writes the start-up
    /// entry. Always finishes, whatever the flash holds.
    pub fn start(hardware: Hardware<B>, rooms: Rooms<B>) -> Self {
        let Rooms { memory, server, waiting } = rooms;
        let (device, link, watchdog) = Device::start(hardware, memory, waiting);
        Self { device, server, link, watchdog }
    }

    /// Does what is due and returns the tick at which it wants to be called again, ms.
    pub fn poll(&mut self) -> u64 {
        let now_ms = self.device.clock.now_ms();
        self.device.press(now_ms);
        if now_ms >= self.device.next_cycle_ms() {
            self.device.cycle(now_ms);
        }
        self.device.flush_when_due(now_ms);
        // A broken line costs a byte, which the frame's check sum shows; there is nobody to tell.
        let _ = self.server.poll(&mut self.link, &mut self.device);
        let idle = self.server.is_idle();
        if idle {
            self.device.housekeeping(now_ms);
        }
        let now_ms = self.device.clock.now_ms();
        if self.device.is_on_time(now_ms) {
            self.watchdog.feed();
        }
        let feed_ms = now_ms.saturating_add(self.watchdog.patience_ms() / PATIENCE_SHARE);
        if idle { self.device.next_wake_ms().min(feed_ms) } else { now_ms }
    }

    /// What has passed over the link.
    #[must_use]
    pub fn link_counters(&self) -> LinkCounters {
        self.server.counters()
    }

    /// The device behind the link.
    #[must_use]
    pub const fn device(&self) -> &Device<B> {
        &self.device
    }

    /// Gives the pieces back that a simulated board carries over a restart.
    pub fn into_device(self) -> Device<B> {
        self.device
    }
}

impl<B: Board> fmt::Debug for App<B> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("App").field("device", &self.device).finish_non_exhaustive()
    }
}
