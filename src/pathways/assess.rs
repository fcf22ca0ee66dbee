//! Assessments: made from a document, kept beside its revision, found again or made again.

use super::reasons::{list, with_reasons};
use super::sql::{RevisionRow, SummaryRow};
use super::{PathwayError, Summary, What, public_id, sql};
use crate::app::{App, Basis};
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::{Assessment, Pathway, canonical};
use crate::core::evaluate::Options;
use crate::rules::basis;
use crate::store::StoreError;
use crate::store::memory::{AssessmentKey, Head, Kept};
use std::sync::Arc;
use tokio::task::JoinSet;
use uuid::Uuid;

/// A document of fewer inventory lines than this is evaluated where the request runs, which takes well under a
/// millisecond in a release build; a larger one goes to the threads for long work, so that it holds up nobody.
const MANY_LINES: usize = 200;

/// Documents that are evaluated together when all are.
const TOGETHER: i64 = 250;

/// An assessment ready to be kept.
#[derive(Clone, Debug)]
pub(super) struct Made {
    pub(super) text: String,
    pub(super) summary: Summary,
    pub(super) thresholds: String,
    /// What it rests on.
    pub(super) basis: Arc<Basis>,
}

impl Made {
    pub(super) fn kept(&self) -> Kept {
        Kept {
            hash: self.summary.assessment_hash.clone(),
            bytes: Arc::from(self.text.as_bytes()),
        }
    }
}

/// The bytes of an assessment and what they belong to.
#[derive(Clone, Debug)]
pub struct AssessmentBytes {
    /// Number of the revision.
    pub revision: i64,
    /// Hash of the revision's document.
    pub pathway_hash: String,
    /// Rule set of the assessment.
    pub rule_set: String,
    /// Hash of the bytes: their entity tag.
    pub hash: String,
    /// Canonical JSON.
    pub bytes: Arc<[u8]>,
}

/// What came of assessing everything.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Reassessed {
    /// Pathways assessed.
    pub assessed: usize,
    /// Pathways whose document this version of the program refuses.
    pub refused: Vec<Uuid>,
    /// Sum of the net figures, g CO2e/MJ: shows that they were made.
    pub net_sum: f64,
}

/// Runs arithmetic for a document of so many lines where it holds up nobody.
pub(super) async fn compute<T: Send + 'static>(
    lines: usize,
    work: impl FnOnce() -> Result<T, PathwayError> + Send + 'static,
) -> Result<T, PathwayError> {
    if lines < MANY_LINES {
        return work();
    }
    let done = tokio::task::spawn_blocking(work).await;
    done.unwrap_or_else(|error| Err(PathwayError::defect("evaluated a pathway", error)))
}

/// Inventory lines of a document.
pub(super) fn lines(document: &Pathway) -> usize {
    document
        .stages
        .iter()
        .map(|stage| stage.inputs.len() + stage.intakes.len() + stage.co_products.len())
        .sum()
}

/// Evaluates a document, its own rule set or another.
pub(super) fn make(
    app: &App,
    basis: &Arc<Basis>,
    document: &Pathway,
    rule_set: Option<&str>,
) -> Result<Made, PathwayError> {
    let options = basis.options(rule_set);
    let assessment = app.evaluates(document, &basis.book, options)?;
    let defect = |error| PathwayError::defect("wrote an assessment", error);
    let bytes = canonical::bytes(&assessment).map_err(defect)?;
    let assessment_hash = canonical::hash(&bytes);
    let text =
        String::from_utf8(bytes).map_err(|error| PathwayError::defect("wrote an assessment", error))?;
    let thresholds = serde_json::to_string(&assessment.thresholds).map_err(defect)?;
    Ok(Made {
        text,
        thresholds,
        summary: summary(
            assessment,
            rule_set.unwrap_or(&document.rule_set),
            assessment_hash,
        ),
        basis: basis.clone(),
    })
}

/// In short, under the rule set as it was asked for: the assessment itself names the version of one of one's own.
fn summary(assessment: Assessment, rule_set: &str, assessment_hash: String) -> Summary {
    let count = |severity: Severity| {
        let findings = assessment
            .findings
            .iter()
            .filter(|finding: &&Finding| finding.severity == severity);
        u32::try_from(findings.count()).unwrap_or(u32::MAX)
    };
    Summary {
        net_g_co2e_per_mj: assessment.net.g_co2e_per_mj,
        saving_percent: assessment.saving_percent,
        blocks: count(Severity::Block),
        warnings: count(Severity::Warn),
        infos: count(Severity::Info),
        rule_set: rule_set.to_owned(),
        thresholds: assessment.thresholds,
        assessment_hash,
    }
}

impl SummaryRow {
    /// The summary of a kept assessment; `row` names the record in an error.
    pub(super) fn into_summary(self, row: i64) -> Result<Option<Summary>, StoreError> {
        let damaged = |column| StoreError::Inconsistent {
            table: "assessment",
            column,
            row,
        };
        let SummaryRow {
            rule_set,
            assessment_hash,
            net,
            saving,
            thresholds,
            blocks,
            warnings,
            infos,
        } = self;
        let Some(assessment_hash) = assessment_hash else {
            return Ok(None);
        };
        let count = |count: Option<i64>, column| {
            count
                .and_then(|count| u32::try_from(count).ok())
                .ok_or_else(|| damaged(column))
        };
        let thresholds = thresholds.ok_or_else(|| damaged("thresholds"))?;
        Ok(Some(Summary {
            rule_set,
            net_g_co2e_per_mj: net.ok_or_else(|| damaged("net"))?,
            saving_percent: saving,
            thresholds: serde_json::from_str(&thresholds).map_err(|_| damaged("thresholds"))?,
            blocks: count(blocks, "blocks")?,
            warnings: count(warnings, "warnings")?,
            infos: count(infos, "infos")?,
            assessment_hash,
        }))
    }
}

/// Reads a stored document back.
pub(super) fn document(text: &str, row: i64) -> Result<Pathway, StoreError> {
    Pathway::from_bytes(text.as_bytes()).map_err(|_| StoreError::Inconsistent {
        table: "revision",
        column: "document",
        row,
    })
}

/// The assessment of a pathway: of the current revision or another, under its own rule set or another, with the reasons
/// given for its warnings. Kept bytes where there are some, made and kept where not.
///
/// # Errors
/// When there is no such pathway or revision, when the document cannot be evaluated under the rule set, or when the
/// database fails.
pub async fn assessment(
    app: &App,
    id: Uuid,
    revision: Option<i64>,
    rule_set: Option<&str>,
) -> Result<AssessmentBytes, PathwayError> {
    seen(app, id)?;
    let basis = basis(app).await?;
    if revision.is_none() {
        let head = head(app, id).await?;
        let rule_set = rule_set.unwrap_or(&head.rule_set);
        let key = AssessmentKey {
            reasons: &head.reasons,
            ..key(&head.hash, rule_set, &basis)
        };
        if let Some(kept) = app.memory.assessment(key) {
            return Ok(answer(head.revision, head.hash.clone(), rule_set, kept));
        }
    }
    let mut reader = app.store.reader().await?;
    let found = sql::revision(&mut reader, app.organisation, id, revision).await?;
    let found = found.ok_or(PathwayError::NotFound(missing(revision)))?;
    let reasons = sql::reasons(&mut reader, app.organisation, found.id).await?;
    drop(reader);
    let rule_set = rule_set.unwrap_or(&found.rule_set).to_owned();
    let kept = match reasons {
        None => bare(app, &basis, &found, &rule_set).await?,
        Some((text, hash)) => {
            let key = AssessmentKey {
                reasons: &hash,
                ..key(&found.hash, &rule_set, &basis)
            };
            match app.memory.assessment(key) {
                Some(kept) => kept,
                None => {
                    let bare = bare(app, &basis, &found, &rule_set).await?;
                    let kept = with_reasons(bare, list(&text, found.id)?).await?;
                    app.memory.keep(key, kept.clone());
                    kept
                }
            }
        }
    };
    Ok(answer(found.number, found.hash, &rule_set, kept))
}

/// The assessment of a revision without reasons: kept bytes where there are some, made and kept where not.
pub(super) async fn bare(
    app: &App,
    basis: &Arc<Basis>,
    found: &RevisionRow,
    rule_set: &str,
) -> Result<Kept, PathwayError> {
    if let Some(kept) = app.memory.assessment(key(&found.hash, rule_set, basis)) {
        return Ok(kept);
    }
    let settings = &basis.settings_hash;
    let mut reader = app.store.reader().await?;
    let kept = sql::assessment(
        &mut reader,
        app.organisation,
        found.revision_id,
        rule_set,
        settings,
    )
    .await?;
    drop(reader);
    let kept = match kept {
        Some((hash, text)) => Kept {
            hash,
            bytes: Arc::from(text.as_bytes()),
        },
        None => {
            let document = document(&found.document, found.revision_id)?;
            let (app_too, basis, under) = (app.clone(), basis.clone(), rule_set.to_owned());
            let lines = lines(&document);
            let work = move || make(&app_too, &basis, &document, Some(&under));
            let made = compute(lines, work).await?;
            let kept = made.kept();
            keep_soon(app, found.revision_id, made).await;
            kept
        }
    };
    app.memory.keep(key(&found.hash, rule_set, basis), kept.clone());
    Ok(kept)
}

/// The key of an assessment without reasons.
pub(super) fn key<'k>(document: &'k str, rule_set: &'k str, basis: &'k Basis) -> AssessmentKey<'k> {
    AssessmentKey {
        document,
        rule_set,
        basis: &basis.hash,
        reasons: "",
    }
}

/// Refuses what whoever asks was not invited to, as if it were not there.
pub(super) fn seen(app: &App, id: Uuid) -> Result<(), PathwayError> {
    if app.who.sees_pathway(id) {
        Ok(())
    } else {
        Err(PathwayError::NotFound(What::Pathway))
    }
}

pub(super) fn missing(revision: Option<i64>) -> What {
    if revision.is_some() {
        What::Revision
    } else {
        What::Pathway
    }
}

fn answer(revision: i64, pathway_hash: String, rule_set: &str, kept: Kept) -> AssessmentBytes {
    let Kept { hash, bytes } = kept;
    AssessmentBytes {
        revision,
        pathway_hash,
        rule_set: rule_set.to_owned(),
        hash,
        bytes,
    }
}

/// Everything that a page of the current revision shows, as a text that changes when any of it does.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn face(app: &App, id: Uuid) -> Result<String, PathwayError> {
    seen(app, id)?;
    let basis = basis(app).await?;
    let head = head(app, id).await?;
    let Head {
        revision,
        hash,
        rule_set,
        reasons,
        archived,
    } = &*head;
    let basis = &basis.hash;
    Ok(format!(
        "{id} {revision} {hash} {basis} {reasons} {archived} {rule_set}"
    ))
}

/// The current revision of a pathway, from memory or the file.
pub(super) async fn head(app: &App, id: Uuid) -> Result<Arc<Head>, PathwayError> {
    let now = app.clock.millis();
    let writes = match app.memory.head(app.organisation, id, now) {
        Ok(head) => return Ok(head),
        Err(writes) => writes,
    };
    let mut reader = app.store.reader().await?;
    let row = sql::head(&mut reader, app.organisation, id).await?;
    let row = row.ok_or(PathwayError::NotFound(What::Pathway))?;
    let head = Arc::new(Head {
        revision: row.number,
        hash: row.hash,
        rule_set: row.rule_set,
        reasons: row.reasons,
        archived: row.archived_at.is_some(),
    });
    app.memory.learn(app.organisation, id, head.clone(), now, writes);
    Ok(head)
}

/// Keeps an assessment beside its revision. It is a cache: a full disk or a busy store is no reason not to answer.
pub(super) async fn keep_soon(app: &App, revision: i64, made: Made) {
    let (who, now) = (app.organisation, app.clock.millis());
    let kept = app
        .store
        .write(move |c| Box::pin(async move { sql::keep(c, who, revision, &made, now).await }));
    if let Err(error) = kept.await {
        tracing::warn!(%error, "an assessment could not be kept");
    }
}

/// Assesses the current revision of every pathway again, on all cores. With `keep` the results are kept beside their
/// revisions: worth doing once after the program has been brought up to date.
///
/// # Errors
/// When the database fails or a stored document cannot be read.
pub async fn reassess_all(app: &App, keep: bool) -> Result<Reassessed, PathwayError> {
    let basis = basis(app).await?;
    let width = std::thread::available_parallelism().map_or(1, std::num::NonZero::get);
    let mut total = Reassessed::default();
    let mut running = JoinSet::new();
    let mut after = 0;
    loop {
        let mut reader = app.store.reader().await?;
        let batch = sql::current_after(&mut reader, app.organisation, after, TOGETHER).await?;
        drop(reader);
        let Some(last) = batch.last() else { break };
        after = last.id;
        if running.len() >= width {
            gather(app, &mut running, keep, &mut total).await?;
        }
        let (app, basis) = (app.clone(), basis.clone());
        running.spawn_blocking(move || {
            let assess = |row: sql::CurrentRow| {
                let id = public_id(&row.public_id, row.id)?;
                let document = document(&row.document, row.revision_id)?;
                let result = if keep {
                    make(&app, &basis, &document, None)
                        .map(|made| (made.summary.net_g_co2e_per_mj, Some((row.revision_id, made))))
                } else {
                    let options = Options {
                        without_workings: true,
                        ..basis.options(None)
                    };
                    let assessment = app.evaluates(&document, &basis.book, options);
                    assessment
                        .map(|made| (made.net.g_co2e_per_mj, None))
                        .map_err(PathwayError::Problems)
                };
                match result {
                    Ok((net, made)) => Ok((id, Some(net), made)),
                    Err(PathwayError::Problems(_)) => Ok((id, None, None)),
                    Err(other) => Err(other),
                }
            };
            batch.into_iter().map(assess).collect()
        });
    }
    while !running.is_empty() {
        gather(app, &mut running, keep, &mut total).await?;
    }
    total.refused.sort();
    Ok(total)
}

/// Of each pathway its net figure, unless it is refused, and what is to be kept.
type Batch = Result<Vec<(Uuid, Option<f64>, Option<(i64, Made)>)>, PathwayError>;

async fn gather(
    app: &App,
    running: &mut JoinSet<Batch>,
    keep: bool,
    total: &mut Reassessed,
) -> Result<(), PathwayError> {
    let Some(done) = running.join_next().await else {
        return Ok(());
    };
    let batch = done.map_err(|error| PathwayError::defect("assessed everything again", error))??;
    let mut made = Vec::new();
    for (id, net, assessment) in batch {
        match net {
            Some(net) => {
                total.assessed += 1;
                total.net_sum += net;
            }
            None => total.refused.push(id),
        }
        made.extend(assessment);
    }
    if keep {
        let (who, now) = (app.organisation, app.clock.millis());
        let write = app.store.write(move |c| {
            Box::pin(async move {
                for (revision, made) in &made {
                    sql::keep(c, who, *revision, made, now).await?;
                }
                Ok::<_, PathwayError>(())
            })
        });
        write.await?;
    }
    Ok(())
}
