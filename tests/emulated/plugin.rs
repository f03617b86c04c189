//! The emulator's plugins: compiled once in a run, from the sources in `plugins/`.

use std::error::Error;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::{Mutex, PoisonError};

use crate::flash_file::{FLASH_BASE, PLANS_BYTES, PLANS_OFFSET};
use crate::toolchain::{root, scratch};

/// Exit status of an emulator that a power cut ended.
pub(crate) const CUT_STATUS: i32 = 77;

/// A plugin with its arguments.
#[derive(Clone, Debug)]
pub(crate) struct Plugin {
    library: PathBuf,
    arguments: Vec<String>,
    /// File in the machine's folder that it writes at an orderly exit.
    pub(crate) out: &'static str,
    /// File in the machine's folder that it writes all the time.
    record: Option<&'static str>,
}

/// A store into flash.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Store {
    /// Offset in the flash file.
    pub(crate) offset: u32,
    /// The word that stands there from then on.
    pub(crate) word: u32,
}

/// What `instruction_count` watches.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Span<'a> {
    pub(crate) name: &'a str,
    /// Address of the first instruction.
    pub(crate) start: u64,
    /// Address behind the last one; none: the instruction that the function returns to.
    pub(crate) stop: Option<u64>,
}

/// Ends the machine after the `after`-th store into `bytes` bytes of flash from `offset`; without
/// a number it only counts the stores, into `stores.txt`.
pub(crate) fn power_cut(
    offset: u64,
    bytes: u64,
    after: Option<u64>,
) -> Result<Plugin, Box<dyn Error>> {
    let base = FLASH_BASE + offset;
    let mut arguments = vec![format!("base={base:#x}"), format!("bytes={bytes:#x}")];
    arguments.extend(after.map(|after| format!("after={after}")));
    Ok(Plugin { library: library("power_cut")?, arguments, out: "stores.txt", record: None })
}

/// As [`power_cut`] over journal and plan slots, and records every store, see [`recorded`].
pub(crate) fn recording_power_cut(after: Option<u64>) -> Result<Plugin, Box<dyn Error>> {
    let plugin = power_cut(0, PLANS_OFFSET + PLANS_BYTES, after)?;
    Ok(Plugin { record: Some("record.bin"), ..plugin })
}

/// The stores that a recording plugin saw, in order.
pub(crate) fn recorded(folder: &Path) -> Result<Vec<Store>, Box<dyn Error>> {
    let bytes = std::fs::read(folder.join("record.bin"))?;
    let (words, _) = bytes.as_chunks();
    let (pairs, _) = words.as_chunks();
    let store = |[offset, word]: &[[u8; 4]; 2]| Store {
        offset: u32::from_le_bytes(*offset),
        word: u32::from_le_bytes(*word),
    };
    Ok(pairs.iter().map(store).collect())
}

/// Counts the instructions of each run through the spans, into `instructions.txt`.
pub(crate) fn instruction_count(spans: &[Span<'_>]) -> Result<Plugin, Box<dyn Error>> {
    let argument = |span: &Span<'_>| {
        let stop = span.stop.map(|stop| format!(":{stop:#x}")).unwrap_or_default();
        format!("span={}:{:#x}{stop}", span.name, span.start)
    };
    let arguments = spans.iter().map(argument).collect();
    let library = library("instruction_count")?;
    Ok(Plugin { library, arguments, out: "instructions.txt", record: None })
}

impl Plugin {
    /// The emulator's argument; `folder` takes the file that the plugin writes.
    pub(crate) fn argument(&self, folder: &Path) -> String {
        let out = folder.join(self.out);
        let mut argument = self.library.display().to_string();
        for part in &self.arguments {
            argument = format!("{argument},{part}");
        }
        if let Some(record) = self.record {
            let (flash, record) = (folder.join("flash.bin"), folder.join(record));
            argument = format!("{argument},flash={},record={}", flash.display(), record.display());
        }
        format!("{argument},out={}", out.display())
    }
}

fn library(name: &str) -> Result<PathBuf, Box<dyn Error>> {
    static BUILT: Mutex<Vec<String>> = Mutex::new(Vec::new());
    let mut built = BUILT.lock().unwrap_or_else(PoisonError::into_inner);
    let library = scratch().join(format!("lib{name}.so"));
    if built.iter().any(|done| done == name) {
        return Ok(library);
    }
    let source = root().join(format!("tests/emulated/plugins/{name}.rs"));
    let output = Command::new("rustc")
        .args(["--edition", "2024", "--crate-type", "cdylib", "-O", "-C", "panic=abort", "-o"])
        .args([&library, &source])
        .output()?;
    if !output.status.success() {
        let message = String::from_utf8_lossy(&output.stderr);
        return Err(format!("compiling the plugin {name} failed:\n{message}").into());
    }
    built.push(name.to_owned());
    Ok(library)
}
