//! The real program on the port of the emulated device: the whole job, as a technician types it.

use std::error::Error;
use std::ffi::OsStr;
use std::ops::Range;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::time::{Duration, Instant};

use serde_json::Value;

use strake_core::journal::check::CRC32;

use crate::device::{LEVEL_REGISTER, UTC_S, WELL_MM, image};
use crate::machine::{Machine, PATIENCE, Setup};
use crate::toolchain::root;
use crate::{Outcome, Test, hold, same};

pub(crate) const TESTS: &[Test] = tests![the_program_does_the_whole_job_over_the_port,];

/// The caution that goes with every output that shows a load.
const FIELD_CHECK: &str = "field check: it replaces no licensed inspection";
/// Levels on the way up, in counts of the sensor, and how many alarms stand there: none, course 1
/// past its warning from 6.475 m on, and past its alarm from 7.238 m on.
const WAY_UP: [(u16, usize); 4] = [(6_400, 0), (6_800, 1), (7_200, 1), (7_900, 2)];

/// What a run of the program left.
#[derive(Debug)]
struct Ran {
    exit: Option<i32>,
    out: String,
    err: String,
}

impl Ran {
    /// The document on standard output; an error unless the run ended with `exit` and said nothing
    /// else.
    fn document(&self, exit: i32) -> Result<Value, Box<dyn Error>> {
        self.ended(exit)?;
        Ok(serde_json::from_str(&self.out)?)
    }

    /// An error unless the run ended with `exit`, with nothing on standard error.
    fn ended(&self, exit: i32) -> Outcome {
        let quiet = self.exit == Some(exit) && self.err.is_empty() && !self.out.is_empty();
        hold(quiet, &format!("not ended with {exit} and quietly: {self:?}"))
    }

    /// An error unless standard output has each of these.
    fn says(&self, texts: &[&str]) -> Outcome {
        texts
            .iter()
            .try_for_each(|&text| hold(self.out.contains(text), &format!("{text}: {self:?}")))
    }
}

fn strake<S: AsRef<OsStr>>(arguments: impl IntoIterator<Item = S>) -> Result<Ran, Box<dyn Error>> {
    let output = Command::new(env!("CARGO_BIN_EXE_strake")).args(arguments).output()?;
    let ran = Ran {
        exit: output.status.code(),
        out: String::from_utf8(output.stdout)?,
        err: String::from_utf8(output.stderr)?,
    };
    Ok(ran)
}

/// The device, the port that the program is told, and a folder for files.
struct Job {
    machine: Machine,
    port: PathBuf,
    folder: PathBuf,
}

impl Job {
    fn start() -> Result<Self, Box<dyn Error>> {
        let setup = Setup::new(&image()?).link_as_terminal().register(LEVEL_REGISTER, WELL_MM);
        let mut machine = setup.start()?;
        let port = machine.port()?;
        let folder = machine.flash().folder().to_owned();
        Ok(Self { machine, port, folder })
    }

    /// Runs a command of the program on the port.
    fn run(&self, arguments: &[&str]) -> Result<Ran, Box<dyn Error>> {
        let port = [OsStr::new("--port"), self.port.as_os_str()];
        strake(arguments.iter().map(OsStr::new).chain(port))
    }

    fn status(&self, exit: i32) -> Result<Value, Box<dyn Error>> {
        self.run(&["status", "--format", "json"])?.document(exit)
    }

    /// Asks until the status is as wanted, whatever the exit status says.
    fn wait_for(
        &self,
        what: &str,
        wanted: impl Fn(&Value) -> bool,
    ) -> Result<Value, Box<dyn Error>> {
        let start = Instant::now();
        loop {
            let ran = self.run(&["status", "--format", "json"])?;
            let status =
                ran.document(ran.exit.filter(|exit| [0, 1].contains(exit)).unwrap_or(0))?;
            if wanted(&status) {
                return Ok(status);
            }
            hold(start.elapsed() < PATIENCE, &format!("waited in vain for {what}: {status}"))?;
            std::thread::sleep(Duration::from_millis(50));
        }
    }

    fn set_level(&self, level_mm: u16) {
        self.machine.sensor().set_register(LEVEL_REGISTER, level_mm);
    }

    fn path(&self, name: &str) -> String {
        self.folder.join(name).to_string_lossy().into_owned()
    }
}

/// A device that nobody commissioned says so, and then takes the plan that the program sealed.
fn commission(job: &mut Job) -> Outcome {
    let status = job.status(0)?;
    same(&status["health"], &"cannot_see".into())?;
    same(&status["plan"], &Value::Null)?;
    hold(!job.machine.contact()?, "the contact conducts without a plan")?;
    let tank = root().join("tests/emulated/tanks/eight_courses.toml");
    let (tank, plan) = (tank.to_string_lossy(), job.path("tank.plan"));
    let sealed = strake(["seal", &*tank, "-o", &plan, "--serial", &UTC_S.to_string()])?;
    sealed.ended(0)?;
    sealed.says(&["emulated tank: plan written to ", "12 parts", FIELD_CHECK])?;
    let commissioned = job.run(&["commission", &plan])?;
    commissioned.ended(0)?;
    commissioned.says(&["plan in force, read back and identical", FIELD_CHECK])?;
    let status = job.wait_for("a reading", |status| status["level"]["reading"] == "valid")?;
    same(&(&status["health"], &status["device"]["id"]), &(&"healthy".into(), &"EMULATED".into()))?;
    hold(job.machine.contact()?, "the contact is open although all is well")
}

/// The level rises; what the program says and what the contact does belong together.
fn rise(job: &mut Job) -> Outcome {
    for (level_mm, alarms) in WAY_UP {
        job.set_level(level_mm);
        let level_m = f64::from(level_mm) / 1000.0;
        let status = job.wait_for(&format!("{level_m} m and {alarms} alarms"), |status| {
            let shown = status["level"]["estimate_m"].as_f64();
            let standing = status["alarms"].as_array().map(Vec::len);
            shown.is_some_and(|shown| (shown - level_m).abs() < 1e-4) && standing == Some(alarms)
        })?;
        let health = if alarms > 0 { "act_now" } else { "healthy" };
        same(&status["health"], &health.into())?;
        same(&status["above_alarm"], &(alarms == 2).into())?;
        same(&job.machine.contact()?, &(alarms == 0))?;
    }
    let status = job.run(&["status"])?;
    status.ended(1)?;
    status.says(&[
        "ACT NOW: a load has passed its margin",
        "course 1  alarm   stands, not acknowledged",
        "ABOVE ITS ALARM THRESHOLD",
        FIELD_CHECK,
    ])
}

/// The first acknowledgement silences; with the load gone the second one resets the latch.
fn acknowledge(job: &mut Job) -> Outcome {
    let silenced = job.run(&["acknowledge"])?;
    silenced.ended(0)?;
    silenced.says(&["course 1, alarm: stands, not acknowledged -> stands, acknowledged"])?;
    hold(!job.machine.contact()?, "the contact conducts in an acknowledged alarm")?;
    job.set_level(WELL_MM);
    let status = job.wait_for("the warning to return", |status| {
        status["alarms"].as_array().is_some_and(|alarms| alarms.len() == 1)
    })?;
    same(&status["above_alarm"], &false.into())?;
    hold(!job.machine.contact()?, "the latch does not hold the contact open")?;
    let reset = job.run(&["acknowledge"])?;
    reset.ended(0)?;
    reset.says(&["course 1, alarm: gone, latched, waits for its reset -> normal"])?;
    same(&job.status(0)?["health"], &"healthy".into())?;
    hold(job.machine.contact()?, "the contact stays open after the reset")
}

/// Takes the journal home; gives its file.
fn collect(job: &Job) -> Result<PathBuf, Box<dyn Error>> {
    let collected = job.run(&["collect", "-o", &job.path("journals")])?;
    collected.ended(0)?;
    collected.says(&["complete: everything that the device held is in the file"])?;
    let mut files = std::fs::read_dir(job.folder.join("journals"))?;
    let file = files.next().ok_or("no journal was written")??.path();
    same(&files.count(), &0)?;
    Ok(file)
}

/// The journal is whole, and the replay decides bit for bit as the device did.
fn judge(journal: &Path) -> Outcome {
    let journal = journal.to_string_lossy();
    let verified = strake(["verify", &journal])?;
    verified.ended(0)?;
    verified.says(&["journal of EMULATED: sound"])?;
    let replay = strake(["replay", &journal, "--format", "json"])?.document(0)?;
    same(&replay["identical"], &true.into())?;
    same(&(&replay["damaged"], &replay["gaps"]), &(&0.into(), &0.into()))?;
    let compared = |what: &str| replay[what].as_u64().unwrap_or(0);
    let (hashes, moves) = (compared("hashes_compared"), compared("moves_compared"));
    // Both thresholds passed, both acknowledged, one returned, one returned and reset.
    hold(hashes >= 7 && moves >= 7, &format!("{hashes} hashes and {moves} moves compared"))?;
    let alarms = replay["alarms"].as_array().ok_or("no list of alarms")?;
    let kinds: Vec<_> = alarms.iter().map(|alarm| (&alarm["name"], &alarm["kind"])).collect();
    let part = &Value::from("course 1");
    same(&kinds, &vec![(part, &"warn".into()), (part, &"alarm".into())])?;
    let settled = |alarm: &Value| {
        alarm["acknowledged_after_s"].is_f64() && alarm["returned_after_s"].is_f64()
    };
    hold(alarms.iter().all(settled), &format!("{alarms:?}"))?;
    println!("the program over the port: {hashes} hashes and {moves} moves compared");
    strake(["replay", &journal])?.says(&["identical: the replay decides as the device did"])
}

fn the_program_does_the_whole_job_over_the_port() -> Outcome {
    let mut job = Job::start()?;
    commission(&mut job)?;
    rise(&mut job)?;
    acknowledge(&mut job)?;
    let journal = collect(&job)?;
    judge(&journal)?;
    a_flipped_bit_is_damage(&journal)?;
    a_changed_plan_is_told(&journal)
}

/// A control: one bit of a block is another, as where the device's flash forgot it. The replay uses
/// the rest and says what is missing.
fn a_flipped_bit_is_damage(journal: &Path) -> Outcome {
    let changed = Changed::new(journal, TAG_SECTOR, "flipped", |sector| sector.len() - 8)?;
    let replay = changed.command("replay", 6)?;
    replay.says(&["1 damaged place", "identical in what could be read"])?;
    changed
        .command("verify", 6)
        .and_then(|verified| verified.says(&["DAMAGED or incomplete", "1 damaged place"]))
}

/// A control: one bit of the plan is another.
fn a_changed_plan_is_told(journal: &Path) -> Outcome {
    let changed = Changed::new(journal, TAG_PLAN, "another-plan", |_| PLAN_HEAD + 40)?;
    let replay = changed.command("replay", 7)?;
    replay.says(&["NOT IDENTICAL", "fingerprint of a plan"])?;
    changed.command("verify", 7).and_then(|verified| verified.says(&["CONTRADICTS"]))
}

/// A journal of which one bit was changed, its record's check put right again.
struct Changed(PathBuf);

impl Changed {
    /// The bit lies in the first record of `tag`, in the byte of its payload that `place` names.
    fn new(
        journal: &Path,
        tag: u8,
        name: &str,
        place: impl Fn(&Range<usize>) -> usize,
    ) -> Result<Self, Box<dyn Error>> {
        let mut file = std::fs::read(journal)?;
        let payload = record(&file, tag)?;
        *file.get_mut(payload.start + place(&payload)).ok_or("a short record")? ^= 1;
        let checked = file.get(payload.start - RECORD_HEAD..payload.end).ok_or("no record")?;
        let check = CRC32.checksum(checked).to_le_bytes();
        let place = file.get_mut(payload.end..payload.end + 4).ok_or("no check")?;
        place.copy_from_slice(&check);
        let path = journal.with_file_name(name);
        std::fs::write(&path, file)?;
        Ok(Self(path))
    }

    /// Runs a command on it, to this end.
    fn command(&self, name: &str, exit: i32) -> Result<Ran, Box<dyn Error>> {
        let path = self.0.as_os_str();
        let json = [OsStr::new(name), path, OsStr::new("--format"), OsStr::new("json")];
        strake(json)?.document(exit)?;
        let ran = strake([OsStr::new(name), path])?;
        ran.ended(exit)?;
        Ok(ran)
    }
}

/// Tags of the journal file's records, bytes before their payload, and those before a plan in it.
const TAG_PLAN: u8 = 2;
const TAG_SECTOR: u8 = 3;
const RECORD_HEAD: usize = 5;
const PLAN_HEAD: usize = 16;

/// Place of the payload of the first record of a tag.
fn record(file: &[u8], tag: u8) -> Result<Range<usize>, Box<dyn Error>> {
    let mut at = 8;
    while let Some(&[found, a, b, c, d]) = file.get(at..at + RECORD_HEAD) {
        let start = at + RECORD_HEAD;
        let end = start + usize::try_from(u32::from_le_bytes([a, b, c, d]))?;
        if found == tag {
            return Ok(start..end);
        }
        at = end + 4;
    }
    Err(format!("no record of tag {tag}").into())
}
