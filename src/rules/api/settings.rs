//! The API of the settings of the checks.

use super::super::{InForce, put_settings, settings};
use crate::app::App;
use crate::core::checks::settings::Settings;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfMatch, IfNoneMatch, etag};
use crate::web::extract::{JsonBody, NoQuery};
use axum::http::HeaderValue;
use axum::http::header::{CONTENT_TYPE, ETAG};
use axum::response::{IntoResponse, Response};
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(read_settings, replace_settings))
}

/// Settings of the checks
///
/// Tolerances and usual ranges that no source fixes: those of the organisation, else the standard ones.
#[utoipa::path(get, path = "/settings", tag = "settings",
    params(("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The settings in force.", body = Settings,
            headers(("ETag" = String, description = "The settings."))),
        (status = 304, description = "You have them.")))]
async fn read_settings(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let InForce { hash, bytes, .. } = settings(&app).await?;
    Ok(seen.json(&hash, bytes))
}

/// Replace the settings of the checks
///
/// What the document leaves out is at its standard. Every assessment is made again under them when it is next asked for.
#[utoipa::path(put, path = "/settings", tag = "settings",
    params(("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the settings you read, or `*`.")),
    request_body(content = Settings, content_type = "application/json"),
    responses((status = 200, description = "In force.", body = Settings, headers(("ETag" = String, description = "The settings.")))))]
async fn replace_settings(
    Actor { app, .. }: Actor<CanWrite>,
    _: NoQuery,
    if_match: IfMatch,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let seen = match if_match.hashes() {
        Ok(seen) => seen,
        Err(refusal) => return Err(refusal.current(etag(&settings(&app).await?.hash))),
    };
    let InForce { hash, bytes, .. } = put_settings(&app, &body, seen).await?;
    let kind = [(CONTENT_TYPE, HeaderValue::from_static("application/json"))];
    Ok(([(ETAG, etag(&hash))], kind, bytes).into_response())
}
