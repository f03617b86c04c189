//! Check sums and framing of the journal and the link; cycles of the replay.

use strake::replay::Rainflow;
use strake_core::journal::check::CRC32;
use strake_core::wire::cobs;
use strake_oracle::cases::{Answer, Reason, Row};

/// Room for the longest frame of the rows.
const ROOM: usize = 600;

pub(super) fn answer(row: &Row) -> Result<Answer, Reason> {
    if row.is("crc", "CRC-32/ISO-HDLC") {
        let data = row.get("data_ascii").ok_or("no data")?;
        return Ok(Answer::Text(format!("{:08X}", CRC32.checksum(data.as_bytes()))));
    }
    match row.get("rule") {
        Some("cobs_encode") => Ok(Answer::Text(hex(&encoded(&bytes(row.get("data"))?)?))),
        Some("cobs_encode_length") => {
            let last = match row.get("data") {
                Some("bytes 01..FE in order") => 0xFE,
                Some("bytes 01..FF in order") => 0xFF,
                _ => return Err("data not understood"),
            };
            let data: Vec<u8> = (1..=last).collect();
            let length = u16::try_from(encoded(&data)?.len()).map_err(|_| "too long")?;
            Ok(Answer::Number(length.into()))
        }
        Some("modbus_rtu_crc") => Err("the driver's own tests hold the check of its frames"),
        _ => Err("no such check is used"),
    }
}

fn encoded(data: &[u8]) -> Result<Vec<u8>, Reason> {
    let mut buffer = [0; ROOM];
    let start = cobs::overhead(data.len());
    let place = buffer.get_mut(start..start + data.len()).ok_or("too long")?;
    place.copy_from_slice(data);
    let length = cobs::encode_in_place(&mut buffer, start, data.len()).ok_or("not encoded")?;
    Ok(buffer[..length].to_vec())
}

fn bytes(text: Option<&str>) -> Result<Vec<u8>, Reason> {
    let words = text.ok_or("no data")?.split(' ');
    words.map(|word| u8::from_str_radix(word, 16).map_err(|_| "data not understood")).collect()
}

fn hex(bytes: &[u8]) -> String {
    let words: Vec<String> = bytes.iter().map(|byte| format!("{byte:02X}")).collect();
    words.join(" ")
}

/// Rainflow counts as `range:cycles|..`, ranges to the decimals that the row states.
pub(super) fn cycles(row: &Row) -> Result<Answer, Reason> {
    if !row.is("rule", "ASTM_E1049_rainflow") {
        return Err("turning points by themselves are not given");
    }
    let mut rainflow = Rainflow::new(0.0);
    for value in series(row.get("series").ok_or("no series")?)? {
        rainflow.push(value);
    }
    let mut summed: Vec<(f64, f64)> = Vec::new();
    for (range, cycles) in rainflow.cycles() {
        match summed.last_mut() {
            Some(last) if (last.0 - range).abs() < 1e-9 => last.1 += cycles,
            _ => summed.push((range, cycles)),
        }
    }
    let mut stated = row.expected.split('|').map(|pair| {
        let range = pair.split(':').next().unwrap_or("");
        range.split_once('.').map_or(0, |(_, decimals)| decimals.len())
    });
    let word = |(range, cycles): &(f64, f64)| {
        let decimals = stated.next().unwrap_or(6);
        format!("{range:.decimals$}:{cycles}")
    };
    let words: Vec<String> = summed.iter().map(word).collect();
    Ok(Answer::Text(words.join("|")))
}

fn series(text: &str) -> Result<Vec<f64>, Reason> {
    if text.starts_with("x=0.2+0.5sin(t)+0.2cos(10t)+0.2sin(4t)") {
        let at = |step: u8| {
            let t = 0.02 * f64::from(step);
            0.2 + 0.5 * t.sin() + 0.2 * (10.0 * t).cos() + 0.2 * (4.0 * t).sin()
        };
        return Ok((0..=200).map(at).collect());
    }
    text.split(',').map(|word| word.parse().map_err(|_| "series not understood")).collect()
}
