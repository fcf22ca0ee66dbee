//! Why a use case of pathways did not do what it was asked. `Display` is for people.

use crate::core::documents::Problems;
use crate::evidence::EvidenceError;
use crate::store::StoreError;
use std::sync::Arc;
use thiserror::Error;

/// What was looked for and is not there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum What {
    /// A pathway of this organisation.
    Pathway,
    /// A revision of a pathway.
    Revision,
    /// A stage of a pathway.
    Stage,
}

impl What {
    /// The word for people.
    pub fn word(self) -> &'static str {
        match self {
            What::Pathway => "pathway",
            What::Revision => "revision",
            What::Stage => "stage",
        }
    }
}

/// Why a use case failed.
#[derive(Clone, Debug, Error)]
pub enum PathwayError {
    /// The document or the question is wrong (422): everything at once, nothing was stored.
    #[error("The document has {} to mend.", count(.0))]
    Problems(Problems),
    /// There is no such record here (404).
    #[error("There is no such {}.", .0.word())]
    NotFound(What),
    /// Somebody saved in between (412).
    #[error("The pathway was saved by someone else in the meantime: it is now at revision {revision}.")]
    Conflict {
        /// The revision that is current now.
        revision: i64,
        /// Its hash.
        hash: String,
    },
    /// The pathway is archived and takes no changes (409).
    #[error("The pathway is archived. Take it out of the archive before you change it.")]
    Archived,
    /// The database (503 with Retry-After when [`StoreError::is_passing`], else 500).
    #[error(transparent)]
    Store(#[from] StoreError),
    /// Evidence of the demonstration could not be kept.
    #[error(transparent)]
    Evidence(#[from] EvidenceError),
    /// A defect of the program (500).
    #[error("The program made a mistake while it {doing}.")]
    Defect {
        /// What it was doing.
        doing: &'static str,
        /// The cause, for the log.
        #[source]
        source: Arc<dyn std::error::Error + Send + Sync>,
    },
}

impl PathwayError {
    pub(in crate::pathways) fn defect(
        doing: &'static str,
        source: impl std::error::Error + Send + Sync + 'static,
    ) -> Self {
        PathwayError::Defect {
            doing,
            source: Arc::new(source),
        }
    }
}

impl From<Problems> for PathwayError {
    fn from(problems: Problems) -> PathwayError {
        PathwayError::Problems(problems)
    }
}

fn count(problems: &Problems) -> String {
    match problems.len() {
        1 => "1 thing".into(),
        many => format!("{many} things"),
    }
}
