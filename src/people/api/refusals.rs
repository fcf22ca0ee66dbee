//! Errors of the use cases as refusals.

use super::super::{PeopleError, seconds};
use crate::web::Refusal;
use axum::http::header::RETRY_AFTER;
use axum::http::{HeaderValue, StatusCode};

impl From<PeopleError> for Refusal {
    fn from(error: PeopleError) -> Refusal {
        let words = error.to_string();
        match error {
            PeopleError::Problems(problems) => Refusal::invalid(problems),
            PeopleError::NotFound => Refusal::of(StatusCode::NOT_FOUND).detail(words),
            PeopleError::NoPerson | PeopleError::NotByToken | PeopleError::DoNotFit => {
                Refusal::not_allowed(words)
            }
            PeopleError::LastAdministrator => Refusal::of(StatusCode::CONFLICT).detail(words),
            PeopleError::TooOften(wait) => Refusal::of(StatusCode::TOO_MANY_REQUESTS)
                .detail(words)
                .header(RETRY_AFTER, HeaderValue::from(seconds(wait))),
            PeopleError::Store(error) => error.into(),
            PeopleError::Defect(doing) => {
                tracing::error!(doing, "a use case failed");
                Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
            }
        }
    }
}
