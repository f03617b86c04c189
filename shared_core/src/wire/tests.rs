//! The wire's bytes, pinned, and what becomes of bytes that are none of them.

mod any_bytes;
mod cobs;
mod messages;
mod numbers;

/// Hexadecimal digits, spaces between, to bytes.
fn hex(text: &str) -> Vec<u8> {
    text.split_whitespace().map(|pair| u8::from_str_radix(pair, 16).unwrap()).collect()
}
