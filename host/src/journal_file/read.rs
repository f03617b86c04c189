//! Reading a journal file: one pass makes an index, then sectors and plans are fetched one by one.
//!
//! Memory grows with the number of sectors by some 40 bytes each (one percent of the file), not
//! with their content.

use super::record::{PLAN_HEAD_BYTES, RECORD_HEAD_BYTES, SECTOR_HEAD_BYTES};
use super::scan::{Damage, DamageKind, Found, Scanner};
use super::{
    DeviceIdentity, HeadRecord, JournalFileError, MAGIC, Record, StoredPlan, StoredSector,
};
use std::collections::BTreeMap;
use std::fs::File;
use std::io::{self, Read, Seek, SeekFrom};
use std::ops::Bound;
use std::path::{Path, PathBuf};

/// An open journal file.
#[derive(Debug)]
pub struct JournalFile<R> {
    source: R,
    path: PathBuf,
    identity: Option<DeviceIdentity>,
    head: Option<HeadRecord>,
    plans: Vec<PlanPlace>,
    sectors: BTreeMap<u32, SectorPlace>,
    damage: Vec<Damage>,
    /// The sector whose record stands last among the sectors.
    last_sector: Option<u32>,
    /// End of the last sound record.
    sound_end: u64,
}

#[derive(Clone, Copy, Debug)]
struct PlanPlace {
    serial: u64,
    fingerprint: u64,
    offset: u64,
    length: usize,
}

#[derive(Clone, Copy, Debug)]
struct SectorPlace {
    offset: u64,
    used: u16,
}

impl JournalFile<File> {
    /// Opens the file and passes through it once.
    ///
    /// # Errors
    /// [`JournalFileError::Empty`], [`JournalFileError::Foreign`], or the system's reason. Damaged
    /// places are no error: see [`Self::damage`].
    pub fn open(path: &Path) -> Result<Self, JournalFileError> {
        let cause = |cause| JournalFileError::Io { doing: "cannot open", path: path.into(), cause };
        Self::read(File::open(path).map_err(cause)?, path)
    }
}

impl<R: Read + Seek> JournalFile<R> {
    /// Passes once through any source; `path` names it in messages.
    ///
    /// # Errors
    /// As [`JournalFile::open`].
    pub fn read(mut source: R, path: &Path) -> Result<Self, JournalFileError> {
        let path = path.to_path_buf();
        let io = |cause| JournalFileError::Io { doing: "cannot read", path: path.clone(), cause };
        let mut magic = Vec::new();
        source.by_ref().take(MAGIC.len() as u64).read_to_end(&mut magic).map_err(io)?;
        if magic != MAGIC {
            return Err(if MAGIC.starts_with(&magic) {
                JournalFileError::Empty { path }
            } else {
                JournalFileError::Foreign { path }
            });
        }
        let mut file = Self {
            source,
            path: path.clone(),
            identity: None,
            head: None,
            plans: Vec::new(),
            sectors: BTreeMap::new(),
            damage: Vec::new(),
            last_sector: None,
            sound_end: MAGIC.len() as u64,
        };
        file.index().map_err(io)?;
        Ok(file)
    }

    fn index(&mut self) -> io::Result<()> {
        let mut scanner = Scanner::new(&mut self.source, MAGIC.len() as u64);
        while let Some(found) = scanner.next()? {
            let (offset, tag, payload) = match found {
                Found::Damage(damage) => {
                    self.damage.push(damage);
                    continue;
                }
                Found::Record { offset, tag, payload } => (offset, tag, payload),
            };
            let bytes = super::record::frame_bytes(payload.len());
            self.sound_end = offset + bytes;
            match Record::decode(tag, payload) {
                None => {
                    let kind = DamageKind::Unknown { tag };
                    self.damage.push(Damage { offset, length: bytes, kind });
                }
                Some(Record::Identity(identity)) => self.identity = Some(identity),
                Some(Record::Head(head)) => self.head = Some(head),
                Some(Record::Plan(StoredPlan { serial, fingerprint, bytes })) => {
                    self.plans.retain(|plan| plan.fingerprint != fingerprint);
                    let length = bytes.len();
                    self.plans.push(PlanPlace { serial, fingerprint, offset, length });
                }
                Some(Record::Sector(StoredSector { sequence, bytes })) => {
                    let used = u16::try_from(bytes.len()).unwrap_or(u16::MAX);
                    let place =
                        self.sectors.entry(sequence).or_insert(SectorPlace { offset, used });
                    if used >= place.used {
                        *place = SectorPlace { offset, used };
                    }
                    self.last_sector = Some(sequence);
                }
            }
        }
        Ok(())
    }

    /// Which device it was; `None` when that record is damaged.
    #[must_use]
    pub fn identity(&self) -> Option<&DeviceIdentity> {
        self.identity.as_ref()
    }

    /// Where the journal ended; `None` in a part file: the collection was not finished.
    #[must_use]
    pub fn head(&self) -> Option<&HeadRecord> {
        self.head.as_ref()
    }

    /// Serial and fingerprint of every plan, in the order of the file.
    pub fn plans(&self) -> impl Iterator<Item = (u64, u64)> {
        self.plans.iter().map(|plan| (plan.serial, plan.fingerprint))
    }

    /// The plan with this fingerprint; `None` when it is not in the file.
    ///
    /// # Errors
    /// The system's reason.
    pub fn plan(&mut self, fingerprint: u64) -> Result<Option<StoredPlan>, JournalFileError> {
        let place = self.plans.iter().copied().find(|plan| plan.fingerprint == fingerprint);
        let Some(PlanPlace { serial, offset, length, .. }) = place else { return Ok(None) };
        let bytes = self.fetch(offset, PLAN_HEAD_BYTES, length)?;
        Ok(Some(StoredPlan { serial, fingerprint, bytes }))
    }

    /// Sequence and used bytes of every sector, oldest first.
    pub fn sectors(&self) -> impl DoubleEndedIterator<Item = (u32, u16)> {
        self.sectors.iter().map(|(sequence, place)| (*sequence, place.used))
    }

    /// The sector with this sequence; `None` when it is not in the file.
    ///
    /// # Errors
    /// The system's reason.
    pub fn sector(&mut self, sequence: u32) -> Result<Option<StoredSector>, JournalFileError> {
        let Some(place) = self.sectors.get(&sequence).copied() else { return Ok(None) };
        let bytes = self.fetch(place.offset, SECTOR_HEAD_BYTES, usize::from(place.used))?;
        Ok(Some(StoredSector { sequence, bytes }))
    }

    /// The first sector above `sequence`, or the first of all for `None`: the step of a walk that
    /// holds one sector at a time.
    ///
    /// # Errors
    /// The system's reason.
    pub fn sector_after(
        &mut self,
        sequence: Option<u32>,
    ) -> Result<Option<StoredSector>, JournalFileError> {
        let from = sequence.map_or(Bound::Unbounded, Bound::Excluded);
        let next = self.sectors.range((from, Bound::Unbounded)).next().map(|(next, _)| *next);
        next.map_or(Ok(None), |next| self.sector(next))
    }

    /// Every place that was not used, in the order of the file.
    #[must_use]
    pub fn damage(&self) -> &[Damage] {
        &self.damage
    }

    /// The sector whose record stands last: the only one that a broken-off collection may have left
    /// shorter than it is on the device.
    pub(super) fn last_sector(&self) -> Option<u32> {
        self.last_sector
    }

    /// End of the last sound record, bytes from the start.
    pub(super) fn sound_end(&self) -> u64 {
        self.sound_end
    }

    fn fetch(
        &mut self,
        record: u64,
        head_bytes: usize,
        length: usize,
    ) -> Result<Vec<u8>, JournalFileError> {
        let mut bytes = vec![0; length];
        let start = record + (RECORD_HEAD_BYTES + head_bytes) as u64;
        let read = self.source.seek(SeekFrom::Start(start));
        read.and_then(|_| self.source.read_exact(&mut bytes)).map_err(|cause| {
            JournalFileError::Io { doing: "cannot read", path: self.path.clone(), cause }
        })?;
        Ok(bytes)
    }
}
