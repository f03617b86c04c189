//! An image as linked: its symbols, its size, its hash.

use std::error::Error;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

use object::{Object as _, ObjectSection as _, ObjectSymbol as _, SectionFlags, elf};
use sha2::{Digest as _, Sha256};

/// An ELF file for the target.
#[derive(Debug)]
pub(crate) struct Image {
    pub(crate) path: PathBuf,
    pub(crate) elf: Vec<u8>,
    /// SHA-256 of the file, in hexadecimal.
    pub(crate) sha256: String,
}

/// Bytes that an image takes on the device.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Footprint {
    /// Code, constants and the initial values of static data.
    pub(crate) flash: u64,
    /// Static data of every kind, retained memory included.
    pub(crate) ram: u64,
}

impl Image {
    pub(crate) fn read(path: &Path) -> Result<Self, Box<dyn Error>> {
        let elf = std::fs::read(path)?;
        let mut sha256 = String::new();
        for byte in Sha256::digest(&elf) {
            write!(sha256, "{byte:02x}")?;
        }
        Ok(Self { path: path.to_owned(), elf, sha256 })
    }

    /// Address and size of the one symbol called `name`: exactly, or as the path of a mangled name
    /// (`modbus::value`), whichever mangling it has.
    pub(crate) fn symbol(&self, name: &str) -> Result<(u64, u64), Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let mut found = Vec::new();
        for symbol in file.symbols() {
            let full = symbol.name().unwrap_or_default();
            if full == name || has_path(full, name) {
                // Bit 0 says Thumb, it is no part of the address.
                found.push((full.to_owned(), (symbol.address() & !1, symbol.size())));
            }
        }
        match &found[..] {
            [(_, place)] => Ok(*place),
            _ => Err(format!("one symbol {name} wanted, found {found:x?}").into()),
        }
    }

    pub(crate) fn footprint(&self) -> Result<Footprint, Box<dyn Error>> {
        const RAM: std::ops::Range<u64> = 0x2000_0000..0x2100_0000;
        let file = object::File::parse(&*self.elf)?;
        let mut footprint = Footprint { flash: 0, ram: 0 };
        for section in file.sections() {
            let SectionFlags::Elf { sh_flags } = section.flags() else { continue };
            if sh_flags & u64::from(elf::SHF_ALLOC) == 0 {
                continue;
            }
            if RAM.contains(&section.address()) {
                footprint.ram += section.size();
            }
            if section.file_range().is_some() {
                footprint.flash += section.size();
            }
        }
        Ok(footprint)
    }
}

/// Both manglings write each part of a path behind its length, one behind the other.
fn has_path(mangled: &str, path: &str) -> bool {
    let parts: Vec<String> = path.split("::").map(|part| format!("{}{part}", part.len())).collect();
    let parts = parts.concat();
    // A digit in front would belong to another length.
    mangled.starts_with('_')
        && mangled
            .match_indices(&*parts)
            .any(|(at, _)| !mangled[..at].ends_with(|last: char| last.is_ascii_digit()))
}
