//! A simulated device behind a pseudo-terminal: the commands reach it as they reach a real one.
//!
//! A thread of this process serves the device until the [`PtyMachine`] goes. Virtual time stands
//! while bytes travel; it moves only inside [`PtyMachine::with`].

use super::machine::Machine;
use crate::link::{InProcess, Port, PortError};
use serialport::{SerialPort, TTYPort};
use std::cell::RefCell;
use std::io::{ErrorKind, Read, Write};
use std::rc::Rc;
use std::sync::mpsc::{self, Receiver, Sender, TryRecvError};
use std::thread::{self, JoinHandle};
use std::time::Duration;

/// How long the thread waits for a byte before it looks for an order.
const LISTEN: Duration = Duration::from_millis(5);
/// Link time within which the device begins to answer.
const ANSWER: Duration = Duration::from_millis(10);
/// How long a host may leave its buffer full before bytes are lost, as on a line.
const SEND: Duration = Duration::from_secs(1);

/// What is asked of the serving thread.
enum Order {
    Look(Box<dyn FnOnce(&mut Machine) + Send>),
    PlugIn(Line),
    UnplugAfter(u64),
}

/// A device in a thread of its own, behind a pseudo-terminal. Dropping it stops the device.
#[derive(Debug)]
pub struct PtyMachine {
    port: String,
    orders: Option<Sender<Order>>,
    server: Option<JoinHandle<()>>,
}

impl PtyMachine {
    /// Serves the device that `make` builds; it is built in the thread that serves it.
    ///
    /// # Errors
    /// When the system gives no pseudo-terminal.
    pub fn serve(make: impl FnOnce() -> Machine + Send + 'static) -> Result<Self, PortError> {
        let line = Line::new()?;
        let port = line.name.clone();
        let (orders, received) = mpsc::channel();
        let server = thread::spawn(move || serve(make(), line, &received));
        Ok(Self { port, orders: Some(orders), server: Some(server) })
    }

    /// The port that a host opens.
    #[must_use]
    pub fn port(&self) -> &str {
        &self.port
    }

    /// Looks at the device or does something to it, between bytes: the only place where virtual
    /// time moves.
    ///
    /// # Errors
    /// When the device has stopped.
    pub fn with<T: Send + 'static>(
        &self,
        look: impl FnOnce(&mut Machine) -> T + Send + 'static,
    ) -> Result<T, PortError> {
        let (answer, answered) = mpsc::channel();
        self.order(Order::Look(Box::new(move |machine| {
            // Nobody waits any more when the asker is gone.
            let _ = answer.send(look(machine));
        })))?;
        answered.recv().map_err(|_| self.stopped())
    }

    /// Pulls the cable after this many bytes more from the device.
    ///
    /// # Errors
    /// When the device has stopped.
    pub fn unplug_after(&self, bytes: u64) -> Result<(), PortError> {
        self.order(Order::UnplugAfter(bytes))
    }

    /// Plugs a new cable in: the port has another name then.
    ///
    /// # Errors
    /// When the system gives no pseudo-terminal, or the device has stopped.
    pub fn plug_in(&mut self) -> Result<(), PortError> {
        let line = Line::new()?;
        let port = line.name.clone();
        self.order(Order::PlugIn(line))?;
        self.port = port;
        Ok(())
    }

    fn order(&self, order: Order) -> Result<(), PortError> {
        match &self.orders {
            Some(orders) if orders.send(order).is_ok() => Ok(()),
            _ => Err(self.stopped()),
        }
    }

    fn stopped(&self) -> PortError {
        let cause = "the simulated device has stopped".to_owned();
        PortError::Failed { port: self.port.clone(), cause }
    }
}

impl Drop for PtyMachine {
    fn drop(&mut self) {
        self.orders = None;
        if let Some(server) = self.server.take() {
            // A device that panicked has said so on standard error.
            let _ = server.join();
        }
    }
}

/// Serves until nobody is left who could give an order.
fn serve(machine: Machine, mut line: Line, orders: &Receiver<Order>) {
    let wire = machine.bench().wire.clone();
    let machine = Rc::new(RefCell::new(machine));
    let turning = machine.clone();
    let mut device = InProcess::new(&wire, move || turning.borrow_mut().poll());
    loop {
        match orders.try_recv() {
            Ok(Order::Look(look)) => look(&mut machine.borrow_mut()),
            Ok(Order::PlugIn(new)) => line = new,
            Ok(Order::UnplugAfter(bytes)) => line.left = Some(bytes),
            Err(TryRecvError::Empty) => line.carry(&mut device),
            Err(TryRecvError::Disconnected) => return,
        }
    }
}

/// A pseudo-terminal.
struct Line {
    name: String,
    device_side: TTYPort,
    /// Held open, so that the line stands between two hosts.
    _host_side: TTYPort,
    /// Bytes that still get through from the device; `None` for an unharmed cable.
    left: Option<u64>,
}

impl Line {
    fn new() -> Result<Self, PortError> {
        let failed = |cause: String| PortError::Failed { port: "pseudo-terminal".into(), cause };
        let (device_side, host_side) =
            TTYPort::pair().map_err(|error| failed(error.to_string()))?;
        let name = host_side.name().ok_or_else(|| failed("it has no name".to_owned()))?;
        Ok(Self { name, device_side, _host_side: host_side, left: None })
    }

    /// Carries what the host has sent to the device, and all that the device answers back.
    fn carry(&mut self, device: &mut impl Port) {
        let mut bytes = [0; 512];
        let count = self.receive(&mut bytes);
        if count == 0 || device.write(&bytes[..count]).is_err() {
            return;
        }
        while let Ok(count @ 1..) = device.read(&mut bytes, ANSWER) {
            self.send(&bytes[..count]);
        }
    }

    fn receive(&mut self, bytes: &mut [u8]) -> usize {
        let read =
            self.device_side.set_timeout(LISTEN).is_ok().then(|| self.device_side.read(bytes));
        match read {
            Some(Ok(count)) => count,
            Some(Err(error)) if error.kind() == ErrorKind::TimedOut => 0,
            // A broken line must not keep the processor busy.
            _ => {
                thread::sleep(LISTEN);
                0
            }
        }
    }

    /// What a host does not take in time is lost.
    fn send(&mut self, bytes: &[u8]) {
        let mut through = bytes;
        if let Some(left) = &mut self.left {
            let count = usize::try_from(*left).unwrap_or(usize::MAX).min(bytes.len());
            *left -= count as u64;
            through = &bytes[..count];
        }
        if self.device_side.set_timeout(SEND).is_ok() {
            let _ = self.device_side.write_all(through);
        }
    }
}
