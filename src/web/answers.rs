//! Answers of pages: HTML, CSV, a file to keep, a way on.

use super::csv::Table;
use super::problem::Refusal;
use askama::Template;
use axum::http::header::{CONTENT_DISPOSITION, CONTENT_TYPE, LOCATION};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{Html, IntoResponse, Response};

/// A page.
///
/// # Errors
/// 500 when the template fails, which it does only where memory does.
pub fn page(page: &impl Template) -> Result<Response, Refusal> {
    with_status(StatusCode::OK, page)
}

/// A page with another status.
///
/// # Errors
/// As [`page`].
pub fn with_status(status: StatusCode, page: &impl Template) -> Result<Response, Refusal> {
    match page.render() {
        Ok(html) => Ok((status, Html(html)).into_response()),
        Err(error) => {
            tracing::error!(%error, "a page failed");
            Err(Refusal::of(StatusCode::INTERNAL_SERVER_ERROR))
        }
    }
}

/// A table as a file to keep.
pub fn csv(name: &str, table: &Table) -> Response {
    file(&format!("{name}.csv"), "text/csv; charset=utf-8", table.csv())
}

/// A file to keep. The name is one of ours: letters, digits, hyphens and a point.
pub fn file(name: &str, kind: &'static str, body: impl IntoResponse) -> Response {
    let mut response = body.into_response();
    let headers = response.headers_mut();
    headers.insert(CONTENT_TYPE, HeaderValue::from_static(kind));
    if let Ok(value) = HeaderValue::try_from(format!("attachment; filename=\"{name}\"")) {
        headers.insert(CONTENT_DISPOSITION, value);
    }
    response
}

/// Go on there: after a form was taken.
pub fn see_other(href: &str) -> Response {
    match HeaderValue::try_from(href) {
        Ok(location) => (StatusCode::SEE_OTHER, [(LOCATION, location)]).into_response(),
        Err(_) => Refusal::of(StatusCode::NOT_FOUND).into_response(),
    }
}
