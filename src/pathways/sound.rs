//! Whether the stored revisions are still what they were: the bytes of each against its hash, its columns against its
//! document, and the rows of current documents against them.

use super::{PathwayError, public_id, rows_differ, sql};
use crate::app::App;
use crate::core::documents::{Pathway, canonical};
use uuid::Uuid;

/// Revisions that are read at once.
const TOGETHER: i64 = 100;

/// A record that is not what it was.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Damage {
    /// Public id of the pathway.
    pub pathway: Uuid,
    /// Number of the revision; none where the rows of the current one are meant.
    pub revision: Option<i64>,
    /// What is wrong, as a sentence.
    pub what: String,
}

/// Every revision of an organisation that is damaged, archived pathways among them.
///
/// # Errors
/// When the database fails.
pub async fn damaged(app: &App) -> Result<Vec<Damage>, PathwayError> {
    let mut found = Vec::new();
    let mut after = (0, 0);
    loop {
        let mut reader = app.store.reader().await?;
        let batch = sql::every_revision(&mut reader, app.organisation, after, TOGETHER).await?;
        drop(reader);
        let Some(last) = batch.last() else { break };
        after = (last.id, last.number);
        for row in batch {
            if let Some(what) = wrong(&row) {
                found.push(Damage {
                    pathway: public_id(&row.public_id, row.id)?,
                    revision: Some(row.number),
                    what: what.to_owned(),
                });
            }
        }
    }
    // Rows cannot be made again from a document that cannot be read.
    if found.is_empty() {
        for pathway in rows_differ(app).await? {
            found.push(Damage {
                pathway,
                revision: None,
                what: "The rows written from its current document say something else than it does."
                    .to_owned(),
            });
        }
    }
    Ok(found)
}

fn wrong(row: &sql::KeptRevision) -> Option<&'static str> {
    let bytes = row.document.as_bytes();
    if canonical::hash(bytes) != row.hash {
        return Some("Its document was changed: it has another hash than the one kept with it.");
    }
    let Ok(document) = Pathway::from_bytes(bytes) else {
        return Some("Its document cannot be read by this version of the program.");
    };
    if canonical::bytes(&document).ok().as_deref() != Some(bytes) {
        return Some("Its document is not in canonical form.");
    }
    (document.rule_set != row.rule_set || document.example != row.example)
        .then_some("Its columns say something else than its document.")
}
