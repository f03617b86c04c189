//! The state machine over a serial link.

use super::answer::Memory;
use super::outbox::Outbox;
use super::sectors::Sectors;
use super::served::Served;
use embedded_io::{Read, ReadReady, Write, WriteReady};
use strake_core::wire::{
    Frame, Kind, LinkCounters, Message, REQUEST_FRAME_BYTES, Receiver, SectorRequest,
};

/// Most bytes taken from the link in one call.
const READ_MAX: usize = 64;

/// Answers the host. One receive buffer, one transmit buffer, a short queue of sector requests:
/// about 1.6 KiB.
#[derive(Debug)]
pub struct Server {
    receiver: Receiver<REQUEST_FRAME_BYTES>,
    /// The receiver holds a request that is still to be answered.
    asked: bool,
    outbox: Outbox,
    sectors: Sectors,
    memory: Memory,
    counters: LinkCounters,
}

impl Server {
    /// A server that has heard nothing yet.
    #[must_use]
    pub const fn new() -> Self {
        Self {
            receiver: Receiver::new(),
            asked: false,
            outbox: Outbox::new(),
            sectors: Sectors::new(),
            memory: Memory::new(),
            counters: LinkCounters { bytes_in: 0, bytes_out: 0, bad_frames: 0 },
        }
    }

    /// Takes what has come (at most 64 bytes), answers at most one request or builds at most one
    /// bulk frame, and sends what the link takes at once. Never waits.
    ///
    /// # Errors
    /// The link's own. Nothing but the byte in question is lost by it; call again.
    // Apart, so that the room for replies on the stack is not taken during a cycle.
    #[inline(never)]
    pub fn poll<L, S>(&mut self, link: &mut L, served: &mut S) -> Result<(), L::Error>
    where
        L: Read + ReadReady + Write + WriteReady,
        S: Served,
    {
        self.send(link)?;
        self.receive(link)?;
        if self.outbox.is_empty() {
            if core::mem::take(&mut self.asked) {
                if let Some(frame) = self.receiver.last() {
                    self.memory.answer(frame, self.counters, served, &mut self.outbox);
                }
            } else {
                self.sectors.next_frame(served, &mut self.outbox);
            }
            self.send(link)?;
        }
        Ok(())
    }

    /// Nothing waits to be sent or answered.
    #[must_use]
    pub fn is_idle(&self) -> bool {
        !self.asked && self.outbox.is_empty() && self.sectors.is_empty()
    }

    /// What has passed over the link.
    #[must_use]
    pub const fn counters(&self) -> LinkCounters {
        self.counters
    }

    fn send<L: Write + WriteReady>(&mut self, link: &mut L) -> Result<(), L::Error> {
        let sent = self.outbox.send(link)?;
        let sent = u32::try_from(sent).unwrap_or(u32::MAX);
        self.counters.bytes_out = self.counters.bytes_out.wrapping_add(sent);
        Ok(())
    }

    /// Takes bytes until a request must be answered first.
    fn receive<L: Read + ReadReady>(&mut self, link: &mut L) -> Result<(), L::Error> {
        for _ in 0..READ_MAX {
            let mut byte = [0];
            if self.asked || !link.read_ready()? || link.read(&mut byte)? == 0 {
                break;
            }
            self.counters.bytes_in = self.counters.bytes_in.wrapping_add(1);
            let [byte] = byte;
            match self.receiver.accept(byte) {
                None => {}
                Some(Err(_)) => self.counters.bad_frames = self.counters.bad_frames.wrapping_add(1),
                Some(Ok(frame)) => {
                    if let Some(request) = sector_request(&frame) {
                        self.sectors.push(request);
                    } else {
                        self.sectors.clear();
                        self.asked = true;
                    }
                }
            }
        }
        Ok(())
    }
}

fn sector_request(frame: &Frame<'_>) -> Option<SectorRequest> {
    let asked = frame.kind == Kind::SectorRequest.number();
    asked.then(|| SectorRequest::decode(frame.body).ok()).flatten()
}

impl Default for Server {
    fn default() -> Self {
        Self::new()
    }
}
