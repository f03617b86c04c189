//! Samples in blocks: codec 1, which is written, and codec 0, which is read for ever.
//!
#![doc = include_str!("samples/codec_1.md")]

mod packed;
mod plain;
mod scale;
mod track;
mod write;

pub use packed::Chain;
pub(super) use packed::Packed;
pub(super) use plain::Chain as PlainChain;

/// Fewest samples that an empty page has room for, whatever they hold: an anchor's head takes at
/// most 303 bits and a sample at most 269 (time 77, qualities 9, counts 70 each, battery 43), of
/// the 1,984 that the longest block of either word holds.
pub const PAGE_SAMPLES_MIN: usize = 7;

#[cfg(test)]
mod tests;
