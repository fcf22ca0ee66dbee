//! The SQL of own rule sets, as named text, and the functions that speak it. Every statement names the organisation.

use crate::store::{Connection, OrganisationId, StoreError};

const LAST: &str = "\
    SELECT COALESCE((SELECT MAX(id) FROM own_rule_set WHERE organisation_id = $1), 0), \
           COALESCE((SELECT MAX(id) FROM check_settings WHERE organisation_id = $1), 0)";
const RULE_SETS: &str = "\
    SELECT id, name, version, document, hash FROM own_rule_set WHERE organisation_id = $1 ORDER BY id LIMIT $2";
const VERSIONS: &str = "\
    SELECT version, hash, saved_at FROM own_rule_set WHERE organisation_id = $1 AND name = $2 ORDER BY id DESC";
const VERSION: &str = "\
    SELECT hash, saved_at FROM own_rule_set WHERE organisation_id = $1 AND name = $2 AND version = $3";
const COUNT: &str = "SELECT count(*) FROM own_rule_set WHERE organisation_id = $1";
const ADD_RULE_SET: &str = "\
    INSERT INTO own_rule_set (organisation_id, name, version, document, hash, saved_at) \
    VALUES ($1, $2, $3, $4, $5, $6)";
const DROP_ASSESSMENTS: &str = "\
    DELETE FROM assessment WHERE organisation_id = $1 AND rule_set = $2 AND revision_id IN \
    (SELECT r.id FROM pathway p JOIN revision r ON r.pathway_id = p.id AND r.organisation_id = p.organisation_id \
     WHERE p.organisation_id = $1)";

const SETTINGS: &str = "\
    SELECT id, document, hash FROM check_settings WHERE organisation_id = $1 ORDER BY id DESC LIMIT 1";
const ADD_SETTINGS: &str = "\
    INSERT INTO check_settings (organisation_id, document, hash, saved_at) VALUES ($1, $2, $3, $4)";

/// The statements of this file.
pub(crate) const STATEMENTS: &[&str] = &[
    LAST,
    RULE_SETS,
    VERSIONS,
    VERSION,
    COUNT,
    ADD_RULE_SET,
    DROP_ASSESSMENTS,
    SETTINGS,
    ADD_SETTINGS,
];

/// A version of a rule set with its document.
#[derive(sqlx::FromRow)]
pub(super) struct RuleSetRow {
    pub(super) id: i64,
    pub(super) name: String,
    pub(super) version: String,
    pub(super) document: String,
    pub(super) hash: String,
}

/// Settings of the checks.
#[derive(sqlx::FromRow)]
pub(super) struct SettingsRow {
    pub(super) id: i64,
    pub(super) document: String,
    pub(super) hash: String,
}

type Answer<T> = Result<T, StoreError>;

/// Inner ids of the last rule set and the last settings; 0 for none.
pub(super) async fn last(c: &mut Connection, who: OrganisationId) -> Answer<(i64, i64)> {
    Ok(sqlx::query_as(LAST).bind(who.0).fetch_one(c).await?)
}

/// Every version of every rule set, oldest first.
pub(super) async fn rule_sets(c: &mut Connection, who: OrganisationId) -> Answer<Vec<RuleSetRow>> {
    Ok(sqlx::query_as(RULE_SETS)
        .bind(who.0)
        .bind(i64::MAX)
        .fetch_all(c)
        .await?)
}

/// Version, hash and time of each version, newest first.
pub(super) async fn versions(
    c: &mut Connection,
    who: OrganisationId,
    name: &str,
) -> Answer<Vec<(String, String, i64)>> {
    Ok(sqlx::query_as(VERSIONS)
        .bind(who.0)
        .bind(name)
        .fetch_all(c)
        .await?)
}

/// Hash and time of a version.
pub(super) async fn version(
    c: &mut Connection,
    who: OrganisationId,
    name: &str,
    version: &str,
) -> Answer<Option<(String, i64)>> {
    let query = sqlx::query_as(VERSION).bind(who.0).bind(name).bind(version);
    Ok(query.fetch_optional(c).await?)
}

pub(super) async fn count(c: &mut Connection, who: OrganisationId) -> Answer<i64> {
    Ok(sqlx::query_scalar(COUNT).bind(who.0).fetch_one(c).await?)
}

pub(super) async fn add_rule_set(
    c: &mut Connection,
    who: OrganisationId,
    name: &str,
    version: &str,
    document: &str,
    hash: &str,
    now: i64,
) -> Answer<()> {
    let query = sqlx::query(ADD_RULE_SET)
        .bind(who.0)
        .bind(name)
        .bind(version)
        .bind(document)
        .bind(hash)
        .bind(now);
    query.execute(c).await?;
    Ok(())
}

/// Drops kept assessments under a rule set: they are a cache.
pub(super) async fn drop_assessments(c: &mut Connection, who: OrganisationId, rule_set: &str) -> Answer<()> {
    let query = sqlx::query(DROP_ASSESSMENTS).bind(who.0).bind(rule_set);
    query.execute(c).await?;
    Ok(())
}

/// The settings saved last, if there are any.
pub(super) async fn settings(c: &mut Connection, who: OrganisationId) -> Answer<Option<SettingsRow>> {
    Ok(sqlx::query_as(SETTINGS).bind(who.0).fetch_optional(c).await?)
}

pub(super) async fn add_settings(
    c: &mut Connection,
    who: OrganisationId,
    document: &str,
    hash: &str,
    now: i64,
) -> Answer<()> {
    let query = sqlx::query(ADD_SETTINGS)
        .bind(who.0)
        .bind(document)
        .bind(hash)
        .bind(now);
    query.execute(c).await?;
    Ok(())
}
