//! A pseudo-terminal changes nothing: the same journal, byte for byte, as inside this process.

use crate::bench::{SERIAL, Swing, compiled, device_with_ring, machine};
use std::cell::RefCell;
use std::fs;
use std::ops::ControlFlow;
use std::rc::Rc;
use strake::compile::fingerprint;
use strake::journal_file::PartFile;
use strake::link::{Client, InProcess, Port, SerialPort, collect};
use strake_core::wire::Text;

const LEVEL: Swing = Swing { low_m: 7.5, high_m: 8.6 };
const SECTORS: usize = 64;
const HOUR_MS: u64 = 3_600_000;

/// One whole visit with fixed times; `run_until` moves virtual time. Gives the journal file.
fn journal<P: Port>(mut client: Client<P>, run_until: impl Fn(u64)) -> Vec<u8> {
    let plan = compiled().encode(SERIAL).unwrap();
    let mark = fingerprint(&plan);
    client.load_plan(&plan, SERIAL, mark, Text::new("pump house 7").unwrap()).unwrap();
    client.set_clock(SERIAL + 60).unwrap();
    for hour in 1..=36 {
        run_until(hour * HOUR_MS);
        client.status().unwrap();
    }
    let folder = tempfile::tempdir().unwrap();
    let mut part = PartFile::open(&folder.path().join("part")).unwrap();
    let all = &mut |_: &_| ControlFlow::Continue(());
    let collected = collect(&mut client, &mut part, Some(SERIAL + 120), all).unwrap();
    let target = folder.path().join("journal");
    part.finish(&collected.head, &target, false).unwrap();
    fs::read(target).unwrap()
}

#[test]
fn the_same_seed_gives_the_same_journal_over_a_port() {
    let device = device_with_ring(LEVEL, SECTORS);
    let client = Client::connect(SerialPort::open(device.port()).unwrap()).unwrap();
    let run = |now_ms| device.with(move |machine| machine.run_until(now_ms)).unwrap();
    let over_port = journal(client, run);

    let machine = Rc::new(RefCell::new(machine(LEVEL, SECTORS)));
    let wire = machine.borrow().bench().wire.clone();
    let turning = machine.clone();
    let port = InProcess::new(&wire, move || turning.borrow_mut().poll());
    let client = Client::connect(port).unwrap();
    let in_process = journal(client, |now_ms| machine.borrow_mut().run_until(now_ms));

    assert!(in_process.len() > 5 * 4096, "{}", in_process.len());
    assert!(over_port == in_process, "{} and {} bytes", over_port.len(), in_process.len());
}
