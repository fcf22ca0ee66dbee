//! Evidence: files that back figures, their records, and what names them. Each function is one use case. The bytes go
//! before the row, so that an accident in between leaves at most a file that nothing names.

pub mod api;
mod error;
mod examples;
mod files;
mod incoming;
mod link;
mod naming;
pub mod pages;
pub mod receive;
mod sql;
mod verify;

pub use error::EvidenceError;
pub use examples::{Example, forget, load_examples, remove_examples};
pub use files::{FilesError, Pieces};
pub use incoming::{Arrived, Incoming};
pub use link::EvidenceLink;
pub use naming::Naming;
pub use verify::{Fault, FaultKind, verify};

use crate::app::App;
use crate::app::who::{Sight, Who};
use crate::audit_trail::{self, Deed};
use crate::clock::day_of;
use crate::core::checks::evidence::file_unchanged;
use crate::store::{Connection, OrganisationId, StoreError};
use files::Files;
use jiff::Timestamp;
use serde::Serialize;
use serde_json::json;
use std::collections::{BTreeMap, BTreeSet};
use tokio::sync::RwLock;
use utoipa::ToSchema;
use uuid::Uuid;

/// Held while a file is kept and its row written, so that nobody takes the file for one that nothing names.
static KEEPING: RwLock<()> = RwLock::const_new(());

/// A piece of evidence as recorded. It never changes.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Record {
    /// Id that documents name it by.
    #[schema(example = "EV-0012", pattern = "^[A-Za-z0-9._-]{1,64}$")]
    pub id: String,
    /// Name of the file, for show.
    pub file_name: String,
    /// Media type as declared, for show: the file is always served as plain bytes.
    pub media_type: String,
    /// Bytes.
    pub size: i64,
    /// Hash of the bytes.
    #[schema(example = "sha256:9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08")]
    pub hash: String,
    /// What it is, in words.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// True for demonstration data.
    pub example: bool,
    /// Who attached it, by name.
    pub attached_by: String,
    /// When.
    #[schema(value_type = String, format = DateTime)]
    pub attached_at: Timestamp,
    /// How many pathways name it in their current revision.
    pub pathways: i64,
}

/// A place that names a piece of evidence: of each pathway the newest revision that does.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Use {
    /// Public id of the pathway.
    pub pathway: Uuid,
    /// Its name.
    pub pathway_name: String,
    /// True if it is hidden from lists.
    pub archived: bool,
    /// Number of the revision.
    pub revision: i64,
    /// True if that is the current one.
    pub current: bool,
    /// Where the document names it, as a JSON pointer.
    pub pointer: String,
    /// Key of the stage; absent where it backs an audit of the whole pathway.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stage: Option<String>,
    /// Its name.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stage_name: Option<String>,
    /// Key of the input; absent where it backs a meter, an audit, or what a supplier stated.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub input: Option<String>,
    /// Its label.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub input_label: Option<String>,
}

/// A page of records, newest first.
#[derive(Clone, Debug, PartialEq)]
pub struct RecordPage {
    /// The records.
    pub records: Vec<Record>,
    /// What to ask for after; none on the last page.
    pub next: Option<String>,
}

/// Every SQL text of evidence.
pub(crate) fn statements() -> Vec<&'static str> {
    sql::STATEMENTS.to_vec()
}

impl sql::EvidenceRow {
    fn into_record(self) -> Result<Record, StoreError> {
        Ok(Record {
            attached_at: time(self.attached_at, "evidence", self.id)?,
            id: self.public_id,
            file_name: self.file_name,
            media_type: self.media_type,
            size: self.size,
            hash: self.hash,
            note: self.note,
            example: self.example,
            attached_by: self.by_name,
            pathways: self.pathways,
        })
    }
}

fn time(millis: i64, table: &'static str, row: i64) -> Result<Timestamp, StoreError> {
    let column = "attached_at";
    Timestamp::from_millisecond(millis).map_err(|_| StoreError::Inconsistent { table, column, row })
}

/// The pathways that somebody sees, as a JSON list; none for all.
fn sees(who: &Who) -> Option<String> {
    match &who.sight {
        Sight::All => None,
        Sight::Chosen { pathways, .. } => Some(json!(pathways).to_string()),
    }
}

/// What attaching made.
#[derive(Clone, Debug, PartialEq)]
pub struct Attached {
    /// The record.
    pub record: Record,
    /// False where the same bytes stood under the wished id already: then nothing was written.
    pub added: bool,
}

/// Keeps a file and records it. The same bytes, sent once more under the same wished id, are the record that is there.
///
/// # Errors
/// `Problems` with what stands beside it, `Taken` when other bytes have the wished id; or when the files or the database
/// fail. Nothing is recorded then.
pub async fn attach(app: &App, mut arrived: Arrived, naming: Naming) -> Result<Attached, EvidenceError> {
    let naming = naming.checked(arrived.size)?;
    if let Some(id) = &naming.id {
        let mut reader = app.store.reader().await?;
        match sql::find(&mut reader, app.organisation, id, None).await? {
            // Kept once more: should the file be gone or altered, this puts it right.
            Some(there) if there.hash == arrived.hash => {
                drop(reader);
                Files::of(app)?.keep(&mut arrived).await?;
                return Ok(Attached {
                    record: there.into_record()?,
                    added: false,
                });
            }
            Some(_) => return Err(EvidenceError::Taken(id.clone())),
            None => {}
        }
    }
    let keeping = KEEPING.read().await;
    Files::of(app)?.keep(&mut arrived).await?;
    let (organisation, who, now) = (app.organisation, app.who.clone(), app.clock.millis());
    let (hash, size) = (
        arrived.hash.clone(),
        i64::try_from(arrived.size).unwrap_or(i64::MAX),
    );
    let record = app
        .store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let (id, number) = match &naming.id {
                        Some(id) if sql::is_there(c, organisation, id).await? => {
                            return Err(EvidenceError::Taken(id.clone()));
                        }
                        Some(id) => (id.clone(), None),
                        None => {
                            let (id, number) = counted(c, organisation).await?;
                            (id, Some(number))
                        }
                    };
                    let new = sql::New {
                        naming: &naming,
                        hash: &hash,
                        size,
                        example: false,
                    };
                    sql::add(c, organisation, (&id, number), new, &who, now).await?;
                    let what = json!({ "file_name": naming.file_name, "size": size, "hash": hash });
                    let deed = Deed::new("attached", "evidence", &id, what);
                    audit_trail::add(c, organisation, &who, now, deed).await?;
                    Ok(Record {
                        id,
                        file_name: naming.file_name,
                        media_type: naming.media_type,
                        size,
                        hash,
                        note: naming.note,
                        example: false,
                        attached_by: who.name.clone(),
                        attached_at: time(now, "evidence", 0)?,
                        pathways: 0,
                    })
                })
            },
            move |_: &Record| drop(keeping),
        )
        .await?;
    Ok(Attached { record, added: true })
}

/// The next id by count that is free: a wished one may stand in its way.
async fn counted(c: &mut Connection, organisation: OrganisationId) -> Result<(String, i64), StoreError> {
    let mut number = sql::last_number(c, organisation).await? + 1;
    loop {
        let id = format!("EV-{number:04}");
        if !sql::is_there(c, organisation, &id).await? {
            return Ok((id, number));
        }
        number += 1;
    }
}

/// Records, newest first.
///
/// # Errors
/// `NotFound` when `after` is no place in the list; or when the database fails.
pub async fn list(app: &App, after: Option<&str>, limit: u32) -> Result<RecordPage, EvidenceError> {
    let seen = sees(&app.who);
    let mut reader = app.store.reader().await?;
    let before = match after {
        None => i64::MAX,
        Some(id) => {
            let found = sql::find(&mut reader, app.organisation, id, seen.as_deref()).await?;
            found.ok_or(EvidenceError::NotFound)?.id
        }
    };
    let wanted = i64::from(limit) + 1;
    let rows = sql::list(&mut reader, app.organisation, before, seen.as_deref(), wanted).await?;
    let more = rows.len() > limit as usize;
    let rows = rows.into_iter().take(limit as usize);
    let records: Vec<Record> = rows
        .map(sql::EvidenceRow::into_record)
        .collect::<Result<_, _>>()?;
    let next = records.last().filter(|_| more).map(|last| last.id.clone());
    Ok(RecordPage { records, next })
}

/// A record.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn read(app: &App, id: &str) -> Result<Record, EvidenceError> {
    let mut reader = app.store.reader().await?;
    let found = sql::find(&mut reader, app.organisation, id, sees(&app.who).as_deref()).await?;
    Ok(found.ok_or(EvidenceError::NotFound)?.into_record()?)
}

/// What names a piece of evidence, by name of the pathway.
///
/// # Errors
/// When the database fails.
pub async fn uses(app: &App, id: &str) -> Result<Vec<Use>, EvidenceError> {
    let mut reader = app.store.reader().await?;
    let rows = sql::uses(&mut reader, app.organisation, id, sees(&app.who).as_deref()).await?;
    let place = |row: sql::UseRow| {
        let pathway = Uuid::parse_str(&row.public_id).map_err(|_| StoreError::Inconsistent {
            table: "pathway",
            column: "public_id",
            row: row.number,
        })?;
        Ok(Use {
            pathway,
            pathway_name: row.name,
            archived: row.archived_at.is_some(),
            revision: row.number,
            current: row.number == row.current_revision,
            pointer: row.pointer,
            stage: row.stage_key,
            stage_name: row.stage_name,
            input: row.input_key,
            input_label: row.input_label,
        })
    };
    rows.into_iter().map(place).collect()
}

/// A record with its file. The file is looked through first, so that a wrong one is told in words; what comes is checked
/// once more as it is read.
///
/// # Errors
/// `NotFound`; `Unsound` when the file is gone or another one; or when the files or the database fail.
pub async fn open(app: &App, id: &str) -> Result<(Record, Pieces), EvidenceError> {
    let record = read(app, id).await?;
    let files = Files::of(app)?;
    let found = files.hash_of(&record.hash).await?;
    let day = day_of(record.attached_at);
    if let Some(finding) = file_unchanged(&record.file_name, day, &record.hash, found.as_deref()) {
        let words = format!("{} {}", finding.message, finding.remedy);
        tracing::error!(id, hash = record.hash, "evidence does not hold: {words}");
        return Err(EvidenceError::Unsound(words));
    }
    let pieces = files.read(&record.hash).await?;
    Ok((record, pieces.ok_or(EvidenceError::NotFound)?))
}

/// The records among some ids, for pages that have read the document which names them.
///
/// # Errors
/// When the database fails.
pub async fn among<'i>(
    app: &App,
    ids: impl IntoIterator<Item = &'i str>,
) -> Result<BTreeMap<String, Record>, EvidenceError> {
    let ids: BTreeSet<&str> = ids.into_iter().collect();
    if ids.is_empty() {
        return Ok(BTreeMap::new());
    }
    let mut reader = app.store.reader().await?;
    let rows = sql::among(&mut reader, app.organisation, &json!(ids).to_string()).await?;
    let record = |row: sql::EvidenceRow| {
        let record = row.into_record()?;
        Ok((record.id.clone(), record))
    };
    rows.into_iter().map(record).collect()
}

/// Those of some ids that no evidence of the organisation has; asked inside the transaction that needs them.
///
/// # Errors
/// When the database fails.
pub async fn missing(
    c: &mut Connection,
    organisation: OrganisationId,
    ids: &BTreeSet<&str>,
) -> Result<BTreeSet<String>, StoreError> {
    if ids.is_empty() {
        return Ok(BTreeSet::new());
    }
    let ids = json!(ids).to_string();
    let missing = sql::missing(c, organisation, &ids).await?;
    Ok(missing.into_iter().collect())
}
