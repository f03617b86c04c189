//! The simulated device: the unchanged application on the simulated board, in lock step.
//!
//! Time moves in [`Machine::run_until`] only, and only while no byte is in flight: a visit over the
//! link takes no virtual time. The same seed gives the same journal, byte for byte.

use super::board::{Bench, SimBoard};
use super::sensor::Failure;
use strake_core::wire::Text;
use strake_firmware::app::App;
use strake_firmware::board::ResetCause;

/// Something that happens to the device at a moment of the trial.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Happening {
    /// The button goes down or up.
    Button(bool),
    /// The sensor fails, or works again.
    Sensor(Option<Failure>),
    /// The power goes; RAM is lost.
    PowerOff,
    /// The power comes back.
    PowerOn,
    /// The watchdog bites: a warm restart.
    WarmRestart,
}

/// The application on its bench.
#[derive(Debug)]
pub struct Machine {
    bench: Bench,
    device_id: Text,
    app: Option<App<SimBoard>>,
}

impl Machine {
    /// Switches a device on for the first time.
    #[must_use]
    pub fn new(bench: Bench, device_id: Text) -> Self {
        let app = App::start(bench.hardware(ResetCause::PowerOn, device_id), Bench::rooms());
        Self { bench, device_id, app: Some(app) }
    }

    /// The bench.
    #[must_use]
    pub const fn bench(&self) -> &Bench {
        &self.bench
    }

    /// The application, while there is power.
    #[must_use]
    pub const fn app(&self) -> Option<&App<SimBoard>> {
        self.app.as_ref()
    }

    /// Lets the application do what is due now, without moving time.
    pub fn poll(&mut self) {
        if let Some(app) = &mut self.app {
            app.poll();
        }
    }

    /// Moves virtual time to `until_ms`, stopping wherever the application wants to be called.
    pub fn run_until(&mut self, until_ms: u64) {
        let clock = self.bench.now_ms.clone();
        loop {
            let now_ms = clock.get();
            // The application's ticks count from its start.
            let wake_ms = match &mut self.app {
                Some(app) => {
                    let wake_tick = app.poll();
                    self.bench.started_ms().saturating_add(wake_tick)
                }
                None => u64::MAX,
            };
            if now_ms >= until_ms {
                return;
            }
            clock.set(wake_ms.clamp(now_ms, until_ms));
        }
    }

    /// Makes something happen now.
    pub fn happen(&mut self, happening: Happening) {
        match happening {
            Happening::Button(down) => self.bench.button.set(down),
            Happening::Sensor(failure) => self.bench.sensor.borrow_mut().fail(failure),
            Happening::PowerOff => {
                self.app = None;
                self.bench.contact.set(false);
            }
            Happening::PowerOn => self.restart(ResetCause::PowerOn),
            Happening::WarmRestart => self.restart(ResetCause::Watchdog),
        }
    }

    fn restart(&mut self, cause: ResetCause) {
        // The old application ends first: it holds the flash.
        self.app = None;
        let hardware = self.bench.hardware(cause, self.device_id);
        self.app = Some(App::start(hardware, Bench::rooms()));
    }
}
