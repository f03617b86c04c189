//! The device application as shipped, on the emulated board.

use std::error::Error;
use std::io::{Read as _, Write as _};
use std::net::TcpStream;
use std::ops::ControlFlow;
use std::sync::Arc;
use std::time::{Duration, Instant};

use strake::journal_file::{JournalFile, PartFile};
use strake::link::{Client, Port, PortError, collect};
use strake::replay::{Replay, replay};
use strake_core::plan_slot::fingerprint;
use strake_core::wire::{Status, Text};

use crate::image::Image;
use crate::machine::{Machine, PATIENCE, Setup};
use crate::toolchain::{self, root};

/// The register that the tank file names.
pub(crate) const LEVEL_REGISTER: u16 = 7;
/// Levels in counts of the sensor: nothing is near its threshold; past the alarm of course 1.
pub(crate) const WELL_MM: u16 = 6_100;
pub(crate) const TOO_HIGH_MM: u16 = 7_900;
/// UTC seconds that the tests set the clock to: 2026-06-01.
pub(crate) const UTC_S: u64 = 1_780_272_000;

/// What [`Status::output`] says.
pub(crate) const HEALTHY: u8 = 0;
pub(crate) const CANNOT_SEE: u8 = 1;
pub(crate) const ACT_NOW: u8 = 2;

pub(crate) fn image() -> Result<Arc<Image>, Box<dyn Error>> {
    toolchain::image("device")
}

/// The host link's TCP connection as a port.
#[derive(Debug)]
pub(crate) struct TcpPort {
    line: TcpStream,
    opened: Instant,
}

impl TcpPort {
    fn failed(error: &std::io::Error) -> PortError {
        PortError::Failed { port: "the emulated link".to_owned(), cause: error.to_string() }
    }
}

impl Port for TcpPort {
    fn name(&self) -> &'static str {
        "the emulated link"
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        self.line.write_all(bytes).map_err(|error| Self::failed(&error))
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        use std::io::ErrorKind;
        // A wait of nothing would mean one without end.
        let wait = wait.max(Duration::from_millis(1));
        self.line.set_read_timeout(Some(wait)).map_err(|error| Self::failed(&error))?;
        match self.line.read(out) {
            Ok(0) => Err(Self::failed(&ErrorKind::UnexpectedEof.into())),
            Ok(count) => Ok(count),
            Err(error) => match error.kind() {
                ErrorKind::WouldBlock | ErrorKind::TimedOut | ErrorKind::Interrupted => Ok(0),
                _ => Err(Self::failed(&error)),
            },
        }
    }

    fn now(&self) -> Duration {
        self.opened.elapsed()
    }
}

/// A plan as a device takes it.
#[derive(Debug)]
pub(crate) struct Sealed {
    pub(crate) bytes: Vec<u8>,
    pub(crate) serial: u64,
    pub(crate) fingerprint: u64,
}

/// The plan of the tank file `tanks/{name}.toml`.
pub(crate) fn sealed(name: &str) -> Result<Sealed, Box<dyn Error>> {
    let path = root().join(format!("tests/emulated/tanks/{name}.toml"));
    let text = std::fs::read(&path)?;
    let said = |findings: strake::tank::Findings| findings.to_text(false);
    let file = strake::tank::parse(&path.to_string_lossy(), &text).map_err(said)?;
    let compiled = strake::compile::for_device(&file).map_err(said)?;
    let serial = UTC_S;
    let bytes = compiled.encode(serial)?;
    Ok(Sealed { fingerprint: fingerprint(&bytes), bytes, serial })
}

/// A device with its sensor, and the connection to it.
pub(crate) struct Site {
    pub(crate) machine: Machine,
    pub(crate) client: Client<TcpPort>,
}

impl Site {
    /// Starts the device with the level at `level_mm` and greets it.
    pub(crate) fn start(setup: Setup, level_mm: u16) -> Result<Self, Box<dyn Error>> {
        let setup = setup.register(LEVEL_REGISTER, level_mm);
        let mut machine = setup.start()?;
        let client = connect(&mut machine)?;
        Ok(Self { machine, client })
    }

    /// Starts a device on blank flash and loads the plan, as a technician does.
    pub(crate) fn commissioned(setup: Setup) -> Result<Self, Box<dyn Error>> {
        let mut site = Self::start(setup, WELL_MM)?;
        site.commission(&sealed("eight_courses")?)?;
        site.wait_for("the device to be healthy", |status| status.output == HEALTHY)?;
        Ok(site)
    }

    pub(crate) fn commission(&mut self, plan: &Sealed) -> Result<(), Box<dyn Error>> {
        self.client.load_plan(&plan.bytes, plan.serial, plan.fingerprint, Text::default())?;
        if self.client.read_plan(plan.fingerprint)? != plan.bytes {
            return Err("the plan read back differs".into());
        }
        self.client.set_clock(UTC_S)?;
        Ok(())
    }

    pub(crate) fn set_level(&self, level_mm: u16) {
        self.machine.sensor().set_register(LEVEL_REGISTER, level_mm);
    }

    /// Greets again, after a restart of the device.
    pub(crate) fn greet(&mut self) -> Result<(), Box<dyn Error>> {
        self.client.hello()?;
        Ok(())
    }

    /// Asks until the status is as wanted.
    pub(crate) fn wait_for(
        &mut self,
        what: &str,
        wanted: impl Fn(&Status) -> bool,
    ) -> Result<Status, Box<dyn Error>> {
        let start = Instant::now();
        loop {
            let status = self.client.status()?;
            if wanted(&status) {
                return Ok(status);
            }
            if start.elapsed() > PATIENCE {
                return Err(format!("waited in vain for {what}: {status:?}").into());
            }
            std::thread::sleep(Duration::from_millis(20));
        }
    }

    /// Raises the level past the alarm and waits for the device to say so.
    pub(crate) fn raise_alarm(&mut self) -> Result<(), Box<dyn Error>> {
        self.set_level(TOO_HIGH_MM);
        self.wait_for("the alarm", |status| status.output == ACT_NOW && status.alarms >= 2)?;
        Ok(())
    }

    /// Writes entries until the journal has this many bytes in use.
    pub(crate) fn fill_journal(&mut self, bytes: u32) -> Result<(), Box<dyn Error>> {
        loop {
            let bounds = self.client.journal_bounds()?;
            if bounds.newest * 4096 + u32::from(bounds.newest_used) >= bytes {
                return Ok(());
            }
            self.client.set_clock(UTC_S)?;
        }
    }

    /// Takes the journal home and replays it. Gives the bytes that it has, too.
    pub(crate) fn replayed(&mut self) -> Result<(Replay, u64), Box<dyn Error>> {
        let folder = self.machine.flash().folder();
        let (part_path, path) = (folder.join("journal.part"), folder.join("journal"));
        let mut part = PartFile::open(&part_path)?;
        let go_on = &mut |_: &_| ControlFlow::Continue(());
        let collected = collect(&mut self.client, &mut part, Some(UTC_S), go_on)?;
        if collected.gone + collected.unreadable > 0 {
            return Err(format!("sectors were not collected: {collected:?}").into());
        }
        part.finish(&collected.head, &path, true)?;
        Ok((replay(&mut JournalFile::open(&path)?)?, collected.bytes))
    }

    /// As [`Self::replayed`]; an error unless everything was whole and identical.
    pub(crate) fn replayed_identically(&mut self) -> Result<(Replay, u64), Box<dyn Error>> {
        let (replay, bytes) = self.replayed()?;
        let verdict = &replay.engine.verdict;
        if !verdict.identical() || !replay.damage.is_empty() {
            return Err(format!("not identical: {verdict:?}, damage {:?}", replay.damage).into());
        }
        Ok((replay, bytes))
    }
}

/// Connects to a device that was just started.
pub(crate) fn connect(machine: &mut Machine) -> Result<Client<TcpPort>, Box<dyn Error>> {
    let line = machine.link()?.try_clone()?;
    Ok(Client::connect(TcpPort { line, opened: Instant::now() })?)
}
