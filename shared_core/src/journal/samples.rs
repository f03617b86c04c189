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

/// Fewest samples that a page has room for, whatever they hold; see the tests.
pub const PAGE_SAMPLES_MIN: usize = 7;

#[cfg(test)]
mod tests;
