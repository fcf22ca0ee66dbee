//! Defaults beside actuals of a stored pathway.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::super::defaults;
use super::evaluate::RuleSetQuestion;
use super::id_of;
use super::stored::{known_rule_set, numbered};
use crate::app::App;
use crate::core::levers::defaults::DefaultsTable;
use crate::rules::basis;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{Path, Query};
use axum::Json;
use axum::response::{IntoResponse, Response};
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The route of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(read_defaults))
}

/// Defaults beside actuals
///
/// The published default of each term beside the own figure of the current revision, every way to put them together, and the
/// best that the law allows.
#[utoipa::path(get, path = "/pathways/{id}/defaults", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), RuleSetQuestion),
    responses((status = 200, description = "The table.", body = DefaultsTable,
            headers(("Wheelwort-Revision" = i64, description = "Number of the revision."))),
        (status = 422, description = "The document does not hold under that rule set, or not without its defaults: `errors` names everything.",
            body = crate::web::problem::ProblemDocument, content_type = "application/problem+json")))]
async fn read_defaults(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    Query(ask): Query<RuleSetQuestion>,
) -> Result<Response, Refusal> {
    known_rule_set(&basis(&app).await?.book, ask.rule_set.as_deref())?;
    let found = defaults(&app, id_of(&id)?, ask.rule_set.as_deref()).await?;
    Ok(numbered(Json(found.table).into_response(), found.revision))
}
