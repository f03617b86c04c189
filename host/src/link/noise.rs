//! A port with a bad line in front of it.

use super::{Port, PortError};
use std::time::Duration;

/// Flips bits and drops bytes, both ways, by a seeded sequence.
#[derive(Debug)]
pub struct Noisy<P> {
    port: P,
    bit_error_rate: f64,
    drop_rate: f64,
    state: u64,
    /// Bytes left until the line goes dead for good; `None`: it never does.
    cut_after: Option<u64>,
    bits_flipped: u64,
    bytes_dropped: u64,
}

impl<P: Port> Noisy<P> {
    /// A line that flips each bit and drops each byte with these probabilities.
    pub fn new(port: P, bit_error_rate: f64, drop_rate: f64, seed: u64) -> Self {
        Self {
            port,
            bit_error_rate,
            drop_rate,
            state: seed,
            cut_after: None,
            bits_flipped: 0,
            bytes_dropped: 0,
        }
    }

    /// The same line, dead once `bytes` more have come from the device.
    #[must_use]
    pub fn cut_after(mut self, bytes: u64) -> Self {
        self.cut_after = Some(bytes);
        self
    }

    /// Bits flipped so far.
    #[must_use]
    pub const fn bits_flipped(&self) -> u64 {
        self.bits_flipped
    }

    /// Bytes dropped so far.
    #[must_use]
    pub const fn bytes_dropped(&self) -> u64 {
        self.bytes_dropped
    }

    /// The byte as it arrives, or `None` when it is lost.
    fn pass(&mut self, byte: u8) -> Option<u8> {
        if self.drop_rate > 0.0 && self.uniform() < self.drop_rate {
            self.bytes_dropped += 1;
            return None;
        }
        let mut byte = byte;
        if self.bit_error_rate > 0.0 {
            for bit in 0..8 {
                if self.uniform() < self.bit_error_rate {
                    byte ^= 1 << bit;
                    self.bits_flipped += 1;
                }
            }
        }
        Some(byte)
    }

    /// The next number of the sequence, in [0, 1). Source: G. Steele, D. Lea, C. Flood, "Fast
    /// splittable pseudorandom number generators", OOPSLA 2014 (the 64-bit mixer).
    #[expect(clippy::cast_precision_loss, reason = "53 bits fit a double")]
    fn uniform(&mut self) -> f64 {
        self.state = self.state.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.state;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        ((z ^ (z >> 31)) >> 11) as f64 / (1_u64 << 53) as f64
    }
}

impl<P: Port> Port for Noisy<P> {
    fn name(&self) -> &str {
        self.port.name()
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        let arriving: Vec<u8> = bytes.iter().filter_map(|byte| self.pass(*byte)).collect();
        self.port.write(&arriving)
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        loop {
            let count = self.port.read(out, wait)?;
            let mut kept = 0;
            for place in 0..count {
                if let Some(left) = &mut self.cut_after {
                    if *left == 0 {
                        break;
                    }
                    *left -= 1;
                }
                if let Some(byte) = self.pass(out[place]) {
                    out[kept] = byte;
                    kept += 1;
                }
            }
            // Bytes that were all lost are no end of the wait.
            if kept > 0 || count == 0 {
                return Ok(kept);
            }
        }
    }

    fn now(&self) -> Duration {
        self.port.now()
    }
}
