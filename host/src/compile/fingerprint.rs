//! The fingerprint of a plan.

use sha2::{Digest, Sha512};

/// Fingerprint of a plan's bytes: the first eight bytes of their SHA-512 (FIPS 180-4), little
/// endian. It names the plan in journals, over the link and on paper.
#[must_use]
pub fn fingerprint(bytes: &[u8]) -> u64 {
    let digest = Sha512::digest(bytes);
    let mut first = [0; 8];
    for (to, from) in first.iter_mut().zip(digest.iter()) {
        *to = *from;
    }
    u64::from_le_bytes(first)
}

#[cfg(test)]
mod tests {
    use super::fingerprint;

    #[test]
    fn the_published_digest_of_abc() {
        // FIPS 180-4 example: SHA-512("abc") begins dd af 35 a1 93 61 7a ba.
        assert_eq!(fingerprint(b"abc"), 0xba7a_6193_a135_afdd);
    }
}
