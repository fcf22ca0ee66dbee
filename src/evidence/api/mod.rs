//! The API of evidence: attach a file, list, read what backs what, fetch the bytes.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

mod refusals;

use super::{Attached, EvidenceError, Record, Use, attach, list, open, read, receive, uses};
use crate::app::App;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::conditional::{IfNoneMatch, etag};
use crate::web::extract::{NoQuery, Path, Query};
use crate::web::links::segment;
use crate::web::multipart::Multipart;
use crate::web::paging::{self, Page};
use axum::Json;
use axum::body::Body;
use axum::extract::OriginalUri;
use axum::http::header::{CONTENT_DISPOSITION, CONTENT_LENGTH, CONTENT_TYPE, ETAG, LOCATION};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use serde::{Deserialize, Serialize};
use utoipa::{IntoParams, ToSchema};
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(list_evidence))
        .routes(routes!(attach_evidence))
        .routes(routes!(read_evidence))
        .routes(routes!(read_evidence_file))
}

/// Which page of the list.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct PageQuestion {
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    limit: Option<u32>,
    /// `next` of the page before.
    after: Option<String>,
}

/// Evidence
///
/// The records with their hashes, newest first.
#[utoipa::path(get, path = "/evidence", tag = "evidence", params(PageQuestion),
    responses((status = 200, description = "A page of evidence.", body = Page<Record>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn list_evidence(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let limit = paging::limit(ask.limit)?;
    let page = list(&app, ask.after.as_deref(), limit)
        .await
        .map_err(|error| match error {
            EvidenceError::NotFound => {
                Refusal::bad_request("\"after\" is not a place in this list. Take it from the page before.")
            }
            other => other.into(),
        })?;
    Ok(Page {
        items: page.records,
        next: page.next,
    }
    .answer(&uri))
}

/// A file with what stands beside it.
#[derive(ToSchema)]
#[allow(dead_code, reason = "the body is read part by part; this only describes it")]
struct UploadForm {
    /// The file, with its name.
    #[schema(value_type = String, format = Binary, content_media_type = "application/octet-stream")]
    file: Vec<u8>,
    /// The id that documents shall name it by; left out, one is counted: `EV-0001`.
    #[schema(pattern = "^[A-Za-z0-9._-]{1,64}$")]
    id: Option<String>,
    /// What it is, in words.
    #[schema(max_length = 1000)]
    note: Option<String>,
}

/// Attach a file
///
/// Kept once under its hash, whoever attaches the same bytes again; recorded under an id that documents can name. A record
/// never changes and is never removed. With a wished id the request can be sent again: the same bytes give the record that
/// is there. The parts come in any order; at most 25 MB, unless the service says otherwise.
#[utoipa::path(post, path = "/evidence", tag = "evidence",
    request_body(content = UploadForm, content_type = "multipart/form-data"),
    responses((status = 201, description = "Attached.", body = Record,
            headers(("Location" = String, description = "Address of the record."))),
        (status = 200, description = "The same bytes stood under the wished id already.", body = Record,
            headers(("Location" = String, description = "Address of the record."))),
        (status = 409, description = "Other bytes have the wished id.", body = crate::web::problem::ProblemDocument,
            content_type = "application/problem+json")))]
async fn attach_evidence(
    Actor { app, .. }: Actor<CanWrite>,
    _: NoQuery,
    mut parts: Multipart,
) -> Result<Response, Refusal> {
    let (arrived, naming) = receive::whole(&app, &mut parts).await?;
    let Attached { record, added } = attach(&app, arrived, naming).await?;
    let address = format!("/api/v1/evidence/{}", segment(&record.id));
    let status = if added {
        StatusCode::CREATED
    } else {
        StatusCode::OK
    };
    let mut response = (status, Json(record)).into_response();
    if let Ok(location) = HeaderValue::try_from(address) {
        response.headers_mut().insert(LOCATION, location);
    }
    Ok(response)
}

/// A record with what names it.
#[derive(Serialize, ToSchema)]
struct RecordWithUses {
    #[serde(flatten)]
    record: Record,
    /// The places that name it, by name of the pathway: of each pathway the newest revision that does. At most 1000.
    uses: Vec<Use>,
}

/// A piece of evidence
///
/// Its record, and which stages and inputs of which pathways it backs.
#[utoipa::path(get, path = "/evidence/{id}", tag = "evidence",
    params(("id" = String, Path, description = "Id of the evidence.")),
    responses((status = 200, description = "The record.", body = RecordWithUses)))]
async fn read_evidence(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Json<RecordWithUses>, Refusal> {
    let record = read(&app, &id).await?;
    let uses = uses(&app, &id).await?;
    Ok(Json(RecordWithUses { record, uses }))
}

/// The file of a piece of evidence
///
/// Always as plain bytes to be kept, whatever was declared. Its hash is checked before and while it is sent.
#[utoipa::path(get, path = "/evidence/{id}/file", tag = "evidence",
    params(("id" = String, Path, description = "Id of the evidence."),
        ("If-None-Match" = Option<String>, Header, description = "The `ETag` you have.")),
    responses((status = 200, description = "The bytes.", content_type = "application/octet-stream", body = Vec<u8>,
            headers(("ETag" = String, description = "Hash of the bytes."),
                ("Content-Disposition" = String, description = "An attachment with the name of the file."))),
        (status = 304, description = "You have it."),
        (status = 409, description = "E-11: the file is gone, or not the one that was attached.",
            body = crate::web::problem::ProblemDocument, content_type = "application/problem+json")))]
pub(super) async fn read_evidence_file(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
    seen: IfNoneMatch,
) -> Result<Response, Refusal> {
    let known = read(&app, &id).await?;
    if seen.has(&known.hash) {
        return Ok((StatusCode::NOT_MODIFIED, [(ETAG, etag(&known.hash))]).into_response());
    }
    let (record, pieces) = open(&app, &id).await?;
    let mut response = Response::new(Body::from_stream(pieces));
    let headers = response.headers_mut();
    headers.insert(CONTENT_TYPE, HeaderValue::from_static("application/octet-stream"));
    headers.insert(CONTENT_LENGTH, HeaderValue::from(record.size));
    headers.insert(ETAG, etag(&record.hash));
    if let Ok(value) = HeaderValue::try_from(disposition(&record)) {
        headers.insert(CONTENT_DISPOSITION, value);
    }
    Ok(response)
}

/// `attachment` with the name of the file (RFC 6266, RFC 8187), and its id for readers that know no other letters.
fn disposition(record: &Record) -> String {
    format!(
        "attachment; filename=\"{}\"; filename*=UTF-8''{}",
        record.id,
        segment(&record.file_name)
    )
}
