//! The page to sign in at, and the one where a password that somebody else set is replaced.

use super::at;
use crate::core::documents::Problem;
use crate::web::frame::{Frame, Section};
use askama::Template;

/// The page to sign in at.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "people/sign_in.html")]
pub struct SignInPage {
    /// Round the page.
    pub frame: Frame,
    /// The name as typed.
    pub name: String,
    /// Where to go on to.
    pub next: String,
    /// Why the last try was refused; empty before the first.
    pub refused: String,
    /// True if there is nobody yet who could sign in.
    pub nobody: bool,
}

impl SignInPage {
    /// The page before the first try.
    pub fn of(next: &str, nobody: bool) -> SignInPage {
        SignInPage {
            frame: Frame::bare("Sign in", Section::SignIn),
            name: String::new(),
            next: next.to_owned(),
            refused: String::new(),
            nobody,
        }
    }
}

/// The page where one chooses a password.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "people/password.html")]
pub struct PasswordPage {
    /// Round the page.
    pub frame: Frame,
    /// The name one signs in with, for password managers.
    pub sign_in_name: String,
    /// True if there is no way round: somebody else set the present one.
    pub must: bool,
    /// What is wrong with what was typed.
    pub problems: Vec<Problem>,
}

impl PasswordPage {
    /// What is wrong with a field.
    fn wrong(&self, field: &str) -> Vec<&Problem> {
        at(&self.problems, field)
    }
}
