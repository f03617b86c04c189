//! Consistent overhead byte stuffing: bytes without a zero, so that a zero can end a frame.
//!
//! Source: S. Cheshire, M. Baker, "Consistent Overhead Byte Stuffing", IEEE/ACM Transactions on
//! Networking 7(2), 1999. Both directions work in place.

const FULL: u8 = 0xFF; // a block of 254 bytes that no zero follows

/// Most bytes that encoding adds to `length` bytes, the closing zero not counted.
#[must_use]
pub const fn overhead(length: usize) -> usize {
    length / 254 + 1
}

/// Encodes the `length` bytes at `start` towards the front of `buffer` and returns how many bytes
/// there are now, from index 0. `None` when the buffer does not hold them or `start` is less than
/// [`overhead`], which keeps what is written behind what is still to be read.
pub fn encode_in_place(buffer: &mut [u8], start: usize, length: usize) -> Option<usize> {
    if start < overhead(length) || buffer.len().checked_sub(start)? < length {
        return None;
    }
    let (mut code_at, mut write, mut code) = (0, 1, 1_u8);
    for read in start..start + length {
        let byte = *buffer.get(read)?;
        if code == FULL {
            *buffer.get_mut(code_at)? = FULL;
            (code_at, write, code) = (write, write + 1, 1);
        }
        if byte == 0 {
            *buffer.get_mut(code_at)? = code;
            (code_at, write, code) = (write, write + 1, 1);
        } else {
            *buffer.get_mut(write)? = byte;
            (write, code) = (write + 1, code.wrapping_add(1));
        }
    }
    *buffer.get_mut(code_at)? = code;
    Some(write)
}

/// Decodes a frame, without its closing zero, to the front of itself and returns its new length.
/// `None` when it is empty, holds a zero, or its last block is cut short.
pub fn decode_in_place(frame: &mut [u8]) -> Option<usize> {
    let (mut read, mut write) = (0, 0);
    if frame.is_empty() || frame.contains(&0) {
        return None;
    }
    while let Some(&code) = frame.get(read) {
        read += 1;
        for _ in 1..code {
            let byte = *frame.get(read)?;
            *frame.get_mut(write)? = byte;
            (read, write) = (read + 1, write + 1);
        }
        if code != FULL && read < frame.len() {
            *frame.get_mut(write)? = 0;
            write += 1;
        }
    }
    Some(write)
}
