//! Lines on which there is no device to work with: each says so in its own words.

use crate::bench::{Ran, run, strake};
use serialport::{SerialPort, TTYPort};
use std::io::{Read, Write};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::thread::JoinHandle;
use std::time::Duration;
use strake_core::wire::{Identity, Kind, Message, REPLY_FRAME_BYTES, Receiver, Text};

fn status_on(port: &str) -> Ran {
    run(strake().args(["status", "--port", port]))
}

/// Somebody else on the line: what has come goes to `answer`, which says what to send.
struct Peer {
    port: String,
    stop: Arc<AtomicBool>,
    thread: Option<JoinHandle<()>>,
    _host_side: TTYPort,
}

impl Peer {
    fn new(mut answer: impl FnMut(&[u8]) -> Vec<u8> + Send + 'static) -> Self {
        let (mut line, host_side) = TTYPort::pair().unwrap();
        let stop = Arc::new(AtomicBool::new(false));
        let stopped = stop.clone();
        let thread = std::thread::spawn(move || {
            line.set_timeout(Duration::from_millis(5)).unwrap();
            let mut bytes = [0; 256];
            while !stopped.load(Ordering::Relaxed) {
                if let Ok(count) = line.read(&mut bytes) {
                    let _ = line.write_all(&answer(&bytes[..count]));
                }
            }
        });
        let port = host_side.name().unwrap();
        Self { port, stop, thread: Some(thread), _host_side: host_side }
    }
}

impl Drop for Peer {
    fn drop(&mut self) {
        self.stop.store(true, Ordering::Relaxed);
        self.thread.take().unwrap().join().unwrap();
    }
}

#[test]
fn an_absent_port() {
    let ran = status_on("/dev/no-such-port");
    assert_eq!((ran.exit, ran.out.as_str()), (4, ""));
    assert_eq!(
        ran.err,
        "error: there is no port /dev/no-such-port\n  \
         hint: list the ports with 'strake ports'\n"
    );
}

#[test]
fn a_port_that_another_program_holds() {
    let (_device_side, host_side) = TTYPort::pair().unwrap();
    let port = host_side.name().unwrap();
    let _other_program = serialport::new(&port, 115_200).open().unwrap();
    let ran = status_on(&port);
    assert_eq!(ran.exit, 4);
    assert_eq!(
        ran.err,
        format!(
            "error: port {port} is in use by another program\n  \
             hint: close that program and repeat\n"
        )
    );
}

#[test]
fn a_port_on_which_nobody_answers() {
    let (_device_side, host_side) = TTYPort::pair().unwrap();
    let port = host_side.name().unwrap();
    for arguments in [&["status"][..], &["acknowledge"], &["collect", "-o", "nowhere"]] {
        let ran = run(strake().args(arguments).args(["--port", &port]));
        assert_eq!((ran.exit, ran.out.as_str()), (4, ""));
        let start = format!("error: nothing answers on {port} within ");
        assert!(ran.err.starts_with(&start), "{}", ran.err);
        assert!(ran.err.contains("hint: switch the device on"), "{}", ran.err);
    }
    assert!(!std::path::Path::new("nowhere").exists(), "no folder before there is a device");
}

#[test]
fn a_port_on_which_something_else_answers() {
    let peer = Peer::new(|_| b"unknown command\r\n\0".to_vec());
    let ran = status_on(&peer.port);
    assert_eq!(ran.exit, 4);
    let start = format!("error: what answers on {} is not a Strake device: ", peer.port);
    assert!(ran.err.starts_with(&start), "{}", ran.err);
}

/// Answers every greeting with an identity of another protocol.
fn of_another_version() -> Peer {
    let mut receiver = Receiver::<REPLY_FRAME_BYTES>::new();
    Peer::new(move |bytes| {
        let mut answer = Vec::new();
        for byte in bytes {
            if let Some(Ok(frame)) = receiver.accept(*byte)
                && frame.kind == Kind::Hello.number()
            {
                let identity = Identity {
                    protocol: 2,
                    firmware: Text::new("0.9.0").unwrap(),
                    device_id: Text::new("yard 2").unwrap(),
                    ..Identity::default()
                };
                let mut out = [0; REPLY_FRAME_BYTES];
                let length = identity.encode(&mut out).unwrap();
                answer.extend(&out[..length]);
            }
        }
        answer
    })
}

#[test]
fn a_device_of_another_version() {
    let peer = of_another_version();
    let ran = status_on(&peer.port);
    assert_eq!((ran.exit, ran.out.as_str()), (5, ""));
    let ours = env!("CARGO_PKG_VERSION");
    assert_eq!(
        ran.err,
        format!(
            "error: version mismatch: strake {ours} speaks link protocol 1, device 'yard 2' with \
             firmware 0.9.0 speaks 2\n  hint: install strake 0.9.0 or later\n"
        )
    );
    let json = run(strake().args(["status", "--format", "json", "--port", &peer.port]));
    let error: serde_json::Value = serde_json::from_str(&json.err).unwrap();
    assert_eq!((json.exit, &error["code"]), (5, &"version".into()));
}
