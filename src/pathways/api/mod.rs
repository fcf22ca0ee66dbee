//! The API of pathways: stored ones with their revisions, stages and assessments; evaluation, comparison and blends
//! without storing.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

mod batch;
mod blend;
mod choice;
mod compare;
mod defaults;
mod evaluate;
mod reasons;
mod refusals;
mod revisions;
mod stages;
mod stored;

use super::{Expected, Saved, read};
use crate::app::App;
use crate::web::Refusal;
use crate::web::conditional::{IfMatch, etag};
use axum::Json;
use axum::http::header::{ETAG, LOCATION};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use utoipa::IntoParams;
use utoipa_axum::router::OpenApiRouter;
use uuid::Uuid;

/// The routes of this folder.
pub fn routes() -> OpenApiRouter<App> {
    stored::routes()
        .merge(revisions::routes())
        .merge(stages::routes())
        .merge(evaluate::routes())
        .merge(batch::routes())
        .merge(compare::routes())
        .merge(blend::routes())
        .merge(defaults::routes())
        .merge(reasons::routes())
}

/// Why a revision is saved.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct Reason {
    /// Why the revision is saved, for the history: at most 1000 letters.
    #[param(max_length = 1000)]
    reason: Option<String>,
}

impl Reason {
    fn checked(self) -> Result<Option<String>, Refusal> {
        match self.reason {
            Some(reason) if reason.chars().count() > 1_000 => {
                Err(Refusal::bad_request("The reason is longer than 1000 letters."))
            }
            Some(reason) if reason.chars().any(|c| c.is_control() && c != '\n') => {
                Err(Refusal::bad_request("The reason holds control characters."))
            }
            reason => Ok(reason.filter(|reason| !reason.trim().is_empty())),
        }
    }
}

/// A public id; what is not one names nothing.
fn id_of(text: &str) -> Result<Uuid, Refusal> {
    match text.parse::<Uuid>() {
        // One spelling each: an id is an address.
        Ok(id) if text.len() == 36 => Ok(id),
        _ => Err(Refusal::not_here("pathway", text)),
    }
}

/// A number of a revision; what is not one names nothing.
fn number_of(text: &str) -> Result<i64, Refusal> {
    text.parse()
        .ok()
        .filter(|number| *number >= 1)
        .ok_or_else(|| Refusal::not_here("revision", text))
}

/// The revision that a write follows.
async fn expected(app: &App, id: Uuid, if_match: &IfMatch) -> Result<Expected, Refusal> {
    match if_match.hashes()? {
        None => Ok(Expected::Any),
        Some(hashes) => match &hashes[..] {
            [one] => Ok(Expected::Hash(one.clone())),
            many => {
                let current = read(app, id).await?.hash;
                // The write itself compares again; a tag that nothing has makes it stale.
                Ok(Expected::Hash(if many.contains(&current) {
                    current
                } else {
                    String::new()
                }))
            }
        },
    }
}

/// 404 before 428: a write to what is not there has nothing to match.
async fn must_be_there(app: &App, id: Uuid, if_match: &IfMatch) -> Result<(), Refusal> {
    match if_match.hashes() {
        Ok(_) => Ok(()),
        Err(refusal) => Err(refusal.current(etag(&read(app, id).await?.hash))),
    }
}

fn saved(status: StatusCode, saved: Saved) -> Response {
    let tag = [(ETAG, etag(&saved.hash))];
    let location = HeaderValue::try_from(format!("/api/v1/pathways/{}", saved.id));
    let mut response = (status, tag, Json(saved)).into_response();
    if let (StatusCode::CREATED, Ok(location)) = (status, location) {
        response.headers_mut().insert(LOCATION, location);
    }
    response
}
