//! Canonical bytes (RFC 8785) and their SHA-256: what is stored, hashed and compared.

use serde::Serialize;
use sha2::{Digest, Sha256};

/// The canonical JSON bytes of a document (RFC 8785).
///
/// # Errors
/// When a figure is not finite: that is a defect upstream, never user input.
pub fn bytes<T: Serialize>(document: &T) -> Result<Vec<u8>, serde_json::Error> {
    serde_json_canonicalizer::to_vec(document)
}

/// `sha256:` and the hash of the bytes in hexadecimal.
pub fn hash(bytes: &[u8]) -> String {
    let mut text = String::with_capacity(71);
    text.push_str("sha256:");
    for byte in Sha256::digest(bytes) {
        text.push(char::from_digit(u32::from(byte >> 4), 16).unwrap_or('0'));
        text.push(char::from_digit(u32::from(byte & 15), 16).unwrap_or('0'));
    }
    text
}
