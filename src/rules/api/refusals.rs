//! Errors of the use cases as refusals. The chain of causes, which may name SQL, goes to the log alone.

use super::super::RuleError;
use crate::store::StoreError;
use crate::web::Refusal;
use crate::web::conditional::etag;
use axum::http::StatusCode;
use std::error::Error;

impl From<RuleError> for Refusal {
    fn from(error: RuleError) -> Refusal {
        match error {
            RuleError::Problems(problems) => Refusal::invalid(problems),
            RuleError::NotFound => Refusal::of(StatusCode::NOT_FOUND)
                .detail("There is no such rule set here. /api/v1/rule-sets lists those there are."),
            RuleError::Taken { .. } | RuleError::TooMany => {
                Refusal::of(StatusCode::CONFLICT).detail(error.to_string())
            }
            RuleError::Stale { ref hash } => {
                let words = format!("{error} Read them, decide, and send their ETag in If-Match.");
                Refusal::of(StatusCode::PRECONDITION_FAILED)
                    .detail(words)
                    .current(etag(hash))
            }
            RuleError::Store(error) => error.into(),
        }
    }
}

/// What can be tried again, or mended by whoever runs the service, is 503; a defect is 500.
impl From<StoreError> for Refusal {
    fn from(error: StoreError) -> Refusal {
        let status = match error {
            StoreError::NotFound => StatusCode::NOT_FOUND,
            StoreError::Busy
            | StoreError::Closed
            | StoreError::Locked(_)
            | StoreError::Lost(_)
            | StoreError::Full(_)
            | StoreError::ReadOnly(_)
            | StoreError::Disk(_)
            | StoreError::Unopenable(_) => StatusCode::SERVICE_UNAVAILABLE,
            _ => StatusCode::INTERNAL_SERVER_ERROR,
        };
        if status != StatusCode::NOT_FOUND {
            tracing::error!(error = %chain(&error), "the store failed");
        }
        Refusal::of(status).detail(error.to_string())
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
