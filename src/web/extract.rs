//! Reads paths, queries, forms and JSON bodies strictly; whatever is wrong becomes a [`Refusal`] instead of plain text.

use super::blocking;
use super::problem::{Refusal, shown};
use crate::core::documents::json;
use axum::RequestPartsExt;
use axum::body::Bytes;
use axum::extract::rejection::{FormRejection, PathRejection};
use axum::extract::{FromRequest, FromRequestParts, Request};
use axum::http::header::{CONTENT_LENGTH, CONTENT_TYPE, EXPECT};
use axum::http::request::Parts;
use axum::http::{HeaderMap, StatusCode};
use serde::de::DeserializeOwned;
use serde_json::Value;
use std::time::Duration;
use tokio_stream::StreamExt;

/// A body of more bytes than this is read on a thread of its own.
const LARGE: usize = 256 << 10;

/// What a request may take. Put on every request by a layer.
#[derive(Clone, Copy, Debug)]
pub struct Limits {
    /// Bytes of a body, and of one line of a batch.
    pub body_bytes: usize,
    /// Lines of a batch.
    pub batch_lines: usize,
    /// Bytes of a file of evidence.
    pub evidence_bytes: usize,
    /// A body must go on arriving: at most this long between two pieces of it.
    pub body_pause: Duration,
}

impl Default for Limits {
    fn default() -> Limits {
        Limits {
            body_bytes: 4 << 20,
            batch_lines: 100_000,
            evidence_bytes: 25_000_000,
            body_pause: Duration::from_secs(15),
        }
    }
}

impl Limits {
    /// The limits of a request; the default ones where no layer set any.
    pub fn of(parts: &axum::http::Extensions) -> Limits {
        parts.get::<Limits>().copied().unwrap_or_default()
    }
}

/// The parameters of a path.
#[derive(Clone, Copy, Debug)]
pub struct Path<T>(pub T);

impl<T: DeserializeOwned + Send + 'static, S: Send + Sync> FromRequestParts<S> for Path<T> {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, _: &S) -> Result<Path<T>, Refusal> {
        match parts.extract::<axum::extract::Path<T>>().await {
            Ok(axum::extract::Path(value)) => Ok(Path(value)),
            // A part that is not of its kind (a word where a number belongs) names nothing.
            Err(PathRejection::FailedToDeserializePathParams(error))
                if error.status() == StatusCode::BAD_REQUEST && !error.body_text().contains("UTF-8") =>
            {
                Err(Refusal::of(StatusCode::NOT_FOUND))
            }
            Err(error) if error.status().is_client_error() => Err(Refusal::bad_request(
                "The address holds bytes that are not UTF-8.",
            )),
            Err(_) => Err(Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)),
        }
    }
}

/// The query of an address. Its type says `deny_unknown_fields`, so that a slip is told and not ignored.
#[derive(Clone, Copy, Debug)]
pub struct Query<T>(pub T);

impl<T: DeserializeOwned, S: Send + Sync> FromRequestParts<S> for Query<T> {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, _: &S) -> Result<Query<T>, Refusal> {
        match axum::extract::Query::<T>::try_from_uri(&parts.uri) {
            Ok(axum::extract::Query(value)) => Ok(Query(value)),
            Err(error) => {
                use std::error::Error;
                let cause = error
                    .source()
                    .map_or_else(|| error.to_string(), ToString::to_string);
                Err(Refusal::bad_request(format!(
                    "The query is wrong: {}.",
                    shown(&cause)
                )))
            }
        }
    }
}

/// The address takes no query.
#[derive(Clone, Copy, Debug)]
pub struct NoQuery;

impl<S: Send + Sync> FromRequestParts<S> for NoQuery {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, _: &S) -> Result<NoQuery, Refusal> {
        match parts.uri.query().filter(|query| !query.is_empty()) {
            None => Ok(NoQuery),
            Some(query) => {
                let name = query.split(['=', '&']).next().unwrap_or(query);
                Err(Refusal::bad_request(format!(
                    "This address takes no query parameter \"{}\".",
                    shown(name)
                )))
            }
        }
    }
}

/// The fields of a posted form.
#[derive(Clone, Copy, Debug)]
pub struct Form<T>(pub T);

impl<T: DeserializeOwned, S: Send + Sync> FromRequest<S> for Form<T> {
    type Rejection = Refusal;

    async fn from_request(request: Request, state: &S) -> Result<Form<T>, Refusal> {
        match axum::extract::Form::<T>::from_request(request, state).await {
            Ok(axum::extract::Form(value)) => Ok(Form(value)),
            Err(FormRejection::InvalidFormContentType(_)) => {
                Err(Refusal::of(StatusCode::UNSUPPORTED_MEDIA_TYPE)
                    .detail("Send the form as application/x-www-form-urlencoded."))
            }
            Err(error) if error.status() == StatusCode::PAYLOAD_TOO_LARGE => {
                Err(Refusal::of(StatusCode::PAYLOAD_TOO_LARGE))
            }
            Err(error) => Err(Refusal::bad_request(format!(
                "The form is wrong: {}.",
                shown(&error.body_text())
            ))),
        }
    }
}

/// A JSON body, read strictly: right content type, within the limit, no duplicate keys.
#[derive(Clone, Debug)]
pub struct JsonBody(pub Value);

impl<S: Send + Sync> FromRequest<S> for JsonBody {
    type Rejection = Refusal;

    async fn from_request(request: Request, _: &S) -> Result<JsonBody, Refusal> {
        if !is_of_type(request.headers(), |kind| {
            kind == "application/json" || kind.ends_with("+json")
        }) {
            return Err(
                Refusal::of(StatusCode::UNSUPPORTED_MEDIA_TYPE).detail("Send the body as application/json.")
            );
        }
        let limits = Limits::of(request.extensions());
        let bytes = whole_body(request, &limits).await?;
        // Reading a large document takes a while, and the threads that talk to people are few.
        let read = if bytes.len() > LARGE {
            blocking::run(move || json::parse(&bytes)).await?
        } else {
            json::parse(&bytes)
        };
        read.map(JsonBody).map_err(Refusal::not_json)
    }
}

/// The body of a document that may come as JSON or as TOML, by its content type.
#[derive(Clone, Debug)]
pub enum JsonOrToml {
    /// Read strictly, as [`JsonBody`].
    Json(Value),
    /// The text; whoever knows the document reads it.
    Toml(String),
}

impl<S: Send + Sync> FromRequest<S> for JsonOrToml {
    type Rejection = Refusal;

    async fn from_request(request: Request, state: &S) -> Result<JsonOrToml, Refusal> {
        if !is_of_type(request.headers(), |kind| kind == "application/toml") {
            let JsonBody(value) =
                JsonBody::from_request(request, state)
                    .await
                    .map_err(|refusal| match refusal.status() {
                        StatusCode::UNSUPPORTED_MEDIA_TYPE => {
                            refusal.detail("Send the body as application/json or application/toml.")
                        }
                        _ => refusal,
                    })?;
            return Ok(JsonOrToml::Json(value));
        }
        let limits = Limits::of(request.extensions());
        let bytes = whole_body(request, &limits).await?;
        match String::from_utf8(bytes.to_vec()) {
            Ok(text) => Ok(JsonOrToml::Toml(text)),
            Err(_) => Err(Refusal::bad_request("The body holds bytes that are not UTF-8.")),
        }
    }
}

/// True if the content type, without its parameters, is what `wanted` asks for.
pub fn is_of_type(headers: &HeaderMap, wanted: impl Fn(&str) -> bool) -> bool {
    headers
        .get(CONTENT_TYPE)
        .and_then(|kind| kind.to_str().ok())
        .and_then(|kind| kind.split(';').next())
        .is_some_and(|kind| wanted(&kind.trim().to_ascii_lowercase()))
}

/// The whole body of a request, up to the limit.
///
/// # Errors
/// 413 beyond the limit, 408 when it stops arriving, 400 when it breaks off.
pub async fn whole_body(request: Request, limits: &Limits) -> Result<Bytes, Refusal> {
    let told = request
        .headers()
        .get(CONTENT_LENGTH)
        .and_then(|n| n.to_str().ok())
        .and_then(|n| n.parse::<u64>().ok());
    let waits_for_leave = request.headers().contains_key(EXPECT);
    let too_large = told.is_some_and(|told| told > limits.body_bytes as u64);
    if too_large && waits_for_leave {
        return Err(refused_size(limits));
    }
    let mut pieces = request.into_body().into_data_stream();
    let told = told.and_then(|told| usize::try_from(told).ok());
    let mut bytes = Vec::with_capacity(told.unwrap_or(4_096).min(limits.body_bytes));
    let mut arrived = 0_usize;
    loop {
        let piece = next_piece(&mut pieces, limits).await?;
        let Some(piece) = piece else { break };
        arrived = arrived.saturating_add(piece.len());
        // A sender that is cut off while it sends sees a broken connection and not our answer: let it finish, within reason.
        if too_large || arrived > limits.body_bytes {
            bytes = Vec::new();
            if arrived > limits.body_bytes.saturating_mul(8) {
                break;
            }
        } else {
            bytes.extend_from_slice(&piece);
        }
    }
    if too_large || arrived > limits.body_bytes {
        Err(refused_size(limits))
    } else {
        Ok(bytes.into())
    }
}

/// The next piece of a body.
///
/// # Errors
/// 408 when nothing comes in time, 400 when the body breaks off.
pub async fn next_piece(
    pieces: &mut axum::body::BodyDataStream,
    limits: &Limits,
) -> Result<Option<Bytes>, Refusal> {
    match tokio::time::timeout(limits.body_pause, pieces.next()).await {
        Err(_) => Err(Refusal::of(StatusCode::REQUEST_TIMEOUT)),
        Ok(Some(Err(_))) => Err(Refusal::bad_request("The body broke off.")),
        Ok(Some(Ok(piece))) => Ok(Some(piece)),
        Ok(None) => Ok(None),
    }
}

fn refused_size(limits: &Limits) -> Refusal {
    let most = megabytes(limits.body_bytes);
    Refusal::too_large(
        format!("The body is larger than the {most} this service takes."),
        format!("Send less at once: at most {most} ({} bytes).", limits.body_bytes),
    )
}

/// A size in words: MB of 1 000 000 bytes, to one decimal.
pub fn megabytes(bytes: usize) -> String {
    // Whole tenths, so that no figure is rounded up beyond the limit.
    let tenths = bytes / 100_000;
    match (tenths / 10, tenths % 10) {
        (0, 0) => format!("{bytes} bytes"),
        (whole, 0) => format!("{whole} MB"),
        (whole, part) => format!("{whole}.{part} MB"),
    }
}
