//! Stored pathways: list, create, read, replace, archive, assess; and who uses a published row.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::super::{
    FactorUse, Line, Question, Saved, Sort, archive, assessment, create, list, read, replace, uses_of_factor,
};
use super::{Reason, expected, id_of, must_be_there, saved};
use crate::app::App;
use crate::core::documents::assessment::Assessment;
use crate::core::documents::pathway::Pathway;
use crate::core::domain::Book;
use crate::rules::basis;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfMatch, IfNoneMatch};
use crate::web::extract::{JsonBody, NoQuery, Path, Query};
use crate::web::paging::{self, Page};
use axum::extract::OriginalUri;
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use utoipa::IntoParams;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(list_pathways))
        .routes(routes!(create_pathway))
        .routes(routes!(read_pathway))
        .routes(routes!(replace_pathway))
        .routes(routes!(archive_pathway))
        .routes(routes!(read_assessment))
        .routes(routes!(factor_uses))
}

/// Which pathways, in which order.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct ListQuestion {
    /// Part of the name, in any case.
    name: Option<String>,
    /// Material id of the feedstock.
    feedstock: Option<String>,
    /// Id of the rule set.
    rule_set: Option<String>,
    /// Demonstration data only, or none of it.
    example: Option<bool>,
    /// Archived pathways instead of the others.
    #[serde(default)]
    #[param(required = false)]
    archived: bool,
    /// In which order: `updated` (last first), `name`, `net` (smallest first), `saving` (largest first).
    #[serde(default)]
    #[param(required = false, inline)]
    sort: Sort,
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    limit: Option<u32>,
    /// `next` of the page before, in the same order.
    after: Option<String>,
}

/// Pathways
///
/// Each with its assessment in short.
#[utoipa::path(get, path = "/pathways", tag = "pathways", params(ListQuestion),
    responses((status = 200, description = "A page of pathways.", body = Page<Line>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn list_pathways(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<ListQuestion>,
) -> Result<Response, Refusal> {
    let ListQuestion {
        name,
        feedstock,
        rule_set,
        example,
        archived,
        sort,
        limit,
        after,
    } = ask;
    let limit = Some(paging::limit(limit)?);
    let question = Question {
        name,
        feedstock,
        rule_set,
        example,
        archived,
        sort,
        after,
        limit,
    };
    let page = list(&app, &question).await.map_err(|error| match error {
        // A place in a list is no document: the query is wrong.
        super::super::PathwayError::Problems(problems) => Refusal::bad_request(
            problems
                .list()
                .first()
                .map_or_else(String::new, |p| format!("{} {}", p.detail, p.remedy)),
        ),
        other => other.into(),
    })?;
    Ok(Page {
        items: page.lines,
        next: page.next,
    }
    .answer(&uri))
}

/// Store a pathway
///
/// The document is evaluated first: either all of it holds and is stored with its assessment, or nothing is.
#[utoipa::path(post, path = "/pathways", tag = "pathways", params(Reason),
    request_body(content = Pathway, content_type = "application/json"),
    responses((status = 201, description = "Stored.", body = Saved,
        headers(("Location" = String, description = "Address of the pathway."), ("ETag" = String, description = "Its revision.")))))]
async fn create_pathway(
    Actor { app, .. }: Actor<CanWrite>,
    Query(reason): Query<Reason>,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let document = Pathway::from_value(&body).map_err(Refusal::invalid)?;
    Ok(saved(
        StatusCode::CREATED,
        create(&app, document, reason.checked()?).await?,
    ))
}

/// A pathway
///
/// The document of its current revision, byte for byte as it is hashed (RFC 8785). Archived ones can be read too.
#[utoipa::path(get, path = "/pathways/{id}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The document.", body = Pathway,
            headers(("ETag" = String, description = "The revision."), ("Wheelwort-Revision" = i64, description = "Its number."))),
        (status = 304, description = "You have it.")))]
async fn read_pathway(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let found = read(&app, id_of(&id)?).await?;
    Ok(numbered(
        seen.json(&found.hash, found.document.to_vec()),
        found.revision,
    ))
}

pub(super) fn numbered(mut response: Response, revision: i64) -> Response {
    response
        .headers_mut()
        .insert("wheelwort-revision", HeaderValue::from(revision));
    response
}

/// Replace a pathway
///
/// Saves the document as the next revision. The current document, saved again, makes none.
#[utoipa::path(put, path = "/pathways/{id}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the revision you read, or `*`."), Reason),
    request_body(content = Pathway, content_type = "application/json"),
    responses((status = 200, description = "Saved.", body = Saved, headers(("ETag" = String, description = "The revision.")))))]
async fn replace_pathway(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Query(reason): Query<Reason>,
    if_match: IfMatch,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    must_be_there(&app, id, &if_match).await?;
    let document = Pathway::from_value(&body).map_err(Refusal::invalid)?;
    let expected = expected(&app, id, &if_match).await?;
    Ok(saved(
        StatusCode::OK,
        replace(&app, id, document, expected, reason.checked()?).await?,
    ))
}

/// Archive a pathway
///
/// Hides it from lists. Nothing is removed: it can still be read, with all its revisions.
#[utoipa::path(delete, path = "/pathways/{id}", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."),
        ("If-Match" = String, Header, pattern = r#"^(\*|"[0-9a-f]{64}")$"#, description = "The `ETag` of the revision you read, or `*`.")),
    responses((status = 204, description = "Archived.")))]
async fn archive_pathway(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    _: NoQuery,
    if_match: IfMatch,
) -> Result<StatusCode, Refusal> {
    let id = id_of(&id)?;
    must_be_there(&app, id, &if_match).await?;
    archive(&app, id, expected(&app, id, &if_match).await?).await?;
    Ok(StatusCode::NO_CONTENT)
}

/// Which assessment.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct AssessmentQuestion {
    /// Id of another rule set than the document's.
    rule_set: Option<String>,
    /// Number of another revision than the current one.
    #[param(minimum = 1)]
    revision: Option<i64>,
}

/// An unknown rule set is a wrong query, not a wrong document.
pub(super) fn known_rule_set(book: &Book, asked: Option<&str>) -> Result<(), Refusal> {
    match asked {
        Some(asked) if !book.rule_sets.contains_key(asked) => {
            let known: Vec<&str> = book.rule_sets.keys().map(String::as_str).collect();
            let asked = crate::web::problem::shown(asked);
            Err(Refusal::bad_request(format!(
                "There is no rule set \"{asked}\". Choose one of: {}.",
                known.join(", ")
            )))
        }
        _ => Ok(()),
    }
}

/// The assessment of a pathway
///
/// The same revision, rule set and program always give the same bytes.
#[utoipa::path(get, path = "/pathways/{id}/assessment", tag = "pathways",
    params(("id" = Uuid, Path, description = "Id of the pathway."), AssessmentQuestion,
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The assessment.", body = Assessment,
            headers(("ETag" = String, description = "Hash of the bytes."), ("Wheelwort-Revision" = i64, description = "Number of the revision."))),
        (status = 304, description = "You have it."),
        (status = 422, description = "The document does not hold under that rule set: `errors` names everything.",
            body = crate::web::problem::ProblemDocument, content_type = "application/problem+json")))]
async fn read_assessment(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    Query(ask): Query<AssessmentQuestion>,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    known_rule_set(&basis(&app).await?.book, ask.rule_set.as_deref())?;
    let found = assessment(&app, id_of(&id)?, ask.revision, ask.rule_set.as_deref()).await?;
    Ok(numbered(
        seen.json(&found.hash, axum::body::Bytes::from_owner(found.bytes)),
        found.revision,
    ))
}

/// Which page of a list.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
pub(super) struct PageQuestion {
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    pub(super) limit: Option<u32>,
    /// `next` of the page before.
    pub(super) after: Option<String>,
}

/// Who uses a published row
///
/// Every place where the current revision of a pathway names the factor, vehicle or default value; archived pathways too.
#[utoipa::path(get, path = "/factors/{edition}/{row}/uses", tag = "published data",
    params(("edition" = String, Path, description = "Id of the edition."), ("row" = String, Path, description = "Id of the row."), PageQuestion),
    responses((status = 200, description = "The places, by name of the pathway.", body = Page<FactorUse>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn factor_uses(
    Actor { app, .. }: Actor<CanRead>,
    Path((edition, row)): Path<(String, String)>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let id = format!("{edition}/{row}");
    if app.library.factor(&id).is_none() && app.library.pathway_default(&id).is_none() {
        return Err(Refusal::not_here("factor", &id));
    }
    let limit = paging::limit(ask.limit)? as usize;
    let from = match ask.after.as_deref() {
        None => 0,
        Some(after) => after.parse::<usize>().map_err(|_| {
            Refusal::bad_request("\"after\" is not a place in this list. Take it from the page before.")
        })?,
    };
    let all = uses_of_factor(&app, &id).await?;
    let end = from.saturating_add(limit);
    let next = (end < all.len()).then(|| end.to_string());
    let items: Vec<FactorUse> = all.into_iter().skip(from).take(limit).collect();
    Ok(Page { items, next }.answer(&uri).into_response())
}
