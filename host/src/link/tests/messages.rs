//! Every error in words, and when it is told.

use super::fake::{FakeDevice, in_process, shared};
use crate::link::serial::{choose, permission_remedy};
use crate::link::{Client, LinkError, Noisy, Port, PortError, VersionMismatch, Versioned};
use std::time::Duration;
use strake_core::wire::{ErrorCode, Identity, Text};

/// A port on which something else talks.
#[derive(Debug)]
struct Chatter {
    text: &'static [u8],
    now: Duration,
}

impl Port for Chatter {
    fn name(&self) -> &'static str {
        "ttyUSB3"
    }

    fn write(&mut self, _bytes: &[u8]) -> Result<(), PortError> {
        Ok(())
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        self.now += wait;
        out[..self.text.len()].copy_from_slice(self.text);
        Ok(self.text.len())
    }

    fn now(&self) -> Duration {
        self.now
    }
}

fn chatter(text: &'static [u8]) -> LinkError {
    Client::connect(Chatter { text, now: Duration::ZERO }).unwrap_err()
}

#[test]
fn silence_and_strangers_are_told_apart() {
    assert_eq!(
        chatter(b"").to_string(),
        "nothing answers on ttyUSB3 within 2.4 s; switch the device on, check the cable and the \
         port"
    );
    assert_eq!(
        chatter(b"$GPGGA,\r\n").to_string(),
        "what answers on ttyUSB3 is not a Strake device: 540 bytes without one sound frame; choose \
         another port with --port"
    );
}

#[test]
fn a_line_beyond_use_says_so() {
    let device = shared(FakeDevice::new(0, 1));
    let mut client = Client::connect(Noisy::new(in_process(&device), 0.0, 0.0, 1)).unwrap();
    client.port = Noisy::new(in_process(&device), 0.01, 0.0, 1);
    let error = client.read_plan(0xAB).unwrap_err();
    let LinkError::Noisy { bad, frames, doing, .. } = &error else { panic!("{error}") };
    assert!(*bad > 0 && frames >= bad && *doing == "reading a plan back", "{error}");
    assert!(error.to_string().starts_with("the line on the simulated device is too noisy: "));
}

fn mismatch(protocol: u16, firmware: &str) -> String {
    let device = shared(FakeDevice::new(0, 0));
    device.borrow_mut().identity.protocol = protocol;
    device.borrow_mut().identity.firmware = Text::new(firmware).unwrap();
    let error = Client::connect(in_process(&device)).unwrap_err();
    assert!(matches!(error, LinkError::Version(_)));
    error.to_string()
}

#[test]
fn a_version_mismatch_names_both_sides_and_the_remedy() {
    assert_eq!(
        mismatch(2, "0.9.0"),
        "version mismatch: strake 0.1.0 speaks link protocol 1, device 'tank-7' with firmware \
         0.9.0 speaks 2; install strake 0.9.0 or later"
    );
    assert_eq!(
        mismatch(0, "0.0.1"),
        "version mismatch: strake 0.1.0 speaks link protocol 1, device 'tank-7' with firmware \
         0.0.1 speaks 0; update the device's firmware to 0.1.0, or install strake 0.0.1"
    );
}

#[test]
fn one_device_is_chosen_and_several_are_listed() {
    let connect = || Client::connect(in_process(&shared(FakeDevice::new(0, 0)))).unwrap();
    let silent = || LinkError::Silent { port: "b".into(), waited: Duration::ZERO };
    let busy = || LinkError::from(PortError::Busy { port: "b".into() });
    let choose = |found, reasons| choose(found, reasons, vec!["a".into(), "b".into()]).map(drop);
    assert!(choose(vec![connect()], vec![silent(), busy()]).is_ok());
    let told = |found, reasons| choose(found, reasons).unwrap_err().to_string();
    assert_eq!(
        told(vec![connect(), connect()], vec![]),
        "several Strake devices found: the simulated device (tank-7), the simulated device \
         (tank-7); choose one with --port"
    );
    assert_eq!(
        told(vec![], vec![silent(), silent()]),
        "no Strake device found on a, b; connect it and switch it on, or name the port with --port"
    );
    // The one reason says more than that nothing was found.
    assert_eq!(told(vec![], vec![busy()]), busy().to_string());
}

fn version(of: Versioned, ours: u16) -> LinkError {
    let device = Identity { journal_format: 1, plan_format: 1, ..FakeDevice::new(0, 0).identity };
    LinkError::Version(VersionMismatch { of, ours, device })
}

#[test]
fn formats_are_compared_by_who_needs_them() {
    let client = Client::connect(in_process(&shared(FakeDevice::new(0, 0)))).unwrap();
    assert!(client.require_journal_format(1).is_ok() && client.require_plan_format(1).is_ok());
    let error = client.require_journal_format(2).unwrap_err();
    assert_eq!(error.to_string(), version(Versioned::Journal, 2).to_string());
    let error = client.require_plan_format(0).unwrap_err();
    assert_eq!(error.to_string(), version(Versioned::Plan, 0).to_string());
}

#[test]
fn every_other_error_in_words() {
    let port = || "ttyUSB0".to_owned();
    let remedy = permission_remedy(Some("dialout".into()));
    let errors: Vec<LinkError> = vec![
        PortError::NoneFound { tried: vec![] }.into(),
        PortError::Missing { port: port() }.into(),
        PortError::Busy { port: port() }.into(),
        PortError::NoPermission { port: port(), remedy }.into(),
        PortError::NoPermission { port: port(), remedy: permission_remedy(None) }.into(),
        PortError::Failed { port: port(), cause: "broken pipe".into() }.into(),
        version(Versioned::Journal, 2),
        version(Versioned::Plan, 0),
        LinkError::UnknownCode { doing: "acknowledging", code: 99, detail: 7 },
        LinkError::Nonsense { doing: "reading the status", what: "its length or a value in it" },
        LinkError::Interrupted,
    ];
    let mut texts: Vec<String> = errors.iter().map(ToString::to_string).collect();
    for code in ErrorCode::ALL {
        let refused = LinkError::Refused { doing: "asking", code: *code, detail: 12 };
        texts.push(refused.to_string());
    }
    assert_eq!(texts.join("\n"), include_str!("errors.txt").trim_end());
}
