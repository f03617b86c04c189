//! The emulator's control channel: QMP over its standard input and output.

use std::io::{self, BufRead as _, BufReader, Write as _};
use std::process::{ChildStdin, ChildStdout};

use serde_json::{Value, json};

/// A channel that was greeted and opened.
#[derive(Debug)]
pub(crate) struct Qmp {
    commands: ChildStdin,
    answers: BufReader<ChildStdout>,
}

impl Qmp {
    pub(crate) fn open(commands: ChildStdin, answers: ChildStdout) -> io::Result<Self> {
        let mut qmp = Self { commands, answers: BufReader::new(answers) };
        qmp.run("qmp_capabilities", &json!({}))?;
        Ok(qmp)
    }

    /// Runs a command and gives back what it returned; events in between are passed over.
    pub(crate) fn run(&mut self, command: &str, arguments: &Value) -> io::Result<Value> {
        let request = json!({ "execute": command, "arguments": arguments });
        // At once: the emulator acts on the last bracket and may be gone before the line's end.
        self.commands.write_all(format!("{request}\n").as_bytes())?;
        loop {
            let mut line = String::new();
            if self.answers.read_line(&mut line)? == 0 {
                return Err(io::Error::other(format!("emulator ended during {command}")));
            }
            // The names of pseudo-terminals come on the same stream, as plain text.
            let Ok(mut answer) = serde_json::from_str::<Value>(&line) else { continue };
            if let Some(result) = answer.get_mut("return") {
                return Ok(result.take());
            }
            if let Some(error) = answer.get("error") {
                return Err(io::Error::other(format!("{command}: {error}")));
            }
        }
    }

    /// Runs a command of the human monitor.
    pub(crate) fn monitor(&mut self, line: &str) -> io::Result<String> {
        let text = self.run("human-monitor-command", &json!({ "command-line": line }))?;
        text.as_str().map(str::to_owned).ok_or_else(|| io::Error::other("monitor gave no text"))
    }

    /// A 32-bit word of the device's memory or of a register.
    pub(crate) fn word(&mut self, address: u64) -> io::Result<u32> {
        let text = self.monitor(&format!("xp /1wx {address:#x}"))?;
        text.trim()
            .rsplit_once("0x")
            .and_then(|(_, digits)| u32::from_str_radix(digits, 16).ok())
            .ok_or_else(|| io::Error::other(format!("no word at {address:#x}: {text}")))
    }
}
