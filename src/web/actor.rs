//! Who asks, with the right a handler needs: `Actor<CanWrite>` in a signature is the check.

use super::form_check::FormCheck;
use super::problem::Refusal;
use crate::app::who::{Right, Who};
use crate::app::{App, OrganisationId};
use axum::extract::FromRequestParts;
use axum::http::StatusCode;
use axum::http::header::{HeaderValue, WWW_AUTHENTICATE};
use axum::http::request::Parts;
use std::marker::PhantomData;
use std::sync::Arc;

/// Who asks and on whose behalf, as the layer that knows people puts it on every request.
#[derive(Clone, Debug)]
pub struct Asking {
    /// Whose records are meant.
    pub organisation: OrganisationId,
    /// Who asks.
    pub who: Arc<Who>,
}

/// A right as a type.
pub trait Needs: Send + Sync + 'static {
    /// The right; none where strangers are welcome.
    const RIGHT: Option<Right>;
    /// What one may not do without it, after "you may not".
    const WORDS: &'static str;
}

/// Whoever comes.
#[derive(Clone, Copy, Debug)]
pub struct Anyone;
/// Who may look.
#[derive(Clone, Copy, Debug)]
pub struct CanRead;
/// Who may enter and change data.
#[derive(Clone, Copy, Debug)]
pub struct CanWrite;
/// Who may approve statements.
#[derive(Clone, Copy, Debug)]
pub struct CanApprove;
/// Who may name members and what they may do.
#[derive(Clone, Copy, Debug)]
pub struct CanAdminister;

impl Needs for Anyone {
    const RIGHT: Option<Right> = None;
    const WORDS: &'static str = "";
}

impl Needs for CanRead {
    const RIGHT: Option<Right> = Some(Right::Read);
    const WORDS: &'static str = "look at this";
}

impl Needs for CanWrite {
    const RIGHT: Option<Right> = Some(Right::Write);
    const WORDS: &'static str = "change this";
}

impl Needs for CanApprove {
    const RIGHT: Option<Right> = Some(Right::Approve);
    const WORDS: &'static str = "approve this";
}

impl Needs for CanAdminister {
    const RIGHT: Option<Right> = Some(Right::Administer);
    const WORDS: &'static str = "name members and what they may do";
}

/// The program, asked by somebody who has the right that `N` needs.
#[derive(Clone)]
pub struct Actor<N> {
    /// The program on behalf of their organisation.
    pub app: App,
    /// The right was checked when this was made.
    right: PhantomData<N>,
}

impl<N: Needs> FromRequestParts<App> for Actor<N> {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, app: &App) -> Result<Actor<N>, Refusal> {
        let app = match parts.extensions.get::<Asking>() {
            Some(asking) => app.asked_by(asking.organisation, asking.who.clone()),
            None => app.asked_by(app.organisation, Arc::new(Who::stranger())),
        };
        check(&app.who, N::RIGHT, N::WORDS)?;
        // Without a word of the layer that looks at forms, nothing that changes something is believed.
        let passed = match parts.extensions.get::<FormCheck>() {
            Some(check) => *check == FormCheck::Passed,
            None => parts.method.is_safe(),
        };
        if !passed {
            return Err(Refusal::form_token());
        }
        Ok(Actor {
            app,
            right: PhantomData,
        })
    }
}

/// Refuses whoever has not the right: 401 a stranger, 403 everybody else.
fn check(who: &Who, right: Option<Right>, words: &str) -> Result<(), Refusal> {
    let Some(right) = right else { return Ok(()) };
    if !who.is_known() {
        return Err(Refusal::of(StatusCode::UNAUTHORIZED)
            .header(WWW_AUTHENTICATE, HeaderValue::from_static("Bearer")));
    }
    if who.may(right) {
        return Ok(());
    }
    Err(Refusal::not_allowed(format!(
        "You may not {words}: it needs the right to {}. An administrator of your organisation can give it, or a token \
         with that scope.",
        right.name()
    )))
}
