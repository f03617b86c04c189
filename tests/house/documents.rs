//! What the documents name exists: commands with their options, files, and the two commands at
//! the top of README.md.

use clap::{CommandFactory as _, Parser as _};
use strake::cli::Cli;
use strake::exit::Exit;

use crate::files::{self, File};
use crate::{none, tell};

const DOCUMENTS: &[&str] = &[
    "README.md",
    "DEVELOPERS.md",
    "firmware/boards/README.md",
    "firmware/boards/nrf52840/README.md",
];

/// The commands README.md promises: the main job and every check.
const PROMISED: &[&str] = &["cargo run --release -p strake -- trial", "./.ci/test"];

/// Where a path in a document may begin.
const FOLDERS: &[&str] =
    &["shared_core/", "firmware/", "host/", "tests/", "configs/", ".ci/", ".cargo/"];

/// Lines of code: those between fences and those set in by four blanks.
fn code_lines(text: &str) -> Vec<&str> {
    let mut fenced = false;
    let mut lines = Vec::new();
    for line in text.lines() {
        if line.starts_with("```") {
            fenced = !fenced;
        } else if fenced || line.starts_with("    ") {
            lines.push(line.trim());
        }
    }
    lines
}

/// Pieces between single back quotes, outside of fences.
fn inline_code(text: &str) -> Vec<&str> {
    let mut fenced = false;
    let mut pieces = Vec::new();
    for line in text.lines() {
        if line.starts_with("```") {
            fenced = !fenced;
        } else if !fenced {
            pieces.extend(line.split('`').skip(1).step_by(2));
        }
    }
    pieces
}

/// The arguments of `strake` on a line of a shell, if it calls it.
fn called(line: &str) -> Option<Vec<String>> {
    let line = line.strip_prefix("$ ").unwrap_or(line);
    let line = match line.split_once("-p strake -- ") {
        Some((cargo, rest)) if cargo.starts_with("cargo run") => rest,
        _ => line.strip_prefix("strake ")?,
    };
    Some(words(line))
}

/// Words of a line as a shell takes them, up to a redirection, a pipe or a remark.
fn words(line: &str) -> Vec<String> {
    let mut words = Vec::new();
    let mut word = String::new();
    let mut quoted = false;
    for letter in line.chars() {
        match letter {
            '"' => quoted = !quoted,
            ' ' if !quoted => words.push(std::mem::take(&mut word)),
            '>' | '|' | '#' | '&' | ';' if !quoted => break,
            _ => word.push(letter),
        }
    }
    words.push(word);
    words.retain(|word| !word.is_empty());
    words
}

/// Names of the tool's subcommands; `help` stands beside them without one of its own.
fn subcommands() -> Vec<String> {
    Cli::command().get_subcommands().map(|known| known.get_name().to_owned()).collect()
}

/// Commands in a document that the tool would refuse.
fn unknown_commands(file: &File) -> (usize, Vec<String>) {
    let mut findings = Vec::new();
    let mut count = 0;
    for line in code_lines(&file.text) {
        let Some(words) = called(line) else { continue };
        count += 1;
        if let Err(error) = Cli::try_parse_from([vec!["strake".to_owned()], words].concat())
            && error.use_stderr()
        {
            findings.push(format!("{}: {line}: {}", file.path, error.kind()));
        }
    }
    for piece in inline_code(&file.text) {
        let Some(words) = called(piece) else { continue };
        let first = words.first().map_or("", String::as_str);
        let known = first == "help" || subcommands().iter().any(|name| name == first);
        if !first.starts_with('-') && !known {
            findings.push(format!("{}: `{piece}`", file.path));
        }
    }
    (count, findings)
}

/// Paths in a document that lead nowhere; one with a name in capitals or a star stands for many.
fn missing_paths(file: &File) -> Vec<String> {
    let lines = code_lines(&file.text).into_iter().chain(inline_code(&file.text));
    let mut findings = Vec::new();
    for word in lines.flat_map(str::split_whitespace) {
        let word = word.trim_start_matches(['(', '"', '[']);
        let word = word.trim_end_matches([')', ',', ';', '.', ':', '"', ']']);
        let path = word.trim_start_matches("./");
        let pattern = path.contains(['*', '{', '<'])
            || path.split(['/', '.', '_']).any(|part| {
                part.len() > 1
                    && part.bytes().all(|byte| byte.is_ascii_uppercase())
                    && part != "README"
            });
        let named = FOLDERS.iter().any(|folder| path.starts_with(folder));
        if named && !pattern && !files::root().join(path).exists() {
            findings.push(format!("{}: {path}", file.path));
        }
    }
    findings
}

#[test]
fn commands_of_the_documents_exist() {
    let mut findings = Vec::new();
    let mut count = 0;
    for name in DOCUMENTS {
        let (found, unknown) = unknown_commands(files::named(name));
        count += found;
        findings.extend(unknown);
    }
    tell(&format!("{count} command lines of the documents taken by the tool's own parser"));
    none("a command that is not there", &findings);
    assert!(count >= 5, "only {count} command lines found");
}

#[test]
fn every_command_is_in_the_readme() {
    let readme = &files::named("README.md").text;
    let missing: Vec<_> = subcommands()
        .iter()
        .map(|name| format!("strake {name}"))
        .filter(|command| !readme.contains(command.as_str()))
        .collect();
    none("not in README.md", &missing);
}

#[test]
fn the_readme_gives_every_exit_status() {
    let readme = &files::named("README.md").text;
    let missing: Vec<_> = Exit::TABLE
        .iter()
        .map(|(exit, what)| format!("| {} | {what}", exit.number()))
        .filter(|row| !readme.replace('`', "").contains(row.as_str()))
        .collect();
    none("not in README.md", &missing);
}

#[test]
fn files_of_the_documents_exist() {
    let findings: Vec<_> =
        DOCUMENTS.iter().flat_map(|name| missing_paths(files::named(name))).collect();
    none("a path that leads nowhere", &findings);
}

/// Rooms of a crate, by the modules that its root declares.
fn rooms(root: &str) -> Vec<&str> {
    root.lines()
        .filter_map(|line| line.trim_start_matches("pub ").strip_prefix("mod "))
        .filter_map(|line| line.strip_suffix(';'))
        .filter(|name| *name != "tests")
        .collect()
}

#[test]
fn every_room_and_folder_of_tests_is_in_the_guide() {
    let guide = &files::named("DEVELOPERS.md").text;
    let section = guide.split("\n## Rooms").nth(1).and_then(|rest| rest.split("\n## ").next());
    let section = section.expect("the guide has rooms");
    let mut names = Vec::new();
    for root in ["shared_core/src/lib.rs", "firmware/src/lib.rs", "host/src/lib.rs"] {
        names.extend(rooms(&files::named(root).text));
    }
    names.extend(files::ALL.iter().filter_map(|file| {
        file.path.strip_prefix("tests/").and_then(|rest| rest.split_once('/')).map(|(name, _)| name)
    }));
    names.sort_unstable();
    names.dedup();
    names.retain(|name| !section.contains(&format!("`{name}`")));
    let missing: Vec<_> = names.into_iter().map(str::to_owned).collect();
    none("a room that DEVELOPERS.md does not name", &missing);
}

#[test]
fn the_readme_gives_the_two_commands() {
    let readme = files::named("README.md");
    let lines = code_lines(&readme.text);
    for command in PROMISED {
        assert!(lines.contains(command), "{command}");
    }
    let gate = files::named(".ci/run");
    let called: Vec<_> =
        gate.text.lines().filter(|line| !line.starts_with('#') && !line.is_empty()).collect();
    assert_eq!(
        called,
        ["exec \"$(dirname \"${BASH_SOURCE[0]}\")/test\""],
        "the gate hides nothing"
    );
}

#[test]
fn the_rules_find_what_they_should() {
    let file = |text: &str| File { path: "a.md".into(), text: text.into() };
    let (count, unknown) = unknown_commands(&file(
        "```\n$ strake assess a.toml\nstrake asses a.toml\n```\n`strake no`",
    ));
    assert_eq!((count, unknown.len()), (2, 2), "{unknown:?}");
    let (_, unknown) = unknown_commands(&file("    strake assess --no-such a.toml > b\n"));
    assert_eq!(unknown.len(), 1);
    assert_eq!(called("cargo run --release -p strake -- trial --duration \"12 h\" | less"), {
        Some(vec!["trial".to_owned(), "--duration".to_owned(), "12 h".to_owned()])
    });
    assert_eq!(called("cargo test -p strake"), None);
    assert_eq!(rooms("pub mod a;\nmod b;\n#[cfg(test)]\nmod tests;\nuse c;"), ["a", "b"]);
    assert_eq!(missing_paths(&file("`host/src/lib.rs` `host/no.rs` `configs/NAME.toml`")).len(), 1);
    assert_eq!(missing_paths(&file("`.ci/run` `.ci/no`")).len(), 1);
}
