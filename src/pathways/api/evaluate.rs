//! Evaluation without storing: one document in, its assessment out.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::stored::known_rule_set;
use crate::app::{App, Basis};
use crate::core::documents::{Assessment, Pathway, canonical};
use crate::rules::basis;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{JsonBody, Query};
use crate::web::{Refusal, blocking};
use axum::http::StatusCode;
use axum::http::header::CONTENT_TYPE;
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use serde_json::Value;
use utoipa::IntoParams;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The route of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(evaluate))
}

/// Under which rule set.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
pub(super) struct RuleSetQuestion {
    /// Id of another rule set than the document's.
    pub(super) rule_set: Option<String>,
}

/// Evaluate a pathway
///
/// Stores nothing.
#[utoipa::path(post, path = "/evaluate", tag = "evaluation", params(RuleSetQuestion),
    request_body(content = Pathway, content_type = "application/json"),
    responses((status = 200, description = "The assessment.", body = Assessment)))]
async fn evaluate(
    Actor { app, .. }: Actor<CanRead>,
    Query(ask): Query<RuleSetQuestion>,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    known_rule_set(&basis.book, ask.rule_set.as_deref())?;
    let bytes = blocking::run(move || assessed(&app, &basis, &body, ask.rule_set.as_deref())).await??;
    Ok(([(CONTENT_TYPE, "application/json")], bytes).into_response())
}

/// The canonical bytes of the assessment of a document.
///
/// # Errors
/// 422 with everything that is wrong with it.
pub(super) fn assessed(
    app: &App,
    basis: &Basis,
    body: &Value,
    rule_set: Option<&str>,
) -> Result<Vec<u8>, Refusal> {
    let pathway = Pathway::from_value(body).map_err(Refusal::invalid)?;
    let options = basis.options(rule_set);
    let assessment = app
        .evaluates(&pathway, &basis.book, options)
        .map_err(Refusal::invalid)?;
    canonical::bytes(&assessment).map_err(|error| {
        tracing::error!(%error, "an assessment could not be written");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })
}
