//! The emulator's plugins: compiled once in a run, from the sources in `plugins/`.

use std::error::Error;
use std::path::PathBuf;
use std::process::Command;
use std::sync::{Mutex, PoisonError};

use crate::flash_file::FLASH_BASE;
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
    Ok(Plugin { library: library("power_cut")?, arguments, out: "stores.txt" })
}

/// Counts the instructions of each run through the spans, into `instructions.txt`.
pub(crate) fn instruction_count(spans: &[Span<'_>]) -> Result<Plugin, Box<dyn Error>> {
    let argument = |span: &Span<'_>| {
        let stop = span.stop.map(|stop| format!(":{stop:#x}")).unwrap_or_default();
        format!("span={}:{:#x}{stop}", span.name, span.start)
    };
    let arguments = spans.iter().map(argument).collect();
    Ok(Plugin { library: library("instruction_count")?, arguments, out: "instructions.txt" })
}

impl Plugin {
    /// The emulator's argument; `folder` takes the file that the plugin writes.
    pub(crate) fn argument(&self, folder: &std::path::Path) -> String {
        let out = folder.join(self.out);
        let mut argument = self.library.display().to_string();
        for part in &self.arguments {
            argument = format!("{argument},{part}");
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
