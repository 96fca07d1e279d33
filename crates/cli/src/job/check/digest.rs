//! Digests of files that are read whole.

use std::fmt::Write;

use sha2::{Digest, Sha256};

/// The SHA-256 digest (FIPS 180-4) in 64 lower-case hexadecimal digits.
pub(super) fn sha256(bytes: &[u8]) -> String {
    let mut text = String::with_capacity(64);
    for byte in Sha256::digest(bytes) {
        // Writing to a string cannot fail.
        let _ = write!(text, "{byte:02x}");
    }
    text
}

#[cfg(test)]
mod tests {
    #[test]
    fn digest_of_abc_is_that_of_fips_180_4() {
        assert_eq!(super::sha256(b"abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    }
}
