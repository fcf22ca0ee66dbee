//! Tokens of scripts: shown once, kept as a hash, good until a day or until they are revoked. What one may do is what its
//! scopes say, as long as its person may do that.

use super::sql;
use crate::app::App;
use crate::app::who::{Right, Via};
use crate::audit_trail::{self, Deed};
use crate::core::documents::Problems;
use crate::core::documents::canonical::hex;
use crate::people::change::own;
use crate::people::{PeopleError, public_id, secrets, time};
use jiff::Timestamp;
use serde::Serialize;
use serde_json::json;
use std::collections::BTreeSet;
use utoipa::ToSchema;
use uuid::Uuid;

/// A token is good for so many days at most.
pub const LONGEST_DAYS: u32 = 730;
/// Tokens of a person that are good at the same time, at most.
const MOST: usize = 100;
const DAY: i64 = 24 * 3_600 * 1_000;

/// The rights that a token can have.
pub(crate) const SCOPES: &[Right] = &[Right::Read, Right::Write, Right::Approve];

/// A token of a person, without its secret.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Token {
    /// Public id.
    pub id: Uuid,
    /// What it is for, in the words of its person.
    pub label: String,
    /// What it may do: `read`, `write`, `approve`.
    pub scopes: Vec<String>,
    /// When it was made.
    #[schema(value_type = String, format = DateTime)]
    pub created_at: Timestamp,
    /// When it stops being good.
    #[schema(value_type = String, format = DateTime)]
    pub expires_at: Timestamp,
    /// When it was last used, to the minute.
    #[schema(value_type = Option<String>, format = DateTime)]
    pub last_used_at: Option<Timestamp>,
    /// When it was revoked.
    #[schema(value_type = Option<String>, format = DateTime)]
    pub revoked_at: Option<Timestamp>,
}

impl Token {
    /// True while it is good.
    pub fn is_good(&self, now: Timestamp) -> bool {
        self.revoked_at.is_none() && now < self.expires_at
    }
}

/// A token to make.
#[derive(Clone, Debug)]
pub struct NewToken {
    /// What it is for.
    pub label: String,
    /// What it may do.
    pub scopes: BTreeSet<Right>,
    /// For how many days, 1 to [`LONGEST_DAYS`].
    pub days: u32,
}

/// A token that was made.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct TokenMade {
    /// Public id, to revoke it by.
    pub id: Uuid,
    /// The token: send it as `Authorization: Bearer ...`. It is shown this once.
    #[schema(example = "wwt_")]
    pub token: String,
    /// When it stops being good.
    #[schema(value_type = String, format = DateTime)]
    pub expires_at: Timestamp,
}

/// Makes a token of the person who asks, or, from the command line, of `person`.
///
/// # Errors
/// All problems; `NotByToken`: one that leaked could make itself a successor; `NotFound`; or when the database fails.
pub async fn make_token(app: &App, person: Option<Uuid>, new: NewToken) -> Result<TokenMade, PeopleError> {
    let row = match (person, &app.who.via) {
        (Some(id), Via::Command) => {
            let mut reader = app.store.reader().await?;
            let row = crate::people::sql::person(&mut reader, app.organisation, id).await?;
            row.ok_or(PeopleError::NotFound)?
        }
        _ => own(app).await?,
    };
    let now = app.clock.millis();
    let label = new.label.trim().to_owned();
    wrong(&label, &new)?;
    let mut reader = app.store.reader().await?;
    let good = sql::tokens(&mut reader, app.organisation, row.id).await?;
    drop(reader);
    if good
        .iter()
        .filter(|token| token.revoked_at.is_none() && now < token.expires_at)
        .count()
        >= MOST
    {
        let detail = format!("There are {MOST} good tokens already.");
        return Err(PeopleError::problem(
            "",
            detail,
            "Revoke those that nothing uses.",
        ));
    }
    let token = format!("{}{}", secrets::TOKEN_PREFIX, secrets::fresh(&app.clock));
    let id = app.clock.id();
    let scopes: Vec<_> = new.scopes.iter().map(|right| right.name()).collect();
    let expires_at = now.saturating_add(i64::from(new.days).saturating_mul(DAY));
    let made = sql::NewToken {
        id,
        secret_hash: hex(&secrets::hash(&token)),
        label,
        scopes: scopes.join(" "),
        expires_at,
    };
    let (who, by) = (app.organisation, app.who.clone());
    let what = json!({ "label": made.label, "scopes": scopes, "days": new.days, "person": row.public_id });
    app.store
        .write(move |c| {
            Box::pin(async move {
                sql::add_token(c, who, row.id, &made, now).await?;
                audit_trail::add(c, who, &by, now, Deed::new("made", "token", id, what)).await?;
                Ok::<_, PeopleError>(())
            })
        })
        .await?;
    Ok(TokenMade {
        id,
        token,
        expires_at: time(expires_at, "token", "expires_at", 0)?,
    })
}

fn wrong(label: &str, new: &NewToken) -> Result<(), PeopleError> {
    let mut problems = Problems::default();
    if label.is_empty() || label.chars().count() > 100 || label.chars().any(char::is_control) {
        let remedy = "Give 1 to 100 letters that tell you later what uses it.";
        problems.add("/label", "The token has no fitting label.", remedy);
    }
    if new.scopes.is_empty() || new.scopes.iter().any(|right| !SCOPES.contains(right)) {
        problems.add(
            "/scopes",
            "A token may read, write or approve.",
            "Choose at least one of read, write, approve.",
        );
    }
    if !(1..=LONGEST_DAYS).contains(&new.days) {
        let remedy = format!("Give 1 to {LONGEST_DAYS} days.");
        problems.add("/days", "A token ends some day.", remedy);
    }
    if problems.is_empty() {
        Ok(())
    } else {
        Err(PeopleError::Problems(problems))
    }
}

/// The tokens of the person who asks, newest first.
///
/// # Errors
/// `NotByToken`, `NoPerson`; or when the database fails.
pub async fn tokens(app: &App) -> Result<Vec<Token>, PeopleError> {
    let row = own(app).await?;
    let mut reader = app.store.reader().await?;
    let rows = sql::tokens(&mut reader, app.organisation, row.id).await?;
    let token = |token: sql::TokenRow| {
        let some = |at: Option<i64>, column| at.map(|at| time(at, "token", column, token.id)).transpose();
        Ok(Token {
            id: public_id(&token.public_id, "token", token.id)?,
            scopes: token.scopes.split_whitespace().map(str::to_owned).collect(),
            created_at: time(token.created_at, "token", "created_at", token.id)?,
            expires_at: time(token.expires_at, "token", "expires_at", token.id)?,
            last_used_at: some(token.last_used_at, "last_used_at")?,
            revoked_at: some(token.revoked_at, "revoked_at")?,
            label: token.label,
        })
    };
    rows.into_iter().map(token).collect()
}

/// Revokes a token of the person who asks. It is refused from now on.
///
/// # Errors
/// `NotFound` when there is none of that id that is good; `NotByToken`, `NoPerson`; or when the database fails.
pub async fn revoke_token(app: &App, id: Uuid) -> Result<(), PeopleError> {
    let row = own(app).await?;
    let (who, now) = (app.organisation, app.clock.millis());
    let (by, doors) = (app.who.clone(), app.doors.clone());
    app.store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let label = sql::revoke(c, who, row.id, id, now).await?;
                    let what = json!({ "label": label.ok_or(PeopleError::NotFound)? });
                    audit_trail::add(c, who, &by, now, Deed::new("revoked", "token", id, what)).await?;
                    Ok(())
                })
            },
            move |()| doors.forget(),
        )
        .await
}
