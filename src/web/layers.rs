//! What every request passes, outermost first: request id and log, compression, security headers, the shape of
//! refusals, panics, requests from other sites, limits; and, around the work itself, overload and time.

use super::extract::{Limits, is_of_type};
use super::metrics;
use super::problem::{Refusal, RefusalPage, shape};
use super::visitor;
use axum::Router;
use axum::extract::{DefaultBodyLimit, Extension, Request, State};
use axum::http::header::{
    AUTHORIZATION, CACHE_CONTROL, CONTENT_SECURITY_POLICY, COOKIE, HeaderName, REFERRER_POLICY, SET_COOKIE,
    X_CONTENT_TYPE_OPTIONS,
};
use axum::http::{HeaderValue, StatusCode};
use axum::middleware::{Next, from_fn, from_fn_with_state, map_request, map_response};
use axum::response::{IntoResponse, Response};
use std::any::Any;
use std::sync::Arc;
use std::time::Duration;
use tokio::sync::Semaphore;
use tower::ServiceBuilder;
use tower_http::catch_panic::CatchPanicLayer;
use tower_http::compression::CompressionLayer;
use tower_http::compression::predicate::{DefaultPredicate, NotForContentType, Predicate};
use tower_http::csrf::CsrfLayer;
use tower_http::request_id::{MakeRequestUuid, PropagateRequestIdLayer, RequestId, SetRequestIdLayer};
use tower_http::sensitive_headers::{SetSensitiveRequestHeadersLayer, SetSensitiveResponseHeadersLayer};
use tower_http::trace::{DefaultOnResponse, TraceLayer};
use tracing::{Level, Span};

/// Only our own files: no inline script or style, no other host, no framing.
const CONTENT_POLICY: &str = "default-src 'none'; style-src 'self'; script-src 'self'; img-src 'self'; font-src 'self'; \
     connect-src 'self'; manifest-src 'self'; form-action 'self'; frame-ancestors 'none'; base-uri 'none'";

const FIXED: [(HeaderName, HeaderValue); 6] = [
    (CONTENT_SECURITY_POLICY, HeaderValue::from_static(CONTENT_POLICY)),
    (X_CONTENT_TYPE_OPTIONS, HeaderValue::from_static("nosniff")),
    (REFERRER_POLICY, HeaderValue::from_static("no-referrer")),
    (
        HeaderName::from_static("cross-origin-opener-policy"),
        HeaderValue::from_static("same-origin"),
    ),
    (
        HeaderName::from_static("cross-origin-resource-policy"),
        HeaderValue::from_static("same-origin"),
    ),
    (
        HeaderName::from_static("permissions-policy"),
        HeaderValue::from_static("camera=(), geolocation=(), microphone=()"),
    ),
];

/// Around the routes that do the work: too many at once and too long are both answered 503 with `Retry-After`.
pub fn around_work<S: Clone + Send + Sync + 'static>(
    router: Router<S>,
    at_once: usize,
    timeout: Duration,
    limits: Limits,
) -> Router<S> {
    let places = Arc::new(Semaphore::new(at_once.max(1)));
    router.layer(
        ServiceBuilder::new()
            .layer(from_fn_with_state(places, take_place))
            .layer(from_fn_with_state(timeout, in_time))
            .layer(DefaultBodyLimit::max(limits.body_bytes)),
    )
}

/// Around everything.
pub fn around_all<S: Clone + Send + Sync + 'static>(
    router: Router<S>,
    page: RefusalPage,
    limits: Limits,
) -> Router<S> {
    let compressible = DefaultPredicate::new()
        .and(NotForContentType::const_new("application/pdf"))
        .and(NotForContentType::const_new("application/vnd.openxmlformats"))
        .and(NotForContentType::const_new("font/"))
        // Files of evidence go out as they came in.
        .and(NotForContentType::const_new("application/octet-stream"))
        // A batch is read line by line as it is made; a compressor would hold lines back.
        .and(NotForContentType::const_new("application/x-ndjson"));
    router.layer(
        ServiceBuilder::new()
            // Whatever logs a header shows these as "Sensitive".
            .layer(SetSensitiveRequestHeadersLayer::new([AUTHORIZATION, COOKIE]))
            .layer(SetSensitiveResponseHeadersLayer::new([SET_COOKIE]))
            .layer(map_request(own_id_only))
            .layer(SetRequestIdLayer::x_request_id(MakeRequestUuid))
            .layer(PropagateRequestIdLayer::x_request_id())
            .layer(
                TraceLayer::new_for_http()
                    .make_span_with(span)
                    .on_response(DefaultOnResponse::new().level(Level::INFO)),
            )
            .layer(from_fn(metrics::measure))
            .layer(CompressionLayer::new().compress_when(compressible))
            .layer(map_response(secured))
            .layer(from_fn(visitor::fill))
            .layer(from_fn_with_state(page, shape))
            .layer(CatchPanicLayer::custom(panicked))
            .layer(CsrfLayer::new())
            .layer(Extension(limits)),
    )
}

/// Ids are made here; one that a client sends would let it write into our log.
async fn own_id_only(mut request: Request) -> Request {
    request.headers_mut().remove("x-request-id");
    request
}

/// The query stays out of the log: it may hold what people search for.
fn span<B>(request: &axum::http::Request<B>) -> Span {
    let id = request
        .extensions()
        .get::<RequestId>()
        .and_then(|id| id.header_value().to_str().ok())
        .unwrap_or("-");
    tracing::info_span!("request", id, method = %request.method(), path = request.uri().path())
}

async fn secured(mut response: Response) -> Response {
    let headers = response.headers_mut();
    for (name, value) in FIXED {
        headers.entry(name).or_insert(value);
    }
    // Nothing is kept by a browser or a proxy without asking again, unless the answer says otherwise.
    headers
        .entry(CACHE_CONTROL)
        .or_insert(HeaderValue::from_static("private, no-cache"));
    response
}

/// How much longer than other answers one may take that waits for files to arrive.
const LONGER_FOR_FILES: u32 = 10;

/// Answers 503 when an answer does not begin in time. A form with files may take longer, for as long as it goes on
/// arriving: a bill on a slow line is minutes under way.
async fn in_time(State(timeout): State<Duration>, request: Request, next: Next) -> Response {
    let brings_files = is_of_type(request.headers(), |kind| kind == "multipart/form-data");
    let timeout = if brings_files {
        timeout.saturating_mul(LONGER_FOR_FILES)
    } else {
        timeout
    };
    match tokio::time::timeout(timeout, next.run(request)).await {
        Ok(response) => response,
        Err(_) => Refusal::of(StatusCode::SERVICE_UNAVAILABLE).into_response(),
    }
}

async fn take_place(State(places): State<Arc<Semaphore>>, request: Request, next: Next) -> Response {
    match places.try_acquire() {
        Ok(_place) => next.run(request).await,
        Err(_) => Refusal::of(StatusCode::SERVICE_UNAVAILABLE).into_response(),
    }
}

#[allow(clippy::needless_pass_by_value, reason = "the layer gives the panic away")]
fn panicked(panic: Box<dyn Any + Send + 'static>) -> Response {
    let words = panic
        .downcast_ref::<String>()
        .map(String::as_str)
        .or_else(|| panic.downcast_ref::<&str>().copied())
        .unwrap_or("no words");
    tracing::error!(panic = words, "a request made the program panic");
    Refusal::of(StatusCode::INTERNAL_SERVER_ERROR).into_response()
}
