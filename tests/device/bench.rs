//! A device on a bench, sealed plans, and the program under test.

use std::fs;
use std::path::PathBuf;
use std::process::{Command, Output};
use strake::compile::{self, Compiled};
use strake::sim::board::Bench;
use strake::sim::machine::Machine;
use strake::sim::pty::PtyMachine;
use strake::sim::sensor::{Level, Sensor};
use strake_core::wire::Text;
use tempfile::TempDir;

/// The tank of the tests: its file, as shipped.
pub(crate) const TANK: &str = include_str!("../../configs/brine_day_tank.toml");
/// Serial of the first plan: 2026-05-28, 20:26:40.
pub(crate) const SERIAL: u64 = 1_780_000_000;

/// Swings between `low_m` and `high_m` once in two days, slower than the tank file's rates.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Swing {
    pub(crate) low_m: f64,
    pub(crate) high_m: f64,
}

impl Swing {
    pub(crate) fn still(level_m: f64) -> Self {
        Self { low_m: level_m, high_m: level_m }
    }
}

impl Level for Swing {
    fn level_m(&self, now_ms: u64) -> f64 {
        let hours = f64::from(u32::try_from(now_ms / 1000).unwrap()) / 3600.0;
        let share = 0.5 - 0.5 * (std::f64::consts::TAU * hours / 48.0).cos();
        self.low_m + share * (self.high_m - self.low_m)
    }
}

/// A device that nobody has commissioned, its sensor on `level`.
pub(crate) fn device(level: Swing) -> PtyMachine {
    device_with_ring(level, 256)
}

/// A device whose journal has this many sectors.
pub(crate) fn device_with_ring(level: Swing, sectors: usize) -> PtyMachine {
    PtyMachine::serve(move || machine(level, sectors)).unwrap()
}

/// The device itself: its sensor as the shipped tank file states it, with a little noise.
pub(crate) fn machine(level: Swing, sectors: usize) -> Machine {
    let plan = compiled().plan;
    let sensor = Sensor::new(&plan, Box::new(level), 20.0, 7);
    Machine::new(Bench::new(sensor, sectors), Text::new("pump house 7").unwrap())
}

/// The shipped tank file, compiled.
pub(crate) fn compiled() -> Compiled {
    let file = strake::tank::parse("tank.toml", TANK.as_bytes()).unwrap();
    compile::for_device(&file).unwrap()
}

/// Lets virtual time go by.
pub(crate) fn run_for(device: &PtyMachine, time_ms: u64) {
    let run = move |machine: &mut Machine| {
        let now_ms = machine.bench().now_ms.get();
        machine.run_until(now_ms + time_ms);
    };
    device.with(run).unwrap();
}

/// A folder with a sealed plan in it.
pub(crate) struct Sealed {
    pub(crate) folder: TempDir,
    pub(crate) file: PathBuf,
}

/// Seals a tank file with the program itself.
pub(crate) fn sealed(tank: &str, serial: u64) -> Sealed {
    let folder = tempfile::tempdir().unwrap();
    let tank_file = folder.path().join("tank.toml");
    fs::write(&tank_file, tank).unwrap();
    let file = folder.path().join("tank.plan");
    let arguments = ["seal", tank_file.to_str().unwrap(), "-o", file.to_str().unwrap()];
    let ran = run(strake().args(arguments).args(["--serial", &serial.to_string()]));
    assert_eq!(ran.exit, 0, "{}", ran.err);
    Sealed { folder, file }
}

/// The program.
pub(crate) fn strake() -> Command {
    Command::new(env!("CARGO_BIN_EXE_strake"))
}

/// What a run left.
#[derive(Debug)]
pub(crate) struct Ran {
    pub(crate) exit: i32,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl From<Output> for Ran {
    fn from(output: Output) -> Self {
        Self {
            exit: output.status.code().expect("it was not killed"),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }
}

/// Runs it to its end.
pub(crate) fn run(command: &mut Command) -> Ran {
    command.output().unwrap().into()
}

/// Runs a subcommand on the device's port.
pub(crate) fn on(device: &PtyMachine, arguments: &[&str]) -> Ran {
    run(strake().args(arguments).args(["--port", device.port()]))
}

/// A device that is commissioned with the shipped tank file.
pub(crate) fn commissioned(level: Swing) -> PtyMachine {
    let device = device(level);
    commission(&device);
    device
}

/// Commissions a device with the shipped tank file.
pub(crate) fn commission(device: &PtyMachine) {
    let plan = sealed(TANK, SERIAL);
    let ran = on(device, &["commission", plan.file.to_str().unwrap()]);
    assert_eq!(ran.exit, 0, "{}", ran.err);
}

/// The one JSON document on standard output.
pub(crate) fn document(ran: &Ran) -> serde_json::Value {
    serde_json::from_str(&ran.out).unwrap_or_else(|error| panic!("{error}: {ran:?}"))
}
