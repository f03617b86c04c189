//! What the tests need from the machine they run on, and the images built with it.

use std::collections::BTreeMap;
use std::error::Error;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::sync::{Arc, Mutex, PoisonError};

use crate::image::Image;

pub(crate) const EMULATOR: &str = "qemu-system-arm";

/// Root of the repository.
pub(crate) fn root() -> &'static Path {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    package.parent().unwrap_or(package)
}

/// Folder for what the tests make.
pub(crate) fn scratch() -> &'static Path {
    Path::new(env!("CARGO_TARGET_TMPDIR"))
}

fn target_cargo() -> Command {
    Command::new(root().join(".ci/target-cargo"))
}

/// What is missing here, and how to get it. Nothing is said to be missing when the variable CI is
/// set: there the tests have to run, or fail.
pub(crate) fn missing() -> Option<(&'static str, String)> {
    if std::env::var_os("CI").is_some() {
        return None;
    }
    let Ok(check) = target_cargo().arg("--check").output() else {
        return Some(("a shell", "install bash".to_owned()));
    };
    if !check.status.success() {
        let reason = String::from_utf8_lossy(&check.stderr).trim().to_owned();
        return Some(("a compiler for the target", reason));
    }
    let mut emulator = Command::new(EMULATOR);
    emulator.arg("--version").stdout(Stdio::null()).stderr(Stdio::null());
    if emulator.status().is_err() {
        return Some(("the emulator", format!("install the package with {EMULATOR}")));
    }
    None
}

/// The board whose images are run, and the one whose image is only looked at.
pub(crate) const EMULATED: &str = "strake-board-emulated";
pub(crate) const NRF52840: &str = "strake-board-nrf52840";

/// The image of a program of the emulated board as it is shipped, built once in a run.
pub(crate) fn image(program: &'static str) -> Result<Arc<Image>, Box<dyn Error>> {
    image_with(program, "")
}

/// The same with a feature of the board: one of its negative controls.
pub(crate) fn image_with(
    program: &'static str,
    feature: &'static str,
) -> Result<Arc<Image>, Box<dyn Error>> {
    image_of(EMULATED, program, feature)
}

/// The image of a program of a board, with one of its features or none.
pub(crate) fn image_of(
    board: &'static str,
    program: &'static str,
    feature: &'static str,
) -> Result<Arc<Image>, Box<dyn Error>> {
    type Built = Result<Arc<Image>, String>;
    static IMAGES: Mutex<BTreeMap<(&str, &str), Built>> = Mutex::new(BTreeMap::new());
    let mut images = IMAGES.lock().unwrap_or_else(PoisonError::into_inner);
    let built = images.entry((program, feature)).or_insert_with(|| {
        let image = build(board, program, feature).and_then(|path| Image::read(&path));
        image.map(Arc::new).map_err(|error| error.to_string())
    });
    Ok(built.clone()?)
}

fn build(board: &str, program: &str, feature: &str) -> Result<PathBuf, Box<dyn Error>> {
    let output = target_cargo()
        .args(["build", "--quiet", "--package", board])
        .args(["--profile", "device", "--bin", program, "--features", feature])
        .output()?;
    if !output.status.success() {
        let message = String::from_utf8_lossy(&output.stderr);
        return Err(format!("building {program} for the target failed:\n{message}").into());
    }
    // Every variant is linked to the same place.
    let linked = root().join("target/thumbv7em-none-eabihf/device").join(program);
    let kept = scratch().join(format!("{program}{feature}.elf"));
    std::fs::copy(linked, &kept)?;
    Ok(kept)
}
