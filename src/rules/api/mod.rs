//! The API of rule sets, built-in and one's own with their versions, and of the settings of the checks.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

mod documents;
mod refusals;
mod settings;

pub use documents::{RuleSetDocument, RuleSetLine};

use super::{OwnVersion, RuleSetVersion, add_version, basis, unpinned, versions};
use crate::app::App;
use crate::core::documents::{canonical, rule_set};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfNoneMatch, etag};
use crate::web::extract::{JsonOrToml, NoQuery, Path, Query};
use crate::web::links::segment;
use crate::web::paging::{self, Page, PageQuestion};
use axum::Json;
use axum::extract::OriginalUri;
use axum::http::header::{ETAG, LOCATION};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this folder.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(rule_sets))
        .routes(routes!(read_rule_set, put_rule_set))
        .routes(routes!(rule_set_versions))
        .merge(settings::routes())
}

/// Rule sets
///
/// The built-in ones and one's own, these at their newest version.
#[utoipa::path(get, path = "/rule-sets", tag = "rule sets", params(PageQuestion),
    responses((status = 200, description = "Rule sets in order of id.", body = Page<RuleSetLine>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn rule_sets(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    let all = basis
        .book
        .rule_sets
        .iter()
        .filter(|(id, _)| !id.contains('@'))
        .map(|(id, rules)| RuleSetLine::of(id, rules, app.library.rule_sets.contains_key(id)));
    Ok(Page::cut(
        all,
        |line| &line.id,
        ask.after.as_deref(),
        paging::limit(ask.limit)?,
    )
    .answer(&uri))
}

/// A rule set
///
/// Everything the engine asks of it, each figure with its source. `id@version` names a version of one of one's own.
#[utoipa::path(get, path = "/rule-sets/{id}", tag = "rule sets",
    params(("id" = String, Path, description = "Id of the rule set, or `id@version`."),
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The rule set.", body = RuleSetDocument,
            headers(("ETag" = String, description = "Hash of the bytes."))),
        (status = 304, description = "You have it.")))]
async fn read_rule_set(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let rules = unpinned(&app, &id).await?;
    let bytes = rule_set::canonical_bytes(&rules).map_err(|error| {
        tracing::error!(%error, id, "a rule set could not be written");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })?;
    Ok(seen.json(&canonical::hash(&bytes), bytes))
}

/// Add a version of a rule set of one's own
///
/// A version never changes; the newest one counts where a pathway names just the id. Built-in ids are refused. The body is
/// JSON, or TOML with the same fields under the same names.
#[utoipa::path(put, path = "/rule-sets/{id}", tag = "rule sets",
    params(("id" = String, Path, description = "Id of the rule set, as the document has it.")),
    request_body(content((RuleSetDocument = "application/json"), (String = "application/toml"))),
    responses((status = 200, description = "The same version was there already.", body = OwnVersion,
            headers(("ETag" = String, description = "Hash of the document."))),
        (status = 201, description = "Added.", body = OwnVersion,
            headers(("Location" = String, description = "Address of the version."), ("ETag" = String, description = "Hash of the document."))),
        (status = 409, description = "That version is there and says something else.", body = crate::web::problem::ProblemDocument,
            content_type = "application/problem+json")))]
async fn put_rule_set(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    _: NoQuery,
    body: JsonOrToml,
) -> Result<Response, Refusal> {
    let document = match body {
        JsonOrToml::Json(value) => value,
        JsonOrToml::Toml(text) => rule_set::value_of_toml(&text).map_err(Refusal::not_toml)?,
    };
    let saved = add_version(&app, &id, &document).await?;
    let status = if saved.added {
        StatusCode::CREATED
    } else {
        StatusCode::OK
    };
    let address = format!(
        "/api/v1/rule-sets/{}",
        segment(&format!("{}@{}", saved.id, saved.version))
    );
    let mut response = (status, [(ETAG, etag(&saved.hash))], Json(saved)).into_response();
    if let (StatusCode::CREATED, Ok(location)) = (status, HeaderValue::try_from(address)) {
        response.headers_mut().insert(LOCATION, location);
    }
    Ok(response)
}

/// Versions of a rule set
///
/// Newest first. A built-in one has one version.
#[utoipa::path(get, path = "/rule-sets/{id}/versions", tag = "rule sets",
    params(("id" = String, Path, description = "Id of the rule set."), PageQuestion),
    responses((status = 200, description = "A page of versions.", body = Page<RuleSetVersion>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn rule_set_versions(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let limit = paging::limit(ask.limit)? as usize;
    let all = versions(&app, &id).await?;
    let from = match ask.after.as_deref() {
        None => 0,
        Some(after) => all
            .iter()
            .position(|line| line.version == after)
            .map(|at| at + 1)
            .ok_or_else(|| {
                Refusal::bad_request("\"after\" is not a place in this list. Take it from the page before.")
            })?,
    };
    let more = all.len() > from + limit;
    let items: Vec<RuleSetVersion> = all.into_iter().skip(from).take(limit).collect();
    let next = items.last().filter(|_| more).map(|line| line.version.clone());
    Ok(Page { items, next }.answer(&uri))
}
