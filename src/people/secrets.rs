//! Secrets drawn at random: those of sessions, tokens, form tokens and temporary passwords. Of each only a hash is kept.

use crate::clock::Clock;
use crate::core::documents::canonical::hex;
use base64::Engine;
use base64::engine::general_purpose::URL_SAFE_NO_PAD;
use sha2::{Digest, Sha256};

/// What the token of a script begins with, so that a leaked one is recognised.
pub const TOKEN_PREFIX: &str = "wwt_";

/// Letters of a temporary password: none that looks like another.
const LETTERS: &[u8; 32] = b"abcdefghijkmnpqrstuvwxyz23456789";

/// A new secret of 256 bits as text.
pub fn fresh(clock: &Clock) -> String {
    URL_SAFE_NO_PAD.encode(clock.secret())
}

/// True if a text looks like a secret of ours: else it is not worth a question to the database.
pub fn is_secret(text: &str) -> bool {
    text.len() == 43
        && text
            .bytes()
            .all(|b| b.is_ascii_alphanumeric() || b == b'-' || b == b'_')
}

/// The hash that is kept of a secret. It has 256 bits already, so a plain hash is enough.
pub fn hash(secret: &str) -> [u8; 32] {
    Sha256::digest(secret.as_bytes()).into()
}

/// The token of forms that belongs to a secret: whoever knows one cannot tell the other.
pub fn form_token(secret: &str) -> String {
    hex(&hash(&format!("wheelwort form token {secret}")))
}

/// True if two texts are the same; takes as long whatever they hold.
pub fn same(one: &str, other: &str) -> bool {
    let (one, other) = (one.as_bytes(), other.as_bytes());
    one.len() == other.len() && one.iter().zip(other).fold(0, |all, (a, b)| all | (a ^ b)) == 0
}

/// A password to begin with, 100 bits.
pub fn temporary_password(clock: &Clock) -> String {
    let mut text = String::with_capacity(23);
    for (index, byte) in clock.secret().iter().take(20).enumerate() {
        if index > 0 && index % 5 == 0 {
            text.push('-');
        }
        text.push(char::from(LETTERS[usize::from(byte & 31)]));
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn secrets_are_new_each_time_and_known_by_their_shape() {
        let clock = Clock::system();
        let (one, two) = (fresh(&clock), fresh(&clock));
        assert_ne!(one, two);
        assert!(is_secret(&one) && is_secret(&two), "{one}");
        let short: String = one.chars().skip(1).collect();
        assert!(!is_secret("") && !is_secret(&short) && !is_secret(&format!("{short}'")));
        assert_ne!(form_token(&one), hex(&hash(&one)));
        assert!(same(&one, &one) && !same(&one, &two) && !same(&one, ""));
    }

    #[test]
    fn a_temporary_password_is_long_enough_and_easily_read() {
        let password = temporary_password(&Clock::system());
        assert_eq!(password.len(), 23, "{password}");
        assert!(!password.contains(['l', 'o', '0', '1']));
    }
}
