//! Reading pathways back: documents, history, what changed, and who uses a published row.

use super::assess::{document, missing, seen};
use super::rows::{self, Rows};
use super::sql::RevisionRow;
use super::{Change, PathwayError, Summary, What, changes as differences, public_id, sql, time};
use crate::app::App;
use crate::core::documents::pathway::Stage;
use crate::rules::basis;
use jiff::Timestamp;
use serde::Serialize;
use std::sync::Arc;
use utoipa::ToSchema;
use uuid::Uuid;

/// A stored revision with its canonical document.
#[derive(Clone, Debug)]
pub struct Stored {
    /// Public id of the pathway.
    pub id: Uuid,
    /// Number of this revision, from 1.
    pub revision: i64,
    /// Number of the current one.
    pub current_revision: i64,
    /// The canonical document, byte for byte as it was hashed.
    pub document: Arc<[u8]>,
    /// Hash of the document: its entity tag.
    pub hash: String,
    /// Rule set that the document names.
    pub rule_set: String,
    /// When this revision was saved.
    pub saved_at: Timestamp,
    /// Why, in the words of who saved it.
    pub reason: Option<String>,
    /// True for demonstration data.
    pub example: bool,
    /// When the pathway was made.
    pub created_at: Timestamp,
    /// Since when it is hidden.
    pub archived_at: Option<Timestamp>,
}

/// A line of a pathway's history.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Revision {
    /// Number, from 1.
    pub number: i64,
    /// Hash of the document.
    pub hash: String,
    /// When it was saved.
    #[schema(value_type = String, format = DateTime)]
    pub saved_at: Timestamp,
    /// Why, in the words of who saved it.
    pub reason: Option<String>,
    /// Its assessment under its own rule set, if this version of the program has made one.
    pub assessment: Option<Summary>,
}

/// A place where a current revision names a published row.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct FactorUse {
    /// Public id of the pathway.
    pub pathway: Uuid,
    /// Its name.
    pub pathway_name: String,
    /// True if it is hidden from lists.
    pub archived: bool,
    /// Number of its current revision.
    pub revision: i64,
    /// The row, `edition/row`.
    pub factor: String,
    /// Where the document names it, as a JSON pointer.
    pub pointer: String,
    /// Key of the stage; none for default values of the whole pathway.
    pub stage: Option<String>,
    /// Key of the input.
    pub input: Option<String>,
    /// Key of the co-product that displaces it.
    pub co_product: Option<String>,
}

impl RevisionRow {
    fn into_stored(self, id: Uuid) -> Result<Stored, PathwayError> {
        let archived_at = self
            .archived_at
            .map(|at| time(at, "pathway", "archived_at", self.id))
            .transpose()?;
        Ok(Stored {
            id,
            revision: self.number,
            current_revision: self.current_revision,
            document: Arc::from(self.document.into_bytes()),
            hash: self.hash,
            rule_set: self.rule_set,
            saved_at: time(self.saved_at, "revision", "saved_at", self.revision_id)?,
            reason: self.reason,
            example: self.example,
            created_at: time(self.created_at, "pathway", "created_at", self.id)?,
            archived_at,
        })
    }
}

/// The current revision of a pathway.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn read(app: &App, id: Uuid) -> Result<Stored, PathwayError> {
    find(app, id, None).await?.into_stored(id)
}

/// A revision of a pathway.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn revision(app: &App, id: Uuid, number: i64) -> Result<Stored, PathwayError> {
    find(app, id, Some(number)).await?.into_stored(id)
}

async fn find(app: &App, id: Uuid, number: Option<i64>) -> Result<RevisionRow, PathwayError> {
    seen(app, id)?;
    let mut reader = app.store.reader().await?;
    let found = sql::revision(&mut reader, app.organisation, id, number).await?;
    found.ok_or(PathwayError::NotFound(missing(number)))
}

/// One stage of the current revision, with the entity tag of the revision.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn stage(app: &App, id: Uuid, key: &str) -> Result<(Stage, String), PathwayError> {
    let found = find(app, id, None).await?;
    let document = document(&found.document, found.revision_id)?;
    let stage = document.stages.into_iter().find(|stage| stage.key == key);
    Ok((stage.ok_or(PathwayError::NotFound(What::Stage))?, found.hash))
}

/// The history of a pathway, newest first.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn revisions(app: &App, id: Uuid) -> Result<Vec<Revision>, PathwayError> {
    seen(app, id)?;
    let basis = basis(app).await?;
    let mut reader = app.store.reader().await?;
    let history = sql::revisions(&mut reader, app.organisation, id, &basis.settings_hash).await?;
    if history.is_empty() {
        return Err(PathwayError::NotFound(What::Pathway));
    }
    let line = |row: sql::HistoryRow| {
        Ok(Revision {
            number: row.number,
            hash: row.hash,
            saved_at: time(row.saved_at, "revision", "saved_at", row.number)?,
            reason: row.reason,
            assessment: row.summary.into_summary(row.number)?,
        })
    };
    history.into_iter().map(line).collect()
}

/// What a revision changed in the one before it; against nothing for the first.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn changes(app: &App, id: Uuid, number: i64) -> Result<Vec<Change>, PathwayError> {
    let after = find(app, id, Some(number)).await?;
    let after = document(&after.document, after.revision_id)?;
    if number <= 1 {
        return differences::between(None, &after);
    }
    let before = find(app, id, Some(number - 1)).await?;
    differences::between(Some(&document(&before.document, before.revision_id)?), &after)
}

/// Where current revisions name a published row, archived pathways among them.
///
/// # Errors
/// When the database fails.
pub async fn uses_of_factor(app: &App, factor: &str) -> Result<Vec<FactorUse>, PathwayError> {
    let mut reader = app.store.reader().await?;
    let uses = rows::sql::uses_of(&mut reader, app.organisation, factor).await?;
    let place = |row: rows::sql::UseOfRow| {
        Ok(FactorUse {
            pathway: public_id(&row.public_id, row.number)?,
            pathway_name: row.name,
            archived: row.archived_at.is_some(),
            revision: row.number,
            factor: row.place.factor,
            pointer: row.place.pointer,
            stage: row.place.stage_key,
            input: row.place.input_key,
            co_product: row.place.co_product_key,
        })
    };
    let seen = |place: &Result<FactorUse, PathwayError>| {
        place
            .as_ref()
            .map_or(true, |place| app.who.sees_pathway(place.pathway))
    };
    uses.into_iter().map(place).filter(seen).collect()
}

/// Makes the rows of every current document again and compares: the pathways whose rows differ.
///
/// # Errors
/// When the database fails or a document cannot be read.
pub async fn rows_differ(app: &App) -> Result<Vec<Uuid>, PathwayError> {
    let mut differ = Vec::new();
    let mut after = 0;
    let mut reader = app.store.reader().await?;
    loop {
        let batch = sql::current_after(&mut reader, app.organisation, after, 100).await?;
        let Some(last) = batch.last() else {
            return Ok(differ);
        };
        after = last.id;
        for row in batch {
            let written = rows::sql::read(&mut reader, app.organisation, row.revision_id).await?;
            if written != Rows::of(&document(&row.document, row.revision_id)?) {
                differ.push(public_id(&row.public_id, row.id)?);
            }
        }
    }
}
