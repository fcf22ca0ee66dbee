//! Why a use case of people did not do what it was asked. `Display` is for people; nothing here holds a secret.

use crate::core::documents::{Problem, Problems};
use crate::store::StoreError;
use std::time::Duration;
use thiserror::Error;

/// Why a use case failed.
#[derive(Clone, Debug, Error)]
pub enum PeopleError {
    /// What was given is wrong (422): everything at once, nothing was stored.
    #[error("What was given does not hold.")]
    Problems(Problems),
    /// There is no such person, session or token here (404).
    #[error("There is nobody and nothing of that id here.")]
    NotFound,
    /// Whoever asks is no person with an account: the command line, or nobody (403).
    #[error("Only a person who signed in has this.")]
    NoPerson,
    /// A token asks for what only a person who signed in may do (403).
    #[error("A token cannot do this: sign in with a browser.")]
    NotByToken,
    /// Nobody would be left to name members (409).
    #[error("Nobody would be left to administer the organisation. Give somebody else that role first.")]
    LastAdministrator,
    /// Name and password do not fit, the person is disabled, or there is no such name: one answer for all (403).
    #[error(
        "Name and password do not fit. Check both; whoever administers Wheelwort at your place can set a new password."
    )]
    DoNotFit,
    /// Too many tries (429).
    #[error("That was tried too often. Wait {} before the next try.", words(*.0))]
    TooOften(Duration),
    /// The database.
    #[error(transparent)]
    Store(#[from] StoreError),
    /// A defect of the program (500).
    #[error("The program made a mistake while it {0}.")]
    Defect(&'static str),
}

impl PeopleError {
    /// One thing is wrong.
    pub(super) fn problem(
        pointer: &str,
        detail: impl Into<String>,
        remedy: impl Into<String>,
    ) -> PeopleError {
        let problem = Problem {
            pointer: pointer.into(),
            detail: detail.into(),
            remedy: remedy.into(),
        };
        PeopleError::Problems(problem.into())
    }
}

/// Whole seconds to wait, at least one.
pub fn seconds(wait: Duration) -> u64 {
    u64::try_from(wait.as_millis().div_ceil(1_000))
        .unwrap_or(u64::MAX)
        .max(1)
}

fn words(wait: Duration) -> String {
    match seconds(wait) {
        1 => "a second".into(),
        many => format!("{many} seconds"),
    }
}
