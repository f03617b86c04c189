//! Numbers off a plan's bytes, without a question after each.

use crate::cursor::{Fetch, Source};

/// Reads numbers and remembers whether the bytes were enough: what is read behind their end is
/// zero. A plan has a hundred numbers, and one answer for all of them makes the code a third of
/// what it would be with one for each. Whoever reads asks [`Reader::whole`] before the numbers
/// count.
pub(super) struct Reader<'a> {
    bytes: Source<&'a mut dyn Fetch>,
    short: bool,
}

impl Fetch for &mut dyn Fetch {
    fn fetch(&mut self, out: &mut [u8]) -> Option<()> {
        (**self).fetch(out)
    }
}

impl<'a> Reader<'a> {
    pub(super) fn new(bytes: &'a mut dyn Fetch) -> Self {
        Self { bytes: Source(bytes), short: false }
    }

    /// `None` once something was read behind the end.
    pub(super) fn whole(&self) -> Option<()> {
        (!self.short).then_some(())
    }

    #[inline(never)]
    pub(super) fn fill(&mut self, out: &mut [u8]) {
        if self.bytes.fill(out).is_none() {
            out.fill(0);
            self.short = true;
        }
    }

    /// The next byte; `None` at the end, which may be one.
    pub(super) fn more(&mut self) -> Option<u8> {
        self.bytes.u8()
    }

    #[inline(never)]
    pub(super) fn u8(&mut self) -> u8 {
        let mut bytes = [0; 1];
        self.fill(&mut bytes);
        let [byte] = bytes;
        byte
    }

    #[inline(never)]
    pub(super) fn u16(&mut self) -> u16 {
        let mut bytes = [0; 2];
        self.fill(&mut bytes);
        u16::from_le_bytes(bytes)
    }

    #[inline(never)]
    pub(super) fn u32(&mut self) -> u32 {
        let mut bytes = [0; 4];
        self.fill(&mut bytes);
        u32::from_le_bytes(bytes)
    }

    pub(super) fn u64(&mut self) -> u64 {
        let (low, high) = (self.u32(), self.u32());
        u64::from(low) | u64::from(high) << 32
    }

    pub(super) fn i32(&mut self) -> i32 {
        self.u32().cast_signed()
    }

    #[inline(never)]
    pub(super) fn f32(&mut self) -> f32 {
        f32::from_bits(self.u32())
    }
}
