//! The SQL of sessions and tokens, as named text, and the functions that speak it. Every statement names the organisation,
//! but for those that ask whom a secret belongs to.

use crate::store::{Connection, OrganisationId, StoreError};
use uuid::Uuid;

macro_rules! holder {
    ($columns:literal, $table:literal) => {
        concat!(
            "SELECT c.id, c.organisation_id, c.person_id, c.expires_at, ",
            $columns,
            " p.public_id, p.name, p.sign_in_name, p.must_change, p.theme, p.disabled_at, o.name AS organisation_name FROM ",
            $table,
            " c JOIN person p ON p.id = c.person_id JOIN organisation o ON o.id = c.organisation_id \
             WHERE c.secret_hash = $1"
        )
    };
}

const SESSION: &str = holder!(
    "c.last_used_at, c.name AS label, '' AS scopes, NULL AS revoked_at,",
    "session"
);
const TOKEN: &str = holder!(
    "COALESCE(c.last_used_at, 0) AS last_used_at, c.label, c.scopes, c.revoked_at,",
    "token"
);
const BEGIN_SESSION: &str = "\
    INSERT INTO session (organisation_id, person_id, secret_hash, name, created_at, expires_at, last_used_at, came_from) \
    VALUES ($1, $2, $3, $4, $5, $6, $5, $7)";
const DROP_EXPIRED: &str = "DELETE FROM session WHERE organisation_id = $1 AND expires_at <= $2";
const SESSIONS: &str = "\
    SELECT name, created_at, expires_at, last_used_at, came_from FROM session \
    WHERE organisation_id = $1 AND person_id = $2 AND expires_at > $3 AND last_used_at > $4 ORDER BY id DESC";
const END_SESSION: &str = "DELETE FROM session WHERE organisation_id = $1 AND person_id = $2 AND name = $3";
const END_OTHERS: &str = "DELETE FROM session WHERE organisation_id = $1 AND person_id = $2 AND name <> $3";
const END_BY_SECRET: &str = "DELETE FROM session WHERE secret_hash = $1 RETURNING organisation_id";
const TOUCH_SESSION: &str = "UPDATE session SET last_used_at = $3 WHERE organisation_id = $1 AND id = $2";
const TOUCH_TOKEN: &str = "UPDATE token SET last_used_at = $3 WHERE organisation_id = $1 AND id = $2";
const ADD_TOKEN: &str = "\
    INSERT INTO token (organisation_id, person_id, public_id, secret_hash, label, scopes, created_at, expires_at) \
    VALUES ($1, $2, $3, $4, $5, $6, $7, $8)";
const TOKENS: &str = "\
    SELECT id, public_id, label, scopes, created_at, expires_at, last_used_at, revoked_at FROM token \
    WHERE organisation_id = $1 AND person_id = $2 ORDER BY id DESC";
const REVOKE: &str = "\
    UPDATE token SET revoked_at = $4 \
    WHERE organisation_id = $1 AND person_id = $2 AND public_id = $3 AND revoked_at IS NULL RETURNING label";
const REVOKE_ALL: &str = "\
    UPDATE token SET revoked_at = $3 WHERE organisation_id = $1 AND person_id = $2 AND revoked_at IS NULL";

/// The statements of this file.
pub(in crate::people) const STATEMENTS: &[&str] = &[
    SESSION,
    TOKEN,
    BEGIN_SESSION,
    DROP_EXPIRED,
    SESSIONS,
    END_SESSION,
    END_OTHERS,
    END_BY_SECRET,
    TOUCH_SESSION,
    TOUCH_TOKEN,
    ADD_TOKEN,
    TOKENS,
    REVOKE,
    REVOKE_ALL,
];

/// Whom a secret belongs to.
#[derive(sqlx::FromRow)]
pub(super) struct HolderRow {
    pub(super) id: i64,
    pub(super) organisation_id: i64,
    pub(super) person_id: i64,
    pub(super) expires_at: i64,
    pub(super) last_used_at: i64,
    pub(super) label: String,
    pub(super) scopes: String,
    pub(super) revoked_at: Option<i64>,
    pub(super) public_id: String,
    pub(super) name: String,
    pub(super) sign_in_name: String,
    pub(super) must_change: bool,
    pub(super) theme: String,
    pub(super) disabled_at: Option<i64>,
    pub(super) organisation_name: String,
}

impl HolderRow {
    pub(super) fn organisation(&self) -> OrganisationId {
        OrganisationId(self.organisation_id)
    }
}

/// A session of a person.
#[derive(sqlx::FromRow)]
pub(super) struct SessionRow {
    pub(super) name: String,
    pub(super) created_at: i64,
    pub(super) expires_at: i64,
    pub(super) last_used_at: i64,
    pub(super) came_from: String,
}

/// A token of a person.
#[derive(sqlx::FromRow)]
pub(super) struct TokenRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) label: String,
    pub(super) scopes: String,
    pub(super) created_at: i64,
    pub(super) expires_at: i64,
    pub(super) last_used_at: Option<i64>,
    pub(super) revoked_at: Option<i64>,
}

/// A session that begins.
pub(super) struct NewSession {
    pub(super) secret_hash: String,
    pub(super) name: String,
    pub(super) expires_at: i64,
    pub(super) came_from: String,
}

/// A token that is made.
pub(super) struct NewToken {
    pub(super) id: Uuid,
    pub(super) secret_hash: String,
    pub(super) label: String,
    pub(super) scopes: String,
    pub(super) expires_at: i64,
}

type Answer<T> = Result<T, StoreError>;

pub(super) async fn session(c: &mut Connection, hash: &str) -> Answer<Option<HolderRow>> {
    Ok(sqlx::query_as(SESSION).bind(hash).fetch_optional(c).await?)
}

pub(super) async fn token(c: &mut Connection, hash: &str) -> Answer<Option<HolderRow>> {
    Ok(sqlx::query_as(TOKEN).bind(hash).fetch_optional(c).await?)
}

/// Begins a session, and takes away those that have expired.
pub(super) async fn begin_session(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    new: &NewSession,
    now: i64,
) -> Answer<()> {
    sqlx::query(DROP_EXPIRED)
        .bind(who.0)
        .bind(now)
        .execute(&mut *c)
        .await?;
    sqlx::query(BEGIN_SESSION)
        .bind(who.0)
        .bind(person)
        .bind(&new.secret_hash)
        .bind(&new.name)
        .bind(now)
        .bind(new.expires_at)
        .bind(&new.came_from)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn sessions(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    now: i64,
    idle_since: i64,
) -> Answer<Vec<SessionRow>> {
    Ok(sqlx::query_as(SESSIONS)
        .bind(who.0)
        .bind(person)
        .bind(now)
        .bind(idle_since)
        .fetch_all(c)
        .await?)
}

pub(super) async fn end_session(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    name: &str,
) -> Answer<u64> {
    let query = sqlx::query(END_SESSION).bind(who.0).bind(person).bind(name);
    Ok(query.execute(c).await?.rows_affected())
}

/// Ends the sessions of a person but for one; an empty name keeps none.
pub(in crate::people) async fn end_others(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    kept: &str,
) -> Answer<u64> {
    let query = sqlx::query(END_OTHERS).bind(who.0).bind(person).bind(kept);
    Ok(query.execute(c).await?.rows_affected())
}

/// Ends the session that a browser had before it signed in anew.
pub(super) async fn end_by_secret(c: &mut Connection, hash: &str) -> Answer<()> {
    sqlx::query(END_BY_SECRET).bind(hash).execute(c).await?;
    Ok(())
}

pub(super) async fn touch(
    c: &mut Connection,
    who: OrganisationId,
    id: i64,
    is_token: bool,
    now: i64,
) -> Answer<()> {
    let text = if is_token { TOUCH_TOKEN } else { TOUCH_SESSION };
    sqlx::query(text)
        .bind(who.0)
        .bind(id)
        .bind(now)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn add_token(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    new: &NewToken,
    now: i64,
) -> Answer<()> {
    sqlx::query(ADD_TOKEN)
        .bind(who.0)
        .bind(person)
        .bind(new.id.to_string())
        .bind(&new.secret_hash)
        .bind(&new.label)
        .bind(&new.scopes)
        .bind(now)
        .bind(new.expires_at)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn tokens(c: &mut Connection, who: OrganisationId, person: i64) -> Answer<Vec<TokenRow>> {
    Ok(sqlx::query_as(TOKENS)
        .bind(who.0)
        .bind(person)
        .fetch_all(c)
        .await?)
}

/// Revokes a token; its label, or none where there is no such token that is good.
pub(super) async fn revoke(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    id: Uuid,
    now: i64,
) -> Answer<Option<String>> {
    Ok(sqlx::query_scalar(REVOKE)
        .bind(who.0)
        .bind(person)
        .bind(id.to_string())
        .bind(now)
        .fetch_optional(c)
        .await?)
}

pub(in crate::people) async fn revoke_all(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    now: i64,
) -> Answer<u64> {
    let query = sqlx::query(REVOKE_ALL).bind(who.0).bind(person).bind(now);
    Ok(query.execute(c).await?.rows_affected())
}
