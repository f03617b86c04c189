//! What the device goes through: a sector closes, an alarm is raised and acknowledged, another plan
//! takes over under which the alarm is raised again.

use std::error::Error;
use std::sync::Arc;
use std::thread;
use std::time::{Duration, Instant};

use strake::link::Client;

use crate::device::{ACT_NOW, TcpPort, UTC_S, connect};
use crate::flash_file::FlashFile;
use crate::image::Image;
use crate::machine::{Machine, PATIENCE, Setup};

use super::flash::Content;
use super::plans::{HIGH_MM, LOW_MM, REGISTER, Sealed};

/// Bytes in use in the open sector when the scenario begins.
const NEARLY_FULL: usize = 3_720;

/// The plans, in the order in which they take over.
pub(super) type Plans = [Sealed; 2];

/// Flash of a device that has a plan and an open sector that is nearly full. The sectors that are
/// opened next are not blank, as in a ring that has gone round.
pub(super) fn prepare(image: &Arc<Image>, plans: &Plans) -> Result<Content, Box<dyn Error>> {
    let mut machine = Setup::new(image).register(REGISTER, LOW_MM).start()?;
    let mut client = connect(&mut machine)?;
    load(&mut client, &plans[0])?;
    // Each clock fix is an entry of its own.
    until("a sector is nearly full", || {
        client.set_clock(UTC_S)?;
        let newest = Content::read(machine.flash())?.newest();
        Ok(newest.is_some_and(|(_, used)| used > NEARLY_FULL))
    })?;
    let mut content = Content::read(&machine.cut_power())?;
    let (newest, _) = content.newest().ok_or("no sector")?;
    for ahead in 1..=2 {
        content.spoil(newest + ahead);
    }
    Ok(content)
}

/// Plays the scenario to its end.
pub(super) fn play(machine: &mut Machine, plans: &Plans) -> Result<(), Box<dyn Error>> {
    let newest = |machine: &Machine| -> Result<_, Box<dyn Error>> {
        let newest = Content::read(machine.flash())?.newest();
        Ok(newest.map(|(sequence, _)| sequence))
    };
    let mut client = connect(machine)?;
    let before = newest(machine)?;
    until("a sector closes", || {
        client.status()?;
        Ok(newest(machine)? > before)
    })?;
    machine.sensor().set_register(REGISTER, HIGH_MM);
    until("the alarm", || Ok(client.status()?.output == ACT_NOW))?;
    client.acknowledge()?;
    load(&mut client, &plans[1])?;
    until("the alarm under the other plan", || Ok(client.status()?.output == ACT_NOW))?;
    client.hello()?;
    let in_force = client.identity().plan_fingerprint;
    if in_force == plans[1].fingerprint { Ok(()) } else { Err("the first plan stayed".into()) }
}

fn load(client: &mut Client<TcpPort>, sealed: &Sealed) -> Result<(), Box<dyn Error>> {
    let any = strake_core::wire::Text::default();
    Ok(client.load_plan(&sealed.bytes, sealed.serial, sealed.fingerprint, any)?)
}

fn until(
    what: &str,
    mut holds: impl FnMut() -> Result<bool, Box<dyn Error>>,
) -> Result<(), Box<dyn Error>> {
    let start = Instant::now();
    while start.elapsed() < PATIENCE {
        if holds()? {
            return Ok(());
        }
        thread::sleep(Duration::from_millis(2));
    }
    Err(format!("waited in vain for this: {what}").into())
}

/// A machine on this content, its level low, with the plugin where one is given.
pub(super) fn machine(
    image: &Arc<Image>,
    flash: FlashFile,
    content: &Content,
    plugin: Option<crate::plugin::Plugin>,
) -> Result<Machine, Box<dyn Error>> {
    content.write(&flash)?;
    let setup = Setup::new(image).register(REGISTER, LOW_MM).flash(flash);
    match plugin {
        Some(plugin) => setup.plugin(plugin),
        None => setup,
    }
    .start()
}
