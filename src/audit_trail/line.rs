//! A line of the audit trail as a document: what is hashed, listed and exported.

use crate::app::who::Who;
use jiff::Timestamp;
use serde::{Deserialize, Serialize};
use serde_json::Value;
use utoipa::ToSchema;
use uuid::Uuid;

/// The format of a line.
pub const FORMAT: &str = "wheelwort.audit-line/1";

/// What was done, to what.
#[derive(Clone, Debug, PartialEq)]
pub struct Deed {
    /// The deed, such as `saved`.
    pub did: &'static str,
    /// Kind of the thing it was done to, such as `pathway`.
    pub thing: &'static str,
    /// Its public id.
    pub id: String,
    /// Particulars: revision and hash, a role given. Never a secret.
    pub what: Value,
    /// Why, in the words of the person.
    pub reason: Option<String>,
}

impl Deed {
    /// A deed without a reason.
    pub fn new(did: &'static str, thing: &'static str, id: impl std::fmt::Display, what: Value) -> Deed {
        Deed {
            did,
            thing,
            id: id.to_string(),
            what,
            reason: None,
        }
    }

    /// The same with a reason.
    #[must_use]
    pub fn because(self, reason: Option<String>) -> Deed {
        Deed { reason, ..self }
    }
}

/// A line of the chain.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[schema(as = AuditLine)]
pub struct Line {
    /// `wheelwort.audit-line/1`.
    pub format: String,
    /// Its number in the chain, from 1, without gaps.
    pub number: i64,
    /// Hash of the line before; empty for the first.
    pub previous: String,
    /// When it was done.
    #[schema(value_type = String, format = DateTime)]
    pub at: Timestamp,
    /// Who did it.
    pub by: By,
    /// What was done, such as `saved`.
    pub did: String,
    /// Kind of what it was done to, such as `pathway`.
    pub thing: String,
    /// Its public id.
    pub id: String,
    /// Particulars.
    #[schema(value_type = Object)]
    pub what: Value,
    /// Why, in the words of the person.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
}

/// Who did something, and by what means.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct By {
    /// Public id of the person; absent for the command line.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub person: Option<Uuid>,
    /// Their name at the time.
    pub name: String,
    /// `session`, `token`, `command`.
    pub via: String,
    /// Which one: the short name of the session, the label of the token.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub label: String,
    /// The address the request came from.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub from: String,
}

impl By {
    /// The part of somebody that a line keeps.
    pub fn of(who: &Who) -> By {
        By {
            person: who.person,
            name: who.name.clone(),
            via: who.via.kind().to_owned(),
            label: who.via.label().to_owned(),
            from: who.from.clone(),
        }
    }
}
