//! Writing: a part file grows, then becomes the journal file.

use super::{DeviceIdentity, HeadRecord, JournalFile, JournalFileError, MAGIC, Record};
use std::collections::{BTreeMap, BTreeSet};
use std::fs::{self, File, OpenOptions};
use std::io::{self, Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};

/// A journal file that grows. Every record is appended whole; what an interrupted run left behind
/// the last sound record is cut off when the file is opened again.
#[derive(Debug)]
pub struct PartFile {
    file: File,
    path: PathBuf,
    identity: Option<DeviceIdentity>,
    plans: BTreeSet<u64>,
    sectors: BTreeMap<u32, u16>,
    last_sector: Option<u32>,
}

impl PartFile {
    /// Begins a part file, or goes on with the one that is there.
    ///
    /// # Errors
    /// [`JournalFileError::Foreign`] when something else stands there, or the system's reason.
    pub fn open(path: &Path) -> Result<Self, JournalFileError> {
        let io = failed("cannot write", path);
        let mut options = OpenOptions::new();
        let options = options.read(true).write(true).create(true).truncate(false);
        let file = options.open(path).map_err(io)?;
        match JournalFile::read(&file, path) {
            Ok(old) => {
                let io = failed("cannot write", path);
                let mut part = Self {
                    identity: old.identity().cloned(),
                    plans: old.plans().map(|(_, fingerprint)| fingerprint).collect(),
                    sectors: old.sectors().collect(),
                    last_sector: old.last_sector(),
                    path: path.to_path_buf(),
                    file: file.try_clone().map_err(&io)?,
                };
                part.file.set_len(old.sound_end()).map_err(&io)?;
                part.file.seek(SeekFrom::End(0)).map_err(&io)?;
                Ok(part)
            }
            Err(JournalFileError::Empty { .. }) => {
                let io = failed("cannot write", path);
                let mut part = Self {
                    file,
                    path: path.to_path_buf(),
                    identity: None,
                    plans: BTreeSet::new(),
                    sectors: BTreeMap::new(),
                    last_sector: None,
                };
                part.file.set_len(0).map_err(&io)?;
                part.file.rewind().map_err(&io)?;
                part.file.write_all(&MAGIC).map_err(&io)?;
                Ok(part)
            }
            Err(other) => Err(other),
        }
    }

    /// States the device, or checks that the file was begun with it.
    ///
    /// # Errors
    /// [`JournalFileError::OtherDevice`], or the system's reason.
    pub fn identify(&mut self, identity: &DeviceIdentity) -> Result<(), JournalFileError> {
        match &self.identity {
            Some(known) if known.device_id != identity.device_id => {
                Err(JournalFileError::OtherDevice {
                    path: self.path.clone(),
                    file: known.device_id.clone(),
                    device: identity.device_id.clone(),
                })
            }
            Some(known) if known == identity => Ok(()),
            _ => self.append(&Record::Identity(identity.clone())),
        }
    }

    /// Appends a record.
    ///
    /// # Errors
    /// The system's reason.
    pub fn append(&mut self, record: &Record) -> Result<(), JournalFileError> {
        let written = self.file.write_all(&record.encode());
        written.map_err(failed("cannot write", &self.path))?;
        match record {
            Record::Identity(identity) => self.identity = Some(identity.clone()),
            Record::Plan(plan) => {
                self.plans.insert(plan.fingerprint);
            }
            Record::Sector(sector) => {
                let used = u16::try_from(sector.bytes.len()).unwrap_or(u16::MAX);
                let known = self.sectors.entry(sector.sequence).or_insert(used);
                *known = used.max(*known);
                self.last_sector = Some(sector.sequence);
            }
            Record::Head(_) => {}
        }
        Ok(())
    }

    /// Whether the plan with this fingerprint is in the file.
    #[must_use]
    pub fn has_plan(&self, fingerprint: u64) -> bool {
        self.plans.contains(&fingerprint)
    }

    /// Sequence and used bytes of the sectors in the file.
    #[must_use]
    pub fn sectors(&self) -> &BTreeMap<u32, u16> {
        &self.sectors
    }

    /// The sector that an interrupted run may have left shorter than it is on the device.
    ///
    /// # Errors
    /// The system's reason.
    pub fn unsure(&self) -> Result<Option<super::StoredSector>, JournalFileError> {
        match self.last_sector {
            None => Ok(None),
            Some(sequence) => JournalFile::open(&self.path)?.sector(sequence),
        }
    }

    /// Where the part file stands.
    #[must_use]
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Appends the head, puts everything on the disk and gives the file its name.
    ///
    /// # Errors
    /// [`JournalFileError::Exists`] when `target` is there and `replace` is false; the part file
    /// stays. Otherwise the system's reason.
    pub fn finish(
        mut self,
        head: &HeadRecord,
        target: &Path,
        replace: bool,
    ) -> Result<(), JournalFileError> {
        if !replace && target.exists() {
            return Err(JournalFileError::Exists { path: target.to_path_buf() });
        }
        self.append(&Record::Head(*head))?;
        self.file.sync_all().map_err(failed("cannot write", &self.path))?;
        fs::rename(&self.path, target).map_err(failed("cannot write", target))?;
        sync_directory(target);
        Ok(())
    }
}

/// Makes the new name durable where the system can; elsewhere the rename itself is all there is.
fn sync_directory(target: &Path) {
    let directory = target.parent().filter(|parent| !parent.as_os_str().is_empty());
    if let Ok(directory) = File::open(directory.unwrap_or(Path::new("."))) {
        let _not_offered_everywhere = directory.sync_all();
    }
}

fn failed(doing: &'static str, path: &Path) -> impl Fn(io::Error) -> JournalFileError {
    let path = path.to_path_buf();
    move |cause| JournalFileError::Io { doing, path: path.clone(), cause }
}
