//! Hash and signature: what makes a file hold against everybody, its issuer included. How another program checks them
//! stands at the head of `core::documents::statement`.

use crate::core::documents::canonical;
pub use crate::core::documents::canonical::hex;
use crate::core::documents::statement::{Signature, Statement};
use ed25519_dalek::{Signer, SigningKey, VerifyingKey};
use sha2::{Digest, Sha256};

/// The only algorithm.
pub const ALGORITHM: &str = "Ed25519";

/// A public key that signatures are checked with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct PublicKey([u8; 32]);

impl PublicKey {
    /// The public half of a signing key.
    pub fn of(key: &SigningKey) -> PublicKey {
        PublicKey(key.verifying_key().to_bytes())
    }

    /// Reads 64 small hexadecimal digits.
    pub fn from_hex(text: &str) -> Option<PublicKey> {
        bytes_of::<32>(text).map(PublicKey)
    }

    /// The key in hexadecimal.
    pub fn hex(self) -> String {
        hex(&self.0)
    }

    /// Its short name: the first 16 hexadecimal digits of its SHA-256.
    pub fn id(self) -> String {
        let mut id = hex(&Sha256::digest(self.0));
        id.truncate(16);
        id
    }

    /// True if `signature` (hexadecimal) is this key's over `bytes`. Weak keys and malleable signatures are refused.
    pub fn signed(self, bytes: &[u8], signature: &str) -> bool {
        let (Ok(key), Some(signature)) = (VerifyingKey::from_bytes(&self.0), bytes_of::<64>(signature))
        else {
            return false;
        };
        let signature = ed25519_dalek::Signature::from_bytes(&signature);
        key.verify_strict(bytes, &signature).is_ok()
    }
}

/// Puts hash and signature on a statement.
///
/// # Errors
/// When a figure is not finite, which a statement that was built cannot hold.
pub fn seal(mut statement: Statement, key: &SigningKey) -> Result<Statement, serde_json::Error> {
    let bytes = statement.signed_bytes()?;
    let public = PublicKey::of(key);
    statement.hash = canonical::hash(&bytes);
    statement.signature = Signature {
        algorithm: ALGORITHM.to_owned(),
        key_id: public.id(),
        public_key: public.hex(),
        value: hex(&key.sign(&bytes).to_bytes()),
    };
    Ok(statement)
}

/// Reads small hexadecimal of exactly so many bytes.
fn bytes_of<const N: usize>(text: &str) -> Option<[u8; N]> {
    if text.len() != 2 * N {
        return None;
    }
    let digit = |byte: u8| match byte {
        b'0'..=b'9' => Some(byte - b'0'),
        b'a'..=b'f' => Some(byte - b'a' + 10),
        _ => None,
    };
    let mut out = [0; N];
    for (byte, pair) in out.iter_mut().zip(text.as_bytes().chunks_exact(2)) {
        if let [high, low] = pair {
            *byte = 16 * digit(*high)? + digit(*low)?;
        }
    }
    Some(out)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn agrees_with_rfc_8032() {
        // RFC 8032 section 7.1, test 2.
        let secret =
            bytes_of::<32>("4ccd089b28ff96da9db6c346ec114e0f5b8a319f35aba624da8cf6ed4fb8a6fb").unwrap();
        let key = SigningKey::from_bytes(&secret);
        let public = PublicKey::of(&key);
        assert_eq!(
            public.hex(),
            "3d4017c3e843895a92b70aa74d1b7ebc9c982ccf2ec4968cc0cd55f12af4660c"
        );
        let signature = "92a009a9f0d4cab8720e820b5f642540a2b27b5416503f8fb3762223ebdb69da\
                         085ac1e43e15996e458f3613d0f11d8c387b2eaeb4302aeeb00d291612bb0c00";
        assert_eq!(hex(&key.sign(&[0x72]).to_bytes()), signature);
        assert!(public.signed(&[0x72], signature));
        assert!(!public.signed(&[0x73], signature));
        assert!(!public.signed(&[0x72], &signature.to_uppercase()));
    }

    #[test]
    fn keys_read_back() {
        let key = PublicKey::of(&SigningKey::from_bytes(&[7; 32]));
        assert_eq!(PublicKey::from_hex(&key.hex()), Some(key));
        assert_eq!(key.id().len(), 16);
        assert_eq!(PublicKey::from_hex("abc"), None);
        assert_eq!(PublicKey::from_hex(&"é".repeat(32)), None);
    }
}
