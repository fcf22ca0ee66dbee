//! `Idempotency-Key`: a request that changes something is done once, however often it is sent. The layer claims the key,
//! lets the handler work on a task of its own (so that a client that hangs up finds its answer later), keeps the answer,
//! and repeats it. What the store does for it, and the one window that is left: `store::idempotency`.

use super::actor::Asking;
use super::extract::{Limits, whole_body};
use super::problem::Refusal;
use crate::app::App;
use crate::core::documents::canonical;
use crate::store::{Claimed, KEPT_HOURS, KeptAnswer, Request as Known};
use axum::body::{Body, Bytes, to_bytes};
use axum::extract::{Request, State};
use axum::http::header::{CONTENT_TYPE, ETAG, LOCATION, RETRY_AFTER};
use axum::http::{HeaderMap, HeaderName, HeaderValue, Method, StatusCode};
use axum::middleware::Next;
use axum::response::{IntoResponse, Response};
use std::collections::BTreeMap;
use tracing::Instrument;

/// The header with the key.
pub const IDEMPOTENCY_KEY: HeaderName = HeaderName::from_static("idempotency-key");
/// Says that an answer is a repeated one.
pub const REPLAYED: HeaderName = HeaderName::from_static("idempotency-replayed");

/// Longest key.
const LONGEST: usize = 255;
/// Longest body of an answer that is kept.
const LONGEST_BODY: usize = 1 << 20;
/// Headers of an answer that are repeated.
static REPEATED: [HeaderName; 4] = [
    CONTENT_TYPE,
    ETAG,
    LOCATION,
    HeaderName::from_static("wheelwort-revision"),
];

/// Addresses whose POST changes nothing or is the same however often it is done: the key is left alone there.
const NEEDS_NO_KEY: [&str; 8] = [
    "/api/v1/evaluate",
    "/api/v1/compare",
    "/api/v1/blend",
    "/api/v1/per-km",
    "/api/v1/calculators",
    // Files are kept by their hash: one that is sent twice is stored once.
    "/api/v1/evidence",
    // Their answers hold a password or a token, which nothing keeps; one that got lost is made anew.
    "/api/v1/people",
    "/api/v1/tokens",
];

/// True if a POST to the address honours the key.
pub fn honoured(path: &str) -> bool {
    path.starts_with("/api/")
        && !NEEDS_NO_KEY.iter().any(|free| {
            path.strip_prefix(free)
                .is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
        })
}

/// The layer. Stands inside the one that knows who asks.
pub async fn layer(State(app): State<App>, request: Request, next: Next) -> Response {
    let key = match key(request.headers()) {
        Ok(Some(key)) if request.method() == Method::POST && honoured(request.uri().path()) => key,
        Ok(_) => return next.run(request).await,
        Err(refusal) if request.method() == Method::POST => return refusal.into_response(),
        Err(_) => return next.run(request).await,
    };
    // Strangers are refused by the handler; nothing is kept for them.
    let Some(asking) = request.extensions().get::<Asking>().cloned() else {
        return next.run(request).await;
    };
    if !asking.who.is_known() {
        return next.run(request).await;
    }
    let work = once(app, asking, key, request, next).in_current_span();
    match tokio::spawn(work).await {
        Ok(response) => response,
        Err(error) => {
            tracing::error!(%error, "a request made the program panic");
            Refusal::of(StatusCode::INTERNAL_SERVER_ERROR).into_response()
        }
    }
}

/// The key of a request: 1 to 255 printable ASCII characters, once.
fn key(headers: &HeaderMap) -> Result<Option<String>, Refusal> {
    let mut given = headers.get_all(IDEMPOTENCY_KEY).iter();
    let Some(first) = given.next() else {
        return Ok(None);
    };
    let fits = |text: &&str| {
        (1..=LONGEST).contains(&text.len()) && text.bytes().all(|byte| (0x20..0x7f).contains(&byte))
    };
    match (first.to_str().ok().map(str::trim).filter(fits), given.next()) {
        (Some(key), None) => Ok(Some(key.to_owned())),
        _ => Err(Refusal::bad_request(format!(
            "The header Idempotency-Key is wrong. Send one key of 1 to {LONGEST} printable ASCII characters, such as a UUID."
        ))),
    }
}

async fn once(app: App, asking: Asking, key: String, request: Request, next: Next) -> Response {
    match done_once(app, asking, key, request, next).await {
        Ok(response) => response,
        Err(refusal) => refusal.into_response(),
    }
}

async fn done_once(
    app: App,
    asking: Asking,
    key: String,
    request: Request,
    next: Next,
) -> Result<Response, Refusal> {
    let (parts, body) = request.into_parts();
    let limits = Limits::of(&parts.extensions);
    let mut copy = Request::new(body);
    copy.headers_mut().clone_from(&parts.headers);
    let bytes = whole_body(copy, &limits).await?;
    let fingerprint = fingerprint(&parts.method, &parts.uri, &parts.headers, &bytes);
    let known = Known {
        organisation: asking.organisation,
        person: asking.who.person.map(|id| id.to_string()).unwrap_or_default(),
        key,
        request: fingerprint,
    };
    let claim = match app.store.claim(known, app.clock.millis()).await? {
        Claimed::New(claim) => claim,
        Claimed::Done(answer) => return repeated(answer),
        Claimed::Other => {
            return Err(Refusal::of(StatusCode::UNPROCESSABLE_ENTITY).detail(format!(
                "This Idempotency-Key was used for another request in the last {KEPT_HOURS} hours. Nothing was done. \
                 Send every new request with a key of its own."
            )));
        }
        Claimed::Running => {
            return Err(Refusal::of(StatusCode::CONFLICT)
                .detail(
                    "The same request is still being worked on. Send it again in a moment for its answer.",
                )
                .header(RETRY_AFTER, HeaderValue::from_static("1")));
        }
        Claimed::AnswerLost => {
            return Err(Refusal::of(StatusCode::CONFLICT).detail(
                "This request was done, but the program stopped before its answer was kept. Nothing was done now. Look at \
                 what is there (the audit trail names it); to do it once more, send it with another key.",
            ));
        }
    };
    let request = Request::from_parts(parts, Body::from(bytes));
    let response = claim.working(next.run(request)).await;
    let (parts, body) = response.into_parts();
    let status = parts.status;
    // A refusal that another moment or another right may lift says nothing of the request itself.
    let passing = [
        StatusCode::UNAUTHORIZED,
        StatusCode::FORBIDDEN,
        StatusCode::REQUEST_TIMEOUT,
        StatusCode::TOO_MANY_REQUESTS,
    ];
    if status.is_server_error() || passing.contains(&status) {
        claim.let_go().await?;
        return Ok(Response::from_parts(parts, body));
    }
    let bytes = to_bytes(body, usize::MAX).await.map_err(|error| {
        tracing::error!(%error, "an answer broke off");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })?;
    let answer = KeptAnswer {
        status: status.as_u16(),
        headers: kept_headers(&parts.headers),
        body: (bytes.len() <= LONGEST_BODY).then(|| bytes.to_vec()),
    };
    if let Err(error) = claim.answered(answer).await {
        // The change stands, and its answer is given; only a repeat of it cannot be.
        tracing::error!(%error, "an answer could not be kept for a repeat");
    }
    Ok(Response::from_parts(parts, Body::from(bytes)))
}

/// What makes a request the same one: method, address, content type and body.
fn fingerprint(method: &Method, uri: &axum::http::Uri, headers: &HeaderMap, body: &Bytes) -> String {
    let kind = headers.get(CONTENT_TYPE).map_or(&b""[..], HeaderValue::as_bytes);
    let target = uri.path_and_query().map_or("/", |target| target.as_str());
    let mut text = format!("{method} {target}\n").into_bytes();
    text.extend_from_slice(kind);
    text.push(b'\n');
    text.extend_from_slice(body);
    canonical::hash(&text)
}

fn kept_headers(headers: &HeaderMap) -> String {
    let kept: BTreeMap<&str, &str> = REPEATED
        .iter()
        .filter_map(|name| Some((name.as_str(), headers.get(name)?.to_str().ok()?)))
        .collect();
    serde_json::to_string(&kept).unwrap_or_else(|_| "{}".to_owned())
}

/// The kept answer, said to be one.
fn repeated(answer: KeptAnswer) -> Result<Response, Refusal> {
    let Some(body) = answer.body else {
        return Err(Refusal::of(StatusCode::CONFLICT).detail(
            "This request was done; its answer was too long to keep. Look at what is there (the audit trail names it).",
        ));
    };
    let defect = |_| Refusal::of(StatusCode::INTERNAL_SERVER_ERROR);
    let mut response = Response::new(Body::from(body));
    *response.status_mut() = StatusCode::from_u16(answer.status).map_err(defect)?;
    let kept: BTreeMap<String, String> = serde_json::from_str(&answer.headers).unwrap_or_default();
    for (name, value) in kept {
        if let (Ok(name), Ok(value)) = (HeaderName::try_from(name), HeaderValue::try_from(value)) {
            response.headers_mut().insert(name, value);
        }
    }
    response
        .headers_mut()
        .insert(REPLAYED, HeaderValue::from_static("true"));
    Ok(response)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(values: &[&'static str]) -> Result<Option<String>, u16> {
        let mut headers = HeaderMap::new();
        for value in values {
            headers.append(IDEMPOTENCY_KEY, HeaderValue::from_static(value));
        }
        key(&headers).map_err(|refusal| refusal.status().as_u16())
    }

    #[test]
    fn a_key_is_short_and_printable_and_one() {
        assert_eq!(of(&[]), Ok(None));
        assert_eq!(of(&["a b"]), Ok(Some("a b".into())));
        assert_eq!(of(&[""]), Err(400));
        assert_eq!(of(&["a", "b"]), Err(400));
        let long: &'static str = "x".repeat(256).leak();
        assert_eq!(of(&[long]), Err(400));
        assert_eq!(of(&[long.split_at(1).1]).map(|key| key.is_some()), Ok(true));
    }

    #[test]
    fn what_changes_nothing_needs_no_key() {
        assert!(honoured("/api/v1/pathways") && honoured("/api/v1/evaluates"));
        assert!(!honoured("/api/v1/evaluate/batch") && !honoured("/pathways"));
    }
}
