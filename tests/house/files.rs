//! The files of the project: what git tracks or would track.

use std::path::Path;
use std::process::Command;
use std::sync::LazyLock;

/// A file, by its path from the root.
#[derive(Debug)]
pub(crate) struct File {
    pub(crate) path: String,
    /// Its text, with a mark in the place of bytes that are none.
    pub(crate) text: String,
}

impl File {
    pub(crate) fn has_extension(&self, extension: &str) -> bool {
        Path::new(&self.path).extension().is_some_and(|found| found == extension)
    }

    /// Scripts have no extension, but say what runs them.
    pub(crate) fn is_script(&self) -> bool {
        self.text.starts_with("#!")
    }

    /// Lines with their numbers.
    pub(crate) fn lines(&self) -> impl Iterator<Item = (usize, &str)> {
        (1..).zip(self.text.lines())
    }
}

/// Root of the repository.
pub(crate) fn root() -> &'static Path {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    package.parent().unwrap_or(package)
}

/// Every file, sorted by path.
pub(crate) static ALL: LazyLock<Vec<File>> = LazyLock::new(|| {
    let mut files: Vec<File> = listed().into_iter().filter_map(read).collect();
    files.sort_by(|a, b| a.path.cmp(&b.path));
    assert!(files.len() > 100, "only {} files found: is this the whole project?", files.len());
    files
});

/// Of those, the ones that a rule looks at.
pub(crate) fn with(extension: &str) -> impl Iterator<Item = &'static File> {
    ALL.iter().filter(move |file| file.has_extension(extension))
}

/// One file that has to exist.
pub(crate) fn named(path: &str) -> &'static File {
    ALL.iter().find(|file| file.path == path).unwrap_or_else(|| panic!("{path} is missing"))
}

fn listed() -> Vec<String> {
    // The owner of the folder may be another than whoever runs the tests.
    let output = Command::new("git")
        .args(["-c", "safe.directory=*", "ls-files", "-z"])
        .args(["--cached", "--others", "--exclude-standard"])
        .current_dir(root())
        .output()
        .expect("git runs");
    assert!(output.status.success(), "git: {}", String::from_utf8_lossy(&output.stderr));
    let paths = String::from_utf8(output.stdout).expect("paths are text");
    paths.split_terminator('\0').map(str::to_owned).collect()
}

/// A file that git lists and that was removed since is none.
fn read(path: String) -> Option<File> {
    let bytes = std::fs::read(root().join(&path)).ok()?;
    let text = String::from_utf8_lossy(&bytes).into_owned();
    Some(File { path, text })
}
