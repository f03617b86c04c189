//! The commands, and the loop that reads them.

use core::fmt::{self, Write as _};

use embedded_hal::digital::{InputPin, OutputPin};
use embedded_io::{Read, ReadReady, Write};
use embedded_storage::nor_flash::NorFlash;
use heapless::{String, Vec};
use strake_board_emulated::flash::NorRegion;
use strake_board_emulated::pins::{Button, Output};
use strake_board_emulated::retained::Retained;
use strake_board_emulated::timer::{MonotonicClock, sleep_until};
use strake_board_emulated::uart::SerialPort;
use strake_board_emulated::{Parts, restart, stack, watchdog};
use strake_firmware::board::{Clock, CountSource, RetainedMemory, Watchdog};
use strake_firmware::sensor::modbus::{Form, Function, ModbusSource, Place, Waits};

use crate::{flash_rules, provoke};

/// The register that the command `level` reads.
const LEVEL: Place = Place { unit: 1, function: Function::Input, register: 0, form: Form::U16 };
const WAITS: Waits = Waits { answer_ms: 2000, silence_ms: 4 };

/// Longest command and longest answer.
type Line = String<96>;

struct Bench {
    clock: MonotonicClock,
    level: ModbusSource<SerialPort, MonotonicClock>,
    journal: NorRegion,
    plans: NorRegion,
    contact: Output,
    lamp: Output,
    button: Button,
    retained: Retained,
    stopped: Option<watchdog::Stopped>,
    running: Option<watchdog::Running>,
    greeting: Line,
}

/// Why a command failed, in the answer.
#[derive(Debug)]
pub(crate) struct Refused(pub(crate) &'static str);

impl From<fmt::Error> for Refused {
    fn from(_: fmt::Error) -> Self {
        Self("answer too long")
    }
}

pub(crate) fn serve(board: Parts) -> ! {
    let mut link = board.link;
    let mut greeting = Line::new();
    // A greeting cut short is still one.
    let _ = write!(greeting, "{:?} {:?}", board.reset_cause, board.last_failure);
    let mut bench = Bench {
        clock: board.clock,
        level: ModbusSource::new(board.sensor_bus, board.clock, LEVEL, WAITS),
        journal: board.journal,
        plans: board.plans,
        contact: board.contact,
        lamp: board.lamp,
        button: board.button,
        retained: board.retained,
        stopped: Some(board.watchdog),
        running: None,
        greeting,
    };
    send(&mut link, &["start ", &bench.greeting, "\n"]);
    let mut command: Vec<u8, 96> = Vec::new();
    loop {
        let mut byte = [0];
        while link.read_ready() == Ok(false) {
            sleep_until(bench.clock, bench.clock.now_ms().saturating_add(1000));
        }
        if link.read(&mut byte) != Ok(1) {
            continue;
        }
        if byte == *b"\n" {
            let line = core::str::from_utf8(&command).unwrap_or("");
            defmt::debug!("command {=str}", line);
            answer(&mut link, &mut bench, line);
            command.clear();
        } else {
            // A command too long to keep is answered as unknown.
            let [byte] = byte;
            let _ = command.push(byte);
        }
    }
}

fn answer(link: &mut SerialPort, bench: &mut Bench, line: &str) {
    let mut text = Line::new();
    let (word, rest) = line.split_once(' ').unwrap_or((line, ""));
    let (verdict, text) = match run(bench, word, rest, &mut text) {
        Ok(()) => ("ok ", text.as_str()),
        Err(Refused(why)) => ("no ", why),
    };
    send(link, &[verdict, text, "\n"]);
}

fn send(link: &mut SerialPort, pieces: &[&str]) {
    for piece in pieces {
        // The line cannot fail, its error type has no value.
        let _ = link.write_all(piece.as_bytes());
    }
    let _ = link.flush();
}

fn number(text: &str) -> Result<u32, Refused> {
    text.parse().map_err(|_| Refused("number expected"))
}

fn run(bench: &mut Bench, word: &str, rest: &str, out: &mut Line) -> Result<(), Refused> {
    match word {
        "cause" => out.push_str(&bench.greeting).map_err(|_| Refused("answer too long"))?,
        "echo" => out.push_str(rest).map_err(|_| Refused("answer too long"))?,
        "time" => write!(out, "{}", bench.clock.now_ms())?,
        "sleep" => {
            let before_ms = bench.clock.now_ms();
            sleep_until(bench.clock, before_ms.saturating_add(u64::from(number(rest)?)));
            write!(out, "{}", bench.clock.now_ms().saturating_sub(before_ms))?;
        }
        "flash" => {
            flash_rules::check(&mut bench.journal)?;
            flash_rules::check(&mut bench.plans)?;
        }
        "store" => store(&mut bench.journal, number(rest)?)?,
        "keep" => bench.retained.write(5, rest.as_bytes()),
        "kept" => {
            let mut bytes = [0; 8];
            bench.retained.read(5, &mut bytes);
            write!(out, "{}", core::str::from_utf8(&bytes).unwrap_or("not text"))?;
        }
        "retained" => check_retained(&mut bench.retained)?,
        "contact" => set(&mut bench.contact, rest),
        "lamp" => set(&mut bench.lamp, rest),
        "button" => write!(out, "{}", bench.button.is_low() == Ok(true))?,
        "level" => match bench.level.read_count() {
            Ok(count) => write!(out, "{count}")?,
            Err(error) => write!(out, "{error}")?,
        },
        "stack" => write!(out, "{} of {}", stack::peak_bytes(), stack::size_bytes())?,
        "watchdog" => {
            let timeout_ms = number(rest)?;
            let stopped = bench.stopped.take().ok_or(Refused("already started"))?;
            bench.running = Some(stopped.start(timeout_ms));
        }
        "feed" => {
            let wake_ms = bench.clock.now_ms().saturating_add(u64::from(number(rest)?));
            sleep_until(bench.clock, wake_ms);
            bench.running.as_mut().ok_or(Refused("not started"))?.feed();
        }
        "log" => {
            defmt::info!("count {=u32}, text {=str}", 4711, rest);
            defmt::warn!("a second frame");
        }
        "count" => provoke::counted_loop(number(rest)?),
        "restart" => restart(),
        _ => provoke::run(word)?,
    }
    Ok(())
}

fn set(output: &mut Output, to: &str) {
    // The pins cannot fail, their error type has no value.
    let _ = if to == "on" { output.set_high() } else { output.set_low() };
}

/// Erases the first block, then programs 1, 2, 3 ... into `count` words of it.
fn store(flash: &mut NorRegion, count: u32) -> Result<(), Refused> {
    let failed = |_| Refused("flash failed");
    flash.erase(0, 4096).map_err(failed)?;
    for value in 1..=count {
        flash.write((value - 1).saturating_mul(4), &value.to_le_bytes()).map_err(failed)?;
    }
    Ok(())
}

fn check_retained(retained: &mut Retained) -> Result<(), Refused> {
    let end = retained.capacity();
    let mut kept = [0; 4];
    retained.read(end.saturating_sub(4), &mut kept);
    retained.write(end.saturating_sub(2), &[0xA5, 0x5A, 0xFF]);
    let mut bytes = [0xEE; 4];
    retained.read(end.saturating_sub(2), &mut bytes);
    if bytes != [0xA5, 0x5A, 0, 0] {
        return Err(Refused("retained memory: the end is wrong"));
    }
    retained.write(end.saturating_sub(4), &kept);
    Ok(())
}
