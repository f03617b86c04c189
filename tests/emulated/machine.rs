//! One emulated device: started, talked to, watched, cut off.
//!
//! Host link and sensor bus are TCP connections that the emulator makes to this process, so no
//! port number is guessed; the link can be a pseudo-terminal instead, as a user has it.

use std::error::Error;
use std::fs::File;
use std::io::{self, Read as _, Write as _};
use std::net::{TcpListener, TcpStream};
use std::path::PathBuf;
use std::process::{Child, Command, ExitStatus, Stdio};
use std::sync::Arc;
use std::thread;
use std::time::{Duration, Instant};

use serde_json::json;

use crate::debugger::Debugger;
use crate::flash_file::FlashFile;
use crate::image::Image;
use crate::log;
use crate::plugin::Plugin;
use crate::qmp::Qmp;
use crate::sensor::Sensor;
use crate::toolchain::EMULATOR;

/// After this the emulator or the device is taken for dead.
pub(crate) const PATIENCE: Duration = Duration::from_secs(30);

const LEDS: u64 = 0x4002_8000;
const CONTACT_BIT: u32 = 1 << 0;
const LAMP_BIT: u32 = 1 << 1;

/// How a machine is to be started.
#[derive(Debug)]
pub(crate) struct Setup {
    image: Arc<Image>,
    flash: Option<FlashFile>,
    sensor: Sensor,
    link_is_terminal: bool,
    instruction_time: Option<String>,
    stops_at_reset: bool,
    debugged: bool,
    plugins: Vec<Plugin>,
}

impl Setup {
    /// The image on erased flash, in real time, its link a TCP connection.
    pub(crate) fn new(image: &Arc<Image>) -> Self {
        Self {
            image: Arc::clone(image),
            flash: None,
            sensor: Sensor::default(),
            link_is_terminal: false,
            instruction_time: None,
            stops_at_reset: false,
            debugged: false,
            plugins: Vec::new(),
        }
    }

    /// Starts on this flash instead.
    pub(crate) fn flash(mut self, flash: FlashFile) -> Self {
        self.flash = Some(flash);
        self
    }

    /// The sensor has this value in a register from the start.
    pub(crate) fn register(self, register: u16, value: u16) -> Self {
        self.sensor.set_register(register, value);
        self
    }

    /// Makes the link a pseudo-terminal, see [`Machine::port`].
    pub(crate) fn link_as_terminal(mut self) -> Self {
        self.link_is_terminal = true;
        self
    }

    /// Each instruction takes 2^`shift` ns of the device's time. While it sleeps its time runs as
    /// real time does, or jumps to the next event (`jump`); not with the watchdog under test, and
    /// with waits for answers of 2 s or more only.
    pub(crate) fn instruction_time(mut self, shift: u8, jump: bool) -> Self {
        let sleep = if jump { "off" } else { "on" };
        self.instruction_time = Some(format!("shift={shift},sleep={sleep}"));
        self
    }

    /// Stands still where the device resets itself, see [`Machine::wait_for_reset`].
    pub(crate) fn stop_at_reset(mut self) -> Self {
        self.stops_at_reset = true;
        self
    }

    /// Lets [`Machine::debugger`] halt the processor and change what it works with.
    pub(crate) fn debugged(mut self) -> Self {
        self.debugged = true;
        self
    }

    pub(crate) fn plugin(mut self, plugin: Plugin) -> Self {
        self.plugins.push(plugin);
        self
    }

    pub(crate) fn start(self) -> Result<Machine, Box<dyn Error>> {
        let flash = match self.flash {
            Some(flash) => flash,
            None => FlashFile::erased()?,
        };
        let link = TcpListener::bind("127.0.0.1:0")?;
        let bus = TcpListener::bind("127.0.0.1:0")?;
        let mut command = Command::new(EMULATOR);
        command
            .args(["-M", "mps2-an386,memory-backend=psram", "-display", "none"])
            .args(["-monitor", "none", "-qmp", "stdio", "-object"])
            .arg(format!(
                "memory-backend-file,id=psram,size=16M,mem-path={},share=on",
                flash.path().display()
            ))
            .args(["-serial", "chardev:link", "-serial", "chardev:bus"])
            .args(["-chardev", &tcp("bus", &bus)?])
            .arg("-serial")
            .arg(format!("file:{}", flash.folder().join("log.bin").display()));
        if self.link_is_terminal {
            command.args(["-chardev", "pty,id=link"]);
        } else {
            command.args(["-chardev", &tcp("link", &link)?]);
        }
        if let Some(time) = &self.instruction_time {
            command.args(["-icount", time]);
        }
        if self.stops_at_reset {
            command.args(["-action", "reboot=shutdown,shutdown=pause"]);
        }
        let debugger = TcpListener::bind("127.0.0.1:0")?;
        if self.debugged {
            command.args(["-chardev", &tcp("debugger", &debugger)?, "-gdb", "chardev:debugger"]);
        }
        for plugin in &self.plugins {
            command.arg("-plugin").arg(plugin.argument(flash.folder()));
        }
        command.arg("-kernel").arg(&self.image.path);
        command.stdin(Stdio::piped()).stdout(Stdio::piped());
        command.stderr(File::create(flash.folder().join("emulator.txt"))?);
        let mut process = Process(command.spawn()?);
        let said = || std::fs::read_to_string(flash.folder().join("emulator.txt"));
        let connected = connect(&mut process, &bus, (!self.link_is_terminal).then_some(&link));
        let (bus, link) = connected
            .map_err(|error| format!("{error}; the emulator: {}", said().unwrap_or_default()))?;
        let debugger = self.debugged.then(|| accept(&mut process, &debugger)).transpose()?;
        let debugger = debugger.map(Debugger::open).transpose()?;
        self.sensor.serve(bus);
        let (input, output) = (process.0.stdin.take(), process.0.stdout.take());
        let qmp = Qmp::open(input.ok_or("no input")?, output.ok_or("no output")?)
            .map_err(|error| format!("{error}; the emulator: {}", said().unwrap_or_default()))?;
        let (image, sensor) = (self.image, self.sensor);
        Ok(Machine { process, qmp, link, unread: Vec::new(), sensor, image, flash, debugger })
    }
}

fn tcp(id: &str, listener: &TcpListener) -> io::Result<String> {
    let port = listener.local_addr()?.port();
    // Without `nodelay` each short frame waits 40 ms for the one before it.
    Ok(format!("socket,id={id},host=127.0.0.1,port={port},server=off,nodelay=on"))
}

/// Waits for the emulator's connections: the bus, and the link where there is one.
fn connect(
    process: &mut Process,
    bus: &TcpListener,
    link: Option<&TcpListener>,
) -> io::Result<(TcpStream, Option<TcpStream>)> {
    let bus = accept(process, bus)?;
    let link = link.map(|link| accept(process, link)).transpose()?;
    Ok((bus, link))
}

fn accept(process: &mut Process, listener: &TcpListener) -> io::Result<TcpStream> {
    listener.set_nonblocking(true)?;
    let start = Instant::now();
    loop {
        match listener.accept() {
            Ok((stream, _)) => {
                stream.set_nonblocking(false)?;
                stream.set_nodelay(true)?;
                return Ok(stream);
            }
            Err(error) if error.kind() != io::ErrorKind::WouldBlock => return Err(error),
            Err(_) => {}
        }
        if let Some(status) = process.0.try_wait()? {
            return Err(io::Error::other(format!("emulator ended at its start, {status}")));
        }
        if start.elapsed() > PATIENCE {
            return Err(io::Error::other("emulator did not connect"));
        }
        thread::sleep(Duration::from_millis(2));
    }
}

/// The emulator's process, killed when dropped.
#[derive(Debug)]
struct Process(Child);

impl Drop for Process {
    fn drop(&mut self) {
        // Either may fail when it has ended by itself.
        let _ = self.0.kill();
        let _ = self.0.wait();
    }
}

/// A running device.
#[derive(Debug)]
pub(crate) struct Machine {
    process: Process,
    qmp: Qmp,
    link: Option<TcpStream>,
    unread: Vec<u8>,
    sensor: Sensor,
    image: Arc<Image>,
    flash: FlashFile,
    debugger: Option<Debugger>,
}

impl Machine {
    /// The connection of the host link.
    pub(crate) fn link(&mut self) -> io::Result<&mut TcpStream> {
        self.link.as_mut().ok_or_else(|| io::Error::other("the link is a pseudo-terminal"))
    }

    /// Path of the pseudo-terminal that the host link is. The device hears what is sent a second
    /// after the path was opened; the emulator looks for an open end that often.
    pub(crate) fn port(&mut self) -> io::Result<PathBuf> {
        let lines = self.qmp.run("query-chardev", &json!({}))?;
        lines
            .as_array()
            .into_iter()
            .flatten()
            .filter(|line| line["label"] == "link")
            .find_map(|line| line["filename"].as_str()?.strip_prefix("pty:").map(PathBuf::from))
            .ok_or_else(|| io::Error::other("the link is no pseudo-terminal"))
    }

    pub(crate) fn send(&mut self, bytes: &[u8]) -> io::Result<()> {
        self.link()?.write_all(bytes)
    }

    /// The next line from the device, without its end.
    pub(crate) fn receive_line(&mut self) -> Result<String, Box<dyn Error>> {
        loop {
            if let Some(end) = self.unread.iter().position(|&byte| byte == b'\n') {
                let line: Vec<u8> = self.unread.drain(..=end).take(end).collect();
                return Ok(String::from_utf8(line)?);
            }
            let mut bytes = [0; 512];
            let link = self.link()?;
            link.set_read_timeout(Some(PATIENCE))?;
            let count = link.read(&mut bytes).map_err(|error| match error.kind() {
                io::ErrorKind::WouldBlock => format!("the device was silent for {PATIENCE:?}"),
                _ => error.to_string(),
            })?;
            if count == 0 {
                return Err("the emulator closed the link".into());
            }
            self.unread.extend(&bytes[..count]);
        }
    }

    /// The debugger of a machine that has one.
    pub(crate) fn debugger(&mut self) -> io::Result<&mut Debugger> {
        self.debugger.as_mut().ok_or_else(|| io::Error::other("the machine has no debugger"))
    }

    /// The sensor at the other end of the bus.
    pub(crate) fn sensor(&self) -> &Sensor {
        &self.sensor
    }

    /// The flash under the running device.
    pub(crate) fn flash(&self) -> &FlashFile {
        &self.flash
    }

    /// Whether the alarm contact conducts.
    pub(crate) fn contact(&mut self) -> io::Result<bool> {
        Ok(self.word(LEDS)? & CONTACT_BIT != 0)
    }

    /// Whether the lamp is lit.
    pub(crate) fn lamp(&mut self) -> io::Result<bool> {
        Ok(self.word(LEDS)? & LAMP_BIT != 0)
    }

    /// A 32-bit word of memory or of a register.
    pub(crate) fn word(&mut self, address: u64) -> io::Result<u32> {
        self.qmp.word(address)
    }

    /// Resets the machine from outside, as a reset pin would.
    pub(crate) fn reset(&mut self) -> io::Result<()> {
        self.qmp.run("system_reset", &json!({})).map(drop)
    }

    /// Waits until the device has asked for its reset; its outputs stand as it left them.
    pub(crate) fn wait_for_reset(&mut self) -> Result<(), Box<dyn Error>> {
        self.wait_for_status("shutdown")
    }

    /// Carries out the reset that was waited for; the next one stops the machine again.
    pub(crate) fn resume(&mut self) -> Result<(), Box<dyn Error>> {
        self.qmp.run("set-action", &json!({ "reboot": "reset" }))?;
        self.reset()?;
        self.wait_for_status("prelaunch")?;
        self.qmp.run("set-action", &json!({ "reboot": "shutdown" }))?;
        self.qmp.run("cont", &json!({}))?;
        Ok(())
    }

    fn wait_for_status(&mut self, status: &str) -> Result<(), Box<dyn Error>> {
        let start = Instant::now();
        while start.elapsed() < PATIENCE {
            if self.qmp.run("query-status", &json!({}))?["status"] == status {
                return Ok(());
            }
            thread::sleep(Duration::from_millis(2));
        }
        Err(format!("the machine did not come to the state {status}").into())
    }

    /// The log so far.
    pub(crate) fn log(&self) -> Result<Vec<String>, Box<dyn Error>> {
        let bytes = std::fs::read(self.flash.folder().join("log.bin"))?;
        log::decode(&self.image.elf, &bytes)
    }

    /// Cuts the power at once.
    pub(crate) fn cut_power(self) -> FlashFile {
        let Self { flash, process, .. } = self;
        drop(process);
        flash
    }

    /// Lets the emulator end in order, so that plugins write their results into the folder.
    pub(crate) fn quit(mut self) -> Result<FlashFile, Box<dyn Error>> {
        self.qmp.run("quit", &json!({}))?;
        let (_, flash) = self.wait()?;
        Ok(flash)
    }

    /// Waits until the emulator ends by itself.
    pub(crate) fn wait(mut self) -> Result<(ExitStatus, FlashFile), Box<dyn Error>> {
        let start = Instant::now();
        while start.elapsed() < PATIENCE {
            if let Some(status) = self.process.0.try_wait()? {
                return Ok((status, self.flash));
            }
            thread::sleep(Duration::from_millis(2));
        }
        Err("the emulator did not end".into())
    }
}
