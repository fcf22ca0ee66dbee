//! Who comes with a session or a token: read once, trusted for a second, forgotten at every write about people.

use super::sessions::{IDLE, millis};
use super::sql::{self, HolderRow};
use super::tokens::SCOPES;
use crate::app::App;
use crate::app::doors::Known;
use crate::app::who::{Right, Role, Sight, Via, Who};
use crate::core::documents::canonical::hex;
use crate::people::secrets::{self, TOKEN_PREFIX};
use crate::people::sql::{InvitationRow, invitations, roles};
use crate::people::{PeopleError, public_id};
use crate::store::OrganisationId;
use std::collections::BTreeSet;
use std::sync::Arc;
use uuid::Uuid;

/// That a session or token was used is written at most so often, ms.
const TOUCH: i64 = 60_000;

/// Whom a session belongs to; none when it is over.
///
/// # Errors
/// When the database fails.
pub async fn recognise_session(app: &App, secret: &str, from: &str) -> Result<Option<Come>, PeopleError> {
    if !secrets::is_secret(secret) {
        return Ok(None);
    }
    let known = recognise(app, secret, false).await?;
    Ok(known.map(|known| come_in(&known, from)))
}

/// Whom a token belongs to; none when it is unknown, has ended or was revoked, or its person is disabled.
///
/// # Errors
/// When the database fails; `TooOften` when too many unknown ones came from an address.
pub async fn recognise_token(app: &App, token: &str, from: &str) -> Result<Option<Come>, PeopleError> {
    let known = match token.strip_prefix(TOKEN_PREFIX) {
        Some(secret) if secrets::is_secret(secret) => recognise(app, token, true).await?,
        _ => None,
    };
    match known {
        Some(known) => Ok(Some(come_in(&known, from))),
        None => {
            app.doors.may_come(from).map_err(PeopleError::TooOften)?;
            Ok(None)
        }
    }
}

/// Somebody who was recognised: whose records are theirs to ask for, who they are, how pages treat them.
pub type Come = (OrganisationId, Arc<Who>, Manners);

/// How pages treat somebody.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Manners {
    /// They must choose a new password before anything else.
    pub must_change: bool,
    /// `light`, `dark` or empty.
    pub theme: String,
}

fn come_in(known: &Arc<Known>, from: &str) -> Come {
    let who = if known.who.from == from {
        known.who.clone()
    } else {
        Arc::new(Who {
            from: from.to_owned(),
            ..(*known.who).clone()
        })
    };
    let manners = Manners {
        must_change: known.must_change,
        theme: known.theme.clone(),
    };
    (known.organisation, who, manners)
}

async fn recognise(app: &App, secret: &str, is_token: bool) -> Result<Option<Arc<Known>>, PeopleError> {
    let (hash, now) = (secrets::hash(secret), app.clock.millis());
    let writes = match app.doors.known(&hash, now) {
        Ok(known) => return Ok(Some(known)),
        Err(writes) => writes,
    };
    let text = hex(&hash);
    let mut reader = app.store.reader().await?;
    let row = match is_token {
        true => sql::token(&mut reader, &text).await?,
        false => sql::session(&mut reader, &text).await?,
    };
    let Some(row) = row.filter(|row| is_good(row, is_token, now)) else {
        return Ok(None);
    };
    let organisation = row.organisation();
    let held = roles(&mut reader, organisation, Some(row.person_id)).await?;
    let held: BTreeSet<Role> = held
        .iter()
        .filter(|held| held.until.is_none_or(|until| now < until))
        .filter_map(|held| Role::of(&held.role))
        .collect();
    let chosen = match held.len() == 1 && held.contains(&Role::Auditor) {
        true => Some(invitations(&mut reader, organisation, Some(row.person_id)).await?),
        false => None,
    };
    drop(reader);
    let known = Arc::new(known(row, is_token, &held, chosen.as_deref(), now)?);
    let touched = now.saturating_sub(known.last_used_at) >= TOUCH;
    if touched {
        touch(app, &known, is_token, now);
    }
    app.doors.learn(hash, known.clone(), now, writes);
    Ok(Some(known))
}

fn is_good(row: &HolderRow, is_token: bool, now: i64) -> bool {
    let in_use = is_token || now.saturating_sub(row.last_used_at) < millis(IDLE);
    row.disabled_at.is_none() && row.revoked_at.is_none() && now < row.expires_at && in_use
}

fn known(
    row: HolderRow,
    is_token: bool,
    held: &BTreeSet<Role>,
    chosen: Option<&[InvitationRow]>,
    now: i64,
) -> Result<Known, PeopleError> {
    let organisation = row.organisation();
    let mut rights: BTreeSet<Right> = held.iter().flat_map(|role| role.rights()).copied().collect();
    if is_token {
        let scopes: BTreeSet<&str> = row.scopes.split_whitespace().collect();
        rights.retain(|right| SCOPES.contains(right) && scopes.contains(right.name()));
    }
    let sight = match chosen {
        None => Sight::All,
        Some(rows) => Sight::Chosen {
            pathways: things(rows, "pathway", now),
            statements: things(rows, "statement", now),
        },
    };
    let via = match is_token {
        true => Via::Token(row.label),
        false => Via::Session(row.label),
    };
    let who = Who {
        person: Some(public_id(&row.public_id, "person", row.person_id)?),
        name: row.name,
        sign_in_name: row.sign_in_name,
        organisation_name: row.organisation_name,
        via,
        from: String::new(),
        rights,
        sight,
    };
    Ok(Known {
        organisation,
        who: Arc::new(who),
        credential: row.id,
        expires_at: row.expires_at,
        last_used_at: row.last_used_at,
        must_change: row.must_change,
        theme: row.theme,
    })
}

fn things(rows: &[InvitationRow], kind: &str, now: i64) -> BTreeSet<Uuid> {
    rows.iter()
        .filter(|row| row.kind == kind && now < row.until)
        .filter_map(|row| Uuid::parse_str(&row.thing).ok())
        .collect()
}

/// Writes that it was used, in its own time: a full disk is no reason not to answer.
fn touch(app: &App, known: &Known, is_token: bool, now: i64) {
    let (store, who, id) = (app.store.clone(), known.organisation, known.credential);
    tokio::spawn(async move {
        let written =
            store.write(move |c| Box::pin(async move { sql::touch(c, who, id, is_token, now).await }));
        if let Err(error) = written.await {
            tracing::warn!(%error, "the last use of a session or token could not be kept");
        }
    });
}
