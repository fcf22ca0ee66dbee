//! The page of one's own account: password, sessions, tokens, light or dark.

use super::{at, shown};
use crate::core::documents::Problem;
use crate::people::{Account, Role, Session, Token};
use crate::web::frame::{Frame, Section};
use askama::Template;
use jiff::Timestamp;
use uuid::Uuid;

/// One's own account.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "people/me.html")]
pub struct MePage {
    /// Round the page.
    pub frame: Frame,
    /// The account.
    pub account: Account,
    /// Name of the organisation.
    pub organisation: String,
    /// What they may do, in words.
    pub may: Vec<&'static str>,
    /// Sessions, newest first.
    pub sessions: Vec<Session>,
    /// Tokens, newest first.
    pub tokens: Vec<Token>,
    /// Now.
    pub now: Timestamp,
    /// A token that was just made.
    pub made: Option<String>,
    /// The token to make, as typed.
    pub typed: TypedToken,
    /// What is wrong with it.
    pub problems: Vec<Problem>,
    /// In the demonstration, whom one can be: id, what they are, whether one is them now.
    pub demo: Vec<(Uuid, &'static str, bool)>,
    /// What was just done.
    pub done: &'static str,
}

/// A token to make, as typed.
#[derive(Clone, Debug, Default, PartialEq, Eq, serde::Deserialize)]
#[serde(default)]
pub struct TypedToken {
    /// What it is for.
    pub label: String,
    /// For how many days.
    pub days: String,
    /// `on` if it may read.
    pub read: String,
    /// `on` if it may write.
    pub write: String,
    /// `on` if it may approve.
    pub approve: String,
}

impl MePage {
    /// Round the page.
    pub(super) fn frame() -> Frame {
        Frame::new("Your account", Section::Me, "GET /api/v1/me")
    }

    fn wrong(&self, field: &str) -> Vec<&Problem> {
        at(&self.problems, field)
    }

    fn time(&self, at: &Timestamp) -> String {
        shown(*at)
    }

    fn state(&self, token: &Token) -> &'static str {
        match (&token.revoked_at, token.is_good(self.now)) {
            (Some(_), _) => "revoked",
            (None, true) => "good",
            (None, false) => "ended",
        }
    }

    fn good(&self, token: &&Token) -> bool {
        token.is_good(self.now)
    }

    fn is_auditor(&self) -> bool {
        self.account.person.is(Role::Auditor)
    }
}
