//! Every driver of the board, through the program `driver-check`.

use std::error::Error;
use std::fs;
use std::io::{BufRead as _, BufReader};
use std::process::{Command, Stdio};
use std::sync::Arc;

use crate::flash_file::{FlashFile, PLANS_OFFSET};
use crate::image::Image;
use crate::machine::{Machine, Setup};
use crate::plugin::{CUT_STATUS, Span, instruction_count, power_cut};
use crate::sensor::Mood;
use crate::toolchain;
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] = tests![
    every_driver_passes_its_check,
    cold_and_warm_starts_are_told_apart,
    an_unfed_watchdog_restarts_the_device,
    a_panic_opens_the_contact,
    faults_open_the_contact,
    flash_outlives_the_power,
    a_cut_leaves_exactly_the_stores_before_it,
    a_modbus_register_is_read,
    outputs_and_button,
    the_link_is_a_terminal_too,
    the_script_starts_a_device_and_prints_its_port,
    long_lines_cross_the_link_unaltered,
    an_hour_asleep_passes_in_virtual_time,
    instructions_are_counted_exactly,
    the_image_fits_its_memories,
];

fn image() -> Result<Arc<Image>, Box<dyn Error>> {
    toolchain::image("driver-check")
}

/// A machine that has said why it started.
fn start(setup: Setup, cause: &str) -> Result<Machine, Box<dyn Error>> {
    let mut machine = setup.start()?;
    expect_start(&mut machine, cause)?;
    Ok(machine)
}

fn expect_start(machine: &mut Machine, cause: &str) -> Outcome {
    same(&machine.receive_line()?, &format!("start {cause}"))
}

/// The answer to a command, without `ok`.
fn ask(machine: &mut Machine, command: &str) -> Result<String, Box<dyn Error>> {
    machine.send(format!("{command}\n").as_bytes())?;
    let line = machine.receive_line()?;
    let answer = line.strip_prefix("ok ").ok_or(format!("{command}: the device says {line}"))?;
    Ok(answer.to_owned())
}

fn every_driver_passes_its_check() -> Outcome {
    let mut machine = start(Setup::new(&image()?), "PowerOn None")?;
    same(&*ask(&mut machine, "echo a b")?, "a b")?;
    ask(&mut machine, "flash")?;
    ask(&mut machine, "retained")?;
    let before: u64 = ask(&mut machine, "time")?.parse()?;
    let slept: u64 = ask(&mut machine, "sleep 600")?.parse()?;
    let after: u64 = ask(&mut machine, "time")?.parse()?;
    hold(slept >= 600, "woke before its time")?;
    hold(after >= before + slept, "the clock fell behind a sleep")?;
    ask(&mut machine, "log with words")?;
    let log = machine.log()?;
    same(
        &log,
        &vec![
            "info start: PowerOn, last failure: None".to_owned(),
            "info count 4711, text with words".to_owned(),
            "warn a second frame".to_owned(),
        ],
    )?;
    machine.send(b"nonsense\n")?;
    same(&*machine.receive_line()?, "no unknown command")
}

fn cold_and_warm_starts_are_told_apart() -> Outcome {
    let image = image()?;
    let mut machine = start(Setup::new(&image), "PowerOn None")?;
    ask(&mut machine, "keep KEPT-8.B")?;
    machine.send(b"restart\n")?;
    expect_start(&mut machine, "Software None")?;
    same(&*ask(&mut machine, "kept")?, "KEPT-8.B")?;
    machine.reset()?;
    expect_start(&mut machine, "Other None")?;
    same(&*ask(&mut machine, "kept")?, "KEPT-8.B")?;
    let flash = machine.cut_power();
    let mut machine = start(Setup::new(&image).flash(flash), "PowerOn None")?;
    hold(ask(&mut machine, "kept")? != "KEPT-8.B", "retained memory outlived the power")
}

fn an_unfed_watchdog_restarts_the_device() -> Outcome {
    let mut machine = start(Setup::new(&image()?), "PowerOn None")?;
    ask(&mut machine, "contact on")?;
    ask(&mut machine, "keep fed-once")?;
    ask(&mut machine, "watchdog 2000")?;
    // Fed after the half that leaves the mark, it must not restart.
    for _ in 0..2 {
        ask(&mut machine, "feed 1250")?;
    }
    hold(machine.contact()?, "the contact opened although the watchdog was fed")?;
    machine.send(b"hang\n")?;
    expect_start(&mut machine, "Watchdog None")?;
    hold(!machine.contact()?, "the contact conducts after a reset")?;
    hold(ask(&mut machine, "kept")?.starts_with("fed-once"), "retained memory was lost")?;
    // The mark of the first half is taken back by feeding.
    ask(&mut machine, "watchdog 4000")?;
    ask(&mut machine, "feed 2500")?;
    machine.reset()?;
    expect_start(&mut machine, "Other None")
}

/// Gives `command`, which ends the run, and finds the contact opened before the reset opens it.
fn provoke(machine: &mut Machine, command: &str) -> Result<String, Box<dyn Error>> {
    ask(machine, "contact on")?;
    ask(machine, "lamp on")?;
    same(&(machine.contact()?, machine.lamp()?), &(true, true))?;
    machine.send(format!("{command}\n").as_bytes())?;
    machine.wait_for_reset()?;
    same(&(machine.contact()?, machine.lamp()?), &(false, true))?;
    machine.resume()?;
    machine.receive_line()
}

fn a_panic_opens_the_contact() -> Outcome {
    let mut machine = start(Setup::new(&image()?).stop_at_reset(), "PowerOn None")?;
    let line = provoke(&mut machine, "panic")?;
    hold(line.starts_with("start Panic Some(Panic { line: "), &line)?;
    let log = machine.log()?;
    let told = |text: &str| log.iter().any(|message| message.contains(text));
    hold(
        told("error panic in firmware/boards/emulated/src/bin/driver-check/provoke.rs, line"),
        &format!("{log:?}"),
    )?;
    hold(told("info start: Panic, last failure: Some(Panic { line: "), &format!("{log:?}"))
}

/// Armv7-M, B3.2.15: the low byte is that of memory management faults.
fn faults_open_the_contact() -> Outcome {
    const INSTRUCTION_ACCESS: u32 = 1 << 0;
    const DATA_ACCESS: u32 = 1 << 1;
    const STACKING: u32 = 1 << 4;
    const ADDRESS_VALID: u32 = 1 << 7;
    let mut machine = start(Setup::new(&image()?).stop_at_reset(), "PowerOn None")?;
    let cases = [
        ("overflow", DATA_ACCESS | STACKING, Some(0x1FFF_F000..0x2000_0000)),
        ("wild", DATA_ACCESS | ADDRESS_VALID, Some(0x400..0x401)),
        ("jump", INSTRUCTION_ACCESS, None),
    ];
    for (command, expected, addresses) in cases {
        let line = provoke(&mut machine, command)?;
        let (status, address) = fault(&line).ok_or(format!("{command}: {line}"))?;
        hold(status & expected != 0, &format!("{command}: status {status:#x}"))?;
        if let Some(addresses) = addresses
            && status & ADDRESS_VALID != 0
        {
            hold(addresses.contains(&address), &format!("{command}: at {address:#x}"))?;
        }
    }
    Ok(())
}

/// Status and address from the line that the device says at its start.
fn fault(line: &str) -> Option<(u32, u32)> {
    let numbers = line.strip_prefix("start Panic Some(Fault { status: ")?.strip_suffix(" })")?;
    let (status, address) = numbers.split_once(", address: ")?;
    Some((status.parse().ok()?, address.parse().ok()?))
}

fn flash_outlives_the_power() -> Outcome {
    let image = image()?;
    let flash = FlashFile::erased()?;
    flash.overwrite(PLANS_OFFSET, b"a plan")?;
    let mut machine = start(Setup::new(&image).flash(flash), "PowerOn None")?;
    ask(&mut machine, "store 300")?;
    let flash = machine.cut_power();
    let machine = start(Setup::new(&image).flash(flash), "PowerOn None")?;
    same(&words(machine.flash(), 301)?, &(1..=300).chain([u32::MAX]).collect())?;
    same(&machine.flash().read(PLANS_OFFSET, 6)?, &b"a plan".to_vec())
}

/// The first words of the journal's flash.
fn words(flash: &FlashFile, count: usize) -> Result<Vec<u32>, Box<dyn Error>> {
    let bytes = flash.read(0, 4 * count)?;
    let (words, _) = bytes.as_chunks();
    Ok(words.iter().map(|word| u32::from_le_bytes(*word)).collect())
}

fn a_cut_leaves_exactly_the_stores_before_it() -> Outcome {
    const BLOCK_WORDS: u64 = 1024;
    const COUNT: u32 = 12;
    let image = image()?;
    let counting = power_cut(0, PLANS_OFFSET, None)?;
    let out = counting.out;
    let mut machine = start(Setup::new(&image).plugin(counting), "PowerOn None")?;
    ask(&mut machine, &format!("store {COUNT}"))?;
    let flash = machine.quit()?;
    let stores: u64 = fs::read_to_string(flash.folder().join(out))?.trim().parse()?;
    same(&stores, &(BLOCK_WORDS + u64::from(COUNT)))?;

    let used = FlashFile::erased()?;
    used.overwrite(0, &[0xA5; 4096])?;
    for after in [1, 2, 1023].into_iter().chain(BLOCK_WORDS..=stores) {
        let cut = power_cut(0, PLANS_OFFSET, Some(after))?;
        let setup = Setup::new(&image).flash(used.copy()?).plugin(cut);
        let mut machine = start(setup, "PowerOn None")?;
        machine.send(format!("store {COUNT}\n").as_bytes())?;
        let (status, flash) = machine.wait()?;
        same(&status.code(), &Some(CUT_STATUS))?;
        let expected: Vec<u32> = (0..BLOCK_WORDS)
            .map(|place| match u32::try_from((place + 1 + BLOCK_WORDS).min(after + 1)) {
                _ if place >= after => 0xA5A5_A5A5,
                Ok(_) if place + BLOCK_WORDS < after => u32::try_from(place + 1).unwrap_or(0),
                _ => u32::MAX,
            })
            .collect();
        same(&words(&flash, 1024)?, &expected).map_err(|error| format!("{after}: {error}"))?;
    }
    Ok(())
}

fn a_modbus_register_is_read() -> Outcome {
    let mut machine = start(Setup::new(&image()?), "PowerOn None")?;
    for value in [0, 4711, 65_535] {
        machine.sensor().set_register(0, value);
        same(&ask(&mut machine, "level")?, &value.to_string())?;
    }
    let cases = [
        (Mood::Silent, "no answer"),
        (Mood::Exception(4), "exception answer"),
        (Mood::Garbled, "garbled answer"),
        (Mood::OtherUnit, "unexpected answer"),
        (Mood::Well, "65535"),
    ];
    for (mood, expected) in cases {
        machine.sensor().set_mood(mood);
        same(&*ask(&mut machine, "level")?, expected)?;
    }
    same(&machine.sensor().questions(), &8)
}

fn outputs_and_button() -> Outcome {
    let mut machine = start(Setup::new(&image()?), "PowerOn None")?;
    same(&(machine.contact()?, machine.lamp()?), &(false, false))?;
    ask(&mut machine, "contact on")?;
    same(&(machine.contact()?, machine.lamp()?), &(true, false))?;
    ask(&mut machine, "lamp on")?;
    ask(&mut machine, "contact off")?;
    same(&(machine.contact()?, machine.lamp()?), &(false, true))?;
    same(&*ask(&mut machine, "button")?, "false")?;
    machine.flash().set_button(true)?;
    same(&*ask(&mut machine, "button")?, "true")?;
    // A change of the button ends a sleep.
    machine.send(b"sleep 3600000\n")?;
    machine.flash().set_button(false)?;
    let line = machine.receive_line()?;
    let slept: u64 = line.strip_prefix("ok ").ok_or("no answer to sleep")?.parse()?;
    hold(slept < 3_600_000, "slept on while the button was let go")
}

fn the_link_is_a_terminal_too() -> Outcome {
    let mut machine = Setup::new(&image()?).link_as_terminal().start()?;
    let path = machine.port()?;
    let mut port = serialport::new(path.to_string_lossy(), 115_200)
        .timeout(crate::machine::PATIENCE)
        .open()?;
    port.write_all(b"echo over a terminal\n")?;
    let mut answer = Vec::new();
    while !answer.ends_with(b"ok over a terminal\n") {
        let mut byte = [0];
        port.read_exact(&mut byte)?;
        answer.extend(byte);
    }
    Ok(())
}

fn long_lines_cross_the_link_unaltered() -> Outcome {
    let mut machine = start(Setup::new(&image()?), "PowerOn None")?;
    // More than the queues hold, sent without waiting for any answer.
    let lines: Vec<String> = (0..200).map(|n| format!("{n:03} {}", "x-".repeat(n % 40))).collect();
    machine.send(format!("echo {}\n", lines.join("\necho ")).as_bytes())?;
    for line in &lines {
        same(&machine.receive_line()?, &format!("ok {line}"))?;
    }
    Ok(())
}

fn an_hour_asleep_passes_in_virtual_time() -> Outcome {
    let setup = Setup::new(&image()?).instruction_time(0, true);
    let mut machine = start(setup, "PowerOn None")?;
    let slept: u64 = ask(&mut machine, "sleep 3600000")?.parse()?;
    same(&slept, &3_600_000)
}

fn instructions_are_counted_exactly() -> Outcome {
    let image = image()?;
    let (start_address, _) = image.symbol("counted_loop")?;
    let spans = [Span { name: "loop", start: start_address, stop: None }];
    let plugin = instruction_count(&spans)?;
    let out = plugin.out;
    let mut machine = start(Setup::new(&image).plugin(plugin), "PowerOn None")?;
    for n in [1, 10, 1000] {
        ask(&mut machine, &format!("count {n}"))?;
    }
    let flash = machine.quit()?;
    let counts = fs::read_to_string(flash.folder().join(out))?;
    hold(counts.starts_with("loop 3\nloop 21\nloop 2001\ntotal "), &counts)
}

fn the_image_fits_its_memories() -> Outcome {
    let image = image()?;
    let footprint = image.footprint()?;
    let mut machine = start(Setup::new(&image), "PowerOn None")?;
    ask(&mut machine, "flash")?;
    let stack = ask(&mut machine, "stack")?;
    println!(
        "driver-check {}: {} B flash, {} B static RAM, stack {stack} B",
        image.sha256, footprint.flash, footprint.ram
    );
    hold(footprint.flash <= 96 << 10, "more flash than the device has for it")?;
    hold(footprint.ram <= 16 << 10, "more static RAM than the device has for it")?;
    let (peak, size) = stack.split_once(" of ").ok_or("no stack figures")?;
    same(size, "12288")?;
    let peak: u32 = peak.parse()?;
    hold((256..4096).contains(&peak), &format!("stack peak {peak} B"))
}

fn the_script_starts_a_device_and_prints_its_port() -> Outcome {
    let image = image()?;
    let flash = FlashFile::erased()?;
    let mut script = Command::new(toolchain::root().join(".ci/emulated-device"))
        .args(["--image".as_ref(), image.path.as_os_str()])
        .args(["--flash".as_ref(), flash.path().as_os_str()])
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()?;
    let mut line = String::new();
    let read = BufReader::new(script.stdout.take().ok_or("no output")?).read_line(&mut line);
    // The script takes the emulator down with it when it is asked to end, not when it is killed.
    Command::new("kill").arg(script.id().to_string()).status()?;
    let status = script.wait()?;
    read?;
    hold(line.starts_with("port /dev/"), &line)?;
    same(&status.code(), &Some(130))
}
