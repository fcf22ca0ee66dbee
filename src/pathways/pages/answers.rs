//! The page of a pathway that is not there, and the answers that all pages give.

pub use crate::web::answers::{csv, file, page, see_other, with_status};
use crate::web::error_page::ErrorPage;
use crate::web::problem::{Asked, Refusal, shown};
use axum::http::{Method, StatusCode};
use axum::response::{IntoResponse, Response};

/// The page of a pathway that is not there, with the one of the nearest name: address and name.
pub fn no_pathway(asked: &str, near: Option<(String, &str)>) -> Response {
    let path = format!("/pathways/{}", shown(asked));
    let refusal = Refusal::not_here("pathway", asked);
    let mut found = ErrorPage::of(
        &refusal,
        Asked {
            method: &Method::GET,
            path: &path,
            request: None,
        },
    );
    found.title = "There is no pathway at this address".to_owned();
    found.frame.title.clone_from(&found.title);
    if let Some((href, name)) = near {
        found = found.way(href, name, " has the nearest name.");
    }
    with_status(StatusCode::NOT_FOUND, &found).unwrap_or_else(IntoResponse::into_response)
}
