//! The list of pathways: filtered, sorted, a page at a time.

pub(crate) mod sql;

use super::assess::{Made, compute, document, keep_soon, lines, make};
use super::{PathwayError, Summary, public_id, reasons, time};
use crate::app::who::Sight;
use crate::app::{App, Basis};
use crate::core::documents::Problem;
use crate::rules;
use jiff::Timestamp;
use serde::{Deserialize, Serialize};
use sql::{LineRow, Place};
use std::sync::Arc;
use utoipa::ToSchema;
use uuid::Uuid;

/// Most lines on a page.
pub const MOST_LINES: u32 = 200;

/// What to list.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Question {
    /// Part of the name, in any case.
    pub name: Option<String>,
    /// Material id of the feedstock.
    pub feedstock: Option<String>,
    /// Id of the rule set.
    pub rule_set: Option<String>,
    /// Demonstration data only, or none of it.
    pub example: Option<bool>,
    /// Archived pathways instead of the others.
    pub archived: bool,
    /// In which order.
    pub sort: Sort,
    /// [`Page::next`] of the page before.
    pub after: Option<String>,
    /// Lines on the page, 1 to [`MOST_LINES`]; 50 when left out.
    pub limit: Option<u32>,
}

/// The order of a list. Ties follow the public id.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Sort {
    /// Last changed first.
    #[default]
    Updated,
    /// By name.
    Name,
    /// Smallest net figure first; without one last.
    Net,
    /// Largest saving first; without one last.
    Saving,
}

/// A line of the list.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Line {
    /// Public id.
    pub id: Uuid,
    /// Name.
    pub name: String,
    /// Material id of the feedstock.
    pub feedstock: String,
    /// Id of the rule set.
    pub rule_set: String,
    /// True for demonstration data.
    pub example: bool,
    /// Number of the current revision.
    pub revision: i64,
    /// Hash of its document: the entity tag.
    pub hash: String,
    /// When the pathway was made.
    #[schema(value_type = String, format = DateTime)]
    pub created_at: Timestamp,
    /// When it was last changed.
    #[schema(value_type = String, format = DateTime)]
    pub updated_at: Timestamp,
    /// Since when it is hidden.
    #[schema(value_type = Option<String>, format = DateTime)]
    pub archived_at: Option<Timestamp>,
    /// The assessment in short; null when this version of the program refuses the document.
    pub assessment: Option<Summary>,
    /// Findings that still want a written reason; the summary counts those with one too.
    pub warnings_without_reason: u32,
}

/// A page of the list.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Page {
    /// The lines.
    pub lines: Vec<Line>,
    /// Where the next page begins; null on the last.
    pub next: Option<String>,
}

/// Lists pathways.
///
/// # Errors
/// A problem when `after` is not a place of this order; or when the database fails.
pub async fn list(app: &App, question: &Question) -> Result<Page, PathwayError> {
    let limit = question.limit.unwrap_or(50).clamp(1, MOST_LINES);
    let after = match &question.after {
        Some(text) => Some(Place::from_text(question.sort, text).ok_or_else(unknown_place)?),
        None => None,
    };
    let basis = rules::basis(app).await?;
    let mut reader = app.store.reader().await?;
    let mut rows = sql::lines(
        &mut reader,
        app.organisation,
        question,
        after.as_ref(),
        i64::from(limit) + 1,
        &basis.settings_hash,
        chosen(&app.who.sight).as_deref(),
    )
    .await?;
    drop(reader);
    let shown = usize::try_from(limit).unwrap_or(usize::MAX);
    let more = rows.len() > shown;
    rows.truncate(shown);
    let next = rows
        .last()
        .filter(|_| more)
        .map(|row| Place::of(question.sort, row).to_text());
    let mut lines = Vec::with_capacity(rows.len());
    for row in rows {
        lines.push(line(app, &basis, row).await?);
    }
    Ok(Page { lines, next })
}

/// The pathways that an auditor from outside was invited to, as a JSON list.
fn chosen(sight: &Sight) -> Option<String> {
    match sight {
        Sight::All => None,
        Sight::Chosen { pathways, .. } => {
            let ids: Vec<_> = pathways.iter().map(|id| format!("\"{id}\"")).collect();
            Some(format!("[{}]", ids.join(",")))
        }
    }
}

fn unknown_place() -> PathwayError {
    let detail = "This is not a place in the list, or one of another order.".into();
    let remedy = "Take it from the link to the next page, or leave it out.".into();
    PathwayError::Problems(
        Problem {
            pointer: String::new(),
            detail,
            remedy,
        }
        .into(),
    )
}

async fn line(app: &App, basis: &Arc<Basis>, row: LineRow) -> Result<Line, PathwayError> {
    let assessment = match row.summary.into_summary(row.id)? {
        Some(summary) => Some(summary),
        None => made_now(app, basis, row.revision_id, &row.public_id, row.id).await?,
    };
    let id = public_id(&row.public_id, row.id)?;
    let warnings = assessment.as_ref().map_or(0, |found| found.warnings);
    // Only a pathway with reasons has its assessment read for them.
    let warnings_without_reason = match row.reasoned && warnings > 0 {
        true => u32::try_from(reasons(app, id).await?.wanting.len()).unwrap_or(u32::MAX),
        false => warnings,
    };
    Ok(Line {
        id,
        name: row.name,
        feedstock: row.feedstock,
        rule_set: row.pathway_rule_set,
        example: row.example,
        revision: row.number,
        hash: row.hash,
        created_at: time(row.created_at, "pathway", "created_at", row.id)?,
        updated_at: time(row.updated_at, "pathway", "updated_at", row.id)?,
        archived_at: row
            .archived_at
            .map(|at| time(at, "pathway", "archived_at", row.id))
            .transpose()?,
        assessment,
        warnings_without_reason,
    })
}

/// The program has been brought up to date since the last save, or what it rests on has changed: assess now.
async fn made_now(
    app: &App,
    basis: &Arc<Basis>,
    revision: i64,
    id: &str,
    row: i64,
) -> Result<Option<Summary>, PathwayError> {
    let mut reader = app.store.reader().await?;
    let found = super::sql::revision(&mut reader, app.organisation, public_id(id, row)?, None).await?;
    drop(reader);
    let Some(found) = found.filter(|found| found.revision_id == revision) else {
        return Ok(None);
    };
    let document = document(&found.document, revision)?;
    let (app_too, basis) = (app.clone(), basis.clone());
    let lines = lines(&document);
    let work = move || make(&app_too, &basis, &document, None);
    let made: Made = match compute(lines, work).await {
        Ok(made) => made,
        Err(PathwayError::Problems(_)) => return Ok(None),
        Err(other) => return Err(other),
    };
    let summary = made.summary.clone();
    keep_soon(app, revision, made).await;
    Ok(Some(summary))
}
