//! The host's own client over the emulated device's line.

use std::io::{self, Read as _, Write as _};
use std::net::TcpStream;
use std::time::{Duration, Instant};

use strake::link::{Client, LinkError, Port, PortError};

/// A connection as a port.
#[derive(Debug)]
pub(crate) struct TcpPort {
    stream: TcpStream,
    opened: Instant,
}

impl TcpPort {
    fn failed(error: &io::Error) -> PortError {
        PortError::Failed { port: "emulated".to_owned(), cause: error.to_string() }
    }
}

impl Port for TcpPort {
    fn name(&self) -> &'static str {
        "emulated"
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        self.stream.write_all(bytes).map_err(|error| Self::failed(&error))
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        // Zero would wait for ever.
        let wait = wait.max(Duration::from_millis(1));
        self.stream.set_read_timeout(Some(wait)).map_err(|error| Self::failed(&error))?;
        match self.stream.read(out) {
            Ok(0) if !out.is_empty() => Err(Self::failed(&io::ErrorKind::UnexpectedEof.into())),
            Ok(count) => Ok(count),
            Err(error) if error.kind() == io::ErrorKind::WouldBlock => Ok(0),
            Err(error) => Err(Self::failed(&error)),
        }
    }

    fn now(&self) -> Duration {
        self.opened.elapsed()
    }
}

/// A client of the device at the other end.
pub(crate) fn client(stream: &TcpStream) -> Result<Client<TcpPort>, LinkError> {
    let stream = stream.try_clone().map_err(|error| TcpPort::failed(&error))?;
    Client::connect(TcpPort { stream, opened: Instant::now() })
}
