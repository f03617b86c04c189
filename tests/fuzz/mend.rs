//! Check sums put right again, so that mutations get behind them.

use strake_core::journal::check::{CRC32, block_check};
use strake_core::journal::header::HEADER_BYTES;

/// A sector: its header's check, then those of its blocks, as far as their lengths lead.
pub(crate) fn sector(bytes: &[u8]) -> Vec<u8> {
    let mut bytes = bytes.to_vec();
    if bytes.len() < HEADER_BYTES {
        return bytes;
    }
    // A magic that is gone would end it all.
    bytes[..4].copy_from_slice(b"SKJ\x01");
    let check = CRC32.checksum(&bytes[..HEADER_BYTES - 4]);
    bytes[HEADER_BYTES - 4..HEADER_BYTES].copy_from_slice(&check.to_le_bytes());
    let sequence = u32::from_le_bytes([bytes[4], bytes[5], bytes[6], bytes[7]]);
    let word = 1 << (bytes[22] & 3);
    for page in 0..bytes.len().div_ceil(256).min(16) {
        let from = if page == 0 { HEADER_BYTES } else { page * 256 };
        let end = bytes.len().min(page * 256 + 256);
        blocks(&mut bytes[page * 256..end], from % 256, sequence, page as u16 * 256, word);
    }
    bytes
}

/// A page in the form that the target of blocks takes: word, sequence, then the page.
pub(crate) fn block(bytes: &[u8]) -> Vec<u8> {
    let mut bytes = bytes.to_vec();
    if let Some(([word, sequence @ ..], page)) = bytes.split_first_chunk_mut::<5>() {
        let word = if *word & 1 == 0 { 1 } else { 4 };
        blocks(page, 0, u32::from_le_bytes(*sequence), 256, word);
    }
    bytes
}

fn blocks(page: &mut [u8], from: usize, sequence: u32, offset: u16, word: usize) {
    let mut at = from;
    while let Some(&words) = page.get(at) {
        let end = at + usize::from(words) * word;
        if words == 0xFF || end < at + 6 || end > page.len() {
            break;
        }
        let (body, check) = page[at..end].split_at_mut(end - at - 4);
        let right = block_check(sequence, offset.wrapping_add(at as u16), body);
        check.copy_from_slice(&right.to_le_bytes());
        at = end;
    }
}

/// Text that can at least be read: what is no printable letter becomes a digit.
pub(crate) fn tank(bytes: &[u8]) -> Vec<u8> {
    let readable = |byte: u8| byte == b'\n' || (b' '..=b'~').contains(&byte);
    bytes.iter().map(|&byte| if readable(byte) { byte } else { b'0' + byte % 10 }).collect()
}

pub(crate) fn plan_file(bytes: &[u8]) -> Vec<u8> {
    let plan = bytes.get(12..bytes.len().saturating_sub(4)).unwrap_or(&[]);
    strake::plan_file::write(plan).unwrap_or_default()
}

/// A frame from kind and body, whose check and stuffing are right. What a stream holds before its
/// first zero is taken for them as it is.
pub(crate) fn frame(bytes: &[u8]) -> Vec<u8> {
    let mut raw = bytes.split(|&byte| byte == 0).next().unwrap_or(&[]).to_vec();
    // The mutated frame opened without its check, if its stuffing still holds.
    let body = unstuffed(&raw).unwrap_or_else(|| std::mem::take(&mut raw));
    let (&kind, body) = body.split_first().unwrap_or((&1, &[]));
    let mut out = vec![0; body.len() + 64 + body.len() / 100];
    let len = strake_core::wire::frame::build(kind, &mut out, &mut |writer| writer.raw(body));
    out.truncate(len.unwrap_or(0));
    out
}

/// COBS undone (Cheshire and Baker, IEEE/ACM Transactions on Networking 7 (1999) 2), less the
/// check.
fn unstuffed(stuffed: &[u8]) -> Option<Vec<u8>> {
    let mut out = Vec::new();
    let mut rest = stuffed;
    while let Some((&code, behind)) = rest.split_first() {
        let (run, next) = behind.split_at_checked(usize::from(code).checked_sub(1)?)?;
        out.extend(run);
        if code != 0xFF && !next.is_empty() {
            out.push(0);
        }
        rest = next;
    }
    out.truncate(out.len().checked_sub(4)?);
    Some(out)
}

/// A journal file: the check of each record, as far as the lengths lead, and of the sectors in it.
pub(crate) fn journal_file(bytes: &[u8]) -> Vec<u8> {
    let mut bytes = bytes.to_vec();
    let mut at = 8;
    while let Some(head) = bytes.get(at..at + 5) {
        let length = u32::from_le_bytes([head[1], head[2], head[3], head[4]]) as usize;
        let (tag, end) = (head[0], at.saturating_add(5).saturating_add(length));
        if end + 4 > bytes.len() {
            break;
        }
        if tag == 3 && length > 6 {
            let mended = sector(&bytes[at + 11..end]);
            bytes[at + 11..end].copy_from_slice(&mended);
        }
        let check = CRC32.checksum(&bytes[at..end]);
        bytes[end..end + 4].copy_from_slice(&check.to_le_bytes());
        at = end + 4;
    }
    bytes
}
