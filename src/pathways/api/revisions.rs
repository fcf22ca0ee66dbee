//! The history of a pathway: its revisions, each with its document and what it changed.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::super::{Change, Revision, changes, revision, revisions};
use super::stored::{PageQuestion, numbered};
use super::{id_of, number_of};
use crate::app::App;
use crate::core::documents::pathway::Pathway;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::conditional::IfNoneMatch;
use crate::web::extract::{NoQuery, Path, Query};
use crate::web::paging::{self, Page};
use axum::Json;
use axum::extract::OriginalUri;
use axum::response::Response;
use serde::Serialize;
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(list_revisions))
        .routes(routes!(read_revision))
        .routes(routes!(read_changes))
}

/// What a revision changed in the one before it.
#[derive(Clone, Debug, Serialize, ToSchema)]
struct Changes {
    /// Number of the revision.
    revision: i64,
    /// Number of the one before it; null for the first, in which everything is added.
    since: Option<i64>,
    /// Every difference.
    changes: Vec<Change>,
}

/// Revisions of a pathway
///
/// Newest first.
#[utoipa::path(get, path = "/pathways/{id}/revisions", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), PageQuestion),
    responses((status = 200, description = "A page of revisions.", body = Page<Revision>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn list_revisions(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let limit = paging::limit(ask.limit)? as usize;
    let before = match ask.after.as_deref() {
        None => i64::MAX,
        Some(after) => after.parse::<i64>().map_err(|_| {
            Refusal::bad_request("\"after\" is not a place in this list. Take it from the page before.")
        })?,
    };
    let all = revisions(&app, id_of(&id)?).await?;
    let mut items: Vec<Revision> = all
        .into_iter()
        .filter(|revision| revision.number < before)
        .take(limit + 1)
        .collect();
    let more = items.len() > limit;
    items.truncate(limit);
    let next = items.last().filter(|_| more).map(|last| last.number.to_string());
    Ok(Page { items, next }.answer(&uri))
}

/// A revision of a pathway
///
/// Its document, byte for byte as it is hashed. A revision never changes.
#[utoipa::path(get, path = "/pathways/{id}/revisions/{number}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("number" = i64, Path, minimum = 1, description = "Number of the revision."),
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The document.", body = Pathway,
            headers(("ETag" = String, description = "The revision."), ("Wheelwort-Revision" = i64, description = "Its number."))),
        (status = 304, description = "You have it.")))]
async fn read_revision(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, number)): Path<(String, String)>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let found = revision(&app, id_of(&id)?, number_of(&number)?).await?;
    Ok(numbered(
        seen.json(&found.hash, found.document.to_vec()),
        found.revision,
    ))
}

/// What a revision changed
///
/// Against the revision before it. Stages, inputs and co-products are followed by their keys.
#[utoipa::path(get, path = "/pathways/{id}/revisions/{number}/changes", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("number" = i64, Path, minimum = 1, description = "Number of the revision.")),
    responses((status = 200, description = "Every difference.", body = Changes)))]
async fn read_changes(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, number)): Path<(String, String)>,
    _: NoQuery,
) -> Result<Json<Changes>, Refusal> {
    let number = number_of(&number)?;
    let changes = changes(&app, id_of(&id)?, number).await?;
    Ok(Json(Changes {
        revision: number,
        since: (number > 1).then(|| number - 1),
        changes,
    }))
}
