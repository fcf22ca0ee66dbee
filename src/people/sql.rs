//! The SQL of people, roles and invitations, as named text, and the functions that speak it. Every statement names the
//! organisation, but for the two that ask whom a name belongs to in the whole service.

use super::Role;
use crate::store::{Connection, OrganisationId, StoreError};
use uuid::Uuid;

macro_rules! person {
    ($rest:literal) => {
        concat!(
            "SELECT p.id, p.organisation_id, p.public_id, p.name, p.sign_in_name, p.password_hash, p.must_change, ",
            "p.theme, p.created_at, p.disabled_at FROM person p WHERE ",
            $rest
        )
    };
}

const PEOPLE: &str = person!("p.organisation_id = $1 ORDER BY p.id");
const PERSON: &str = person!("p.organisation_id = $1 AND p.public_id = $2");
const NAMED: &str = person!("p.sign_in_name = $1");
const COUNT: &str = "SELECT count(*) FROM person WHERE organisation_id = $1";
const ADD: &str = "\
    INSERT INTO person (organisation_id, public_id, name, sign_in_name, password_hash, must_change, created_at) \
    VALUES ($1, $2, $3, $4, $5, $6, $7) ON CONFLICT (sign_in_name) DO NOTHING RETURNING id";
const SET_NAME: &str = "UPDATE person SET name = $3 WHERE organisation_id = $1 AND id = $2";
const SET_PASSWORD: &str =
    "UPDATE person SET password_hash = $3, must_change = $4 WHERE organisation_id = $1 AND id = $2";
const SET_DISABLED: &str = "UPDATE person SET disabled_at = $3 WHERE organisation_id = $1 AND id = $2";
const SET_THEME: &str = "UPDATE person SET theme = $3 WHERE organisation_id = $1 AND id = $2";

const ROLES: &str =
    "SELECT person_id, role, until FROM member WHERE organisation_id = $1 ORDER BY person_id, id";
const ROLES_OF: &str = "\
    SELECT person_id, role, until FROM member WHERE organisation_id = $1 AND person_id = $2 ORDER BY id";
const DROP_ROLES: &str = "DELETE FROM member WHERE organisation_id = $1 AND person_id = $2";
const GIVE_ROLE: &str = "\
    INSERT INTO member (organisation_id, person_id, role, until, given_at) VALUES ($1, $2, $3, $4, $5)";
const ADMINISTRATORS: &str = "\
    SELECT count(*) FROM member m JOIN person p ON p.id = m.person_id \
    WHERE m.organisation_id = $1 AND m.role = 'administrator' AND p.disabled_at IS NULL AND p.id <> $2";

const INVITATIONS: &str =
    "SELECT person_id, kind, thing, until FROM invitation WHERE organisation_id = $1 ORDER BY person_id, id";
const INVITATIONS_OF: &str = "\
    SELECT person_id, kind, thing, until FROM invitation WHERE organisation_id = $1 AND person_id = $2 ORDER BY id";
const DROP_INVITATIONS: &str = "DELETE FROM invitation WHERE organisation_id = $1 AND person_id = $2";
const INVITE: &str = "\
    INSERT INTO invitation (organisation_id, person_id, kind, thing, until) VALUES ($1, $2, $3, $4, $5)";

/// The statements of this file.
pub(super) const STATEMENTS: &[&str] = &[
    PEOPLE,
    PERSON,
    NAMED,
    COUNT,
    ADD,
    SET_NAME,
    SET_PASSWORD,
    SET_DISABLED,
    SET_THEME,
    ROLES,
    ROLES_OF,
    DROP_ROLES,
    GIVE_ROLE,
    ADMINISTRATORS,
    INVITATIONS,
    INVITATIONS_OF,
    DROP_INVITATIONS,
    INVITE,
];

/// A person.
#[derive(Clone, sqlx::FromRow)]
pub(super) struct PersonRow {
    pub(super) id: i64,
    pub(super) organisation_id: i64,
    pub(super) public_id: String,
    pub(super) name: String,
    pub(super) sign_in_name: String,
    pub(super) password_hash: Option<String>,
    pub(super) must_change: bool,
    pub(super) theme: String,
    pub(super) created_at: i64,
    pub(super) disabled_at: Option<i64>,
}

impl PersonRow {
    pub(super) fn organisation(&self) -> OrganisationId {
        OrganisationId(self.organisation_id)
    }
}

/// A role of a person.
#[derive(Clone, sqlx::FromRow)]
pub(super) struct RoleRow {
    pub(super) person_id: i64,
    pub(super) role: String,
    pub(super) until: Option<i64>,
}

/// What an auditor was invited to.
#[derive(Clone, sqlx::FromRow)]
pub(super) struct InvitationRow {
    pub(super) person_id: i64,
    pub(super) kind: String,
    pub(super) thing: String,
    pub(super) until: i64,
}

/// A person who is added.
#[derive(Clone)]
pub(super) struct NewRow {
    pub(super) id: Uuid,
    pub(super) name: String,
    pub(super) sign_in_name: String,
    pub(super) password_hash: Option<String>,
    pub(super) must_change: bool,
}

type Answer<T> = Result<T, StoreError>;

pub(super) async fn people(c: &mut Connection, who: OrganisationId) -> Answer<Vec<PersonRow>> {
    Ok(sqlx::query_as(PEOPLE).bind(who.0).fetch_all(c).await?)
}

pub(super) async fn person(c: &mut Connection, who: OrganisationId, id: Uuid) -> Answer<Option<PersonRow>> {
    Ok(sqlx::query_as(PERSON)
        .bind(who.0)
        .bind(id.to_string())
        .fetch_optional(c)
        .await?)
}

/// Whom a name to sign in with belongs to, in small letters.
pub(super) async fn named(c: &mut Connection, folded: &str) -> Answer<Option<PersonRow>> {
    Ok(sqlx::query_as(NAMED).bind(folded).fetch_optional(c).await?)
}

pub(super) async fn count(c: &mut Connection, who: OrganisationId) -> Answer<i64> {
    Ok(sqlx::query_scalar(COUNT).bind(who.0).fetch_one(c).await?)
}

/// Adds a person; none where the name to sign in with is taken.
pub(super) async fn add(
    c: &mut Connection,
    who: OrganisationId,
    row: &NewRow,
    now: i64,
) -> Answer<Option<i64>> {
    Ok(sqlx::query_scalar(ADD)
        .bind(who.0)
        .bind(row.id.to_string())
        .bind(&row.name)
        .bind(&row.sign_in_name)
        .bind(row.password_hash.as_deref())
        .bind(row.must_change)
        .bind(now)
        .fetch_optional(c)
        .await?)
}

pub(super) async fn set_name(c: &mut Connection, who: OrganisationId, person: i64, name: &str) -> Answer<()> {
    sqlx::query(SET_NAME)
        .bind(who.0)
        .bind(person)
        .bind(name)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn set_password(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    hash: &str,
    must_change: bool,
) -> Answer<()> {
    sqlx::query(SET_PASSWORD)
        .bind(who.0)
        .bind(person)
        .bind(hash)
        .bind(must_change)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn set_disabled(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    at: Option<i64>,
) -> Answer<()> {
    sqlx::query(SET_DISABLED)
        .bind(who.0)
        .bind(person)
        .bind(at)
        .execute(c)
        .await?;
    Ok(())
}

pub(super) async fn set_theme(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    theme: &'static str,
) -> Answer<()> {
    sqlx::query(SET_THEME)
        .bind(who.0)
        .bind(person)
        .bind(theme)
        .execute(c)
        .await?;
    Ok(())
}

/// The roles of a person, or of everybody.
pub(super) async fn roles(
    c: &mut Connection,
    who: OrganisationId,
    person: Option<i64>,
) -> Answer<Vec<RoleRow>> {
    Ok(match person {
        None => sqlx::query_as(ROLES).bind(who.0).fetch_all(c).await?,
        Some(person) => {
            let query = sqlx::query_as(ROLES_OF).bind(who.0).bind(person);
            query.fetch_all(c).await?
        }
    })
}

/// Gives a person these roles in place of those they have.
pub(super) async fn set_roles(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    roles: &[(Role, Option<i64>)],
    now: i64,
) -> Answer<()> {
    sqlx::query(DROP_ROLES)
        .bind(who.0)
        .bind(person)
        .execute(&mut *c)
        .await?;
    for (role, until) in roles {
        sqlx::query(GIVE_ROLE)
            .bind(who.0)
            .bind(person)
            .bind(role.name())
            .bind(*until)
            .bind(now)
            .execute(&mut *c)
            .await?;
    }
    Ok(())
}

/// How many others may administer the organisation.
pub(super) async fn other_administrators(c: &mut Connection, who: OrganisationId, than: i64) -> Answer<i64> {
    Ok(sqlx::query_scalar(ADMINISTRATORS)
        .bind(who.0)
        .bind(than)
        .fetch_one(c)
        .await?)
}

/// What a person, or everybody, was invited to.
pub(super) async fn invitations(
    c: &mut Connection,
    who: OrganisationId,
    person: Option<i64>,
) -> Answer<Vec<InvitationRow>> {
    Ok(match person {
        None => sqlx::query_as(INVITATIONS).bind(who.0).fetch_all(c).await?,
        Some(person) => {
            let query = sqlx::query_as(INVITATIONS_OF).bind(who.0).bind(person);
            query.fetch_all(c).await?
        }
    })
}

/// Invites a person to these things in place of those before.
pub(super) async fn set_invitations(
    c: &mut Connection,
    who: OrganisationId,
    person: i64,
    things: &[(&'static str, Uuid)],
    until: i64,
) -> Answer<()> {
    sqlx::query(DROP_INVITATIONS)
        .bind(who.0)
        .bind(person)
        .execute(&mut *c)
        .await?;
    for (kind, thing) in things {
        sqlx::query(INVITE)
            .bind(who.0)
            .bind(person)
            .bind(*kind)
            .bind(thing.to_string())
            .bind(until)
            .execute(&mut *c)
            .await?;
    }
    Ok(())
}
