//! Errors of the use cases as refusals. The chain of causes, which may name SQL, goes to the log alone.

use super::super::{PathwayError, What};
use crate::web::Refusal;
use crate::web::conditional::etag;
use axum::http::StatusCode;
use std::error::Error;

impl From<PathwayError> for Refusal {
    fn from(error: PathwayError) -> Refusal {
        match error {
            PathwayError::Problems(problems) => Refusal::invalid(problems),
            PathwayError::NotFound(what) => {
                let words = match what {
                    What::Pathway => "There is no such pathway here. /api/v1/pathways lists those there are.",
                    What::Revision => "The pathway has no such revision.",
                    What::Stage => "The pathway has no such stage.",
                };
                Refusal::of(StatusCode::NOT_FOUND).detail(words)
            }
            PathwayError::Conflict { revision, ref hash } => {
                let words = format!(
                    "{error} Read it, decide, and send its ETag in If-Match. Nothing was saved over revision {revision}."
                );
                Refusal::of(StatusCode::PRECONDITION_FAILED)
                    .detail(words)
                    .current(etag(hash))
            }
            PathwayError::Archived => Refusal::of(StatusCode::CONFLICT).detail(error.to_string()),
            PathwayError::Store(error) => error.into(),
            PathwayError::Evidence(error) => error.into(),
            PathwayError::Defect { .. } => {
                tracing::error!(error = %chain(&error), "a use case failed");
                Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
            }
        }
    }
}

/// An error with its causes.
fn chain(error: &dyn Error) -> String {
    let mut words = error.to_string();
    let mut cause = error.source();
    while let Some(error) = cause {
        words.push_str(": ");
        words.push_str(&error.to_string());
        cause = error.source();
    }
    words
}
