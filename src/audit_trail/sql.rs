//! The SQL of the audit trail, as named text, and the functions that speak it. Every statement names the organisation.

use super::Line;
use crate::store::{Connection, OrganisationId, StoreError};

const LAST: &str =
    "SELECT number, hash FROM audit_line WHERE organisation_id = $1 ORDER BY number DESC LIMIT 1";
const ADD: &str = "\
    INSERT INTO audit_line (organisation_id, number, at, person, thing, thing_id, did, document, hash) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9)";

/// The statements of this file.
pub(super) const STATEMENTS: &[&str] = &[LAST, ADD];

/// Number and hash of the last line; 0 and nothing where there is none.
pub(super) async fn last(
    c: &mut Connection,
    organisation: OrganisationId,
) -> Result<(i64, String), StoreError> {
    let row = sqlx::query_as(LAST)
        .bind(organisation.0)
        .fetch_optional(c)
        .await?;
    Ok(row.unwrap_or((0, String::new())))
}

/// Writes a line.
pub(super) async fn add(
    c: &mut Connection,
    organisation: OrganisationId,
    at: i64,
    line: &Line,
    document: &str,
    hash: &str,
) -> Result<(), StoreError> {
    sqlx::query(ADD)
        .bind(organisation.0)
        .bind(line.number)
        .bind(at)
        .bind(line.by.person.map(|id| id.to_string()))
        .bind(&line.thing)
        .bind(&line.id)
        .bind(&line.did)
        .bind(document)
        .bind(hash)
        .execute(c)
        .await?;
    Ok(())
}
