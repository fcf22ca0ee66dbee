//! Why a use case of evidence did not do what it was asked. `Display` is for people.

use super::files::FilesError;
use crate::core::documents::Problems;
use crate::store::StoreError;
use thiserror::Error;

/// Why a use case failed.
#[derive(Clone, Debug, Error)]
pub enum EvidenceError {
    /// What stands beside the file is wrong (422): everything at once, nothing was kept.
    #[error("What stands beside the file does not hold.")]
    Problems(Problems),
    /// There is no such evidence here (404).
    #[error("There is no such evidence.")]
    NotFound,
    /// The wished id is taken (409).
    #[error("There is evidence \"{0}\" already. Take another id, or leave it out to have one counted.")]
    Taken(String),
    /// The file is gone or another one (409): what E-11 says of it.
    #[error("{0}")]
    Unsound(String),
    /// The database (503 with Retry-After when [`StoreError::is_passing`], else 500).
    #[error(transparent)]
    Store(#[from] StoreError),
    /// The disk or the store elsewhere (503).
    #[error(transparent)]
    Files(#[from] FilesError),
}
