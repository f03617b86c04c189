//! A pseudo-terminal in place of a serial line.

use super::fake::{FakeDevice, random_bytes};
use crate::link::{Client, LinkError, PortError, SerialPort};
use serialport::{SerialPort as _, TTYPort};
use std::io::{Read, Write};
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Duration;
use strake_core::wire::Text;
use strake_firmware::serve::Server;

/// The device's end of the pseudo-terminal.
struct Terminal(TTYPort);

impl embedded_io::ErrorType for Terminal {
    type Error = embedded_io::ErrorKind;
}

impl embedded_io::Read for Terminal {
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Self::Error> {
        self.0.read(out).map_err(|_| embedded_io::ErrorKind::Other)
    }
}

impl embedded_io::ReadReady for Terminal {
    fn read_ready(&mut self) -> Result<bool, Self::Error> {
        Ok(self.0.bytes_to_read().is_ok_and(|count| count > 0))
    }
}

impl embedded_io::Write for Terminal {
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Self::Error> {
        self.0.write(bytes).map_err(|_| embedded_io::ErrorKind::Other)
    }

    fn flush(&mut self) -> Result<(), Self::Error> {
        Ok(())
    }
}

impl embedded_io::WriteReady for Terminal {
    fn write_ready(&mut self) -> Result<bool, Self::Error> {
        Ok(true)
    }
}

/// Runs `host` while a device serves the other end.
fn beside_a_device(host: impl FnOnce(&str)) {
    let (master, slave) = TTYPort::pair().unwrap();
    let name = slave.name().unwrap();
    drop(slave);
    let done = AtomicBool::new(false);
    std::thread::scope(|scope| {
        scope.spawn(|| {
            let (mut terminal, mut server) = (Terminal(master), Server::new());
            let mut device = FakeDevice::new(3, 2);
            while !done.load(Ordering::Relaxed) {
                // While nobody has the other end open the terminal reports a hang-up.
                let _closed = server.poll(&mut terminal, &mut device);
                if server.is_idle() {
                    std::thread::sleep(Duration::from_micros(200));
                }
            }
        });
        let result = std::panic::catch_unwind(std::panic::AssertUnwindSafe(|| host(&name)));
        done.store(true, Ordering::Relaxed);
        result.unwrap();
    });
}

#[test]
fn talks_over_a_terminal_and_connects_again() {
    beside_a_device(|name| {
        for round in 0..2_u64 {
            let mut client = Client::connect(SerialPort::open(name).unwrap()).unwrap();
            assert_eq!(client.identity().device_id.as_str(), "tank-7");
            let plan = random_bytes(round, 2000);
            client.load_plan(&plan, round, 0x77 + round, Text::default()).unwrap();
            assert_eq!(client.read_plan(0x77 + round).unwrap(), plan);
        }
    });
}

#[test]
fn a_port_in_use_and_a_port_that_is_not_there_are_told_apart() {
    beside_a_device(|name| {
        let held = SerialPort::open(name).unwrap();
        let error = SerialPort::open(name).unwrap_err();
        assert_eq!(error, PortError::Busy { port: name.to_owned() });
        drop(held);
        let error = SerialPort::open("/dev/no-such-port").unwrap_err();
        assert!(matches!(error, PortError::Missing { .. }), "{error}");
    });
}

#[test]
fn a_line_nobody_answers_on_is_silent() {
    let (master, slave) = TTYPort::pair().unwrap();
    let name = slave.name().unwrap();
    let error = Client::connect(SerialPort::over(&name, Box::new(slave))).unwrap_err();
    assert!(matches!(error, LinkError::Silent { .. }), "{error}");
    drop(master);
}
