//! One stage of a pathway: read, put, delete. Each write makes a revision of the whole.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::super::{Saved, delete_stage, put_stage, stage};
use super::{Reason, expected, id_of, must_be_there, saved};
use crate::app::App;
use crate::core::documents::canonical;
use crate::core::documents::pathway::Stage;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfMatch, IfNoneMatch};
use crate::web::extract::{JsonBody, NoQuery, Path, Query};
use axum::http::StatusCode;
use axum::response::Response;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(read_stage))
        .routes(routes!(put_one))
        .routes(routes!(delete_one))
}

/// A stage
///
/// Its `ETag` is that of the whole pathway: send it with a write of any stage.
#[utoipa::path(get, path = "/pathways/{id}/stages/{key}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), ("key" = String, Path, pattern = "^[a-z][a-z0-9-]{0,39}$", description = "Key of the stage."),
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The stage.", body = Stage, headers(("ETag" = String, description = "The revision."))),
        (status = 304, description = "You have it.")))]
async fn read_stage(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, key)): Path<(String, String)>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let (stage, hash) = stage(&app, id_of(&id)?, &key).await?;
    let bytes = canonical::bytes(&stage).map_err(|error| {
        tracing::error!(%error, "a stage could not be written");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })?;
    Ok(seen.json(&hash, bytes))
}

/// Put a stage
///
/// In its place, or after the last one where the pathway has none of that key.
#[utoipa::path(put, path = "/pathways/{id}/stages/{key}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), ("key" = String, Path, pattern = "^[a-z][a-z0-9-]{0,39}$", description = "Key of the stage."),
        ("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the revision you read, or `*`."), Reason),
    request_body(content = Stage, content_type = "application/json"),
    responses((status = 200, description = "Saved.", body = Saved, headers(("ETag" = String, description = "The revision.")))))]
async fn put_one(
    Actor { app, .. }: Actor<CanWrite>,
    Path((id, key)): Path<(String, String)>,
    Query(reason): Query<Reason>,
    if_match: IfMatch,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    must_be_there(&app, id, &if_match).await?;
    let stage = Stage::from_value(&body).map_err(Refusal::invalid)?;
    let expected = expected(&app, id, &if_match).await?;
    Ok(saved(
        StatusCode::OK,
        put_stage(&app, id, &key, stage, expected, reason.checked()?).await?,
    ))
}

/// Delete a stage
///
/// A pathway that needs it is refused with everything that would then be wrong.
#[utoipa::path(delete, path = "/pathways/{id}/stages/{key}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), ("key" = String, Path, pattern = "^[a-z][a-z0-9-]{0,39}$", description = "Key of the stage."),
        ("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the revision you read, or `*`."), Reason),
    responses((status = 200, description = "Saved without it.", body = Saved, headers(("ETag" = String, description = "The revision.")))))]
async fn delete_one(
    Actor { app, .. }: Actor<CanWrite>,
    Path((id, key)): Path<(String, String)>,
    Query(reason): Query<Reason>,
    if_match: IfMatch,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    must_be_there(&app, id, &if_match).await?;
    let expected = expected(&app, id, &if_match).await?;
    Ok(saved(
        StatusCode::OK,
        delete_stage(&app, id, &key, expected, reason.checked()?).await?,
    ))
}
