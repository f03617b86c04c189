//! A serial line, and finding the devices on the lines there are.

use super::{BAUD, Client, LinkError, Port, PortError};
use std::io::{self, Read, Write};
use std::time::{Duration, Instant};
use strake_core::wire::Identity;

/// How long the line may refuse to take bytes.
const WRITE_TIMEOUT: Duration = Duration::from_secs(2);
/// Pause after a read that ended early with nothing, so that a dead line costs no processor time.
const EMPTY_PAUSE: Duration = Duration::from_millis(1);

/// An open serial line.
pub struct SerialPort {
    name: String,
    line: Box<dyn serialport::SerialPort>,
    opened: Instant,
}

impl std::fmt::Debug for SerialPort {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("SerialPort").field("name", &self.name).finish_non_exhaustive()
    }
}

impl SerialPort {
    /// Opens a port by its name, at [`BAUD`].
    ///
    /// # Errors
    /// [`PortError::Missing`], [`PortError::Busy`], [`PortError::NoPermission`],
    /// [`PortError::Failed`].
    pub fn open(name: &str) -> Result<Self, PortError> {
        let line = serialport::new(name, BAUD).timeout(WRITE_TIMEOUT).open();
        line.map(|line| Self::over(name, line)).map_err(|error| open_error(name, &error))
    }

    /// Uses a line that is open already.
    #[must_use]
    pub fn over(name: &str, mut line: Box<dyn serialport::SerialPort>) -> Self {
        // Some bridges send only while these stand. A pseudo-terminal has neither: harmless.
        let _no_such_line = line.write_data_terminal_ready(true);
        let _no_such_line = line.write_request_to_send(true);
        Self { name: name.to_owned(), line, opened: Instant::now() }
    }

    fn failed(&self, cause: &impl ToString) -> PortError {
        PortError::Failed { port: self.name.clone(), cause: cause.to_string() }
    }
}

impl Port for SerialPort {
    fn name(&self) -> &str {
        &self.name
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        self.line.set_timeout(WRITE_TIMEOUT).map_err(|error| self.failed(&error))?;
        self.line.write_all(bytes).map_err(|error| self.failed(&error))
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        self.line.set_timeout(wait).map_err(|error| self.failed(&error))?;
        match self.line.read(out) {
            Ok(0) => {
                std::thread::sleep(EMPTY_PAUSE.min(wait));
                Ok(0)
            }
            Ok(count) => Ok(count),
            Err(error) => match error.kind() {
                io::ErrorKind::TimedOut
                | io::ErrorKind::WouldBlock
                | io::ErrorKind::Interrupted => Ok(0),
                _ => Err(self.failed(&error)),
            },
        }
    }

    fn now(&self) -> Duration {
        self.opened.elapsed()
    }
}

fn open_error(name: &str, error: &serialport::Error) -> PortError {
    let port = name.to_owned();
    match error.kind() {
        serialport::ErrorKind::NoDevice => PortError::Busy { port },
        serialport::ErrorKind::Io(io::ErrorKind::NotFound) => PortError::Missing { port },
        serialport::ErrorKind::Io(io::ErrorKind::PermissionDenied) => {
            let remedy = permission_remedy(group_of(name));
            PortError::NoPermission { port, remedy }
        }
        _ => PortError::Failed { port, cause: error.to_string() },
    }
}

pub(super) fn permission_remedy(group: Option<String>) -> String {
    match group {
        Some(group) => format!(
            "it belongs to group '{group}': run 'sudo usermod -aG {group} $USER', log out and in \
             again"
        ),
        None => "run as a user who may".to_owned(),
    }
}

/// The group that a port belongs to.
#[cfg(unix)]
fn group_of(name: &str) -> Option<String> {
    use std::os::unix::fs::MetadataExt;
    let number = std::fs::metadata(name).ok()?.gid().to_string();
    let groups = std::fs::read_to_string("/etc/group").ok()?;
    let mut fields = groups.lines().map(|line| line.split(':'));
    fields.find_map(|mut line| {
        let group = line.next()?;
        (line.nth(1)? == number).then(|| group.to_owned())
    })
}

#[cfg(not(unix))]
fn group_of(_name: &str) -> Option<String> {
    None
}

/// A serial port of this computer and what answers on it.
#[derive(Debug)]
pub struct FoundDevice {
    /// The port's name.
    pub port: String,
    /// The device, or why there is none.
    pub device: Result<Identity, LinkError>,
}

/// Greets on every serial port of this computer.
#[must_use]
pub fn ports() -> Vec<FoundDevice> {
    let names = names().into_iter();
    let greet = |port: &str| Ok(*Client::connect(SerialPort::open(port)?)?.identity());
    names.map(|port| FoundDevice { device: greet(&port), port }).collect()
}

fn names() -> Vec<String> {
    let mut names: Vec<String> = serialport::available_ports()
        .unwrap_or_default()
        .into_iter()
        .map(|port| port.port_name)
        .collect();
    names.sort();
    names
}

/// Connects to the named port, or to the only device there is.
///
/// # Errors
/// [`PortError::NoneFound`], [`PortError::Several`], or why the one port there is cannot be used.
pub fn connect(port: Option<&str>) -> Result<Client<SerialPort>, LinkError> {
    if let Some(name) = port {
        return Client::connect(SerialPort::open(name)?);
    }
    let mut found = Vec::new();
    let mut reasons = Vec::new();
    let tried = names();
    for name in &tried {
        match SerialPort::open(name).map_err(LinkError::from).and_then(Client::connect) {
            Ok(client) => found.push(client),
            Err(reason) => reasons.push(reason),
        }
    }
    choose(found, reasons, tried)
}

/// The one connection, or why there is not exactly one.
pub(super) fn choose<P: Port>(
    mut found: Vec<Client<P>>,
    mut reasons: Vec<LinkError>,
    tried: Vec<String>,
) -> Result<Client<P>, LinkError> {
    if found.len() > 1 {
        let name = |client: &Client<P>| {
            format!("{} ({})", client.port.name(), client.identity().device_id)
        };
        return Err(PortError::Several { found: found.iter().map(name).collect() }.into());
    }
    match found.pop() {
        Some(client) => Ok(client),
        None => Err(match reasons.pop() {
            Some(only) if reasons.is_empty() && !matches!(only, LinkError::Silent { .. }) => only,
            _ => PortError::NoneFound { tried }.into(),
        }),
    }
}
