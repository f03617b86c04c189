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

    /// Address and size of the symbol whose name is `name`, or ends in `::name` before its hash.
    pub(crate) fn symbol(&self, name: &str) -> Result<(u64, u64), Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let inner = format!("{}{name}17h", name.len());
        let found: Vec<_> = file
            .symbols()
            .filter(|symbol| symbol.name().is_ok_and(|full| full == name || full.contains(&inner)))
            // Bit 0 says Thumb, it is no part of the address.
            .map(|symbol| (symbol.address() & !1, symbol.size()))
            .collect();
        match found[..] {
            [one] => Ok(one),
            _ => Err(format!("{} symbols are called {name}", found.len()).into()),
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
