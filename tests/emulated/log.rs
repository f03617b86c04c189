//! The device's log, decoded with the strings of its image.

use std::error::Error;

use defmt_decoder::{DecodeError, Table};

/// The messages in `bytes`, each with its level in front. A frame that cannot be decoded stands
/// there as `damaged`.
pub(crate) fn decode(elf: &[u8], bytes: &[u8]) -> Result<Vec<String>, Box<dyn Error>> {
    let table = Table::parse(elf)?.ok_or("the image holds no strings of a log")?;
    let mut decoder = table.new_stream_decoder();
    decoder.received(bytes);
    let mut messages = Vec::new();
    loop {
        match decoder.decode() {
            Ok(frame) => {
                let level = frame.level().map_or("print", |level| level.as_str());
                messages.push(format!("{level} {}", frame.display_message()));
            }
            Err(DecodeError::UnexpectedEof) => return Ok(messages),
            Err(DecodeError::Malformed) => messages.push("damaged".to_owned()),
        }
    }
}
