//! The handlers of the pages about people: the way in and out here, the own account and the members beside it.

mod account;
mod members;

use super::gate::{Arrival, PASSWORD};
use super::sign_in::SignInPage;
use crate::app::App;
use crate::app::who::Via;
use crate::people::{PeopleError, anybody, seconds, sign_in, sign_out};
use crate::web::Refusal;
use crate::web::actor::{Actor, Anyone};
use crate::web::answers::{page, see_other, with_status};
use crate::web::cookies;
use crate::web::extract::{Form, Query};
use crate::web::links::local;
use axum::Router;
use axum::extract::Extension;
use axum::http::header::{CACHE_CONTROL, RETRY_AFTER, SET_COOKIE};
use axum::http::{HeaderMap, HeaderValue, StatusCode};
use axum::response::Response;
use axum::routing::{get, post};
use serde::Deserialize;
use uuid::Uuid;

/// The routes of the pages.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/sign-in", get(show_sign_in).post(do_sign_in))
        .route("/sign-out", post(do_sign_out))
        .route("/me", get(account::show_me))
        .route(PASSWORD, get(account::show_password).post(account::do_password))
        .route("/me/theme", post(account::do_theme))
        .route("/me/tokens", post(account::do_token))
        .route("/me/tokens/{id}/revoke", post(account::do_revoke))
        .route("/me/sessions/{name}/end", post(account::do_end_session))
        .route("/me/sign-out-everywhere", post(account::do_sign_out_everywhere))
        .route("/me/act-as", post(account::do_act_as))
        .route("/people", get(members::show_people).post(members::do_add))
        .route("/people/{id}", get(members::show_person).post(members::do_change))
        .route("/people/{id}/password", post(members::do_reset))
        .route("/people/{id}/disable", post(members::do_disable))
}

#[derive(Debug, Default, Deserialize)]
#[serde(default, deny_unknown_fields)]
struct Next {
    next: String,
}

#[derive(Deserialize)]
struct Credentials {
    name: String,
    password: String,
    #[serde(default)]
    next: String,
}

async fn show_sign_in(
    Actor { app, .. }: Actor<Anyone>,
    Query(Next { next }): Query<Next>,
) -> Result<Response, Refusal> {
    if matches!(app.who.via, Via::Session(_)) && !next.is_empty() {
        return Ok(see_other(local(&next)));
    }
    page(&SignInPage::of(local(&next), !anybody(&app).await?))
}

async fn do_sign_in(
    Actor { app, .. }: Actor<Anyone>,
    Extension(arrival): Extension<Arrival>,
    headers: HeaderMap,
    Form(form): Form<Credentials>,
) -> Result<Response, Refusal> {
    let before = cookies::read(&headers, cookies::SESSION).map(str::to_owned);
    let next = local(&form.next).to_owned();
    match sign_in(&app, &form.name, form.password, before).await {
        Ok(signed_in) => Ok(come_in(
            &arrival,
            &signed_in.secret,
            if signed_in.must_change { PASSWORD } else { &next },
        )),
        Err(error @ (PeopleError::DoNotFit | PeopleError::TooOften(_))) => {
            let refused = SignInPage {
                name: form.name.chars().take(200).collect(),
                refused: error.to_string(),
                ..SignInPage::of(&next, !anybody(&app).await?)
            };
            if let PeopleError::TooOften(wait) = error {
                let mut response = with_status(StatusCode::TOO_MANY_REQUESTS, &refused)?;
                response
                    .headers_mut()
                    .insert(RETRY_AFTER, HeaderValue::from(seconds(wait)));
                return Ok(response);
            }
            with_status(StatusCode::UNPROCESSABLE_ENTITY, &refused)
        }
        Err(error) => Err(error.into()),
    }
}

/// Gives the browser its session, in place of what it had, and sends it on.
fn come_in(arrival: &Arrival, secret: &str, next: &str) -> Response {
    let mut response = see_other(next);
    let age = Some(crate::people::LONGEST.as_secs());
    let set = cookies::set(cookies::SESSION, secret, age, arrival.secure);
    for cookie in [set, cookies::clear(cookies::VISIT, arrival.secure)]
        .into_iter()
        .flatten()
    {
        response.headers_mut().append(SET_COOKIE, cookie);
    }
    response
}

/// Takes the session from the browser, and sends it to the door.
fn gone(arrival: &Arrival) -> Response {
    let mut response = see_other("/sign-in");
    if let Some(cookie) = cookies::clear(cookies::SESSION, arrival.secure) {
        response.headers_mut().append(SET_COOKIE, cookie);
    }
    response
}

async fn do_sign_out(
    Actor { app, .. }: Actor<Anyone>,
    Extension(arrival): Extension<Arrival>,
) -> Result<Response, Refusal> {
    match sign_out(&app).await {
        Ok(()) | Err(PeopleError::NoPerson) => Ok(gone(&arrival)),
        Err(error) => Err(error.into()),
    }
}

#[derive(Debug, Default, Deserialize)]
#[serde(default, deny_unknown_fields)]
struct Done {
    done: String,
}

impl Done {
    /// The words of what was just done; nothing that an address holds is shown.
    fn words(&self) -> &'static str {
        match self.done.as_str() {
            "password" => "The password is changed. Every other session has ended.",
            "theme" => "Pages look as you chose.",
            "revoked" => "The token is revoked and refused from now on.",
            "ended" => "The session has ended.",
            "changed" => "Kept.",
            _ => "",
        }
    }
}

/// A page that holds a secret: nothing keeps it.
fn told_once(mut response: Response) -> Result<Response, Refusal> {
    response
        .headers_mut()
        .insert(CACHE_CONTROL, HeaderValue::from_static("no-store"));
    Ok(response)
}

fn id_of(text: &str) -> Result<Uuid, Refusal> {
    text.parse().map_err(|_| Refusal::of(StatusCode::NOT_FOUND))
}
