//! The application: one call in a loop.
//!
//! [`App::poll`] never waits. It takes a cycle when one is due, answers the link, does what is left
//! to do while idle, feeds the watchdog and says when it wants to be called again; in between the
//! board sleeps. A byte on the link or the button may wake it earlier.

use crate::board::{Board, Clock, Hardware, Watchdog};
use crate::device::Device;
use crate::serve::Server;
use core::fmt;
use strake_core::wire::LinkCounters;

/// The device application.
pub struct App<B: Board> {
    device: Device<B>,
    server: Server,
    link: B::Link,
    watchdog: B::Watchdog,
}

impl<B: Board> App<B> {
    /// Starts: finds the plan and the journal's end, restores the alarms, writes the start-up
    /// entry. Always finishes, whatever the flash holds.
    pub fn start(hardware: Hardware<B>) -> Self {
        let (device, link, watchdog) = Device::start(hardware);
        Self { device, server: Server::new(), link, watchdog }
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
        self.watchdog.feed();
        if idle { self.device.next_wake_ms() } else { now_ms }
    }

    /// What has passed over the link.
    #[must_use]
    pub const fn link_counters(&self) -> LinkCounters {
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
