//! The SQL of the audit trail, as named text, and the functions that speak it. Every statement names the organisation.

use super::{Line, Question};
use crate::store::{Connection, OrganisationId, StoreError};

const HEAD: &str = "SELECT number, hash FROM audit_head WHERE organisation_id = $1";
const ADD: &str = "\
    INSERT INTO audit_line (organisation_id, number, at, person, thing, thing_id, did, document, hash) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9)";

/// Lines of an organisation that fit a question; the first filter stands open, so that an index leads to its lines.
macro_rules! lines {
    ($first:literal, $order:literal) => {
        concat!(
            "SELECT number, document, hash FROM audit_line WHERE organisation_id = $1 AND number > $2 AND number < $3 ",
            $first,
            " AND ($4 IS NULL OR thing = $4) AND ($5 IS NULL OR thing_id = $5) AND ($6 IS NULL OR person = $6) \
              AND ($7 IS NULL OR did = $7) AND ($8 IS NULL OR at >= $8) AND ($9 IS NULL OR at < $9) \
              AND ($10 IS NULL OR (thing = 'pathway' AND thing_id IN (SELECT value FROM json_each($10))) \
                   OR (thing = 'statement' AND thing_id IN (SELECT value FROM json_each($11)))) \
              ORDER BY number ",
            $order,
            " LIMIT $12"
        )
    };
}

const LAST_LINES: &str = lines!("", "DESC");
const LAST_LINES_OF_THING: &str = lines!("AND thing = $4 AND thing_id = $5", "DESC");
const LAST_LINES_OF_PERSON: &str = lines!("AND person = $6", "DESC");
const FIRST_LINES: &str = lines!("", "");

/// Each person who stands in the trail, found by hops along the index, with the last line of theirs.
const PEOPLE: &str = "\
    WITH RECURSIVE hop (person) AS ( \
        SELECT (SELECT min(person) FROM audit_line WHERE organisation_id = $1 AND person > '') \
        UNION ALL \
        SELECT (SELECT min(person) FROM audit_line WHERE organisation_id = $1 AND person > hop.person) \
        FROM hop WHERE hop.person IS NOT NULL) \
    SELECT (SELECT document FROM audit_line WHERE organisation_id = $1 AND person = hop.person ORDER BY number DESC LIMIT 1) \
    FROM hop WHERE hop.person IS NOT NULL LIMIT 500";

const CHAINS: &str = "\
    SELECT o.id, o.public_id, o.name, h.number, h.hash FROM organisation o \
    LEFT JOIN audit_head h ON h.organisation_id = o.id ORDER BY o.id";
const ROWS: &str = "\
    SELECT number, at, person, thing, thing_id, did, document, hash FROM audit_line \
    WHERE organisation_id = $1 AND number > $2 ORDER BY number LIMIT $3";

/// The statements of this file.
pub(super) const STATEMENTS: &[&str] = &[
    HEAD,
    ADD,
    LAST_LINES,
    LAST_LINES_OF_THING,
    LAST_LINES_OF_PERSON,
    FIRST_LINES,
    PEOPLE,
    CHAINS,
    ROWS,
];

/// Number and hash of the last line; 0 and nothing where there is none.
pub(super) async fn head(
    c: &mut Connection,
    organisation: OrganisationId,
) -> Result<(i64, String), StoreError> {
    let row = sqlx::query_as(HEAD)
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

/// A line as it is kept.
#[derive(Debug, sqlx::FromRow)]
pub(super) struct Kept {
    pub(super) number: i64,
    pub(super) document: String,
    pub(super) hash: String,
}

/// What somebody sees of it: public ids of pathways and statements as JSON lists; none for everything.
pub(super) type Seen = Option<(String, String)>;

/// At most `limit` lines between two numbers, both left out, that fit a question; the last first, or the first.
pub(super) async fn lines(
    c: &mut Connection,
    organisation: OrganisationId,
    question: &Question,
    seen: &Seen,
    (above, below): (i64, i64),
    last_first: bool,
    limit: i64,
) -> Result<Vec<Kept>, StoreError> {
    let text = match (last_first, &question.thing, &question.id, &question.person) {
        (false, ..) => FIRST_LINES,
        (true, Some(_), Some(_), _) => LAST_LINES_OF_THING,
        (true, _, _, Some(_)) => LAST_LINES_OF_PERSON,
        (true, ..) => LAST_LINES,
    };
    let rows = sqlx::query_as(text)
        .bind(organisation.0)
        .bind(above)
        .bind(below)
        .bind(&question.thing)
        .bind(&question.id)
        .bind(question.person.map(|id| id.to_string()))
        .bind(&question.did)
        .bind(question.from.map(jiff::Timestamp::as_millisecond))
        .bind(question.before.map(jiff::Timestamp::as_millisecond))
        .bind(seen.as_ref().map(|(pathways, _)| pathways))
        .bind(seen.as_ref().map(|(_, statements)| statements))
        .bind(limit)
        .fetch_all(c)
        .await?;
    Ok(rows)
}

/// The last line of each person.
pub(super) async fn people(
    c: &mut Connection,
    organisation: OrganisationId,
) -> Result<Vec<String>, StoreError> {
    Ok(sqlx::query_scalar(PEOPLE)
        .bind(organisation.0)
        .fetch_all(c)
        .await?)
}

/// An organisation with the end of its chain, if it has one.
#[derive(Debug, sqlx::FromRow)]
pub(super) struct ChainRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) name: String,
    pub(super) number: Option<i64>,
    pub(super) hash: Option<String>,
}

/// Every organisation.
pub(super) async fn chains(c: &mut Connection) -> Result<Vec<ChainRow>, StoreError> {
    Ok(sqlx::query_as(CHAINS).fetch_all(c).await?)
}

/// A line with all its columns.
#[derive(Debug, sqlx::FromRow)]
pub(super) struct Row {
    pub(super) number: i64,
    pub(super) at: i64,
    pub(super) person: Option<String>,
    pub(super) thing: String,
    pub(super) thing_id: String,
    pub(super) did: String,
    pub(super) document: String,
    pub(super) hash: String,
}

/// The lines after a number, in order.
pub(super) async fn rows(
    c: &mut Connection,
    organisation: i64,
    after: i64,
    limit: i64,
) -> Result<Vec<Row>, StoreError> {
    Ok(sqlx::query_as(ROWS)
        .bind(organisation)
        .bind(after)
        .bind(limit)
        .fetch_all(c)
        .await?)
}
