//! A text that no log, no error and no table may show.

/// A secret setting. `Debug` hides it.
#[derive(Clone, PartialEq, Eq)]
pub struct Secret(String);

impl Secret {
    /// Keeps a text secret.
    pub fn new(text: impl Into<String>) -> Secret {
        Secret(text.into())
    }

    /// The text, for the one place that needs it.
    pub fn reveal(&self) -> &str {
        &self.0
    }
}

impl std::fmt::Debug for Secret {
    fn fmt(&self, to: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        to.write_str("Secret(hidden)")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn it_is_not_shown() {
        let secret = Secret::new("correct horse");
        assert!(!format!("{secret:?} {:#?}", Some(&secret)).contains("horse"));
        assert_eq!(secret.reveal(), "correct horse");
    }
}
