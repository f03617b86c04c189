//! Mutations of a corpus, the same for the same seed.

/// Numbers at which code changes its mind.
const NUMBERS: [u64; 12] =
    [0, 1, 0x7F, 0x80, 0xFF, 0x100, 0xFFF, 0x1000, 0x7FFF, 0xFFFF, 0xFFFF_FFFF, u64::MAX];

pub(crate) struct Mutator<'a> {
    state: u64,
    corpus: &'a [Vec<u8>],
}

impl<'a> Mutator<'a> {
    pub(crate) fn new(seed: u64, corpus: &'a [Vec<u8>]) -> Self {
        Self { state: seed, corpus }
    }

    /// splitmix64 (Steele, Lea and Flood, OOPSLA 2014), below `end`.
    fn below(&mut self, end: usize) -> usize {
        self.state = self.state.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.state;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        usize::try_from((z ^ (z >> 31)) % end.max(1) as u64).unwrap_or(0)
    }

    /// One seed after one to four mutations.
    pub(crate) fn next(&mut self) -> Vec<u8> {
        let pick = self.below(self.corpus.len());
        let mut bytes = self.corpus[pick].clone();
        for _ in 0..=self.below(4) {
            self.mutate(&mut bytes);
        }
        bytes
    }

    fn mutate(&mut self, bytes: &mut Vec<u8>) {
        let at = self.below(bytes.len() + 1);
        let len = 1 + self.below(16).min(bytes.len() - at);
        let end = (at + len).min(bytes.len());
        match self.below(8) {
            0 => {
                if let Some(byte) = bytes.get_mut(at) {
                    *byte ^= 1 << self.below(8);
                }
            }
            1 => {
                let value = self.below(256) as u8;
                bytes.get_mut(at..end).into_iter().flatten().for_each(|byte| *byte = value);
            }
            2 => {
                let number = NUMBERS[self.below(NUMBERS.len())].to_le_bytes();
                let width = [1, 2, 4, 8][self.below(4)];
                for (place, byte) in bytes.iter_mut().skip(at).zip(&number[..width]) {
                    *place = *byte;
                }
            }
            3 => drop(bytes.drain(at..end)),
            4 => {
                let copy = bytes[at..end].to_vec();
                let to = self.below(bytes.len() + 1);
                bytes.splice(to..to, copy);
            }
            5 => {
                // The beginning of one seed, the end of another.
                let other = self.below(self.corpus.len());
                let from = self.below(self.corpus[other].len() + 1);
                bytes.truncate(at);
                bytes.extend(&self.corpus[other][from..]);
            }
            6 => bytes.truncate(at),
            _ => {
                if let Some(byte) = bytes.get_mut(at) {
                    *byte = byte.wrapping_add([1, 255, 16][self.below(3)]);
                }
            }
        }
    }
}
