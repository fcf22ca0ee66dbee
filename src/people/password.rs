//! Passwords: which are refused, and how they are hashed (argon2id, RFC 9106) and tried, two at a time, on threads of their
//! own.

use super::PeopleError;
use crate::app::App;
use crate::core::documents::Problems;
use argon2::{Argon2, PasswordHasher, PasswordVerifier};
use std::sync::OnceLock;

/// Letters of a password at least.
pub const LEAST: usize = 12;
/// Letters of a password at most: more is no safer, and is work.
pub const MOST: usize = 256;

/// Passwords that are long enough and everybody's.
const USUAL: &[&str] = &[
    "000000000000",
    "111111111111",
    "123123123123",
    "123456123456",
    "123456789012",
    "1234567890123",
    "12345678901234",
    "123456789123",
    "1q2w3e4r5t6y",
    "1qaz2wsx3edc",
    "abcdefghijkl",
    "abcdefghijklm",
    "abcd12345678",
    "adminadminadmin",
    "administrator",
    "administrator1",
    "asdfghjkl123",
    "asdfghjklqwerty",
    "bioethanol123",
    "changeme1234",
    "changemechangeme",
    "correcthorsebatterystaple",
    "iloveyou1234",
    "letmeinletmein",
    "letmein12345",
    "password1234",
    "password12345",
    "password123456",
    "passwordpassword",
    "passw0rd1234",
    "qwerty123456",
    "qwertyqwerty",
    "qwertyuiop12",
    "qwertyuiop123",
    "qwertyuiopasdf",
    "secretsecret",
    "sunshine1234",
    "trustno1trustno1",
    "welcome12345",
    "welcomewelcome",
    "wheelwort123",
    "wheelwort1234",
    "wheelwortwheelwort",
    "zaq12wsxcde3",
];

/// Says what is wrong with a new password for somebody of these names.
///
/// # Errors
/// What is wrong, at `pointer`.
pub fn check(password: &str, pointer: &str, names: &[&str]) -> Result<(), Problems> {
    let mut problems = Problems::default();
    let folded = password.to_lowercase();
    let mut letters: Vec<char> = password.chars().collect();
    let length = letters.len();
    letters.sort_unstable();
    letters.dedup();
    let long = "Take several words that do not belong together.";
    if length < LEAST {
        let detail = format!("The password has {length} letters: {LEAST} are the least.");
        problems.add(pointer, detail, long);
    } else if length > MOST {
        let detail = format!("The password has more than {MOST} letters.");
        problems.add(pointer, detail, "Shorten it.");
    } else if letters.len() < 5 || USUAL.contains(&folded.as_str()) {
        problems.add(pointer, "Many people have this password.", long);
    } else if names.iter().any(|name| name.to_lowercase() == folded) {
        problems.add(pointer, "The password is the name.", long);
    }
    if problems.is_empty() {
        Ok(())
    } else {
        Err(problems)
    }
}

/// Hashes a password.
pub(super) async fn hash(app: &App, password: String) -> Result<String, PeopleError> {
    let salt = app.clock.secret();
    on_a_thread(app, move || hashed(&password, &salt[..16])).await?
}

fn hashed(password: &str, salt: &[u8]) -> Result<String, PeopleError> {
    Argon2::default()
        .hash_password_with_salt(password.as_bytes(), salt)
        .map(|hash| hash.to_string())
        .map_err(|_| PeopleError::Defect("hashed a password"))
}

/// True if the password is the one that was hashed. Without a hash it takes as long and is false.
pub(super) async fn fits(app: &App, password: String, hash: Option<String>) -> Result<bool, PeopleError> {
    /// A hash that no password has to fit.
    static NOBODY: OnceLock<String> = OnceLock::new();
    on_a_thread(app, move || {
        let known = hash.is_some();
        let hash = match hash {
            Some(hash) => hash,
            None => match NOBODY.get() {
                Some(hash) => hash.clone(),
                None => {
                    let hash = hashed("nobody has this password", &[7; 16])?;
                    NOBODY.get_or_init(|| hash).clone()
                }
            },
        };
        let fits = Argon2::default()
            .verify_password(password.as_bytes(), hash.as_str())
            .is_ok();
        Ok(fits && known)
    })
    .await?
}

async fn on_a_thread<T: Send + 'static>(
    app: &App,
    work: impl FnOnce() -> T + Send + 'static,
) -> Result<T, PeopleError> {
    let defect = PeopleError::Defect("tried a password");
    // Never closed, so this waits for a place and does not fail. The place goes with the work: a request that is given up
    // must not let another begin beside it.
    let place = app.doors.hashing.clone().acquire_owned().await;
    let place = place.map_err(|_| defect.clone())?;
    let done = tokio::task::spawn_blocking(move || {
        let done = work();
        drop(place);
        done
    });
    done.await.map_err(|_| defect)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn short_usual_and_named_passwords_are_refused() {
        let names = ["Ines Marshland", "marshland.ines"];
        for wrong in [
            "",
            "elevenlettr",
            "Password1234",
            "aaaaaaaaaaaaaaaa",
            "Marshland.Ines",
            &"x1y2z3".repeat(50),
        ] {
            let problems = check(wrong, "/password", &names).expect_err(wrong);
            assert_eq!(problems.list()[0].pointer, "/password");
            assert!(
                !problems.list()[0].detail.contains("Marshland"),
                "it is not shown"
            );
        }
        for right in ["barley tram seven", "\u{e4}\u{f6}\u{fc}\u{df}beet\u{e9}chaff9"] {
            assert!(check(right, "/password", &names).is_ok(), "{right}");
        }
    }

    #[test]
    fn usual_passwords_are_those_that_the_length_lets_through() {
        for usual in USUAL {
            assert!(
                usual.chars().count() >= LEAST && *usual == usual.to_lowercase(),
                "{usual}"
            );
        }
    }

    #[test]
    fn a_hash_says_how_it_was_made() {
        let hash = hashed("barley tram seven", &[1; 16]).expect("hashes");
        assert!(hash.starts_with("$argon2id$v=19$m=19456,t=2,p=1$"), "{hash}");
    }
}
