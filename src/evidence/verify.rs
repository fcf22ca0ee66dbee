//! The check of every file of evidence, of all organisations: there and unchanged (E-11), and named by a record.

use super::files::Files;
use super::{EvidenceError, sql};
use crate::app::App;
use crate::clock::day_of;
use crate::core::checks::evidence::file_unchanged;
use serde_json::json;
use std::collections::BTreeSet;
use std::fmt;

/// What is wrong with a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum FaultKind {
    /// A record names it and it is not there.
    Missing,
    /// It is not the file that was attached.
    Altered,
    /// No record names it: what an interrupted upload leaves. Only told, nothing is lost.
    Unreferenced,
}

/// Something wrong with a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// What kind.
    pub kind: FaultKind,
    /// Name of the organisation; empty for a file that no record names.
    pub organisation: String,
    /// Id of the evidence; for a file that no record names its hash or name.
    pub id: String,
    /// What is so.
    pub message: String,
    /// What to do.
    pub remedy: String,
}

impl Fault {
    /// True if a figure lost what backs it.
    pub fn is_serious(&self) -> bool {
        self.kind != FaultKind::Unreferenced
    }
}

impl fmt::Display for Fault {
    fn fmt(&self, to: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.organisation.is_empty() {
            write!(to, "{} {}", self.message, self.remedy)
        } else {
            let Fault {
                organisation,
                id,
                message,
                remedy,
                ..
            } = self;
            write!(to, "{organisation}, {id}: {message} {remedy}")
        }
    }
}

/// Reads every file of evidence once and compares it with its record; then looks for files that no record names. In order
/// of hash, those without a record last.
///
/// # Errors
/// When the files or the database fail.
pub async fn verify(app: &App) -> Result<Vec<Fault>, EvidenceError> {
    let files = Files::of(app)?;
    // The names first: a file that is kept meanwhile is none that nothing names.
    let names = files.names().await?;
    let mut faults = Vec::new();
    let (mut hash, mut id) = (String::new(), 0);
    let mut looked_at: Option<(String, Option<String>)> = None;
    loop {
        let mut reader = app.store.reader().await?;
        let batch = sql::all_after(&mut reader, &hash, id).await?;
        drop(reader);
        let Some(last) = batch.last() else { break };
        (hash, id) = (last.hash.clone(), last.id);
        for row in batch {
            let found = match &looked_at {
                Some((hash, found)) if *hash == row.hash => found.clone(),
                _ => {
                    let found = files.hash_of(&row.hash).await?;
                    looked_at = Some((row.hash.clone(), found.clone()));
                    found
                }
            };
            let day = day_of(super::time(row.attached_at, "evidence", row.id)?);
            if let Some(finding) = file_unchanged(&row.file_name, day, &row.hash, found.as_deref()) {
                faults.push(Fault {
                    kind: if found.is_some() {
                        FaultKind::Altered
                    } else {
                        FaultKind::Missing
                    },
                    organisation: row.organisation,
                    id: row.public_id,
                    message: finding.message,
                    remedy: finding.remedy,
                });
            }
        }
    }
    faults.extend(unreferenced(app, names).await?);
    Ok(faults)
}

async fn unreferenced(app: &App, names: Vec<String>) -> Result<Vec<Fault>, EvidenceError> {
    let mut reader = app.store.reader().await?;
    let mut found = BTreeSet::new();
    for some in names.chunks(500) {
        found.extend(sql::named_by_none(&mut reader, &json!(some).to_string()).await?);
    }
    let fault = |name: String| Fault {
        kind: FaultKind::Unreferenced,
        organisation: String::new(),
        message: format!("No record names the file {name}."),
        remedy: "An interrupted upload leaves such a file; it can be taken away.".into(),
        id: name,
    };
    Ok(found.into_iter().map(fault).collect())
}
