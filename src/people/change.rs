//! What changes about a person: roles, invitations, whether they can come in, their password, how they want pages. What
//! takes rights away holds at once.

use super::credentials::sql as credentials;
use super::members::{find, given, names, names_wrong, refuse, roles_wrong};
use super::sql::{self, PersonRow};
use super::{Audit, PeopleError, Person, Role, password, secrets};
use crate::app::App;
use crate::app::who::Via;
use crate::audit_trail::{self, Deed};
use crate::store::{Connection, OrganisationId};
use serde_json::json;
use std::collections::BTreeSet;
use uuid::Uuid;

/// What a person is from now on.
#[derive(Clone, Debug)]
pub struct Change {
    /// Name, as pages and documents show it.
    pub name: String,
    /// What they are to the organisation.
    pub roles: BTreeSet<Role>,
    /// What an auditor is invited to.
    pub audit: Option<Audit>,
}

/// The account of whoever asks.
#[derive(Clone, Debug, PartialEq)]
pub struct Account {
    /// The person.
    pub person: Person,
    /// How they want pages: `light`, `dark`, or empty for what their machine says.
    pub theme: String,
    /// True if they can change a password here.
    pub has_password: bool,
}

impl Account {
    /// The account of the person who asks.
    ///
    /// # Errors
    /// `NoPerson` for the command line; or when the database fails.
    pub async fn of(app: &App) -> Result<Account, PeopleError> {
        let id = app.who.person.ok_or(PeopleError::NoPerson)?;
        let mut reader = app.store.reader().await?;
        let row = sql::person(&mut reader, app.organisation, id).await?;
        drop(reader);
        let row = row.ok_or(PeopleError::NoPerson)?;
        Ok(Account {
            person: find(app, id).await?,
            has_password: row.password_hash.is_some(),
            theme: row.theme,
        })
    }
}

/// Gives a person another name, other roles, other invitations.
///
/// # Errors
/// All problems; `NotFound`; `LastAdministrator`; or when the database fails.
pub async fn change(app: &App, id: Uuid, change: Change) -> Result<Person, PeopleError> {
    let (who, now) = (app.organisation, app.clock.millis());
    let name = change.name.trim().to_owned();
    let mut problems = names_wrong(&name, "x");
    problems.extend(roles_wrong(&change.roles, change.audit.as_ref(), now));
    refuse(problems)?;
    let (by, doors) = (app.who.clone(), app.doors.clone());
    let (roles, things) = given(&change.roles, change.audit.as_ref());
    let before = find(app, id).await?;
    let what = json!({
        "name": name, "roles": names(&change.roles), "audit": change.audit,
        "before": { "name": before.name, "roles": before.roles, "audit": before.audit },
    });
    let stays = change.roles.contains(&Role::Administrator);
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let row = there(c, who, id).await?;
                if !stays {
                    somebody_administers(c, who, &row).await?;
                }
                sql::set_name(c, who, row.id, &name).await?;
                sql::set_roles(c, who, row.id, &roles, now).await?;
                let (things, until) = things.unwrap_or_default();
                sql::set_invitations(c, who, row.id, &things, until).await?;
                audit_trail::add(c, who, &by, now, Deed::new("changed", "person", id, what)).await?;
                Ok::<_, PeopleError>(())
            })
        },
        move |()| doors.forget(),
    );
    job.await?;
    find(app, id).await
}

/// Keeps a person out, or lets them in again. Their sessions end; their tokens are refused while it lasts.
///
/// # Errors
/// `NotFound`; `LastAdministrator`; or when the database fails.
pub async fn disable(app: &App, id: Uuid, disabled: bool) -> Result<Person, PeopleError> {
    let (who, now) = (app.organisation, app.clock.millis());
    let (by, doors) = (app.who.clone(), app.doors.clone());
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let row = there(c, who, id).await?;
                if row.disabled_at.is_some() == disabled {
                    return Ok(());
                }
                if disabled {
                    somebody_administers(c, who, &row).await?;
                    credentials::end_others(c, who, row.id, "").await?;
                }
                sql::set_disabled(c, who, row.id, disabled.then_some(now)).await?;
                let did = if disabled { "disabled" } else { "enabled" };
                audit_trail::add(c, who, &by, now, Deed::new(did, "person", id, json!({}))).await?;
                Ok::<_, PeopleError>(())
            })
        },
        move |()| doors.forget(),
    );
    job.await?;
    find(app, id).await
}

/// Sets a password for somebody else: the one given, or one to begin with, which is told once. They must choose another
/// at the next sign-in; their sessions end. Their tokens go on, unless they are revoked with it.
///
/// # Errors
/// A password that is refused; `NotFound`; or when the database fails.
pub async fn reset_password(
    app: &App,
    id: Uuid,
    given: Option<String>,
    revoke_tokens: bool,
) -> Result<String, PeopleError> {
    let person = find(app, id).await?;
    if let Some(given) = &given {
        password::check(given, "/password", &[&person.name, &person.sign_in_name])
            .map_err(PeopleError::Problems)?;
    }
    let new = given.unwrap_or_else(|| secrets::temporary_password(&app.clock));
    let hash = password::hash(app, new.clone()).await?;
    let (who, now) = (app.organisation, app.clock.millis());
    let (by, doors) = (app.who.clone(), app.doors.clone());
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let row = there(c, who, id).await?;
                sql::set_password(c, who, row.id, &hash, true).await?;
                let ended = credentials::end_others(c, who, row.id, "").await?;
                let revoked = match revoke_tokens {
                    true => credentials::revoke_all(c, who, row.id, now).await?,
                    false => 0,
                };
                let what = json!({ "sessions_ended": ended, "tokens_revoked": revoked });
                audit_trail::add(
                    c,
                    who,
                    &by,
                    now,
                    Deed::new("reset the password of", "person", id, what),
                )
                .await?;
                Ok::<_, PeopleError>(())
            })
        },
        move |()| doors.forget(),
    );
    job.await?;
    Ok(new)
}

/// Changes one's own password; every other session of the person ends.
///
/// # Errors
/// `DoNotFit` when the old one is not it, `TooOften`; a new one that is refused; `NotByToken`, `NoPerson`; or when the
/// database fails.
pub async fn change_password(app: &App, old: String, new: String) -> Result<(), PeopleError> {
    let row = own(app).await?;
    let names = [row.name.as_str(), row.sign_in_name.as_str()];
    password::check(&new, "/new", &names).map_err(PeopleError::Problems)?;
    if old == new {
        let remedy = "Take another.";
        return Err(PeopleError::problem(
            "/new",
            "This is the password you have.",
            remedy,
        ));
    }
    app.doors
        .may_try(&row.sign_in_name, &app.who.from)
        .map_err(PeopleError::TooOften)?;
    if !password::fits(app, old, row.password_hash).await? {
        return Err(PeopleError::DoNotFit);
    }
    let hash = password::hash(app, new).await?;
    let (who, now, id) = (app.organisation, app.clock.millis(), row.id);
    let (by, doors, kept) = (app.who.clone(), app.doors.clone(), app.who.via.label().to_owned());
    let public = row.public_id;
    app.store
        .write_then(
            move |c| {
                Box::pin(async move {
                    sql::set_password(c, who, id, &hash, false).await?;
                    let ended = credentials::end_others(c, who, id, &kept).await?;
                    let what = json!({ "sessions_ended": ended });
                    let deed = Deed::new("changed the password of", "person", public, what);
                    audit_trail::add(c, who, &by, now, deed).await?;
                    Ok(())
                })
            },
            move |()| doors.forget(),
        )
        .await
}

/// Chooses how one wants pages: `light`, `dark`, or anything else for what the machine says.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn set_theme(app: &App, theme: &str) -> Result<(), PeopleError> {
    let theme = match theme {
        "light" => "light",
        "dark" => "dark",
        _ => "",
    };
    let row = own(app).await?;
    let (who, doors) = (app.organisation, app.doors.clone());
    // How somebody likes pages is no change of a record: no line of the trail tells of it.
    app.store
        .write_then(
            move |c| Box::pin(async move { Ok(sql::set_theme(c, who, row.id, theme).await?) }),
            move |()| doors.forget(),
        )
        .await
}

/// The row of the person who asks with a browser.
pub(super) async fn own(app: &App) -> Result<PersonRow, PeopleError> {
    if matches!(app.who.via, Via::Token(_)) {
        return Err(PeopleError::NotByToken);
    }
    let id = app.who.person.ok_or(PeopleError::NoPerson)?;
    let mut reader = app.store.reader().await?;
    let row = sql::person(&mut reader, app.organisation, id).await?;
    row.ok_or(PeopleError::NoPerson)
}

async fn there(c: &mut Connection, who: OrganisationId, id: Uuid) -> Result<PersonRow, PeopleError> {
    sql::person(c, who, id).await?.ok_or(PeopleError::NotFound)
}

/// Refuses to take the last administrator away.
async fn somebody_administers(
    c: &mut Connection,
    who: OrganisationId,
    row: &PersonRow,
) -> Result<(), PeopleError> {
    let administers = sql::roles(c, who, Some(row.id))
        .await?
        .iter()
        .any(|held| held.role == Role::Administrator.name());
    if administers && row.disabled_at.is_none() && sql::other_administrators(c, who, row.id).await? == 0 {
        return Err(PeopleError::LastAdministrator);
    }
    Ok(())
}
