//! A device whose plans and journal are random bytes.

use super::super::{InProcess, Port, Wire};
use std::cell::RefCell;
use std::collections::BTreeMap;
use std::rc::Rc;
use strake_core::wire::{
    ErrorCode, FaultStatus, FillingStatus, Head, Identity, JournalBounds, PROTOCOL_VERSION,
    PartStatus, PlanBegin, PlanEntry, PlanList, Status, Text,
};
use strake_firmware::serve::{Refusal, Served, Server};

#[derive(Clone, Debug)]
pub(super) struct FakeDevice {
    pub(super) identity: Identity,
    pub(super) status: Status,
    pub(super) plans: Vec<(u64, u64, Vec<u8>)>,
    pub(super) loading: Option<(PlanBegin, Vec<u8>)>,
    pub(super) sectors: BTreeMap<u32, Vec<u8>>,
    pub(super) clock: Vec<u64>,
    pub(super) acknowledged: u32,
    /// Commits to be answered as busy.
    pub(super) busy: u32,
    /// The button has been pressed.
    pub(super) pressed: bool,
    /// A sector and the offset from which it cannot be read.
    pub(super) torn: Option<(u32, u16)>,
}

/// A number sequence for contents (Knuth, TAOCP 3.3.4, table 1, line 26).
pub(super) fn random_bytes(seed: u64, length: usize) -> Vec<u8> {
    let mut state = seed;
    let mut next = || {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        u8::try_from(state >> 56).unwrap()
    };
    // A third of the bytes are zeros and runs of ones, as in flash.
    (0..length)
        .map(|_| match next() % 6 {
            0 => 0,
            1 => 0xFF,
            _ => next(),
        })
        .collect()
}

impl FakeDevice {
    /// A device with `closed` closed sectors from `oldest` on, of uneven length, and an open one.
    pub(super) fn new(oldest: u32, closed: u32) -> Self {
        let mut sectors = BTreeMap::new();
        for sequence in oldest..oldest + closed {
            let used = 4096 - usize::try_from(sequence % 7).unwrap() * 36;
            sectors.insert(sequence, random_bytes(u64::from(sequence), used));
        }
        sectors.insert(oldest + closed, random_bytes(99, 1700));
        Self {
            identity: Identity {
                protocol: PROTOCOL_VERSION,
                journal_format: 1,
                plan_format: 1,
                firmware: Text::new("0.1.0").unwrap(),
                device_id: Text::new("tank-7").unwrap(),
                boot: 3,
                tick_ms: 86_400_000,
                plan_fingerprint: 0xAB,
                plan_serial: 1_700_000_000,
                word_bytes: 4,
                sectors: 2048,
            },
            status: Status { level_m: 4.25, samples: 77, ..Status::default() },
            plans: vec![
                (1_700_000_000, 0xAB, random_bytes(1, 1500)),
                (1_600_000_000, 0xCD, random_bytes(2, 512)),
            ],
            loading: None,
            sectors,
            clock: Vec::new(),
            acknowledged: 0,
            busy: 0,
            pressed: true,
            torn: None,
        }
    }

    pub(super) fn newest(&self) -> u32 {
        *self.sectors.keys().next_back().unwrap()
    }

    /// Journal bytes on the device.
    pub(super) fn bytes(&self) -> usize {
        self.sectors.values().map(Vec::len).sum()
    }

    fn used(&self, sequence: u32) -> u16 {
        u16::try_from(self.sectors[&sequence].len()).unwrap()
    }
}

impl Served for FakeDevice {
    fn identity(&mut self) -> Identity {
        self.identity
    }

    fn status(&mut self) -> Status {
        self.status
    }

    fn part_status(&mut self, part: u8) -> Option<PartStatus> {
        (part < 3).then(|| PartStatus { part, utilisation: 0.5, ..PartStatus::default() })
    }

    fn fault_status(&mut self) -> FaultStatus {
        let mut status = FaultStatus::default();
        status.counts[2] = 513;
        status
    }

    fn filling(&mut self) -> FillingStatus {
        FillingStatus { state: 2, ..FillingStatus::default() }
    }
    fn set_clock(&mut self, utc_s: u64) -> Result<(), Refusal> {
        if utc_s < 1_577_836_800 {
            return Err(ErrorCode::ClockImpossible.into());
        }
        self.clock.push(utc_s);
        Ok(())
    }

    fn acknowledge(&mut self) -> Result<(), Refusal> {
        if !self.pressed {
            return Err(ErrorCode::PressButton.into());
        }
        self.acknowledged += 1;
        Ok(())
    }

    fn plan_begin(&mut self, begin: &PlanBegin) -> Result<(), Refusal> {
        if begin.length > 8192 {
            return Err(Refusal { code: ErrorCode::PlanTooLong, detail: 8192 });
        }
        if !begin.device_id.is_empty() && begin.device_id != self.identity.device_id {
            return Err(ErrorCode::PlanForOther.into());
        }
        self.loading = Some((*begin, Vec::new()));
        Ok(())
    }

    fn plan_chunk(&mut self, offset: u32, bytes: &[u8]) -> Result<(), Refusal> {
        let (_, held) = self.loading.as_mut().expect("the server keeps the order");
        assert_eq!(held.len(), usize::try_from(offset).unwrap());
        held.extend(bytes);
        Ok(())
    }

    fn plan_commit(&mut self, fingerprint: u64) -> Result<(), Refusal> {
        if self.busy > 0 {
            self.busy -= 1;
            return Err(ErrorCode::Busy.into());
        }
        let (begin, bytes) = self.loading.take().expect("the server keeps the order");
        assert_eq!((begin.fingerprint, begin.length as usize), (fingerprint, bytes.len()));
        self.plans.insert(0, (begin.serial, fingerprint, bytes));
        self.identity.plan_fingerprint = fingerprint;
        self.identity.plan_serial = begin.serial;
        Ok(())
    }

    fn plans(&mut self) -> PlanList {
        let mut list = PlanList::default();
        for (entry, (serial, fingerprint, bytes)) in list.plans.iter_mut().zip(&self.plans) {
            let length = u32::try_from(bytes.len()).unwrap();
            *entry = PlanEntry { serial: *serial, fingerprint: *fingerprint, length };
        }
        list
    }

    fn read_plan(&mut self, fingerprint: u64, offset: u32, out: &mut [u8]) -> Result<(), Refusal> {
        let (.., bytes) = self.plans.iter().find(|plan| plan.1 == fingerprint).unwrap();
        out.copy_from_slice(&bytes[offset as usize..][..out.len()]);
        Ok(())
    }

    fn journal_bounds(&mut self) -> JournalBounds {
        let (oldest, newest) = (*self.sectors.keys().next().unwrap(), self.newest());
        JournalBounds { oldest, newest, newest_used: self.used(newest) }
    }

    fn head(&mut self) -> Result<Head, Refusal> {
        let newest = self.newest();
        Ok(Head {
            newest,
            used: self.used(newest),
            next_entry: 12_345,
            running_hash: 0x0123_4567_89AB_CDEF,
            boot: self.identity.boot,
            tick_ms: self.identity.tick_ms,
        })
    }

    fn sector_used(&mut self, sequence: u32) -> Option<u16> {
        self.sectors.contains_key(&sequence).then(|| self.used(sequence))
    }

    fn read_sector(&mut self, sequence: u32, offset: u16, out: &mut [u8]) -> Result<(), Refusal> {
        if self.torn.is_some_and(|(torn, from)| torn == sequence && offset >= from) {
            return Err(ErrorCode::StorageFailed.into());
        }
        let sector = self.sectors.get(&sequence).ok_or(ErrorCode::SectorGone)?;
        out.copy_from_slice(&sector[usize::from(offset)..][..out.len()]);
        Ok(())
    }
}

pub(super) type Shared = Rc<RefCell<FakeDevice>>;

/// The device behind a channel.
pub(super) fn in_process(device: &Shared) -> impl Port + std::fmt::Debug + use<> {
    let wire = Wire::new();
    let (mut end, mut server) = (wire.device_end(), Server::new());
    let device = Rc::clone(device);
    InProcess::new(&wire, move || {
        server.poll(&mut end, &mut *device.borrow_mut()).unwrap();
    })
}

pub(super) fn shared(device: FakeDevice) -> Shared {
    Rc::new(RefCell::new(device))
}
