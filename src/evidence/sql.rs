//! The SQL of evidence, as named text, and the functions that speak it. Every statement names the organisation, but those
//! of the check, which looks at all files at once. `$3` of some is a JSON list of the pathways that somebody sees; null
//! for all.

use super::Naming;
use crate::app::who::Who;
use crate::store::{Connection, OrganisationId, StoreError};
use sqlx::FromRow;

type Answer<T> = Result<T, StoreError>;

const LAST_NUMBER: &str = "\
    SELECT number FROM evidence WHERE organisation_id = $1 AND number IS NOT NULL ORDER BY number DESC LIMIT 1";
const IS_THERE: &str = "SELECT EXISTS (SELECT 1 FROM evidence WHERE organisation_id = $1 AND public_id = $2)";
const ADD: &str = "\
    INSERT INTO evidence (organisation_id, public_id, number, file_name, media_type, size, hash, note, example, person, \
                          by_name, attached_at) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12)";
const FIND: &str = "\
    SELECT e.id, e.public_id, e.file_name, e.media_type, e.size, e.hash, e.note, e.example, e.by_name, e.attached_at, \
           (SELECT COUNT(DISTINCT p.id) FROM evidence_use u JOIN revision r ON r.id = u.revision_id \
            JOIN pathway p ON p.id = r.pathway_id AND p.current_revision = r.number \
            WHERE u.evidence = e.public_id AND u.organisation_id = e.organisation_id \
              AND ($3 IS NULL OR p.public_id IN (SELECT value FROM json_each($3)))) AS pathways \
    FROM evidence e WHERE e.organisation_id = $1 AND e.public_id = $2 \
      AND ($3 IS NULL OR EXISTS (SELECT 1 FROM evidence_use u JOIN revision r ON r.id = u.revision_id \
           JOIN pathway p ON p.id = r.pathway_id WHERE u.evidence = e.public_id AND u.organisation_id = e.organisation_id \
             AND p.public_id IN (SELECT value FROM json_each($3))))";
const LIST: &str = "\
    SELECT e.id, e.public_id, e.file_name, e.media_type, e.size, e.hash, e.note, e.example, e.by_name, e.attached_at, \
           (SELECT COUNT(DISTINCT p.id) FROM evidence_use u JOIN revision r ON r.id = u.revision_id \
            JOIN pathway p ON p.id = r.pathway_id AND p.current_revision = r.number \
            WHERE u.evidence = e.public_id AND u.organisation_id = e.organisation_id \
              AND ($3 IS NULL OR p.public_id IN (SELECT value FROM json_each($3)))) AS pathways \
    FROM evidence e WHERE e.organisation_id = $1 AND e.id < $2 \
      AND ($3 IS NULL OR EXISTS (SELECT 1 FROM evidence_use u JOIN revision r ON r.id = u.revision_id \
           JOIN pathway p ON p.id = r.pathway_id WHERE u.evidence = e.public_id AND u.organisation_id = e.organisation_id \
             AND p.public_id IN (SELECT value FROM json_each($3)))) \
    ORDER BY e.id DESC LIMIT $4";
const AMONG: &str = "\
    SELECT e.id, e.public_id, e.file_name, e.media_type, e.size, e.hash, e.note, e.example, e.by_name, e.attached_at, \
           0 AS pathways \
    FROM evidence e WHERE e.organisation_id = $1 AND e.public_id IN (SELECT value FROM json_each($2))";
const MISSING: &str = "\
    SELECT DISTINCT json_each.value FROM json_each($2) \
    WHERE NOT EXISTS (SELECT 1 FROM evidence e WHERE e.organisation_id = $1 AND e.public_id = json_each.value)";
const USES: &str = "\
    SELECT p.public_id, p.name, p.archived_at, r.number, p.current_revision, u.pointer, u.stage_key, u.input_key, \
           s.name AS stage_name, i.label AS input_label \
    FROM evidence_use u JOIN revision r ON r.id = u.revision_id \
    JOIN pathway p ON p.id = r.pathway_id AND p.organisation_id = u.organisation_id \
    LEFT JOIN stage s ON s.revision_id = r.id AND s.key = u.stage_key \
    LEFT JOIN input i ON i.revision_id = r.id AND i.stage_key = u.stage_key AND i.key = u.input_key \
    WHERE u.organisation_id = $1 AND u.evidence = $2 \
      AND ($3 IS NULL OR p.public_id IN (SELECT value FROM json_each($3))) \
      AND NOT EXISTS (SELECT 1 FROM revision later JOIN evidence_use again ON again.revision_id = later.id \
           AND again.evidence = $2 AND again.organisation_id = $1 \
           WHERE later.pathway_id = r.pathway_id AND later.number > r.number) \
    ORDER BY p.name_folded, p.public_id, u.id LIMIT 1000";
const ALL_AFTER: &str = "\
    SELECT e.id, e.public_id, e.file_name, e.hash, e.attached_at, o.name AS organisation \
    FROM evidence e JOIN organisation o ON o.id = e.organisation_id \
    WHERE (e.hash, e.id) > ($1, $2) ORDER BY e.hash, e.id LIMIT 200";
const UNUSED_EXAMPLES: &str = "\
    SELECT DISTINCT hash FROM evidence e WHERE e.organisation_id = $1 AND e.example = 1 AND NOT EXISTS \
        (SELECT 1 FROM evidence_use u WHERE u.evidence = e.public_id AND u.organisation_id = e.organisation_id)";
const REMOVE_UNUSED_EXAMPLES: &str = "\
    DELETE FROM evidence WHERE organisation_id = $1 AND example = 1 AND NOT EXISTS \
        (SELECT 1 FROM evidence_use u WHERE u.evidence = evidence.public_id \
            AND u.organisation_id = evidence.organisation_id)";
const NAMED_BY_NONE: &str = "\
    SELECT DISTINCT json_each.value FROM json_each($1) \
    WHERE NOT EXISTS (SELECT 1 FROM evidence e WHERE e.hash = json_each.value)";

/// The statements of this file.
pub(super) const STATEMENTS: &[&str] = &[
    LAST_NUMBER,
    IS_THERE,
    ADD,
    FIND,
    LIST,
    AMONG,
    MISSING,
    USES,
    ALL_AFTER,
    UNUSED_EXAMPLES,
    REMOVE_UNUSED_EXAMPLES,
    NAMED_BY_NONE,
];

/// A record.
#[derive(FromRow)]
pub(super) struct EvidenceRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) file_name: String,
    pub(super) media_type: String,
    pub(super) size: i64,
    pub(super) hash: String,
    pub(super) note: Option<String>,
    pub(super) example: bool,
    pub(super) by_name: String,
    pub(super) attached_at: i64,
    pub(super) pathways: i64,
}

/// A place that names evidence.
#[derive(FromRow)]
pub(super) struct UseRow {
    pub(super) public_id: String,
    pub(super) name: String,
    pub(super) archived_at: Option<i64>,
    pub(super) number: i64,
    pub(super) current_revision: i64,
    pub(super) pointer: String,
    pub(super) stage_key: Option<String>,
    pub(super) input_key: Option<String>,
    pub(super) stage_name: Option<String>,
    pub(super) input_label: Option<String>,
}

/// A record as the check reads it.
#[derive(FromRow)]
pub(super) struct KeptRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) file_name: String,
    pub(super) hash: String,
    pub(super) attached_at: i64,
    pub(super) organisation: String,
}

/// What is written of a file.
pub(super) struct New<'a> {
    pub(super) naming: &'a Naming,
    pub(super) hash: &'a str,
    pub(super) size: i64,
    pub(super) example: bool,
}

/// The last number that was counted; 0 where none was.
pub(super) async fn last_number(c: &mut Connection, organisation: OrganisationId) -> Answer<i64> {
    let last: Option<i64> = sqlx::query_scalar(LAST_NUMBER)
        .bind(organisation.0)
        .fetch_optional(c)
        .await?;
    Ok(last.unwrap_or(0))
}

pub(super) async fn is_there(c: &mut Connection, organisation: OrganisationId, id: &str) -> Answer<bool> {
    Ok(sqlx::query_scalar(IS_THERE)
        .bind(organisation.0)
        .bind(id)
        .fetch_one(c)
        .await?)
}

pub(super) async fn add(
    c: &mut Connection,
    organisation: OrganisationId,
    (id, number): (&str, Option<i64>),
    new: New<'_>,
    who: &Who,
    now: i64,
) -> Answer<()> {
    sqlx::query(ADD)
        .bind(organisation.0)
        .bind(id)
        .bind(number)
        .bind(&new.naming.file_name)
        .bind(&new.naming.media_type)
        .bind(new.size)
        .bind(new.hash)
        .bind(&new.naming.note)
        .bind(new.example)
        .bind(who.person.map(|id| id.to_string()))
        .bind(&who.name)
        .bind(now)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn find(
    c: &mut Connection,
    organisation: OrganisationId,
    id: &str,
    seen: Option<&str>,
) -> Answer<Option<EvidenceRow>> {
    Ok(sqlx::query_as(FIND)
        .bind(organisation.0)
        .bind(id)
        .bind(seen)
        .fetch_optional(c)
        .await?)
}

pub(super) async fn list(
    c: &mut Connection,
    organisation: OrganisationId,
    before: i64,
    seen: Option<&str>,
    limit: i64,
) -> Answer<Vec<EvidenceRow>> {
    Ok(sqlx::query_as(LIST)
        .bind(organisation.0)
        .bind(before)
        .bind(seen)
        .bind(limit)
        .fetch_all(c)
        .await?)
}

pub(super) async fn among(
    c: &mut Connection,
    organisation: OrganisationId,
    ids: &str,
) -> Answer<Vec<EvidenceRow>> {
    Ok(sqlx::query_as(AMONG)
        .bind(organisation.0)
        .bind(ids)
        .fetch_all(c)
        .await?)
}

pub(super) async fn missing(
    c: &mut Connection,
    organisation: OrganisationId,
    ids: &str,
) -> Answer<Vec<String>> {
    Ok(sqlx::query_scalar(MISSING)
        .bind(organisation.0)
        .bind(ids)
        .fetch_all(c)
        .await?)
}

pub(super) async fn uses(
    c: &mut Connection,
    organisation: OrganisationId,
    id: &str,
    seen: Option<&str>,
) -> Answer<Vec<UseRow>> {
    Ok(sqlx::query_as(USES)
        .bind(organisation.0)
        .bind(id)
        .bind(seen)
        .fetch_all(c)
        .await?)
}

/// The next records of every organisation, by hash.
pub(super) async fn all_after(c: &mut Connection, hash: &str, id: i64) -> Answer<Vec<KeptRow>> {
    Ok(sqlx::query_as(ALL_AFTER).bind(hash).bind(id).fetch_all(c).await?)
}

/// Takes the demonstration's evidence out that no revision names any more; the hashes it had.
pub(super) async fn remove_unused_examples(
    c: &mut Connection,
    organisation: OrganisationId,
) -> Answer<Vec<String>> {
    let hashes = sqlx::query_scalar(UNUSED_EXAMPLES)
        .bind(organisation.0)
        .fetch_all(&mut *c)
        .await?;
    sqlx::query(REMOVE_UNUSED_EXAMPLES)
        .bind(organisation.0)
        .execute(c)
        .await?;
    Ok(hashes)
}

/// Those of a JSON list of hashes that no record names.
pub(super) async fn named_by_none(c: &mut Connection, hashes: &str) -> Answer<Vec<String>> {
    Ok(sqlx::query_scalar(NAMED_BY_NONE)
        .bind(hashes)
        .fetch_all(c)
        .await?)
}
