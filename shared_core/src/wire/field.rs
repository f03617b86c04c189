//! Writing bodies in postcard's encoding without a way to panic.
//!
//! postcard's own writer keeps a reachable panic at the size-optimised level; the few rules needed
//! here are small: bytes and floats as they are (little endian), wider unsigned integers as varints
//! of seven bits (low group first, high bit: more follows), texts and byte strings with their
//! length before them, structs and arrays as their fields in order. A test compares every message
//! with the crate's output.

use super::text::Text;

/// Fills a slice from the front and remembers whether everything fitted.
#[derive(Debug)]
pub struct Writer<'a> {
    out: &'a mut [u8],
    length: usize,
    short: bool,
}

impl<'a> Writer<'a> {
    /// A writer at the front of `out`.
    pub fn new(out: &'a mut [u8]) -> Self {
        Self { out, length: 0, short: false }
    }

    /// What was written, or `None` when it did not fit.
    #[must_use]
    pub fn written(&self) -> Option<&[u8]> {
        if self.short { None } else { self.out.get(..self.length) }
    }

    /// Room for `length` raw bytes, to be filled by the caller; empty when they do not fit.
    pub fn reserve(&mut self, length: usize) -> &mut [u8] {
        let start = self.length;
        let end = start.saturating_add(length);
        if end > self.out.len() || self.short {
            self.short = true;
            return &mut [];
        }
        self.length = end;
        self.out.get_mut(start..end).unwrap_or_default()
    }

    /// Raw bytes, without a length before them.
    pub fn raw(&mut self, bytes: &[u8]) {
        for (slot, byte) in self.reserve(bytes.len()).iter_mut().zip(bytes) {
            *slot = *byte;
        }
    }

    /// A varint.
    #[expect(clippy::cast_possible_truncation, reason = "the low seven bits are meant")]
    pub fn varint(&mut self, mut value: u64) {
        while value >= 0x80 {
            self.raw(&[value as u8 | 0x80]);
            value >>= 7;
        }
        self.raw(&[value as u8]);
    }

    /// The length before a text or a byte string.
    pub fn length(&mut self, length: usize) {
        self.varint(length as u64);
    }
}

/// What can stand in a message.
pub trait Field {
    /// Appends its bytes.
    fn put(&self, out: &mut Writer<'_>);
}

impl Field for u8 {
    fn put(&self, out: &mut Writer<'_>) {
        out.raw(&[*self]);
    }
}

impl Field for bool {
    fn put(&self, out: &mut Writer<'_>) {
        out.raw(&[u8::from(*self)]);
    }
}

impl Field for u16 {
    fn put(&self, out: &mut Writer<'_>) {
        out.varint(u64::from(*self));
    }
}

impl Field for u32 {
    fn put(&self, out: &mut Writer<'_>) {
        out.varint(u64::from(*self));
    }
}

impl Field for u64 {
    fn put(&self, out: &mut Writer<'_>) {
        out.varint(*self);
    }
}

impl Field for f32 {
    fn put(&self, out: &mut Writer<'_>) {
        out.raw(&self.to_le_bytes());
    }
}

impl Field for &[u8] {
    fn put(&self, out: &mut Writer<'_>) {
        out.length(self.len());
        out.raw(self);
    }
}

impl Field for Text {
    fn put(&self, out: &mut Writer<'_>) {
        self.as_bytes().put(out);
    }
}

impl<T: Field, const N: usize> Field for [T; N] {
    fn put(&self, out: &mut Writer<'_>) {
        for element in self {
            element.put(out);
        }
    }
}

/// Writes a struct as its fields in order. A field left out does not compile.
macro_rules! fields {
    ($name:ident $(<$life:lifetime>)? { $($field:ident),* $(,)? }) => {
        impl $(<$life>)? $crate::wire::Field for $name $(<$life>)? {
            fn put(&self, out: &mut $crate::wire::Writer<'_>) {
                let Self { $($field),* } = self;
                $( $crate::wire::Field::put($field, out); )*
                let _ = out;
            }
        }
    };
}

/// Makes a struct the message of a kind.
macro_rules! message {
    ($kind:ident, $name:ident { $($field:ident),* $(,)? }) => {
        $crate::wire::field::fields!($name { $($field),* });
        impl $crate::wire::Message<'_> for $name {
            const KIND: $crate::wire::Kind = $crate::wire::Kind::$kind;
        }
    };
    ($kind:ident, $name:ident <$life:lifetime> { $($field:ident),* $(,)? }) => {
        $crate::wire::field::fields!($name <$life> { $($field),* });
        impl<$life> $crate::wire::Message<$life> for $name<$life> {
            const KIND: $crate::wire::Kind = $crate::wire::Kind::$kind;
        }
    };
}

pub(super) use {fields, message};
