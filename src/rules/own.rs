//! Rule sets of one's own: a version is added and never changes; the newest one counts where a document names none.

use super::{basis, sql};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::documents::{Problem, Problems, canonical, rule_set};
use crate::core::domain::RuleSet;
use crate::store::StoreError;
use jiff::Timestamp;
use serde::Serialize;
use serde_json::{Value, json};
use thiserror::Error;
use utoipa::ToSchema;

/// More versions than this, of all rule sets together, are a mistake: every evaluation holds them at hand.
const MOST_VERSIONS: i64 = 1_000;

/// Why a use case of rules did not do what it was asked. `Display` is for people.
#[derive(Clone, Debug, Error)]
pub enum RuleError {
    /// The document is wrong (422): everything at once, nothing was stored.
    #[error("The document does not hold.")]
    Problems(Problems),
    /// There is no such rule set here (404).
    #[error("There is no such rule set.")]
    NotFound,
    /// That version is there and says something else (409).
    #[error(
        "Version {version} of this rule set is there and says something else. A version never changes: give the next one another name."
    )]
    Taken {
        /// The version.
        version: String,
    },
    /// There are too many versions (409).
    #[error("There are {MOST_VERSIONS} versions of rule sets here already. No more can be added.")]
    TooMany,
    /// Somebody saved in between (412).
    #[error("Somebody changed the settings in the meantime.")]
    Stale {
        /// Hash of what is there now.
        hash: String,
    },
    /// The database.
    #[error(transparent)]
    Store(#[from] StoreError),
}

/// A version that is there now.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct OwnVersion {
    /// Id of the rule set.
    pub id: String,
    /// Its version. Documents name it as `id@version`, or just `id` for the newest.
    pub version: String,
    /// Hash of its canonical document: the entity tag.
    pub hash: String,
    /// When it was saved.
    #[schema(value_type = String, format = DateTime)]
    pub saved_at: Timestamp,
    /// False when the same was there already: then nothing was written.
    pub added: bool,
}

/// A version of a rule set.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct RuleSetVersion {
    /// The version.
    pub version: String,
    /// Hash of its canonical document.
    pub hash: String,
    /// When it was saved; null for a built-in one.
    #[schema(value_type = Option<String>, format = DateTime)]
    pub saved_at: Option<Timestamp>,
}

/// Adds a version of an own rule set. The same version again, saying the same, is no change.
///
/// # Errors
/// All problems of the document; `Taken` when that version says something else; or when the database fails. Nothing is
/// stored then.
pub async fn add_version(app: &App, id: &str, document: &Value) -> Result<OwnVersion, RuleError> {
    let rules = checked(app, id, document).map_err(RuleError::Problems)?;
    let bytes = rule_set::canonical_bytes(&rules).map_err(unwritable)?;
    let hash = canonical::hash(&bytes);
    let text = String::from_utf8(bytes).map_err(unwritable)?;
    let (who, now, memory) = (app.organisation, app.clock.millis(), app.memory.clone());
    let by = app.who.clone();
    let (name, version, hash_too) = (rules.id.clone(), rules.version.clone(), hash.clone());
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                match sql::version(c, who, &name, &version).await? {
                    Some((found, saved_at)) if found == hash_too => return Ok((saved_at, false)),
                    Some(_) => return Err(RuleError::Taken { version }),
                    None => {}
                }
                if sql::count(c, who).await? >= MOST_VERSIONS {
                    return Err(RuleError::TooMany);
                }
                sql::add_rule_set(c, who, &name, &version, &text, &hash_too, now).await?;
                let what = json!({ "version": version, "hash": hash_too });
                audit_trail::add(c, who, &by, now, Deed::new("added", "rule_set", &name, what)).await?;
                // Assessments under the name rest on the version before.
                sql::drop_assessments(c, who, &name).await?;
                Ok((now, true))
            })
        },
        move |_| memory.forget_basis(who),
    );
    let (saved_at, added) = job.await?;
    Ok(OwnVersion {
        id: rules.id,
        version: rules.version,
        hash,
        saved_at: time(saved_at)?,
        added,
    })
}

/// Reads the document and holds it to what its address and versions ask.
fn checked(app: &App, id: &str, document: &Value) -> Result<RuleSet, Problems> {
    let rules = rule_set::from_value(document, app.library)?;
    let mut problems = Problems::default();
    if rules.id != id {
        let detail = format!(
            "The rule set is called \"{}\", and was sent to another address.",
            rules.id
        );
        problems.add("/id", detail, "Give both the same id.");
    }
    let letters = rules
        .version
        .chars()
        .all(|c| c.is_ascii_alphanumeric() || matches!(c, '.' | '_' | '-'));
    if !letters || rules.version.len() > 64 {
        let detail = "The version cannot stand in an address.";
        problems.add("/version", detail, "Give 1 to 64 of A-Z a-z 0-9 . _ -");
    }
    if problems.is_empty() {
        Ok(rules)
    } else {
        Err(problems)
    }
}

/// The versions of a rule set, newest first; a built-in one has its one.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn versions(app: &App, id: &str) -> Result<Vec<RuleSetVersion>, RuleError> {
    if let Some(rules) = app.library.rule_sets.get(id) {
        let bytes = rule_set::canonical_bytes(rules).map_err(unwritable)?;
        return Ok(vec![RuleSetVersion {
            version: rules.version.clone(),
            hash: canonical::hash(&bytes),
            saved_at: None,
        }]);
    }
    let mut reader = app.store.reader().await?;
    let rows = sql::versions(&mut reader, app.organisation, id).await?;
    if rows.is_empty() {
        return Err(RuleError::NotFound);
    }
    let line = |(version, hash, saved_at): (String, String, i64)| {
        Ok(RuleSetVersion {
            version,
            hash,
            saved_at: Some(time(saved_at)?),
        })
    };
    rows.into_iter().map(line).collect()
}

/// A rule set by its id, or a version of one as `id@version`, as its document has it: without the version in its id.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn unpinned(app: &App, id: &str) -> Result<RuleSet, RuleError> {
    let basis = basis(app).await?;
    let mut rules = basis.book.rule_sets.get(id).cloned().ok_or(RuleError::NotFound)?;
    if let Some((name, _)) = rules.id.split_once('@') {
        rules.id = name.to_owned();
    }
    Ok(rules)
}

fn time(millis: i64) -> Result<Timestamp, StoreError> {
    Timestamp::from_millisecond(millis).map_err(|_| StoreError::Inconsistent {
        table: "own_rule_set",
        column: "saved_at",
        row: 0,
    })
}

/// A rule set that was read holds no figure that JSON cannot; if it did, the document is to blame.
fn unwritable(error: impl std::fmt::Display) -> RuleError {
    let problem = Problem {
        pointer: String::new(),
        detail: format!("The rule set cannot be written as JSON: {error}."),
        remedy: "Check its figures.".to_owned(),
    };
    RuleError::Problems(problem.into())
}
