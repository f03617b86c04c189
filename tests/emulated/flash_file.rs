//! The file that holds the emulated flash, and the button's word at its end.

use std::fs::{File, OpenOptions};
use std::io;
use std::os::unix::fs::FileExt as _;
use std::path::{Path, PathBuf};

use tempfile::TempDir;

use crate::toolchain::scratch;

/// Bytes of PSRAM.
pub(crate) const FLASH_BYTES: u64 = 16 << 20;
/// Address of PSRAM on the device.
pub(crate) const FLASH_BASE: u64 = 0x2100_0000;
/// Where the plan slots begin in the file; the journal begins at 0.
pub(crate) const PLANS_OFFSET: u64 = 8 << 20;
/// Bytes of the plan slots.
pub(crate) const PLANS_BYTES: u64 = 64 << 10;

const BUTTON_OFFSET: u64 = FLASH_BYTES - 4;
const BUTTON_PRESSED: [u8; 4] = 0x5052_4553_u32.to_le_bytes();
const BUTTON_RELEASED: [u8; 4] = [0xFF; 4];

/// Flash content, independent of any machine; deleted when dropped.
#[derive(Debug)]
pub(crate) struct FlashFile {
    folder: TempDir,
    file: File,
}

impl FlashFile {
    /// Flash that was never written.
    pub(crate) fn erased() -> io::Result<Self> {
        Self::filled(&vec![0xFF; usize::try_from(FLASH_BYTES).unwrap_or(0)])
    }

    fn filled(content: &[u8]) -> io::Result<Self> {
        let folder = TempDir::new_in(scratch())?;
        let path = folder.path().join("flash.bin");
        std::fs::write(&path, content)?;
        let file = OpenOptions::new().read(true).write(true).open(path)?;
        Ok(Self { folder, file })
    }

    /// A second flash with the same content.
    pub(crate) fn copy(&self) -> io::Result<Self> {
        Self::filled(&std::fs::read(self.path())?)
    }

    pub(crate) fn path(&self) -> PathBuf {
        self.folder.path().join("flash.bin")
    }

    /// A folder that lives as long as this flash.
    pub(crate) fn folder(&self) -> &Path {
        self.folder.path()
    }

    /// The `bytes` bytes at `offset`, also while a machine runs on it.
    pub(crate) fn read(&self, offset: u64, bytes: usize) -> io::Result<Vec<u8>> {
        let mut content = vec![0; bytes];
        self.file.read_exact_at(&mut content, offset)?;
        Ok(content)
    }

    /// Replaces content, past every rule of a flash.
    pub(crate) fn overwrite(&self, offset: u64, content: &[u8]) -> io::Result<()> {
        self.file.write_all_at(content, offset)
    }

    /// Presses or releases the button; the device looks at it four times a second.
    pub(crate) fn set_button(&self, pressed: bool) -> io::Result<()> {
        let word = if pressed { BUTTON_PRESSED } else { BUTTON_RELEASED };
        self.overwrite(BUTTON_OFFSET, &word)
    }
}
