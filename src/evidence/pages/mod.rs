//! Pages of evidence: the list with a form to attach a file, and one record with what it backs.

mod list;
mod show;
#[cfg(test)]
mod tests;

pub use list::ListEvidence;
pub use show::ShowEvidence;

use super::{EvidenceError, api, attach, receive};
use crate::app::App;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::answers::{page, see_other, with_status};
use crate::web::extract::{NoQuery, Path, Query};
use crate::web::links;
use crate::web::multipart::Multipart;
use axum::Router;
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use axum::routing::get;
use list::Asked;
use serde::Deserialize;

/// Entries on a page.
const ON_A_PAGE: u32 = 100;

/// The routes of this folder.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/evidence", get(show_list).post(take_in))
        .route("/evidence/{id}", get(show_one))
        .route("/evidence/{id}/file", get(api::read_evidence_file))
}

/// Which page of the list.
#[derive(Debug, Default, Deserialize)]
#[serde(default)]
struct ListQuery {
    after: Option<String>,
}

async fn show_list(
    Actor { app, .. }: Actor<CanRead>,
    Query(query): Query<ListQuery>,
) -> Result<Response, Refusal> {
    page(&listed(&app, query.after.as_deref(), Asked::default()).await?)
}

async fn listed(app: &App, after: Option<&str>, asked: Asked) -> Result<ListEvidence, Refusal> {
    let found = match super::list(app, after, ON_A_PAGE).await {
        // A place that is gone: from the beginning.
        Err(EvidenceError::NotFound) => super::list(app, None, ON_A_PAGE).await?,
        other => other?,
    };
    Ok(ListEvidence::of(&found, asked))
}

/// A file attached on the page of the list.
async fn take_in(
    Actor { app, .. }: Actor<CanWrite>,
    _: NoQuery,
    mut parts: Multipart,
) -> Result<Response, Response> {
    let taken = match receive::whole(&app, &mut parts).await {
        Ok((arrived, naming)) => {
            let asked = Asked {
                id: naming.id.clone().unwrap_or_default(),
                note: naming.note.clone().unwrap_or_default(),
                ..Asked::default()
            };
            match attach(&app, arrived, naming).await {
                Ok(attached) => Ok(attached.record),
                Err(error) => Err((Refusal::from(error), asked)),
            }
        }
        Err(refusal) => Err((refusal, Asked::default())),
    };
    let (refusal, mut asked) = match taken {
        Ok(record) => return Ok(see_other(&links::evidence(&record.id))),
        Err(refused) => refused,
    };
    asked.wrong = match refusal.status() {
        StatusCode::UNPROCESSABLE_ENTITY | StatusCode::PAYLOAD_TOO_LARGE => refusal
            .errors()
            .iter()
            .map(|error| format!("{} {}", error.detail, error.remedy))
            .collect(),
        StatusCode::CONFLICT => vec![refusal.words().to_owned()],
        _ => return Err(refusal.into_response()),
    };
    let shown = listed(&app, None, asked)
        .await
        .map_err(IntoResponse::into_response)?;
    with_status(refusal.status(), &shown).map_err(IntoResponse::into_response)
}

async fn show_one(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Response, Refusal> {
    let record = super::read(&app, &id).await?;
    let uses = super::uses(&app, &id).await?;
    page(&ShowEvidence::of(&record, &uses))
}
