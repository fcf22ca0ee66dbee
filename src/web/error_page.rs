//! The page of a refusal, in plain words: what is so, what was asked, and the ways on.

use super::filters;
use super::frame::{Frame, Section};
use super::problem::{Asked, Refusal, shown};
use crate::core::documents::Problem;
use askama::Template;
use axum::http::StatusCode;

/// The page of a refusal.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "error.html")]
pub struct ErrorPage {
    /// Round the page.
    pub frame: Frame,
    /// What is so.
    pub title: String,
    /// What it means.
    pub lead: String,
    /// Ways on: address, words, what follows them.
    pub ways: Vec<(String, String, String)>,
    /// What is wrong with the document, if one was sent.
    pub errors: Vec<Problem>,
    /// The request.
    pub asked: String,
    /// The answer in words.
    pub answer: String,
    /// What to quote.
    pub request: Option<String>,
}

impl ErrorPage {
    /// The page of a refusal.
    pub fn of(refusal: &Refusal, asked: Asked<'_>) -> ErrorPage {
        let status = refusal.status();
        let (title, lead) = words(status, refusal.words());
        let nothing = if status.is_server_error() || asked.method != axum::http::Method::GET {
            ", nothing was changed"
        } else {
            ""
        };
        ErrorPage {
            frame: Frame::bare(title.clone(), Section::Elsewhere),
            title,
            lead,
            ways: vec![
                (
                    "/".to_owned(),
                    "All pathways".to_owned(),
                    ", archived ones too.".to_owned(),
                ),
                (
                    "/factors".to_owned(),
                    "Factors".to_owned(),
                    ", materials and rule sets.".to_owned(),
                ),
                (
                    "/api".to_owned(),
                    "The API in words".to_owned(),
                    ", if a program of yours asked.".to_owned(),
                ),
            ],
            errors: refusal.errors().to_vec(),
            asked: format!("{} {}", asked.method, shown(asked.path)),
            answer: format!("{}{nothing}", status.as_u16()),
            request: asked.request.map(str::to_owned),
        }
    }

    /// The same with another way on, in the first place.
    #[must_use]
    pub fn way(
        mut self,
        href: impl Into<String>,
        words: impl Into<String>,
        after: impl Into<String>,
    ) -> ErrorPage {
        self.ways.insert(0, (href.into(), words.into(), after.into()));
        self
    }
}

/// Makes the page of a refusal, for the shell.
pub fn page(refusal: &Refusal, asked: Asked<'_>) -> String {
    // A template fails only where writing to memory does; the bare page then stands in.
    ErrorPage::of(refusal, asked)
        .render()
        .unwrap_or_else(|_| super::problem::bare_page(refusal, asked))
}

fn words(status: StatusCode, detail: &str) -> (String, String) {
    let title = match status {
        StatusCode::NOT_FOUND => "There is nothing at this address",
        StatusCode::METHOD_NOT_ALLOWED => "This address does not take that",
        StatusCode::FORBIDDEN => "The request came from another site",
        StatusCode::PRECONDITION_FAILED => "Somebody saved in the meantime",
        StatusCode::CONFLICT => "That does not fit what is there now",
        StatusCode::UNPROCESSABLE_ENTITY => "The document does not hold",
        StatusCode::PAYLOAD_TOO_LARGE => "That is too large",
        StatusCode::BAD_REQUEST => "The request could not be understood",
        StatusCode::SERVICE_UNAVAILABLE => "There is too much to do at the moment",
        status if status.is_server_error() => "Something failed on our side",
        _ => "That could not be done",
    };
    let lead = match status {
        status if status == StatusCode::INTERNAL_SERVER_ERROR => {
            "Nothing was changed. Quote the request below when you ask for help.".to_owned()
        }
        _ => detail.replace(" Read it, decide, and send its ETag in If-Match.", ""),
    };
    (title.to_owned(), lead)
}

#[cfg(test)]
mod tests {
    use super::*;
    use axum::http::Method;

    #[test]
    fn every_refusal_has_a_page_that_names_the_way_on() {
        let asked = Asked {
            method: &Method::POST,
            path: "/pathways/<b>",
            request: Some("01J2"),
        };
        for status in [400, 403, 404, 405, 409, 412, 413, 422, 500, 503] {
            let status = StatusCode::from_u16(status).expect("a status");
            let html = page(&Refusal::of(status).detail("It is <b>so</b>."), asked);
            assert!(
                html.contains("href=\"/factors\"") && html.contains("01J2"),
                "{status}"
            );
            assert!(!html.contains("<b>so") && !html.contains("/<b>"), "{status}");
            assert!(html.contains("nothing was changed"), "{status}");
        }
    }
}
