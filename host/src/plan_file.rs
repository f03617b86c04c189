//! The file in which a sealed plan travels from the desk to the device.
//!
//! | bytes | field |
//! | --- | --- |
//! | 8 | magic `STRAKEP1` |
//! | 4 | length of the plan, u32, little endian |
//! | n | the plan as [`strake_core::plan::codec`] writes it, header included |
//! | 4 | CRC-32 (ISO-HDLC) of everything before, little endian |
//!
//! The check finds damage on the way. It is no signature: who made the plan it cannot say.

use crate::compile::fingerprint;
use strake_core::journal::check::CRC32;
use strake_core::plan::codec::{self, PLAN_BYTES_MAX};
use strake_core::plan::{Plan, PlanError, PlanHeader};

const MAGIC: &[u8; 8] = b"STRAKEP1";
const HEAD_BYTES: usize = MAGIC.len() + 4;
const CHECK_BYTES: usize = 4;
/// Most bytes of a plan file.
pub const PLAN_FILE_BYTES_MAX: usize = HEAD_BYTES + PLAN_BYTES_MAX + CHECK_BYTES;

/// A plan file's content.
#[derive(Clone, Debug)]
pub struct PlanFile {
    /// Serial and device.
    pub header: PlanHeader,
    /// The plan.
    pub plan: Plan,
    /// Name of the tank.
    pub tank_name: String,
    /// Names of the parts, in the plan's order.
    pub part_names: Vec<String>,
    /// Why a margin shorter than needed was accepted at sealing.
    pub accepted_margin: Option<String>,
    /// The plan's bytes, as the device takes them.
    pub bytes: Vec<u8>,
    /// Their fingerprint.
    pub fingerprint: u64,
}

/// Why bytes are no plan file.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PlanFileError {
    /// The first bytes are not a plan file's.
    #[error("these bytes are no sealed plan")]
    NotAPlanFile,
    /// The file ends early, or more stands behind its end.
    #[error("the sealed plan has {found} bytes, its head says {stated}")]
    Length {
        /// Bytes there.
        found: usize,
        /// Bytes that the head announces.
        stated: usize,
    },
    /// The check does not agree.
    #[error("the sealed plan is damaged: its check does not agree")]
    Damaged,
    /// The plan inside is none.
    #[error(transparent)]
    Plan(#[from] PlanError),
}

/// The file for a plan's bytes.
///
/// # Errors
/// [`PlanError::TooLarge`] when no device could take the plan.
pub fn write(plan: &[u8]) -> Result<Vec<u8>, PlanError> {
    let length = u32::try_from(plan.len()).map_err(|_| PlanError::TooLarge)?;
    if plan.len() > PLAN_BYTES_MAX {
        return Err(PlanError::TooLarge);
    }
    let mut file = Vec::with_capacity(HEAD_BYTES + plan.len() + CHECK_BYTES);
    file.extend_from_slice(MAGIC);
    file.extend_from_slice(&length.to_le_bytes());
    file.extend_from_slice(plan);
    let check = CRC32.checksum(&file);
    file.extend_from_slice(&check.to_le_bytes());
    Ok(file)
}

/// Reads a plan file and the plan in it.
///
/// # Errors
/// [`PlanFileError`] with what is wrong; nothing of a damaged file is used.
pub fn read(file: &[u8]) -> Result<PlanFile, PlanFileError> {
    let rest = file.strip_prefix(MAGIC).ok_or(PlanFileError::NotAPlanFile)?;
    let wrong = |stated| PlanFileError::Length { found: file.len(), stated };
    let (length, rest) = rest.split_first_chunk::<4>().ok_or(wrong(HEAD_BYTES))?;
    let length = usize::try_from(u32::from_le_bytes(*length)).unwrap_or(usize::MAX);
    let stated = length.saturating_add(HEAD_BYTES + CHECK_BYTES);
    let (bytes, check) = rest.split_at_checked(length).ok_or(wrong(stated))?;
    let check: [u8; CHECK_BYTES] = check.try_into().map_err(|_| wrong(stated))?;
    let checked = file.get(..HEAD_BYTES + length).ok_or(wrong(stated))?;
    if CRC32.checksum(checked) != u32::from_le_bytes(check) {
        return Err(PlanFileError::Damaged);
    }
    Ok(PlanFile::of_plan(bytes)?)
}

impl PlanFile {
    /// The plan in the bytes that a device takes and keeps.
    ///
    /// # Errors
    /// [`PlanError`] when they are no plan.
    pub fn of_plan(bytes: &[u8]) -> Result<Self, PlanError> {
        let (header, plan) = codec::decode(bytes)?;
        let mut part_names = Vec::new();
        let tank_name = codec::names(bytes, |_, name| part_names.push(name.to_owned()))?;
        let accepted_margin = codec::accepted_margin(bytes)?.map(str::to_owned);
        Ok(Self {
            accepted_margin,
            header,
            plan,
            tank_name: tank_name.as_str().to_owned(),
            part_names,
            bytes: bytes.to_vec(),
            fingerprint: fingerprint(bytes),
        })
    }
}

#[cfg(test)]
mod tests;
