//! What every command that talks to a device needs.

use crate::failure::Failure;
use crate::link::{self, Client, SerialPort};
use crate::term::Term;

/// Which device.
#[derive(Debug, clap::Args)]
pub struct PortArgs {
    /// Serial port of the device; else the only one on which a device answers
    #[arg(long, value_name = "PORT")]
    pub port: Option<String>,
}

/// Connects to the device, or says why not.
pub(super) fn connect(args: &PortArgs, term: &mut Term) -> Result<Client<SerialPort>, Failure> {
    let client = link::connect(args.port.as_deref())?;
    let identity = client.identity();
    term.detail(&format!(
        "{}: {}, firmware {}, protocol {}",
        client.port_name(),
        identity.device_id,
        identity.firmware,
        identity.protocol
    ));
    Ok(client)
}
