//! Saving: a document is evaluated whole and becomes a revision, or nothing is stored at all.

use super::assess::{Made, compute, document, key, lines, make};
use super::rows::{self, EvidenceUseRow, RowTexts, Rows};
use super::{Expected, PathwayError, Saved, Summary, What, sql, time};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::documents::pathway::Stage;
use crate::core::documents::{Pathway, Problem, canonical};
use crate::evidence;
use crate::rules::basis;
use crate::store::memory::{Head, Memory};
use crate::store::{Connection, OrganisationId};
use serde_json::json;
use std::sync::Arc;
use uuid::Uuid;

/// A document that may be saved, with all that is written beside it.
#[derive(Debug)]
pub(super) struct Prepared {
    pub(super) document: Pathway,
    pub(super) text: String,
    pub(super) hash: String,
    pub(super) rows: RowTexts,
    /// Where it names evidence.
    evidence: Vec<EvidenceUseRow>,
    pub(super) assessment: Made,
}

/// Evaluates a document and works out everything that is written with it.
pub(super) async fn prepare(app: &App, document: Pathway) -> Result<Arc<Prepared>, PathwayError> {
    let named = rows::evidence::named(&document);
    match computed(app, document).await {
        // Whatever is wrong with a document is told at once.
        Err(PathwayError::Problems(mut problems)) => {
            let mut reader = app.store.reader().await?;
            let missing =
                evidence::missing(&mut reader, app.organisation, &rows::evidence::ids(&named)).await?;
            for problem in rows::evidence::problems(&named, &missing).into_list() {
                problems.add(problem.pointer, problem.detail, problem.remedy);
            }
            Err(PathwayError::Problems(problems))
        }
        other => other,
    }
}

async fn computed(app: &App, document: Pathway) -> Result<Arc<Prepared>, PathwayError> {
    let basis = basis(app).await?;
    let app = app.clone();
    compute(lines(&document), move || {
        let defect = |error| PathwayError::defect("wrote a pathway", error);
        let bytes = canonical::bytes(&document).map_err(defect)?;
        // What is evaluated is what is stored, read back: a document put together in memory is held to the rules of
        // one that was sent, and its bytes must stay the same ever after.
        let document = Pathway::from_bytes(&bytes)?;
        if canonical::bytes(&document).map_err(defect)? != bytes {
            let lost = std::io::Error::other("the canonical bytes read back as another document");
            return Err(PathwayError::defect("wrote a pathway", lost));
        }
        let assessment = make(&app, &basis, &document, None)?;
        let rows = Rows::of(&document);
        let evidence = rows.evidence.clone();
        let rows = rows
            .texts()
            .map_err(|error| PathwayError::defect("wrote the rows of a pathway", error))?;
        let hash = canonical::hash(&bytes);
        let text =
            String::from_utf8(bytes).map_err(|error| PathwayError::defect("wrote a pathway", error))?;
        Ok(Arc::new(Prepared {
            document,
            text,
            hash,
            rows,
            evidence,
            assessment,
        }))
    })
    .await
}

impl Prepared {
    fn saved(&self, id: Uuid, revision: i64, at: i64, changed: bool) -> Result<Saved, PathwayError> {
        let saved_at = time(at, "revision", "saved_at", revision)?;
        let assessment: Summary = self.assessment.summary.clone();
        Ok(Saved {
            id,
            revision,
            hash: self.hash.clone(),
            saved_at,
            changed,
            assessment,
        })
    }

    /// Refuses it where it names evidence that is not there: asked in the transaction that stores it.
    async fn backed(&self, c: &mut Connection, who: OrganisationId) -> Result<(), PathwayError> {
        let missing = evidence::missing(c, who, &rows::evidence::ids(&self.evidence)).await?;
        let problems = rows::evidence::problems(&self.evidence, &missing);
        if problems.is_empty() {
            Ok(())
        } else {
            Err(PathwayError::Problems(problems))
        }
    }

    /// What the audit trail says of it.
    fn deed(&self, did: &'static str, id: Uuid, revision: i64) -> Deed {
        let what = json!({
            "name": self.document.name,
            "revision": revision,
            "hash": self.hash,
            "net_g_co2e_per_mj": self.assessment.summary.net_g_co2e_per_mj,
        });
        Deed::new(did, "pathway", id, what)
    }

    fn head(&self, revision: i64, reasons: String) -> Head {
        Head {
            revision,
            hash: self.hash.clone(),
            rule_set: self.document.rule_set.clone(),
            reasons,
            archived: false,
        }
    }

    /// Keeps the assessment at hand.
    fn keep(&self, memory: &Memory) {
        let assessment = &self.assessment;
        let key = key(&self.hash, &self.document.rule_set, &assessment.basis);
        memory.keep(key, assessment.kept());
    }
}

/// Stores a new pathway.
///
/// # Errors
/// All problems of the document; then nothing is stored. Or when the database fails.
pub async fn create(app: &App, document: Pathway, reason: Option<String>) -> Result<Saved, PathwayError> {
    let made = prepare(app, document).await?;
    create_prepared(app, made, reason).await
}

pub(super) async fn create_prepared(
    app: &App,
    made: Arc<Prepared>,
    reason: Option<String>,
) -> Result<Saved, PathwayError> {
    let (who, id, now) = (app.organisation, app.clock.id(), app.clock.millis());
    let by = app.who.clone();
    let saved = made.saved(id, 1, now, true)?;
    let (memory, kept) = (app.memory.clone(), made.clone());
    app.store
        .write_then(
            move |c| {
                Box::pin(async move {
                    made.backed(c, who).await?;
                    let pathway = sql::add_pathway(c, who, id, &made, now).await?;
                    sql::add_revision(c, who, pathway, 1, &made, reason.as_deref(), now).await?;
                    let deed = made.deed("created", id, 1).because(reason);
                    audit_trail::add(c, who, &by, now, deed).await?;
                    Ok::<_, PathwayError>(())
                })
            },
            move |()| {
                memory.wrote(who, id, kept.head(1, String::new()), now);
                kept.keep(&memory);
            },
        )
        .await?;
    Ok(saved)
}

/// Saves a document as the next revision of a pathway. The current document, saved again, makes none.
///
/// # Errors
/// All problems of the document; `Conflict` when the pathway is not at the expected revision; `NotFound`, `Archived`;
/// or when the database fails. Nothing is stored then.
pub async fn replace(
    app: &App,
    id: Uuid,
    document: Pathway,
    expected: Expected,
    reason: Option<String>,
) -> Result<Saved, PathwayError> {
    let made = prepare(app, document).await?;
    let (who, now, by) = (app.organisation, app.clock.millis(), app.who.clone());
    let (memory, job, after) = (app.memory.clone(), made.clone(), made.clone());
    let (revision, at, changed, _) = app
        .store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let head = sql::head(c, who, id)
                        .await?
                        .ok_or(PathwayError::NotFound(What::Pathway))?;
                    expected.check(head.number, &head.hash)?;
                    if head.archived_at.is_some() {
                        return Err(PathwayError::Archived);
                    }
                    if head.hash == job.hash {
                        return Ok((head.number, head.saved_at, false, head.reasons));
                    }
                    job.backed(c, who).await?;
                    let number = head.number + 1;
                    sql::add_revision(c, who, head.id, number, &job, reason.as_deref(), now).await?;
                    sql::move_on(c, who, head.id, number, &job, now).await?;
                    let deed = job.deed("saved", id, number).because(reason);
                    audit_trail::add(c, who, &by, now, deed).await?;
                    Ok((number, now, true, head.reasons))
                })
            },
            move |(number, _, _, reasons)| {
                memory.wrote(who, id, after.head(*number, reasons.clone()), now);
                after.keep(&memory);
            },
        )
        .await?;
    made.saved(id, revision, at, changed)
}

/// Hides a pathway from lists; nothing is removed and it can still be read.
///
/// # Errors
/// `Conflict` when it is not at the expected revision, `NotFound`, or when the database fails.
pub async fn archive(app: &App, id: Uuid, expected: Expected) -> Result<(), PathwayError> {
    set_archived(app, id, expected, true).await
}

/// Takes a pathway out of the archive.
///
/// # Errors
/// `Conflict` when it is not at the expected revision, `NotFound`, or when the database fails.
pub async fn restore(app: &App, id: Uuid, expected: Expected) -> Result<(), PathwayError> {
    set_archived(app, id, expected, false).await
}

async fn set_archived(app: &App, id: Uuid, expected: Expected, archived: bool) -> Result<(), PathwayError> {
    let (who, now, by) = (app.organisation, app.clock.millis(), app.who.clone());
    let memory = app.memory.clone();
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let head = sql::head(c, who, id)
                    .await?
                    .ok_or(PathwayError::NotFound(What::Pathway))?;
                expected.check(head.number, &head.hash)?;
                if head.archived_at.is_some() != archived {
                    sql::set_archived(c, who, head.id, archived.then_some(now), now).await?;
                    let did = if archived { "archived" } else { "restored" };
                    let deed = Deed::new(did, "pathway", id, json!({ "revision": head.number }));
                    audit_trail::add(c, who, &by, now, deed).await?;
                }
                Ok::<_, PathwayError>(Head {
                    revision: head.number,
                    hash: head.hash,
                    rule_set: head.rule_set,
                    reasons: head.reasons,
                    archived,
                })
            })
        },
        move |head| memory.wrote(who, id, head.clone(), now),
    );
    job.await.map(drop)
}

/// Saves one stage, in its place or after the last, as the next revision.
///
/// # Errors
/// As [`replace`]; and a problem when the stage carries another key than asked for.
pub async fn put_stage(
    app: &App,
    id: Uuid,
    key: &str,
    stage: Stage,
    expected: Expected,
    reason: Option<String>,
) -> Result<Saved, PathwayError> {
    if stage.key != key {
        let detail = format!(
            "The stage is called \"{}\", and was sent to \"{key}\".",
            stage.key
        );
        let remedy = "Give both the same key. A stage cannot be renamed in place.".into();
        return Err(PathwayError::Problems(
            Problem {
                pointer: "/key".into(),
                detail,
                remedy,
            }
            .into(),
        ));
    }
    let (mut document, seen) = current(app, id, &expected).await?;
    match document.stages.iter_mut().find(|old| old.key == key) {
        Some(old) => *old = stage,
        None => document.stages.push(stage),
    }
    replace(app, id, document, seen, reason).await
}

/// Takes one stage out, as the next revision.
///
/// # Errors
/// As [`replace`]; `NotFound` when there is no such stage. A pathway that needs the stage is refused with problems.
pub async fn delete_stage(
    app: &App,
    id: Uuid,
    key: &str,
    expected: Expected,
    reason: Option<String>,
) -> Result<Saved, PathwayError> {
    let (mut document, seen) = current(app, id, &expected).await?;
    let before = document.stages.len();
    document.stages.retain(|stage| stage.key != key);
    if document.stages.len() == before {
        return Err(PathwayError::NotFound(What::Stage));
    }
    replace(app, id, document, seen, reason).await
}

/// The current document if it is the expected one, and its number: a save in between is then a conflict.
async fn current(app: &App, id: Uuid, expected: &Expected) -> Result<(Pathway, Expected), PathwayError> {
    let mut reader = app.store.reader().await?;
    let found = sql::revision(&mut reader, app.organisation, id, None).await?;
    let found = found.ok_or(PathwayError::NotFound(What::Pathway))?;
    expected.check(found.number, &found.hash)?;
    Ok((
        document(&found.document, found.revision_id)?,
        Expected::Number(found.number),
    ))
}
