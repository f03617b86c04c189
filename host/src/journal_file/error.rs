//! What can go wrong with a journal file as a whole.

use std::io;
use std::path::PathBuf;

/// A journal file cannot be read or written.
#[derive(Debug, thiserror::Error)]
pub enum JournalFileError {
    /// The operating system refuses.
    #[error(
        "{doing} {}: {cause}; check the path, the rights and the space on the disk",
        path.display()
    )]
    Io {
        /// What was tried.
        doing: &'static str,
        /// Where.
        path: PathBuf,
        /// The system's reason.
        cause: io::Error,
    },
    /// No byte, or not even the whole magic.
    #[error("{} is empty; collect the journal again", path.display())]
    Empty {
        /// Which file.
        path: PathBuf,
    },
    /// Another kind of file.
    #[error(
        "{} is not a journal file: it does not begin with STRAKEJ1; give a file that \
         'strake collect' or 'strake trial' wrote", path.display()
    )]
    Foreign {
        /// Which file.
        path: PathBuf,
    },
    /// The target is there already.
    #[error("{} exists and is kept; give --force to replace it, or another name", path.display())]
    Exists {
        /// Which file.
        path: PathBuf,
    },
    /// A part file that another device began.
    #[error(
        "{} was begun with device '{file}', but device '{device}' answers; connect that device, \
         or move the file away", path.display()
    )]
    OtherDevice {
        /// Which file.
        path: PathBuf,
        /// The device in the file.
        file: String,
        /// The device on the line.
        device: String,
    },
}
