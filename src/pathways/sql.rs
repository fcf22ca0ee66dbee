//! The SQL of pathways, revisions and assessments, as named text, and the functions that speak it. Every statement names the
//! organisation.

use super::assess::Made;
use super::save::Prepared;
use crate::app::PROGRAM;
use crate::store::{Connection, OrganisationId, StoreError};
use uuid::Uuid;

const HEAD: &str = "\
    SELECT p.id, p.archived_at, r.number, r.hash, r.rule_set, r.saved_at, \
           COALESCE((SELECT s.hash FROM reasons s WHERE s.pathway_id = p.id ORDER BY s.number DESC LIMIT 1), '') AS reasons \
    FROM pathway p \
    JOIN revision r ON r.pathway_id = p.id AND r.number = p.current_revision AND r.organisation_id = p.organisation_id \
    WHERE p.organisation_id = $1 AND p.public_id = $2";
const REVISION: &str = "\
    SELECT p.id, p.public_id, p.example, p.created_at, p.archived_at, p.current_revision, r.id AS revision_id, r.number, \
           r.document, r.hash, r.rule_set, r.saved_at, r.reason \
    FROM pathway p \
    JOIN revision r ON r.pathway_id = p.id AND r.number = COALESCE($3, p.current_revision) \
                   AND r.organisation_id = p.organisation_id \
    WHERE p.organisation_id = $1 AND p.public_id = $2";
const REVISIONS: &str = "\
    SELECT r.number, r.hash, r.saved_at, r.reason, r.rule_set, a.hash AS assessment_hash, a.net, a.saving, a.thresholds, \
           a.blocks, a.warnings, a.infos \
    FROM pathway p \
    JOIN revision r ON r.pathway_id = p.id AND r.organisation_id = p.organisation_id \
    LEFT JOIN assessment a ON a.organisation_id = r.organisation_id AND a.revision_id = r.id AND a.program = $3 \
                          AND a.rule_set = r.rule_set AND a.settings = $4 \
    WHERE p.organisation_id = $1 AND p.public_id = $2 ORDER BY r.number DESC";
const ADD_PATHWAY: &str = "\
    INSERT INTO pathway (organisation_id, public_id, name, name_folded, feedstock, rule_set, example, current_revision, \
                         created_at, updated_at) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, 1, $8, $8) RETURNING id";
const MOVE_ON: &str = "\
    UPDATE pathway SET name = $3, name_folded = $4, feedstock = $5, rule_set = $6, example = $7, current_revision = $8, \
                       updated_at = $9 \
    WHERE organisation_id = $1 AND id = $2";
const SET_ARCHIVED: &str =
    "UPDATE pathway SET archived_at = $3, updated_at = $4 WHERE organisation_id = $1 AND id = $2";
const ADD_REVISION: &str = "\
    INSERT INTO revision (organisation_id, pathway_id, number, document, hash, rule_set, example, saved_at, reason) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9) RETURNING id";
const REMOVE_EXAMPLES: &str = "\
    DELETE FROM pathway WHERE organisation_id = $1 AND example = 1 AND NOT EXISTS \
    (SELECT 1 FROM revision r WHERE r.organisation_id = $1 AND r.pathway_id = pathway.id AND r.example = 0) AND EXISTS \
    (SELECT 1 FROM revision r WHERE r.organisation_id = $1 AND r.pathway_id = pathway.id AND r.number = 1 \
     AND r.hash IN (SELECT value FROM json_each($2)))";
const EXAMPLE_BY_HASH: &str = "\
    SELECT p.public_id FROM pathway p \
    JOIN revision r ON r.pathway_id = p.id AND r.number = p.current_revision AND r.organisation_id = p.organisation_id \
    WHERE p.organisation_id = $1 AND p.example = 1 AND p.archived_at IS NULL AND r.hash = $2";
const CURRENT_AFTER: &str = "\
    SELECT p.id, p.public_id, r.id AS revision_id, r.document FROM pathway p \
    JOIN revision r ON r.pathway_id = p.id AND r.number = p.current_revision AND r.organisation_id = p.organisation_id \
    WHERE p.organisation_id = $1 AND p.id > $2 ORDER BY p.id LIMIT $3";
const EVERY_REVISION: &str = "\
    SELECT p.id, p.public_id, r.number, r.document, r.hash, r.rule_set, r.example \
    FROM pathway p JOIN revision r ON r.pathway_id = p.id AND r.organisation_id = p.organisation_id \
    WHERE p.organisation_id = $1 AND p.id >= $2 AND (p.id > $2 OR r.number > $3) ORDER BY p.id, r.number LIMIT $4";

const ASSESSMENT: &str = "\
    SELECT hash, document FROM assessment \
    WHERE organisation_id = $1 AND revision_id = $2 AND rule_set = $3 AND program = $4 AND settings = $5";
const KEEP_ASSESSMENT: &str = "\
    INSERT INTO assessment (organisation_id, revision_id, rule_set, program, document, hash, net, saving, thresholds, \
                            blocks, warnings, infos, made_at, settings) \
    SELECT $1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12, $13, $14 \
    WHERE $15 = COALESCE((SELECT MAX(id) FROM own_rule_set WHERE organisation_id = $1), 0) \
    ON CONFLICT (revision_id, rule_set, program) DO UPDATE SET \
        document = excluded.document, hash = excluded.hash, net = excluded.net, saving = excluded.saving, \
        thresholds = excluded.thresholds, blocks = excluded.blocks, warnings = excluded.warnings, \
        infos = excluded.infos, made_at = excluded.made_at, settings = excluded.settings";

const REASONS: &str = "\
    SELECT document, hash FROM reasons WHERE organisation_id = $1 AND pathway_id = $2 ORDER BY number DESC LIMIT 1";
const ADD_REASONS: &str = "\
    INSERT INTO reasons (organisation_id, pathway_id, number, document, hash, saved_at) \
    VALUES ($1, $2, 1 + COALESCE((SELECT MAX(number) FROM reasons WHERE organisation_id = $1 AND pathway_id = $2), 0), \
            $3, $4, $5)";

/// The statements of this file.
pub(crate) const STATEMENTS: &[&str] = &[
    HEAD,
    REVISION,
    REVISIONS,
    ADD_PATHWAY,
    MOVE_ON,
    SET_ARCHIVED,
    ADD_REVISION,
    REMOVE_EXAMPLES,
    EXAMPLE_BY_HASH,
    CURRENT_AFTER,
    EVERY_REVISION,
    ASSESSMENT,
    KEEP_ASSESSMENT,
    REASONS,
    ADD_REASONS,
];

/// The current revision of a pathway, by its inner ids.
#[derive(sqlx::FromRow)]
pub(super) struct HeadRow {
    pub(super) id: i64,
    pub(super) archived_at: Option<i64>,
    pub(super) number: i64,
    pub(super) hash: String,
    pub(super) rule_set: String,
    pub(super) saved_at: i64,
    /// Hash of the reasons given for its warnings; empty for none.
    pub(super) reasons: String,
}

/// A revision with its document.
#[derive(sqlx::FromRow)]
pub(super) struct RevisionRow {
    pub(super) id: i64,
    pub(super) example: bool,
    pub(super) created_at: i64,
    pub(super) archived_at: Option<i64>,
    pub(super) current_revision: i64,
    pub(super) revision_id: i64,
    pub(super) number: i64,
    pub(super) document: String,
    pub(super) hash: String,
    pub(super) rule_set: String,
    pub(super) saved_at: i64,
    pub(super) reason: Option<String>,
}

/// A line of the history of a pathway.
#[derive(sqlx::FromRow)]
pub(super) struct HistoryRow {
    pub(super) number: i64,
    pub(super) hash: String,
    pub(super) saved_at: i64,
    pub(super) reason: Option<String>,
    #[sqlx(flatten)]
    pub(super) summary: SummaryRow,
}

/// The short form of an assessment; empty where none is kept.
#[derive(sqlx::FromRow)]
pub(super) struct SummaryRow {
    pub(super) rule_set: String,
    pub(super) assessment_hash: Option<String>,
    pub(super) net: Option<f64>,
    pub(super) saving: Option<f64>,
    pub(super) thresholds: Option<String>,
    pub(super) blocks: Option<i64>,
    pub(super) warnings: Option<i64>,
    pub(super) infos: Option<i64>,
}

/// A current document out of all.
#[derive(sqlx::FromRow)]
pub(super) struct CurrentRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) revision_id: i64,
    pub(super) document: String,
}

type Answer<T> = Result<T, StoreError>;

pub(super) async fn head(c: &mut Connection, who: OrganisationId, id: Uuid) -> Answer<Option<HeadRow>> {
    Ok(sqlx::query_as(HEAD)
        .bind(who.0)
        .bind(id.to_string())
        .fetch_optional(c)
        .await?)
}

/// A revision by number; the current one without.
pub(super) async fn revision(
    c: &mut Connection,
    who: OrganisationId,
    id: Uuid,
    number: Option<i64>,
) -> Answer<Option<RevisionRow>> {
    Ok(sqlx::query_as(REVISION)
        .bind(who.0)
        .bind(id.to_string())
        .bind(number)
        .fetch_optional(c)
        .await?)
}

/// The history, newest first; empty when there is no such pathway.
pub(super) async fn revisions(
    c: &mut Connection,
    who: OrganisationId,
    id: Uuid,
    settings: &str,
) -> Answer<Vec<HistoryRow>> {
    Ok(sqlx::query_as(REVISIONS)
        .bind(who.0)
        .bind(id.to_string())
        .bind(PROGRAM)
        .bind(settings)
        .fetch_all(c)
        .await?)
}

/// Adds a pathway; its inner id.
pub(super) async fn add_pathway(
    c: &mut Connection,
    who: OrganisationId,
    id: Uuid,
    made: &Prepared,
    now: i64,
) -> Answer<i64> {
    let document = &made.document;
    let query = sqlx::query_scalar(ADD_PATHWAY)
        .bind(who.0)
        .bind(id.to_string())
        .bind(&document.name)
        .bind(fold(&document.name))
        .bind(&document.feedstock)
        .bind(&document.rule_set)
        .bind(document.example)
        .bind(now);
    Ok(query.fetch_one(c).await?)
}

/// Makes a revision the current one.
pub(super) async fn move_on(
    c: &mut Connection,
    who: OrganisationId,
    pathway: i64,
    number: i64,
    made: &Prepared,
    now: i64,
) -> Answer<()> {
    let document = &made.document;
    let query = sqlx::query(MOVE_ON)
        .bind(who.0)
        .bind(pathway)
        .bind(&document.name)
        .bind(fold(&document.name))
        .bind(&document.feedstock)
        .bind(&document.rule_set)
        .bind(document.example)
        .bind(number)
        .bind(now);
    query.execute(c).await?;
    Ok(())
}

pub(super) async fn set_archived(
    c: &mut Connection,
    who: OrganisationId,
    pathway: i64,
    archived_at: Option<i64>,
    now: i64,
) -> Answer<()> {
    sqlx::query(SET_ARCHIVED)
        .bind(who.0)
        .bind(pathway)
        .bind(archived_at)
        .bind(now)
        .execute(c)
        .await?;
    Ok(())
}

/// Adds a revision with its rows and its assessment; its inner id.
pub(super) async fn add_revision(
    c: &mut Connection,
    who: OrganisationId,
    pathway: i64,
    number: i64,
    made: &Prepared,
    reason: Option<&str>,
    now: i64,
) -> Answer<i64> {
    let query = sqlx::query_scalar(ADD_REVISION)
        .bind(who.0)
        .bind(pathway)
        .bind(number)
        .bind(&made.text)
        .bind(&made.hash)
        .bind(&made.document.rule_set)
        .bind(made.document.example)
        .bind(now)
        .bind(reason);
    let revision = query.fetch_one(&mut *c).await?;
    super::rows::sql::write(c, who, revision, &made.rows).await?;
    keep(c, who, revision, &made.assessment, now).await?;
    Ok(revision)
}

/// Keeps an assessment beside its revision, unless an own rule set was saved since it was made.
pub(super) async fn keep(
    c: &mut Connection,
    who: OrganisationId,
    revision: i64,
    made: &Made,
    now: i64,
) -> Answer<()> {
    let query = sqlx::query(KEEP_ASSESSMENT)
        .bind(who.0)
        .bind(revision)
        .bind(&made.summary.rule_set)
        .bind(PROGRAM)
        .bind(&made.text)
        .bind(&made.summary.assessment_hash)
        .bind(made.summary.net_g_co2e_per_mj)
        .bind(made.summary.saving_percent)
        .bind(&made.thresholds)
        .bind(made.summary.blocks)
        .bind(made.summary.warnings)
        .bind(made.summary.infos)
        .bind(now)
        .bind(&*made.basis.settings_hash)
        .bind(made.basis.last_rule_set);
    query.execute(c).await?;
    Ok(())
}

/// Hash and bytes of the assessment kept by this version of the program.
pub(super) async fn assessment(
    c: &mut Connection,
    who: OrganisationId,
    revision: i64,
    rule_set: &str,
    settings: &str,
) -> Answer<Option<(String, String)>> {
    let query = sqlx::query_as(ASSESSMENT)
        .bind(who.0)
        .bind(revision)
        .bind(rule_set)
        .bind(PROGRAM)
        .bind(settings);
    Ok(query.fetch_optional(c).await?)
}

/// Document and hash of the reasons saved last.
pub(super) async fn reasons(
    c: &mut Connection,
    who: OrganisationId,
    pathway: i64,
) -> Answer<Option<(String, String)>> {
    Ok(sqlx::query_as(REASONS)
        .bind(who.0)
        .bind(pathway)
        .fetch_optional(c)
        .await?)
}

pub(super) async fn add_reasons(
    c: &mut Connection,
    who: OrganisationId,
    pathway: i64,
    document: &str,
    hash: &str,
    now: i64,
) -> Answer<()> {
    let query = sqlx::query(ADD_REASONS)
        .bind(who.0)
        .bind(pathway)
        .bind(document)
        .bind(hash)
        .bind(now);
    query.execute(c).await?;
    Ok(())
}

/// Removes demonstration data whole; how many pathways went.
pub(super) async fn remove_examples(c: &mut Connection, who: OrganisationId, hashes: &str) -> Answer<u64> {
    Ok(sqlx::query(REMOVE_EXAMPLES)
        .bind(who.0)
        .bind(hashes)
        .execute(c)
        .await?
        .rows_affected())
}

pub(super) async fn example_by_hash(
    c: &mut Connection,
    who: OrganisationId,
    hash: &str,
) -> Answer<Option<String>> {
    Ok(sqlx::query_scalar(EXAMPLE_BY_HASH)
        .bind(who.0)
        .bind(hash)
        .fetch_optional(c)
        .await?)
}

/// The next current documents after an inner id, in the order of inner ids.
pub(super) async fn current_after(
    c: &mut Connection,
    who: OrganisationId,
    after: i64,
    limit: i64,
) -> Answer<Vec<CurrentRow>> {
    Ok(sqlx::query_as(CURRENT_AFTER)
        .bind(who.0)
        .bind(after)
        .bind(limit)
        .fetch_all(c)
        .await?)
}

/// Small letters: how names are searched and ordered.
pub(super) fn fold(name: &str) -> String {
    name.to_lowercase()
}

/// A revision as it is kept.
#[derive(Debug, sqlx::FromRow)]
pub(super) struct KeptRevision {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) number: i64,
    pub(super) document: String,
    pub(super) hash: String,
    pub(super) rule_set: String,
    pub(super) example: bool,
}

/// Revisions of every pathway in order, after a number of the pathway with this inner id.
pub(super) async fn every_revision(
    c: &mut Connection,
    organisation: OrganisationId,
    (pathway, number): (i64, i64),
    limit: i64,
) -> Result<Vec<KeptRevision>, StoreError> {
    Ok(sqlx::query_as(EVERY_REVISION)
        .bind(organisation.0)
        .bind(pathway)
        .bind(number)
        .bind(limit)
        .fetch_all(c)
        .await?)
}
