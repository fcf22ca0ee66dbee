//! The API of written reasons for warnings.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::super::{Expected, Reasons, ReasonsDocument, put_reasons, reasons};
use super::id_of;
use crate::app::App;
use crate::core::checks::reasons::Reason;
use crate::core::documents::Problems;
use crate::core::documents::reader::{Place, object, whole};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfMatch, etag};
use crate::web::extract::{JsonBody, NoQuery, Path};
use axum::Json;
use axum::http::header::ETAG;
use axum::response::{IntoResponse, Response};
use serde_json::Value;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(read_reasons, replace_reasons))
}

/// Reasons for warnings
///
/// The written reasons of a pathway, those that nothing wants any more, and the warnings that still want one.
#[utoipa::path(get, path = "/pathways/{id}/reasons", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway.")),
    responses((status = 200, description = "The reasons.", body = Reasons,
        headers(("ETag" = String, description = "The list of reasons.")))))]
async fn read_reasons(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Response, Refusal> {
    Ok(answer(reasons(&app, id_of(&id)?).await?))
}

/// Replace the reasons for warnings
///
/// The whole list. They stand in the findings of every assessment of the pathway that is read from here. The service notes
/// when each was given.
#[utoipa::path(put, path = "/pathways/{id}/reasons", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the reasons you read, or `*`.")),
    request_body(content = ReasonsDocument, content_type = "application/json"),
    responses((status = 200, description = "Saved.", body = Reasons, headers(("ETag" = String, description = "The list of reasons.")))))]
async fn replace_reasons(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    _: NoQuery,
    if_match: IfMatch,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    let seen = match if_match.hashes() {
        Ok(seen) => seen,
        Err(refusal) => return Err(refusal.current(etag(&reasons(&app, id).await?.hash))),
    };
    let expected = match seen.as_deref() {
        None => Expected::Any,
        Some([one]) => Expected::Hash(one.clone()),
        Some(many) => {
            let current = reasons(&app, id).await?.hash;
            Expected::Hash(if many.contains(&current) {
                current
            } else {
                String::new()
            })
        }
    };
    let document = read(&body).map_err(Refusal::invalid)?;
    let saved = put_reasons(&app, id, document, expected).await;
    saved.map(answer).map_err(|error| match error {
        super::super::PathwayError::Conflict { hash, .. } => {
            Refusal::of(axum::http::StatusCode::PRECONDITION_FAILED)
                .detail("Somebody saved other reasons. Read them, decide, and send their ETag in If-Match.")
                .current(etag(&hash))
        }
        other => other.into(),
    })
}

fn answer(reasons: Reasons) -> Response {
    ([(ETAG, etag(&reasons.hash))], Json(reasons)).into_response()
}

/// Reads a list of reasons.
fn read(body: &Value) -> Result<ReasonsDocument, Problems> {
    whole(body, |fields, at, problems| {
        fields.need("reasons", at, problems);
        let reasons = fields.list("reasons", at, problems, reason);
        Some(ReasonsDocument { reasons })
    })
}

fn reason(value: &Value, at: &Place, problems: &mut Problems) -> Option<Reason> {
    object(value, at, problems, |fields, at, problems| {
        let id = fields.required_text("id", at, problems);
        let stage = fields.text("stage", at, problems).unwrap_or_default();
        let field = fields.text("field", at, problems).unwrap_or_default();
        let text = fields.required_text("text", at, problems);
        let who = fields.text("who", at, problems);
        let when = fields.text("when", at, problems);
        let time = when.as_deref().and_then(|when| when.parse().ok());
        if when.is_some() && time.is_none() {
            problems.add(
                at.field("when"),
                "This is not a time.",
                "Leave it out, or send it as it was read.",
            );
        }
        Some(Reason {
            id: id?,
            stage,
            field,
            text: text?,
            who,
            when: time,
        })
    })
}
