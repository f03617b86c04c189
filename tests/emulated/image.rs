//! An image as linked: its symbols, its size, its hash.

use std::error::Error;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

use object::{Object as _, ObjectSection as _, ObjectSymbol as _, SectionFlags, SymbolKind, elf};
use sha2::{Digest as _, Sha256};

/// An ELF file for the target.
#[derive(Debug)]
pub(crate) struct Image {
    pub(crate) path: PathBuf,
    pub(crate) elf: Vec<u8>,
    /// SHA-256 of the file, in hexadecimal.
    pub(crate) sha256: String,
}

/// A function of an image: address, size and name as linked.
pub(crate) type Function = (u32, u32, String);
/// A stretch of what the flash holds: address and content.
pub(crate) type Stretch = (u32, Vec<u8>);

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
    /// (`modbus::value`, `digest..add`), whichever mangling it has.
    pub(crate) fn symbol(&self, name: &str) -> Result<(u64, u64), Box<dyn Error>> {
        match &self.symbols(name)?[..] {
            [place] => Ok(*place),
            found => Err(format!("one symbol {name} wanted, found {found:x?}").into()),
        }
    }

    /// Address and size of every symbol of that name: a generic function has one for each use.
    pub(crate) fn symbols(&self, name: &str) -> Result<Vec<(u64, u64)>, Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let mut found = Vec::new();
        for symbol in file.symbols() {
            let full = symbol.name().unwrap_or_default();
            if full == name || has_path(full, name) {
                // Bit 0 says Thumb, it is no part of the address.
                found.push((symbol.address() & !1, symbol.size()));
            }
        }
        Ok(found)
    }

    /// Address of the first 16 bits of code that are `code` under `mask`.
    pub(crate) fn instruction(&self, (code, mask): (u16, u16)) -> Result<u32, Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let text = file.section_by_name(".text").ok_or("no code")?;
        let halves = text.data()?.chunks_exact(2);
        let is_it = |half: &[u8]| half.first_chunk().map(|half| u16::from_le_bytes(*half) & mask);
        let found = halves.into_iter().position(|half| is_it(half) == Some(code));
        let offset = found.ok_or(format!("no instruction {code:#06x}"))? * 2;
        Ok(u32::try_from(text.address())? + u32::try_from(offset)?)
    }

    /// The functions of the image: address, size and name as linked.
    pub(crate) fn functions(&self) -> Result<Vec<Function>, Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let mut functions = Vec::new();
        for symbol in file.symbols().filter(|symbol| symbol.kind() == SymbolKind::Text) {
            let name = symbol.name().unwrap_or_default();
            if !name.starts_with('$') {
                let address = u32::try_from(symbol.address() & !1)?;
                functions.push((address, u32::try_from(symbol.size())?, name.to_owned()));
            }
        }
        Ok(functions)
    }

    /// Address and content of every section that the flash holds.
    pub(crate) fn content(&self) -> Result<Vec<Stretch>, Box<dyn Error>> {
        let file = object::File::parse(&*self.elf)?;
        let mut content = Vec::new();
        for section in file.sections() {
            let SectionFlags::Elf { sh_flags } = section.flags() else { continue };
            if sh_flags & u64::from(elf::SHF_ALLOC) != 0 && section.file_range().is_some() {
                content.push((u32::try_from(section.address())?, section.data()?.to_vec()));
            }
        }
        Ok(content)
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

/// Both manglings write each part of a path behind its length, one behind the other; `..` in `path`
/// stands for anything in between, such as the type of a method.
fn has_path(mangled: &str, path: &str) -> bool {
    let mut rest = mangled;
    mangled.starts_with('_')
        && path.split("..").all(|piece| {
            let parts = piece.split("::").map(|part| format!("{}{part}", part.len()));
            let parts = parts.collect::<String>();
            // A digit in front would belong to another length.
            let found = rest
                .match_indices(&*parts)
                .find(|(at, _)| !rest[..*at].ends_with(|last: char| last.is_ascii_digit()));
            found.map(|(at, _)| rest = &rest[at + parts.len()..]).is_some()
        })
}
