//! Written reasons for warnings. They stand beside the pathway: the assessment that is kept has none, so that it can be made
//! again; they are put on its findings where it is read.

use super::assess::{bare, compute, seen};
use super::{Expected, PathwayError, What, sql};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::checks::reasons::{Applied, Reason, Stale, apply, check, wanting};
use crate::core::documents::assessment::Finding;
use crate::core::documents::{Assessment, Problems, canonical};
use crate::rules::basis;
use crate::store::StoreError;
use crate::store::memory::{Head, Kept};
use jiff::Timestamp;
use serde::{Deserialize, Serialize};
use serde_json::json;
use std::sync::Arc;
use utoipa::ToSchema;
use uuid::Uuid;

/// More reasons than this are a mistake.
pub const MOST_REASONS: usize = 1_000;

/// The reasons of a pathway as they are stored.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ReasonsDocument {
    /// The reasons. Each belongs to the finding of that check, stage and field.
    #[schema(max_items = 1000)]
    pub reasons: Vec<Reason>,
}

/// The reasons of a pathway, and what they are for.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Reasons {
    /// The reasons.
    pub reasons: Vec<Reason>,
    /// Those that no warning of the current revision wants.
    pub stale: Vec<Stale>,
    /// Warnings of the current revision that still want one.
    pub wanting: Vec<Finding>,
    /// Hash of the list: the entity tag.
    #[serde(skip)]
    pub hash: String,
}

/// The reasons given for the warnings of a pathway, as the current revision under its own rule set has them.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn reasons(app: &App, id: Uuid) -> Result<Reasons, PathwayError> {
    seen(app, id)?;
    let mut reader = app.store.reader().await?;
    let found = sql::revision(&mut reader, app.organisation, id, None).await?;
    let found = found.ok_or(PathwayError::NotFound(What::Pathway))?;
    let stored = sql::reasons(&mut reader, app.organisation, found.id).await?;
    drop(reader);
    let (list, hash) = match stored {
        Some((text, hash)) => (list(&text, found.id)?, hash),
        None => (Vec::new(), written(&ReasonsDocument::default())?.1),
    };
    let basis = basis(app).await?;
    let rule_set = found.rule_set.clone();
    let applied = match bare(app, &basis, &found, &rule_set).await {
        Ok(kept) => put_on(&kept, &list)?.1,
        // A document that this program refuses has no findings.
        Err(PathwayError::Problems(_)) => apply(Vec::new(), &list),
        Err(other) => return Err(other),
    };
    Ok(Reasons {
        wanting: wanting(&applied.findings).cloned().collect(),
        stale: applied.stale,
        reasons: list,
        hash,
    })
}

/// Replaces the reasons of a pathway. A reason that was there stays as it was given; a new or changed one is given now.
///
/// # Errors
/// All problems of the list; `Conflict` when the stored list is not the expected one (by hash; a number fits none);
/// `NotFound`, `Archived`; or when the database fails. Nothing is stored then.
pub async fn put_reasons(
    app: &App,
    id: Uuid,
    document: ReasonsDocument,
    expected: Expected,
) -> Result<Reasons, PathwayError> {
    checked(&document.reasons)?;
    let (who, now, memory) = (app.organisation, app.clock.millis(), app.memory.clone());
    let by = app.who.clone();
    let given_at = super::time(now, "reasons", "saved_at", 0)?;
    let none = written(&ReasonsDocument::default())?.1;
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let head = sql::head(c, who, id)
                    .await?
                    .ok_or(PathwayError::NotFound(What::Pathway))?;
                let stored = sql::reasons(c, who, head.id).await?;
                let (before, hash) = match stored {
                    Some((text, hash)) => (list(&text, head.id)?, hash),
                    None => (Vec::new(), none),
                };
                if !expected.fits(0, &hash) {
                    let revision = head.number;
                    return Err(PathwayError::Conflict { revision, hash });
                }
                if head.archived_at.is_some() {
                    return Err(PathwayError::Archived);
                }
                let document = ReasonsDocument {
                    reasons: document
                        .reasons
                        .into_iter()
                        .map(|reason| dated(reason, &before, given_at))
                        .collect(),
                };
                let (text, new) = written(&document)?;
                if new != hash {
                    sql::add_reasons(c, who, head.id, &text, &new, now).await?;
                    let what = json!({ "revision": head.number, "hash": new, "reasons": document.reasons });
                    audit_trail::add(c, who, &by, now, Deed::new("gave reasons", "pathway", id, what))
                        .await?;
                }
                let head = Head {
                    revision: head.number,
                    hash: head.hash,
                    rule_set: head.rule_set,
                    reasons: new,
                    archived: false,
                };
                Ok::<_, PathwayError>(head)
            })
        },
        move |head| memory.wrote(who, id, head.clone(), now),
    );
    job.await?;
    reasons(app, id).await
}

fn checked(reasons: &[Reason]) -> Result<(), Problems> {
    let mut problems = Problems::default();
    if reasons.len() > MOST_REASONS {
        let detail = format!("{} reasons are too many.", reasons.len());
        problems.add("/reasons", detail, format!("Give at most {MOST_REASONS}."));
        return Err(problems);
    }
    if let Err(found) = check(reasons) {
        for problem in found.into_list() {
            problems.add(
                format!("/reasons{}", problem.pointer),
                problem.detail,
                problem.remedy,
            );
        }
    }
    for (index, reason) in reasons.iter().enumerate() {
        if reason.who.as_ref().is_some_and(|who| who.chars().count() > 200) {
            problems.add(
                format!("/reasons/{index}/who"),
                "The name is longer than 200 letters.",
                "Shorten it.",
            );
        }
    }
    if problems.is_empty() {
        Ok(())
    } else {
        Err(problems)
    }
}

/// The reason with the time at which it was first given so.
fn dated(reason: Reason, before: &[Reason], now: Timestamp) -> Reason {
    let same = |old: &&Reason| {
        let undated = Reason {
            when: reason.when,
            ..(*old).clone()
        };
        undated == reason
    };
    let when = before.iter().find(same).and_then(|old| old.when).unwrap_or(now);
    Reason {
        when: Some(when),
        ..reason
    }
}

/// A list as it is stored, and its hash.
fn written(document: &ReasonsDocument) -> Result<(String, String), PathwayError> {
    let defect = "wrote reasons";
    let bytes = canonical::bytes(document).map_err(|error| PathwayError::defect(defect, error))?;
    let hash = canonical::hash(&bytes);
    let text = String::from_utf8(bytes).map_err(|error| PathwayError::defect(defect, error))?;
    Ok((text, hash))
}

/// Reads a stored list back.
pub(super) fn list(text: &str, row: i64) -> Result<Vec<Reason>, StoreError> {
    let document: Result<ReasonsDocument, _> = serde_json::from_str(text);
    document
        .map(|document| document.reasons)
        .map_err(|_| StoreError::Inconsistent {
            table: "reasons",
            column: "document",
            row,
        })
}

/// An assessment with the reasons on its findings.
pub(super) async fn with_reasons(kept: Kept, reasons: Vec<Reason>) -> Result<Kept, PathwayError> {
    // Reading and writing an assessment takes about as long as making it.
    let lines = kept.bytes.len() / 1_000;
    compute(lines, move || Ok(put_on(&kept, &reasons)?.0)).await
}

fn put_on(kept: &Kept, reasons: &[Reason]) -> Result<(Kept, Applied), PathwayError> {
    let mut assessment: Assessment = serde_json::from_slice(&kept.bytes)
        .map_err(|error| PathwayError::defect("read an assessment", error))?;
    let applied = apply(std::mem::take(&mut assessment.findings), reasons);
    assessment.findings.clone_from(&applied.findings);
    let bytes =
        canonical::bytes(&assessment).map_err(|error| PathwayError::defect("wrote an assessment", error))?;
    let kept = Kept {
        hash: canonical::hash(&bytes),
        bytes: Arc::from(bytes),
    };
    Ok((kept, applied))
}
