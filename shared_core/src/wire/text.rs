//! A short text that a message can carry by value.

use core::fmt;
use serde::{Deserialize, Deserializer, Serialize, Serializer, de};

/// At most [`Text::MAX_BYTES`] bytes of UTF-8: a device's name, a version. What comes over the link
/// is compared as bytes; whoever shows it asks [`Text::is_text`] first.
#[derive(Clone, Copy, Default, PartialEq, Eq)]
pub struct Text {
    bytes: [u8; Self::MAX_BYTES],
    length: u8,
}

impl Text {
    /// Most bytes.
    pub const MAX_BYTES: usize = 32;

    /// The text, or `None` when it is longer than [`Self::MAX_BYTES`].
    #[must_use]
    pub fn new(text: &str) -> Option<Self> {
        Self::from_bytes(text.as_bytes())
    }

    /// The text; empty where the bytes are none.
    #[must_use]
    pub fn as_str(&self) -> &str {
        core::str::from_utf8(self.as_bytes()).unwrap_or_default()
    }

    /// Whether the bytes are UTF-8.
    #[must_use]
    pub fn is_text(&self) -> bool {
        core::str::from_utf8(self.as_bytes()).is_ok()
    }

    fn from_bytes(from: &[u8]) -> Option<Self> {
        let mut bytes = [0; Self::MAX_BYTES];
        bytes.get_mut(..from.len())?.iter_mut().zip(from).for_each(|(to, from)| *to = *from);
        Some(Self { bytes, length: u8::try_from(from.len()).ok()? })
    }

    pub(super) fn as_bytes(&self) -> &[u8] {
        self.bytes.get(..usize::from(self.length)).unwrap_or_default()
    }

    /// No text at all.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.length == 0
    }
}

impl fmt::Display for Text {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.as_str())
    }
}

impl fmt::Debug for Text {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Debug::fmt(self.as_str(), f)
    }
}

impl Serialize for Text {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_bytes(self.as_bytes())
    }
}

impl<'de> Deserialize<'de> for Text {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let text = <&[u8]>::deserialize(deserializer)?;
        Self::from_bytes(text).ok_or_else(|| de::Error::custom("text too long"))
    }
}
