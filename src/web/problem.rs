//! What a request is answered that cannot be granted: problem JSON (RFC 9457) for programs, a page for people. Every
//! refusal of the service goes through here, those of the router and of the layers too.

use super::visitor::Visitor;
use crate::core::documents::{Problem, Problems};
use axum::body::Body;
use axum::extract::{Request, State};
use axum::http::header::{ACCEPT, ALLOW, AUTHORIZATION, CACHE_CONTROL, CONTENT_TYPE, ETAG, RETRY_AFTER};
use axum::http::uri::PathAndQuery;
use axum::http::{HeaderMap, HeaderName, HeaderValue, Method, StatusCode};
use axum::middleware::Next;
use axum::response::{IntoResponse, Response};
use serde::Serialize;
use tower_http::request_id::RequestId;
use utoipa::ToSchema;

/// The content type of a problem.
pub const PROBLEM_JSON: &str = "application/problem+json";

/// The body of every refusal (RFC 9457).
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct ProblemDocument {
    /// What kind of problem this is: a name that never changes, not an address to visit.
    #[serde(rename = "type")]
    #[schema(example = "urn:wheelwort:problem:invalid-document")]
    pub kind: String,
    /// The kind in words.
    pub title: String,
    /// The HTTP status.
    #[schema(minimum = 400, maximum = 599)]
    pub status: u16,
    /// What happened this time, and what to do.
    pub detail: String,
    /// Everything that is wrong with the document, all at once; absent where the document is not the matter.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub errors: Vec<Problem>,
    /// Quote this when you ask for help: it finds the request in the log.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub request: Option<String>,
}

/// A request that is not granted.
#[derive(Clone, Debug)]
pub struct Refusal {
    status: StatusCode,
    kind: &'static str,
    title: &'static str,
    detail: String,
    errors: Vec<Problem>,
    headers: Vec<(HeaderName, HeaderValue)>,
}

impl Refusal {
    /// The refusal that a status stands for, with its usual words.
    pub fn of(status: StatusCode) -> Refusal {
        let (kind, title, detail) = words(status);
        let mut refusal = Refusal {
            status,
            kind,
            title,
            detail: detail.into(),
            errors: Vec::new(),
            headers: Vec::new(),
        };
        if status == StatusCode::SERVICE_UNAVAILABLE {
            refusal = refusal.header(RETRY_AFTER, HeaderValue::from_static("2"));
        }
        refusal
    }

    /// With words of its own.
    pub fn detail(self, detail: impl Into<String>) -> Refusal {
        Refusal {
            detail: detail.into(),
            ..self
        }
    }

    /// With a header.
    pub fn header(mut self, name: HeaderName, value: HeaderValue) -> Refusal {
        self.headers.push((name, value));
        self
    }

    /// With the entity tag of what is there now.
    pub fn current(self, etag: HeaderValue) -> Refusal {
        self.header(ETAG, etag)
    }

    /// The body is too large: 413, with what to do about it.
    pub fn too_large(detail: impl Into<String>, remedy: impl Into<String>) -> Refusal {
        let detail = detail.into();
        let problem = Problem {
            pointer: String::new(),
            detail: detail.clone(),
            remedy: remedy.into(),
        };
        Refusal {
            errors: vec![problem],
            ..Refusal::of(StatusCode::PAYLOAD_TOO_LARGE)
        }
        .detail(detail)
    }

    /// The bytes are not JSON at all: 400.
    pub fn not_json(problems: Problems) -> Refusal {
        let detail = match problems.list() {
            [one] => format!("{} {}", one.detail, one.remedy),
            _ => "The body is not JSON.".into(),
        };
        Refusal {
            kind: "not-json",
            title: "Not JSON",
            errors: problems.into_list(),
            ..Refusal::of(StatusCode::BAD_REQUEST)
        }
        .detail(detail)
    }

    /// The bytes are not TOML at all: 400.
    pub fn not_toml(problems: Problems) -> Refusal {
        let refusal = Refusal::not_json(problems);
        Refusal {
            kind: "not-toml",
            title: "Not TOML",
            ..refusal
        }
    }

    /// The document is JSON and does not hold: 422, with everything that is wrong.
    pub fn invalid(problems: Problems) -> Refusal {
        let detail = match problems.len() {
            1 => "One thing is wrong with the document. Nothing was saved.".to_owned(),
            Problems::MOST => format!(
                "At least {} things are wrong with the document. Nothing was saved.",
                Problems::MOST
            ),
            count => format!("{count} things are wrong with the document. Nothing was saved."),
        };
        Refusal {
            errors: problems.into_list(),
            ..Refusal::of(StatusCode::UNPROCESSABLE_ENTITY)
        }
        .detail(detail)
    }

    /// Nothing of that kind and name is here: 404.
    pub fn not_here(what: &str, name: &str) -> Refusal {
        Refusal::of(StatusCode::NOT_FOUND).detail(format!("There is no {what} \"{}\" here.", shown(name)))
    }

    /// Whoever asks has not the right: 403.
    pub fn not_allowed(detail: impl Into<String>) -> Refusal {
        Refusal {
            kind: "not-allowed",
            title: "Not allowed",
            ..Refusal::of(StatusCode::FORBIDDEN)
        }
        .detail(detail)
    }

    /// The form carries no token of this visitor: 403.
    pub fn form_token() -> Refusal {
        Refusal {
            kind: "form-token",
            title: "Send it again",
            ..Refusal::of(StatusCode::FORBIDDEN)
        }
        .detail(
            "The form does not belong to your present session. Go back, load the page again, and send it from there; \
             nothing was changed. A script sends a token as `Authorization: Bearer ...`, or the page's token in X-Form-Token.",
        )
    }

    /// The same refusal of a document that stands inside another, at this pointer.
    pub fn under(mut self, pointer: &str) -> Refusal {
        for error in &mut self.errors {
            error.pointer.insert_str(0, pointer);
        }
        self
    }

    /// A query parameter, path or header is wrong: 400.
    pub fn bad_request(detail: impl Into<String>) -> Refusal {
        Refusal::of(StatusCode::BAD_REQUEST).detail(detail)
    }

    /// The status of the answer.
    pub fn status(&self) -> StatusCode {
        self.status
    }

    /// The headline of a page.
    pub fn title(&self) -> &str {
        self.title
    }

    /// What happened, and what to do.
    pub fn words(&self) -> &str {
        &self.detail
    }

    /// What is wrong with the document.
    pub fn errors(&self) -> &[Problem] {
        &self.errors
    }

    /// The refusal as a document.
    pub fn document(&self, request: Option<&str>) -> ProblemDocument {
        ProblemDocument {
            kind: format!("urn:wheelwort:problem:{}", self.kind),
            title: self.title.into(),
            status: self.status.as_u16(),
            detail: self.detail.clone(),
            errors: self.errors.clone(),
            request: request.map(str::to_owned),
        }
    }

    fn answer(&self, content_type: &'static str, body: impl Into<Body>) -> Response {
        let mut response = Response::new(body.into());
        *response.status_mut() = self.status;
        let headers = response.headers_mut();
        headers.insert(CONTENT_TYPE, HeaderValue::from_static(content_type));
        headers.insert(CACHE_CONTROL, HeaderValue::from_static("no-store"));
        for (name, value) in &self.headers {
            headers.insert(name.clone(), value.clone());
        }
        response
    }

    fn as_json(&self, request: Option<&str>) -> Response {
        let body = serde_json::to_vec(&self.document(request)).unwrap_or_default();
        self.answer(PROBLEM_JSON, body)
    }
}

/// Answers problem JSON; the layer [`shape`] makes a page of it where a person asks.
impl IntoResponse for Refusal {
    fn into_response(self) -> Response {
        let mut response = self.as_json(None);
        response.extensions_mut().insert(self);
        response
    }
}

/// Type, title and usual words of a status.
fn words(status: StatusCode) -> (&'static str, &'static str, &'static str) {
    match status {
        StatusCode::BAD_REQUEST => (
            "bad-request",
            "Bad request",
            "The request could not be understood.",
        ),
        StatusCode::UNAUTHORIZED => (
            "sign-in-needed",
            "Sign in",
            "This needs somebody who is known here. Sign in, or send a token as `Authorization: Bearer ...`.",
        ),
        StatusCode::FORBIDDEN => (
            "refused-origin",
            "Refused",
            "The request was sent from the page of another site. Send it from this one, or from a program.",
        ),
        StatusCode::NOT_FOUND => ("not-found", "Nothing here", "There is nothing at this address."),
        StatusCode::METHOD_NOT_ALLOWED => (
            "method-not-allowed",
            "Method not allowed",
            "This address does not take that method. The Allow header names those it takes.",
        ),
        StatusCode::NOT_ACCEPTABLE => (
            "not-acceptable",
            "Not acceptable",
            "This address answers in JSON only.",
        ),
        StatusCode::REQUEST_TIMEOUT => (
            "too-slow",
            "Too slow",
            "The request did not arrive in time. Send it again, faster.",
        ),
        StatusCode::CONFLICT => (
            "conflict",
            "Conflict",
            "The request does not fit what is there now.",
        ),
        StatusCode::PRECONDITION_FAILED => (
            "stale",
            "Changed in the meantime",
            "Somebody saved another revision. Read it, decide, and send its ETag in If-Match.",
        ),
        StatusCode::PAYLOAD_TOO_LARGE => (
            "too-large",
            "Too large",
            "The body is larger than this service takes.",
        ),
        StatusCode::URI_TOO_LONG => ("address-too-long", "Address too long", "Shorten the address."),
        StatusCode::UNSUPPORTED_MEDIA_TYPE => (
            "wrong-content-type",
            "Wrong content type",
            "Send the body in a type that this address takes.",
        ),
        StatusCode::UNPROCESSABLE_ENTITY => (
            "invalid-document",
            "Invalid document",
            "The document does not hold. Nothing was saved.",
        ),
        StatusCode::PRECONDITION_REQUIRED => (
            "if-match-required",
            "If-Match required",
            "Send the ETag of the revision you read in If-Match, so that nobody's work is lost.",
        ),
        StatusCode::TOO_MANY_REQUESTS => ("too-many", "Too many requests", "Wait a moment and try again."),
        StatusCode::SERVICE_UNAVAILABLE => (
            "busy",
            "Busy",
            "The service has more to do than it can at the moment, or the request took too long. Try again shortly.",
        ),
        status if status.is_client_error() => ("refused", "Refused", "The request could not be granted."),
        _ => (
            "defect",
            "The program made a mistake",
            "The program made a mistake. Nothing was saved. Quote the request when you ask for help.",
        ),
    }
}

/// A name that somebody typed, fit to be shown: no control characters, not endless.
pub fn shown(name: &str) -> String {
    let mut text: String = name
        .chars()
        .take(100)
        .map(|c| if c.is_control() { '\u{fffd}' } else { c })
        .collect();
    if name.chars().nth(100).is_some() {
        text.push_str("...");
    }
    text
}

/// What a page of refusal is told.
#[derive(Clone, Copy, Debug)]
pub struct Asked<'a> {
    /// Method of the request.
    pub method: &'a Method,
    /// Path of the request, without its query.
    pub path: &'a str,
    /// Id of the request.
    pub request: Option<&'a str>,
}

/// Makes the page of a refusal: complete HTML.
pub type RefusalPage = fn(&Refusal, Asked<'_>) -> String;

/// A bare page, until the pages bring theirs.
pub fn bare_page(refusal: &Refusal, asked: Asked<'_>) -> String {
    let mut errors = String::new();
    for error in refusal.errors() {
        errors.push_str(&format!("<li>{}</li>", escaped(&error.to_string())));
    }
    format!(
        "<!doctype html><html lang=\"en\"><head><meta charset=\"utf-8\"><title>{title} - Wheelwort</title></head><body>\
         <main><h1>{title}</h1><p>{words}</p><ul>{errors}</ul><p>Asked for: <code>{method} {path}</code></p>\
         <p>Request: <code>{request}</code></p><p><a href=\"/\">All pathways</a></p></main></body></html>",
        title = escaped(refusal.title()),
        words = escaped(refusal.words()),
        method = escaped(asked.method.as_str()),
        path = escaped(asked.path),
        request = escaped(asked.request.unwrap_or("-")),
    )
}

/// A text as HTML holds it, where no template writes it.
pub(super) fn escaped(text: &str) -> String {
    text.replace('&', "&amp;")
        .replace('<', "&lt;")
        .replace('>', "&gt;")
        .replace('"', "&quot;")
}

/// The layer that gives every refusal its shape: problem JSON under `/api` and for programs, a page for people.
pub async fn shape(State(page): State<RefusalPage>, request: Request, next: Next) -> Response {
    let method = request.method().clone();
    let path = request.uri().path().to_owned();
    let id = request
        .extensions()
        .get::<RequestId>()
        .and_then(|id| id.header_value().to_str().ok())
        .map(str::to_owned);
    let as_page = wants_page(&path, request.headers());
    let way_back =
        (as_page && method.is_safe() && !request.headers().contains_key(AUTHORIZATION)).then(|| {
            request
                .uri()
                .path_and_query()
                .map_or("/", PathAndQuery::as_str)
                .to_owned()
        });
    let mut response = next.run(request).await;
    let Some(refusal) = refusal_of(&response) else {
        return response;
    };
    if let Some(way_back) = way_back
        && refusal.status == StatusCode::UNAUTHORIZED
    {
        return super::answers::see_other(&super::links::sign_in(&way_back));
    }
    let visitor = response.extensions_mut().remove::<Visitor>();
    let id = id.as_deref();
    if as_page {
        let asked = Asked {
            method: &method,
            path: &path,
            request: id,
        };
        let mut answer = refusal.answer("text/html; charset=utf-8", page(&refusal, asked));
        if let Some(visitor) = visitor {
            answer.extensions_mut().insert(visitor);
        }
        answer
    } else {
        refusal.as_json(id)
    }
}

/// The refusal in an answer; answers of the router and of layers that come without one get the usual words.
fn refusal_of(response: &Response) -> Option<Refusal> {
    if let Some(refusal) = response.extensions().get::<Refusal>() {
        return Some(refusal.clone());
    }
    let status = response.status();
    let shaped = response
        .headers()
        .get(CONTENT_TYPE)
        .is_some_and(|kind| kind.as_bytes().starts_with(b"text/html") || kind == PROBLEM_JSON);
    if shaped || !(status.is_client_error() || status.is_server_error()) {
        return None;
    }
    let mut refusal = Refusal::of(status);
    if let Some(allow) = response.headers().get(ALLOW) {
        refusal = refusal.header(ALLOW, allow.clone());
    }
    Some(refusal)
}

/// True where a person is reading: never under `/api/` and `/health/`, elsewhere unless JSON is asked for.
fn wants_page(path: &str, headers: &HeaderMap) -> bool {
    if path.starts_with("/api/") || path.starts_with("/health/") {
        return false;
    }
    let accept = headers
        .get(ACCEPT)
        .and_then(|accept| accept.to_str().ok())
        .unwrap_or("");
    !accept.contains("json") || accept.contains("text/html")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn accept(value: &'static str) -> HeaderMap {
        HeaderMap::from_iter([(ACCEPT, HeaderValue::from_static(value))])
    }

    #[test]
    fn people_get_pages_and_programs_get_json() {
        assert!(wants_page(
            "/pathways/x",
            &accept("text/html,application/xhtml+xml,*/*;q=0.8")
        ));
        assert!(wants_page("/pathways/x", &HeaderMap::new()));
        assert!(!wants_page("/pathways/x", &accept("application/json")));
        assert!(!wants_page("/api/v1/pathways/x", &accept("text/html")));
    }

    #[test]
    fn a_page_escapes_what_was_typed() {
        let refusal = Refusal::not_here("pathway", "<script>alert(1)</script>");
        let asked = Asked {
            method: &Method::GET,
            path: "/<b>",
            request: None,
        };
        let page = bare_page(&refusal, asked);
        assert!(!page.contains("<script>") && !page.contains("<b>"));
        assert!(page.contains("&lt;script&gt;"));
    }

    #[test]
    fn names_are_shown_short_and_plain() {
        assert_eq!(shown("a\u{0}b"), "a\u{fffd}b");
        assert_eq!(shown(&"x".repeat(101)).len(), 103);
    }

    #[test]
    fn busy_says_when_to_come_back() {
        let response = Refusal::of(StatusCode::SERVICE_UNAVAILABLE).into_response();
        assert!(response.headers().contains_key(RETRY_AFTER));
    }
}
