//! Signing in and out. Each sign-in makes a session with a new secret and ends the one the browser had before.

use super::sql::{self, NewSession};
use crate::app::App;
use crate::app::who::{Via, Who};
use crate::audit_trail::{self, Deed};
use crate::core::documents::canonical::hex;
use crate::people::change::own;
use crate::people::sql::{PersonRow, named, person, roles};
use crate::people::{PeopleError, folded, password, public_id, secrets, time};
use crate::store::StoreError;
use jiff::Timestamp;
use serde_json::json;
use std::collections::BTreeSet;
use std::sync::Arc;
use std::time::Duration;
use uuid::Uuid;

/// A session that is not used for so long ends.
pub const IDLE: Duration = Duration::from_secs(12 * 3_600);
/// A session ends after so long, whatever is done in it.
pub const LONGEST: Duration = Duration::from_secs(7 * 24 * 3_600);

/// What a sign-in gave.
#[derive(Clone, Debug)]
pub struct SignedIn {
    /// The secret for the cookie.
    pub secret: String,
    /// Public id of the person.
    pub person: Uuid,
    /// They must choose a new password before anything else.
    pub must_change: bool,
}

/// A session of a person.
#[derive(Clone, Debug, PartialEq)]
pub struct Session {
    /// Its short name.
    pub name: String,
    /// True for the one that asks.
    pub here: bool,
    /// When it began.
    pub created_at: Timestamp,
    /// When it ends at the latest.
    pub expires_at: Timestamp,
    /// When it was last used, to a few minutes.
    pub last_used_at: Timestamp,
    /// The address it was begun from.
    pub from: String,
}

pub(crate) fn millis(duration: Duration) -> i64 {
    i64::try_from(duration.as_millis()).unwrap_or(i64::MAX)
}

/// Signs somebody in by name and password. An unknown name takes as long as a wrong password, and gets the same answer.
/// `before` is the secret of the session the browser has already.
///
/// # Errors
/// `DoNotFit`, `TooOften`; or when the database fails.
pub async fn sign_in(
    app: &App,
    name: &str,
    password: String,
    before: Option<String>,
) -> Result<SignedIn, PeopleError> {
    let name: String = folded(name).chars().take(200).collect();
    app.doors
        .may_try(&name, &app.who.from)
        .map_err(PeopleError::TooOften)?;
    let mut reader = app.store.reader().await?;
    let row = named(&mut reader, &name).await?;
    drop(reader);
    let hash = row.as_ref().and_then(|row| row.password_hash.clone());
    let fits = password.chars().count() <= password::MOST && password::fits(app, password, hash).await?;
    let able = row.as_ref().is_some_and(|row| row.disabled_at.is_none());
    match row {
        Some(row) if fits && able => begin(app, row, before, "password").await,
        row => {
            refused(app, row.as_ref())?;
            Err(PeopleError::DoNotFit)
        }
    }
}

/// Signs in a person whom somebody else vouches for: an identity provider, or the demonstration. `means` says who.
///
/// # Errors
/// `NotFound` when there is no such person or they are disabled; or when the database fails.
pub async fn sign_in_as(
    app: &App,
    id: Uuid,
    before: Option<String>,
    means: &'static str,
) -> Result<SignedIn, PeopleError> {
    let mut reader = app.store.reader().await?;
    let row = person(&mut reader, app.organisation, id).await?;
    drop(reader);
    let row = row.filter(|row| row.disabled_at.is_none());
    begin(app, row.ok_or(PeopleError::NotFound)?, before, means).await
}

async fn begin(
    app: &App,
    row: PersonRow,
    before: Option<String>,
    means: &'static str,
) -> Result<SignedIn, PeopleError> {
    let (who, now, doors) = (row.organisation(), app.clock.millis(), app.doors.clone());
    let secret = secrets::fresh(&app.clock);
    let id = public_id(&row.public_id, "person", row.id)?;
    // The last digits of an id are chance.
    let drawn = app.clock.id().simple().to_string();
    let name: String = drawn.chars().skip(20).collect();
    let new = NewSession {
        secret_hash: hex(&secrets::hash(&secret)),
        name: name.clone(),
        expires_at: now.saturating_add(millis(LONGEST)),
        came_from: app.who.from.clone(),
    };
    let by = Who {
        person: Some(id),
        name: row.name.clone(),
        via: Via::Session(name),
        from: app.who.from.clone(),
        rights: BTreeSet::new(),
        ..Who::stranger()
    };
    let must_change = row.must_change && row.password_hash.is_some();
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                if let Some(before) = before {
                    sql::end_by_secret(c, &hex(&secrets::hash(&before))).await?;
                }
                sql::begin_session(c, who, row.id, &new, now).await?;
                let held = roles(c, who, Some(row.id)).await?;
                let held: Vec<_> = held.iter().map(|held| held.role.as_str()).collect();
                let what = json!({ "by": means, "roles": held });
                audit_trail::add(c, who, &by, now, Deed::new("signed in", "person", id, what)).await?;
                Ok::<_, PeopleError>(())
            })
        },
        move |()| doors.forget(),
    );
    job.await?;
    Ok(SignedIn {
        secret,
        person: id,
        must_change,
    })
}

/// Writes that a sign-in was refused: after the answer, so that it takes no time of it, and a line a minute at most. What
/// was typed is not kept: people type their password where the name belongs.
fn refused(app: &App, row: Option<&PersonRow>) -> Result<(), StoreError> {
    let now = app.clock.millis();
    let (who, person) = match row {
        Some(row) => (
            row.organisation(),
            Some(public_id(&row.public_id, "person", row.id)?),
        ),
        None => (app.organisation, None),
    };
    let Some(times) = app.doors.refused(person, now) else {
        return Ok(());
    };
    let by = Arc::new(Who {
        from: app.who.from.clone(),
        ..Who::stranger()
    });
    let thing = person.map_or_else(String::new, |id| id.to_string());
    let what = json!({ "times": times, "known_name": person.is_some() });
    let deed = Deed::new("refused sign-in", "person", thing, what);
    let store = app.store.clone();
    tokio::spawn(async move {
        let told =
            store.write(move |c| Box::pin(async move { audit_trail::add(c, who, &by, now, deed).await }));
        if let Err(error) = told.await {
            tracing::error!(%error, "a refused sign-in could not be written to the audit trail");
        }
    });
    Ok(())
}

/// The sessions of the person who asks, newest first.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn sessions(app: &App) -> Result<Vec<Session>, PeopleError> {
    let row = own(app).await?;
    let now = app.clock.millis();
    let mut reader = app.store.reader().await?;
    let idle_since = now.saturating_sub(millis(IDLE));
    let rows = sql::sessions(&mut reader, app.organisation, row.id, now, idle_since).await?;
    let session = |session: sql::SessionRow| {
        Ok(Session {
            here: session.name == app.who.via.label(),
            created_at: time(session.created_at, "session", "created_at", row.id)?,
            expires_at: time(session.expires_at, "session", "expires_at", row.id)?,
            last_used_at: time(session.last_used_at, "session", "last_used_at", row.id)?,
            name: session.name,
            from: session.came_from,
        })
    };
    rows.into_iter().map(session).collect()
}

/// Ends the session that asks.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn sign_out(app: &App) -> Result<(), PeopleError> {
    end_session(app, app.who.via.label()).await.map(drop)
}

/// Ends one session of the person who asks; false where there is none of that name.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn end_session(app: &App, name: &str) -> Result<bool, PeopleError> {
    let name = name.to_owned();
    let ended = end(app, "signed out", move |c, who, person| {
        Box::pin(async move { sql::end_session(c, who, person, &name).await })
    });
    Ok(ended.await? > 0)
}

/// Ends every session of the person who asks, this one too; how many.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn sign_out_everywhere(app: &App) -> Result<u64, PeopleError> {
    end(app, "signed out everywhere", move |c, who, person| {
        Box::pin(async move { sql::end_others(c, who, person, "").await })
    })
    .await
}

async fn end<F>(app: &App, did: &'static str, ending: F) -> Result<u64, PeopleError>
where
    F: for<'c> FnOnce(
            &'c mut crate::store::Connection,
            crate::store::OrganisationId,
            i64,
        ) -> crate::store::Work<'c, Result<u64, StoreError>>
        + Send
        + 'static,
{
    let row = own(app).await?;
    let (who, now) = (app.organisation, app.clock.millis());
    let (by, doors) = (app.who.clone(), app.doors.clone());
    app.store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let ended = ending(c, who, row.id).await?;
                    if ended > 0 {
                        let deed = Deed::new(did, "person", row.public_id, json!({ "sessions": ended }));
                        audit_trail::add(c, who, &by, now, deed).await?;
                    }
                    Ok(ended)
                })
            },
            move |_| doors.forget(),
        )
        .await
}
