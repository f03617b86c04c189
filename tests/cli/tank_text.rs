//! Tank files for the tests.

use std::path::PathBuf;
use tempfile::TempDir;

/// A folder of its own with one tank file in it.
pub(crate) struct TankText {
    folder: TempDir,
}

impl TankText {
    /// An example of the repository, changed.
    pub(crate) fn example(name: &str, change: impl Fn(String) -> String) -> Self {
        let top = concat!(env!("CARGO_MANIFEST_DIR"), "/../configs/");
        let text = std::fs::read_to_string(format!("{top}{name}.toml")).expect("an example");
        Self::new(&change(text))
    }

    pub(crate) fn new(text: &str) -> Self {
        let folder = tempfile::tempdir().expect("a folder");
        std::fs::write(folder.path().join("tank.toml"), text).expect("written");
        Self { folder }
    }

    /// The tank file.
    pub(crate) fn path(&self) -> String {
        self.inside("tank.toml").display().to_string()
    }

    /// Another name in the same folder.
    pub(crate) fn inside(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }
}
