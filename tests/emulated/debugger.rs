//! The emulator's debugger interface: GDB's remote serial protocol, as far as the tests need it.
//!
//! The shipped image has no command to hang, to fail or to measure its stack. From here the
//! processor is halted, its registers and memory are changed, and it goes on.

use std::io::{self, Read as _, Write as _};
use std::net::TcpStream;

use crate::machine::PATIENCE;

const STACK_POINTER: u8 = 13;
const PROGRAM_COUNTER: u8 = 15;
/// Bytes of memory in one packet.
const CHUNK: u32 = 512;

/// The paint of a free stack, as cortex-m-rt uses it.
const PAINT: [u8; 4] = 0xCCCC_CCCC_u32.to_le_bytes();

/// A connection to a machine that runs.
#[derive(Debug)]
pub(crate) struct Debugger {
    line: TcpStream,
}

impl Debugger {
    /// Takes the connection; the machine, which stops at it, runs on.
    pub(crate) fn open(line: TcpStream) -> io::Result<Self> {
        line.set_read_timeout(Some(PATIENCE))?;
        let mut debugger = Self { line };
        debugger.ask("?")?;
        // The emulator gives single registers to those only who asked how they are numbered.
        debugger.ask("qXfer:features:read:target.xml:0,100")?;
        debugger.send("c")?;
        Ok(debugger)
    }

    fn send(&mut self, text: &str) -> io::Result<()> {
        let sum = text.bytes().fold(0_u8, u8::wrapping_add);
        self.line.write_all(format!("${text}#{sum:02x}").as_bytes())
    }

    /// The next packet, acknowledged.
    fn receive(&mut self) -> io::Result<String> {
        let mut byte = [0];
        while byte != *b"$" {
            self.line.read_exact(&mut byte)?;
        }
        let mut text = String::new();
        loop {
            self.line.read_exact(&mut byte)?;
            if byte == *b"#" {
                break;
            }
            text.push(char::from(byte[0]));
        }
        self.line.read_exact(&mut [0; 2])?;
        self.line.write_all(b"+")?;
        Ok(text)
    }

    fn ask(&mut self, text: &str) -> io::Result<String> {
        self.send(text)?;
        self.receive()
    }

    fn order(&mut self, text: &str) -> io::Result<()> {
        match self.ask(text)?.as_str() {
            "OK" => Ok(()),
            other => Err(io::Error::other(format!("debugger: {text}: {other}"))),
        }
    }

    /// Halts the processor for the time of `work`.
    pub(crate) fn halted<T>(
        &mut self,
        work: impl FnOnce(&mut Self) -> io::Result<T>,
    ) -> io::Result<T> {
        self.line.write_all(&[3])?;
        self.receive()?;
        let result = work(self)?;
        self.send("c")?;
        Ok(result)
    }

    fn register(&mut self, number: u8) -> io::Result<u32> {
        let text = self.ask(&format!("p{number:x}"))?;
        let bytes = bytes_of(&text)?;
        let word = bytes.first_chunk().ok_or_else(|| io::Error::other("a short register"))?;
        Ok(u32::from_le_bytes(*word))
    }

    /// Lets the processor go on at `address`.
    pub(crate) fn jump(&mut self, address: u32) -> io::Result<()> {
        let [a, b, c, d] = address.to_le_bytes();
        self.order(&format!("P{PROGRAM_COUNTER:x}={a:02x}{b:02x}{c:02x}{d:02x}"))
    }

    /// Paints the free stack, which begins at `lowest`, anew.
    pub(crate) fn paint_stack(&mut self, lowest: u32) -> io::Result<()> {
        let end = self.register(STACK_POINTER)?;
        let mut address = lowest;
        while address < end {
            let bytes = (end - address).min(CHUNK);
            let paint: String = PAINT.map(|byte| format!("{byte:02x}")).concat();
            let content = paint.repeat(usize::try_from(bytes / 4).unwrap_or(0));
            self.order(&format!("M{address:x},{bytes:x}:{content}"))?;
            address += bytes;
        }
        Ok(())
    }

    /// Bytes of stack between `lowest` and `end` that were used since they were painted.
    pub(crate) fn stack_peak(&mut self, lowest: u32, end: u32) -> io::Result<u32> {
        let mut address = lowest;
        while address < end {
            let bytes = (end - address).min(CHUNK);
            let content = bytes_of(&self.ask(&format!("m{address:x},{bytes:x}"))?)?;
            let painted = content.chunks(4).take_while(|word| *word == PAINT).count();
            let painted = u32::try_from(painted).unwrap_or(0) * 4;
            address += painted;
            if painted < bytes {
                break;
            }
        }
        Ok(end - address)
    }
}

fn bytes_of(text: &str) -> io::Result<Vec<u8>> {
    let pairs = text.as_bytes().chunks(2);
    pairs
        .map(|pair| {
            let pair = std::str::from_utf8(pair).ok();
            pair.and_then(|pair| u8::from_str_radix(pair, 16).ok())
                .ok_or_else(|| io::Error::other(format!("debugger: no bytes: {text}")))
        })
        .collect()
}
