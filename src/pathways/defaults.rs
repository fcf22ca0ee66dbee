//! Defaults beside actuals of a stored pathway.

use super::assess::{compute, document, lines, missing, seen};
use super::{PathwayError, sql};
use crate::app::App;
use crate::core::documents::Pathway;
use crate::core::levers::defaults::{DefaultsTable, table};
use crate::rules::basis;
use uuid::Uuid;

/// A table with the revision that it is of.
#[derive(Clone, Debug)]
pub struct Defaults {
    /// Number of the revision.
    pub revision: i64,
    /// The document of the revision.
    pub pathway: Pathway,
    /// The table.
    pub table: DefaultsTable,
}

/// Published defaults beside the own figures of the current revision, under its own rule set or another.
///
/// # Errors
/// `NotFound`; when the document cannot be evaluated under the rule set, with its defaults or without; or when the database
/// fails.
pub async fn defaults(app: &App, id: Uuid, rule_set: Option<&str>) -> Result<Defaults, PathwayError> {
    seen(app, id)?;
    let basis = basis(app).await?;
    let mut reader = app.store.reader().await?;
    let found = sql::revision(&mut reader, app.organisation, id, None).await?;
    drop(reader);
    let found = found.ok_or(PathwayError::NotFound(missing(None)))?;
    let pathway = document(&found.document, found.revision_id)?;
    let (app, rule_set) = (app.clone(), rule_set.map(str::to_owned));
    // A table evaluates the document once for every combination.
    let work = lines(&pathway).saturating_mul(10);
    compute(work, move || {
        let mut options = basis.options(rule_set.as_deref());
        options.without_workings = true;
        let assessment = app.evaluates(&pathway, &basis.book, options)?;
        let table = table(&pathway, &assessment, &basis.book)?;
        Ok(Defaults {
            revision: found.number,
            pathway,
            table,
        })
    })
    .await
}
