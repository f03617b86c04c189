//! Reading and writing little-endian numbers in a slice. Total: running out is a value, not a
//! panic.

/// Hands out bytes in order.
pub trait Fetch {
    /// Fills `out` with the next bytes; `None` when there are not that many.
    fn fetch(&mut self, out: &mut [u8]) -> Option<()>;
}

impl Fetch for &[u8] {
    fn fetch(&mut self, out: &mut [u8]) -> Option<()> {
        let (head, rest) = self.split_at_checked(out.len())?;
        fill(out, head);
        *self = rest;
        Some(())
    }
}

/// Copies as many bytes as both have. Where the compiler cannot see that the lengths are equal, the
/// copy of a slice keeps a way to panic.
pub(crate) fn fill(target: &mut [u8], source: &[u8]) {
    for (to, from) in target.iter_mut().zip(source) {
        *to = *from;
    }
}

/// The bytes before the last `N`, and these; `None` where there are fewer. The library's function
/// of this purpose keeps a way to panic where the compiler leaves it a function.
pub(crate) fn split_last<const N: usize>(bytes: &[u8]) -> Option<(&[u8], &[u8; N])> {
    let (before, last) = bytes.split_at_checked(bytes.len().checked_sub(N)?)?;
    Some((before, last.first_chunk()?))
}

/// Reads numbers off something that hands out bytes.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Source<F>(pub(crate) F);

impl<F: Fetch> Source<F> {
    pub(crate) fn fill(&mut self, out: &mut [u8]) -> Option<()> {
        self.0.fetch(out)
    }

    fn array<const N: usize>(&mut self) -> Option<[u8; N]> {
        let mut bytes = [0; N];
        self.0.fetch(&mut bytes).map(|()| bytes)
    }

    pub(crate) fn u8(&mut self) -> Option<u8> {
        self.array::<1>().map(|[byte]| byte)
    }

    pub(crate) fn u16(&mut self) -> Option<u16> {
        self.array().map(u16::from_le_bytes)
    }

    pub(crate) fn u32(&mut self) -> Option<u32> {
        self.array().map(u32::from_le_bytes)
    }

    pub(crate) fn u64(&mut self) -> Option<u64> {
        self.array().map(u64::from_le_bytes)
    }

    pub(crate) fn i32(&mut self) -> Option<i32> {
        self.array().map(i32::from_le_bytes)
    }
}

/// Writes numbers into a slice and remembers whether they fitted.
#[derive(Debug)]
pub(crate) struct Sink<'a> {
    bytes: &'a mut [u8],
    used: usize,
    fits: bool,
}

impl<'a> Sink<'a> {
    pub(crate) fn new(bytes: &'a mut [u8]) -> Self {
        Self { bytes, used: 0, fits: true }
    }

    /// Bytes written; `None` when they did not all fit.
    pub(crate) fn finish(self) -> Option<usize> {
        self.fits.then_some(self.used)
    }

    pub(crate) fn bytes(&mut self, source: &[u8]) {
        let end = self.used.saturating_add(source.len());
        match self.bytes.get_mut(self.used..end) {
            Some(target) => {
                fill(target, source);
                self.used = end;
            }
            None => self.fits = false,
        }
    }

    pub(crate) fn u8(&mut self, value: u8) {
        self.bytes(&[value]);
    }

    pub(crate) fn u16(&mut self, value: u16) {
        self.bytes(&value.to_le_bytes());
    }

    pub(crate) fn u32(&mut self, value: u32) {
        self.bytes(&value.to_le_bytes());
    }

    pub(crate) fn u64(&mut self, value: u64) {
        self.bytes(&value.to_le_bytes());
    }

    pub(crate) fn i32(&mut self, value: i32) {
        self.bytes(&value.to_le_bytes());
    }

    pub(crate) fn f32(&mut self, value: f32) {
        self.bytes(&value.to_le_bytes());
    }
}
