//! Bounded writing and reading of bytes and varints.
//!
//! A varint holds 7 bits per byte, lowest first; the top bit says that more follow. A signed number
//! is folded first (zig-zag): 0, -1, 1, -2 become 0, 1, 2, 3.

use crate::cursor::fill;

/// Appends to a slice; what does not fit marks the sink as full and is dropped.
pub(super) struct Sink<'a> {
    out: &'a mut [u8],
    len: usize,
    full: bool,
}

impl<'a> Sink<'a> {
    pub(super) fn new(out: &'a mut [u8]) -> Self {
        Self { out, len: 0, full: false }
    }

    /// Bytes written; `None` when something did not fit.
    pub(super) fn finished(&self) -> Option<usize> {
        (!self.full).then_some(self.len)
    }

    pub(super) fn bytes(&mut self, bytes: &[u8]) {
        let end = self.len.saturating_add(bytes.len());
        match self.out.get_mut(self.len..end) {
            Some(place) if !self.full => {
                fill(place, bytes);
                self.len = end;
            }
            _ => self.full = true,
        }
    }

    pub(super) fn byte(&mut self, byte: u8) {
        self.bytes(&[byte]);
    }

    pub(super) fn varint(&mut self, mut value: u64) {
        loop {
            let [low, ..] = value.to_le_bytes();
            value >>= 7;
            if value == 0 {
                self.byte(low & 0x7F);
                return;
            }
            self.byte(low | 0x80);
        }
    }

    pub(super) fn signed(&mut self, value: i64) {
        self.varint(((value << 1) ^ (value >> 63)).cast_unsigned());
    }
}

/// Takes bytes and numbers off the front of a slice; `None` where they end or make no sense.
#[derive(Clone, Copy, Debug)]
pub(super) struct Source<'a> {
    rest: &'a [u8],
}

impl<'a> Source<'a> {
    pub(super) const fn new(bytes: &'a [u8]) -> Self {
        Self { rest: bytes }
    }

    pub(super) fn array<const N: usize>(&mut self) -> Option<[u8; N]> {
        let (head, rest) = self.rest.split_first_chunk::<N>()?;
        self.rest = rest;
        Some(*head)
    }

    pub(super) fn byte(&mut self) -> Option<u8> {
        self.array::<1>().map(|[byte]| byte)
    }

    pub(super) fn varint(&mut self) -> Option<u64> {
        let mut value = 0_u64;
        for shift in (0..64).step_by(7) {
            let byte = self.byte()?;
            let bits = u64::from(byte & 0x7F);
            // The tenth byte has room for one bit.
            if shift == 63 && bits > 1 {
                return None;
            }
            value |= bits << shift;
            if byte & 0x80 == 0 {
                return Some(value);
            }
        }
        None
    }

    pub(super) fn signed(&mut self) -> Option<i64> {
        let folded = self.varint()?;
        Some((folded >> 1).cast_signed() ^ (folded & 1).cast_signed().wrapping_neg())
    }

    /// A varint that must fit the narrower type.
    pub(super) fn narrow<T: TryFrom<u64>>(&mut self) -> Option<T> {
        T::try_from(self.varint()?).ok()
    }

    /// A signed varint that must fit the narrower type.
    pub(super) fn narrow_signed<T: TryFrom<i64>>(&mut self) -> Option<T> {
        T::try_from(self.signed()?).ok()
    }
}

#[cfg(test)]
mod tests {
    use super::{Sink, Source};
    use proptest::prelude::*;

    fn varint_bytes(value: u64) -> Vec<u8> {
        let mut out = [0; 16];
        let mut sink = Sink::new(&mut out);
        sink.varint(value);
        let len = sink.finished().unwrap();
        out[..len].to_vec()
    }

    #[test]
    fn known_varints() {
        assert_eq!(varint_bytes(0), [0x00]);
        assert_eq!(varint_bytes(127), [0x7F]);
        assert_eq!(varint_bytes(128), [0x80, 0x01]);
        assert_eq!(varint_bytes(300), [0xAC, 0x02]);
        assert_eq!(varint_bytes(u64::MAX).len(), 10);
    }

    #[test]
    fn too_long_or_cut_varints_are_refused() {
        assert_eq!(Source::new(&[0x80]).varint(), None);
        assert_eq!(Source::new(&[0xFF; 12]).varint(), None);
        let mut over = [0x80; 10];
        over[9] = 0x02;
        assert_eq!(Source::new(&over).varint(), None);
    }

    #[test]
    fn a_full_sink_stays_full() {
        let mut out = [0; 2];
        let mut sink = Sink::new(&mut out);
        sink.bytes(&[1, 2, 3]);
        sink.byte(4);
        assert_eq!(sink.finished(), None);
    }

    proptest! {
        #[test]
        fn numbers_come_back(value: u64, signed: i64) {
            let mut out = [0; 20];
            let mut sink = Sink::new(&mut out);
            sink.varint(value);
            sink.signed(signed);
            let len = sink.finished().unwrap();
            let mut source = Source::new(&out[..len]);
            prop_assert_eq!(source.varint(), Some(value));
            prop_assert_eq!(source.signed(), Some(signed));
            prop_assert_eq!(source.byte(), None);
        }
    }
}
