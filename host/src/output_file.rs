//! Writing a file so that it is whole or not there: a temporary name, a sync, a rename. Nothing is
//! overwritten unless that is asked for.

use crate::exit::Exit;
use crate::failure::Failure;
use std::fs::{self, File, OpenOptions};
use std::io::{self, Write};
use std::path::{Path, PathBuf};

/// Writes a file.
///
/// # Errors
/// [`Exit::Refused`] when it exists and `force` is not set; [`Exit::Partial`] when it cannot be
/// written, and then what stood there before still stands.
pub fn write(path: &Path, bytes: &[u8], force: bool) -> Result<(), Failure> {
    let reserved = !force;
    if reserved {
        reserve(path)?;
    }
    let temporary = temporary_name(path);
    let written = write_whole(&temporary, bytes).and_then(|()| fs::rename(&temporary, path));
    if let Err(error) = written.and_then(|()| sync_directory(path)) {
        // Both are our own; what cannot be removed does no harm.
        let _ = fs::remove_file(&temporary);
        if reserved {
            let _ = fs::remove_file(path);
        }
        return Err(cannot_write(path, &error));
    }
    Ok(())
}

/// Takes the name, so that no other program's file is replaced in between.
fn reserve(path: &Path) -> Result<(), Failure> {
    match OpenOptions::new().write(true).create_new(true).open(path) {
        Ok(_) => Ok(()),
        Err(error) if error.kind() == io::ErrorKind::AlreadyExists => Err(Failure::new(
            Exit::Refused,
            "file-exists",
            format!("{} exists and is not overwritten", path.display()),
            "give another name, or --force to replace it",
        )),
        Err(error) => Err(cannot_write(path, &error)),
    }
}

fn cannot_write(path: &Path, error: &io::Error) -> Failure {
    let message = format!("cannot write {}: {error}", path.display());
    Failure::new(Exit::Partial, "cannot-write", message, "check the folder and the space in it")
}

fn write_whole(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let mut file = File::create(path)?;
    file.write_all(bytes)?;
    file.sync_all()
}

/// The new name is durable once its folder is.
fn sync_directory(path: &Path) -> io::Result<()> {
    if cfg!(unix) {
        File::open(folder(path))?.sync_all()?;
    }
    Ok(())
}

fn folder(path: &Path) -> PathBuf {
    match path.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent.to_path_buf(),
        _ => PathBuf::from("."),
    }
}

/// In the same folder, so that the rename stays on one file system.
fn temporary_name(path: &Path) -> PathBuf {
    let mut name = std::ffi::OsString::from(".");
    name.push(path.file_name().unwrap_or_default());
    name.push(format!(".{}.part", std::process::id()));
    folder(path).join(name)
}
