//! Taking the journal home: identity, plans, sectors, head.

use super::client::{Client, reply};
use super::error::doing;
use super::transfer::{Finished, Transfer};
use super::{LinkError, Port};
use crate::journal_file::{DeviceIdentity, HeadRecord, PartFile, Record, StoredPlan, StoredSector};
use std::ops::ControlFlow;
use std::time::Duration;
use strake_core::wire::{
    ErrorCode, ErrorReply, Frame, Head, Identity, JournalBounds, Kind, SectorData, SectorEnd,
};

/// Silence after which what was asked for is taken to be lost, the first time; doubled each time.
const QUIET: Duration = Duration::from_millis(150);
const QUIET_LONGEST: Duration = Duration::from_secs(2);
/// Silences in a row after which the device is taken to be gone.
const QUIET_MAX: u32 = 10;
/// Bytes without one useful frame after which the line is taken to be hopeless.
const USELESS_BYTES: u64 = 128 * 1024;

/// How far a collection is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Progress {
    /// Sectors through in this run.
    pub sectors: u32,
    /// Sectors to come in this run, those through included.
    pub sectors_total: u32,
    /// Journal bytes that came in this run.
    pub bytes: u64,
}

/// What a collection brought. It is complete up to the head, except
/// for `gone` and `unreadable`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Collected {
    /// Where the journal ended; [`PartFile::finish`] takes it.
    pub head: HeadRecord,
    /// Sectors of this run.
    pub sectors: u32,
    /// Journal bytes of this run.
    pub bytes: u64,
    /// Sectors that an earlier run had left in the file.
    pub resumed: u32,
    /// Sectors that the device overwrote before they could be taken whole.
    pub gone: u32,
    /// Sectors that the device could not read.
    pub unreadable: u32,
    /// Frames that came damaged.
    pub damaged_frames: u64,
    /// Bulk frames that were asked for again.
    pub lost_frames: u64,
}

/// Takes everything that is not in `file` yet, up to the journal's end as it is at the beginning.
/// `utc_s` is the laptop's time. `progress` is called after every read and may break it off; so may
/// the line: what has come is in the file then, and the next call goes on from there.
///
/// # Errors
/// [`LinkError`].
pub fn collect<P: Port>(
    client: &mut Client<P>,
    file: &mut PartFile,
    utc_s: Option<u64>,
    progress: &mut dyn FnMut(&Progress) -> ControlFlow<()>,
) -> Result<Collected, LinkError> {
    let identity = *client.hello()?;
    file.identify(&device_identity(&identity))?;
    let head = client.head()?;
    let bounds = client.journal_bounds()?;
    take_plans(client, file)?;

    let resumed = u32::try_from(file.sectors().len()).unwrap_or(u32::MAX);
    let unsure = file.unsure()?.filter(|sector| sector.sequence >= bounds.oldest);
    let wanted = wanted(&identity, &bounds, &head, file, unsure.as_ref())?;
    let overwritten = overwritten(file, bounds.oldest);
    let mut run = Run {
        progress: Progress {
            sectors_total: u32::try_from(wanted.len()).unwrap_or(u32::MAX),
            ..Progress::default()
        },
        transfer: Transfer::new(wanted, unsure.as_ref().map(|sector| sector.bytes.as_slice())),
        gone: overwritten,
        unreadable: 0,
        head,
        file,
    };
    let damaged_before = client.heard.bad;
    let result = run.sectors(client, progress);
    if result.is_err()
        && let Some((sequence, bytes)) = run.transfer.begun()
    {
        run.file.append(&Record::Sector(StoredSector { sequence, bytes }))?;
    }
    result?;
    Ok(Collected {
        head: head_record(&head, utc_s),
        sectors: run.progress.sectors,
        bytes: run.progress.bytes,
        resumed,
        gone: run.gone,
        unreadable: run.unreadable,
        damaged_frames: client.heard.bad - damaged_before,
        lost_frames: run.transfer.lost_frames(),
    })
}

struct Run<'f> {
    transfer: Transfer,
    progress: Progress,
    gone: u32,
    unreadable: u32,
    head: Head,
    file: &'f mut PartFile,
}

impl Run<'_> {
    fn sectors<P: Port>(
        &mut self,
        client: &mut Client<P>,
        progress: &mut dyn FnMut(&Progress) -> ControlFlow<()>,
    ) -> Result<(), LinkError> {
        let (mut silences, mut useful_at) = (0, client.heard);
        let mut since = client.port.now();
        while !self.transfer.is_done() {
            while let Some(request) = self.transfer.next_request() {
                client.send(&request)?;
            }
            let wait = QUIET_LONGEST.min(QUIET * 2_u32.pow(silences.min(8)));
            let (mut useful, mut refused) = (false, None);
            let transfer = &mut self.transfer;
            let count = client.listen(wait, &mut |frame| match take(transfer, frame) {
                Taken::Useful => useful = true,
                Taken::Refused(reply) => refused = Some(reply),
                Taken::Other => {}
            })?;
            if let Some(ErrorReply { code, detail, .. }) = refused {
                let doing = doing(Kind::SectorRequest);
                return Err(match ErrorCode::from_number(code) {
                    Some(code) => LinkError::Refused { doing, code, detail },
                    None => LinkError::UnknownCode { doing, code, detail },
                });
            }
            if useful {
                (silences, useful_at, since) = (0, client.heard, client.port.now());
            } else if count == 0 {
                silences += 1;
                self.transfer.give_up_issued();
            }
            let useless = client.heard.bytes - useful_at.bytes > USELESS_BYTES;
            if silences > QUIET_MAX || useless {
                return Err(client.no_answer(doing(Kind::SectorRequest), useful_at, since));
            }
            self.store()?;
            if progress(&self.progress).is_break() {
                return Err(LinkError::Interrupted);
            }
        }
        Ok(())
    }

    /// Puts what is through into the file. The newest sector ends where the head says.
    fn store(&mut self) -> Result<(), LinkError> {
        while let Some(finished) = self.transfer.take_finished() {
            self.progress.sectors += 1;
            match finished {
                Finished::Lost { sequence, code, bytes } => {
                    if code == ErrorCode::SectorGone.number() {
                        self.gone += 1;
                    } else {
                        self.unreadable += 1;
                    }
                    if !bytes.is_empty() {
                        self.keep(sequence, bytes)?;
                    }
                }
                Finished::Sector { sequence, mut bytes } => {
                    if sequence == self.head.newest {
                        bytes.truncate(usize::from(self.head.used));
                    }
                    self.keep(sequence, bytes)?;
                }
            }
        }
        Ok(())
    }

    fn keep(&mut self, sequence: u32, bytes: Vec<u8>) -> Result<(), LinkError> {
        self.progress.bytes += bytes.len() as u64;
        Ok(self.file.append(&Record::Sector(StoredSector { sequence, bytes }))?)
    }
}

enum Taken {
    Useful,
    Refused(ErrorReply),
    Other,
}

fn take(transfer: &mut Transfer, frame: &Frame<'_>) -> Taken {
    if let Some(Ok(data)) = reply::<SectorData<'_>>(frame) {
        if transfer.data(&data) { Taken::Useful } else { Taken::Other }
    } else if let Some(Ok(end)) = reply::<SectorEnd>(frame) {
        if transfer.end(end) { Taken::Useful } else { Taken::Other }
    } else {
        match reply::<ErrorReply>(frame) {
            Some(Ok(reply)) if reply.to == Kind::SectorRequest.number() => Taken::Refused(reply),
            _ => Taken::Other,
        }
    }
}

fn take_plans<P: Port>(client: &mut Client<P>, file: &mut PartFile) -> Result<(), LinkError> {
    for plan in client.plans()? {
        if !file.has_plan(plan.fingerprint) {
            let bytes = client.read_plan(plan.fingerprint)?;
            let (serial, fingerprint) = (plan.serial, plan.fingerprint);
            file.append(&Record::Plan(StoredPlan { serial, fingerprint, bytes }))?;
        }
    }
    Ok(())
}

/// The sectors to ask for: the one that may be cut short first, then the others, oldest first.
fn wanted(
    identity: &Identity,
    bounds: &JournalBounds,
    head: &Head,
    file: &PartFile,
    unsure: Option<&StoredSector>,
) -> Result<Vec<u32>, LinkError> {
    let stored = head.newest.checked_sub(bounds.oldest);
    if stored.is_some_and(|stored| stored >= identity.sectors) {
        let what = "more sectors than its ring has";
        return Err(LinkError::Nonsense { doing: doing(Kind::HeadRequest), what });
    }
    let others = bounds.oldest..=head.newest;
    let others = others.filter(|sequence| !file.sectors().contains_key(sequence));
    Ok(unsure.map(|sector| sector.sequence).into_iter().chain(others).collect())
}

/// Sectors between those in the file and those on the device: neither has them any more.
fn overwritten(file: &PartFile, oldest: u32) -> u32 {
    match file.sectors().last_key_value() {
        Some((last, _)) => oldest.saturating_sub(last.saturating_add(1)),
        None => 0,
    }
}

fn device_identity(identity: &Identity) -> DeviceIdentity {
    DeviceIdentity {
        device_id: identity.device_id.as_str().to_owned(),
        firmware: identity.firmware.as_str().to_owned(),
        word_bytes: identity.word_bytes,
        sectors: identity.sectors,
    }
}

fn head_record(head: &Head, collected_utc_s: Option<u64>) -> HeadRecord {
    HeadRecord {
        newest: head.newest,
        used: head.used,
        next_entry: head.next_entry,
        running_hash: head.running_hash,
        boot: head.boot,
        tick_ms: head.tick_ms,
        collected_utc_s,
        signature: None,
    }
}
