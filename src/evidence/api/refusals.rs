//! Errors of the use cases as refusals. The chain of causes, which may name folders and hosts, goes to the log alone.

use super::super::EvidenceError;
use crate::web::Refusal;
use axum::http::StatusCode;
use std::error::Error;

impl From<EvidenceError> for Refusal {
    fn from(error: EvidenceError) -> Refusal {
        match error {
            EvidenceError::Problems(problems) => Refusal::invalid(problems),
            EvidenceError::NotFound => Refusal::of(StatusCode::NOT_FOUND)
                .detail("There is no such evidence here. /api/v1/evidence lists what there is."),
            EvidenceError::Taken(_) | EvidenceError::Unsound(_) => {
                Refusal::of(StatusCode::CONFLICT).detail(error.to_string())
            }
            EvidenceError::Store(error) => error.into(),
            EvidenceError::Files(error) => {
                let cause = error.source().map(ToString::to_string);
                tracing::error!(%error, cause, "the files of evidence failed");
                Refusal::of(StatusCode::SERVICE_UNAVAILABLE).detail(error.to_string())
            }
        }
    }
}
