//! The append-only record of who did what: a chain of lines an organisation, each with the hash of the one before, each
//! written in the transaction of the change it records.

pub mod api;
pub mod line;
pub mod pages;
mod question;
mod sql;
pub mod verify;

pub use line::{By, Deed, FORMAT, Line};
pub use question::{Entry, Export, Page, Person, Question, head, list, of_revision, people};
pub use verify::verify;

use crate::app::who::Who;
use crate::core::documents::canonical;
use crate::store::{Connection, OrganisationId, StoreError};
use jiff::Timestamp;

/// Every SQL text of the audit trail.
pub(crate) fn statements() -> Vec<&'static str> {
    sql::STATEMENTS.to_vec()
}

/// Adds a line to the chain of an organisation, inside the transaction of the change it records.
///
/// # Errors
/// When the database fails; then the change is lost with its line.
pub async fn add(
    c: &mut Connection,
    organisation: OrganisationId,
    who: &Who,
    at: i64,
    deed: Deed,
) -> Result<(), StoreError> {
    let (number, previous) = sql::head(c, organisation).await?;
    let wrong = |column| StoreError::Inconsistent {
        table: "audit_line",
        column,
        row: number,
    };
    let line = Line {
        format: FORMAT.to_owned(),
        number: number + 1,
        previous,
        at: Timestamp::from_millisecond(at).map_err(|_| wrong("at"))?,
        by: By::of(who),
        did: deed.did.to_owned(),
        thing: deed.thing.to_owned(),
        id: deed.id,
        what: deed.what,
        reason: deed.reason,
    };
    let bytes = canonical::bytes(&line).map_err(|_| wrong("document"))?;
    let hash = canonical::hash(&bytes);
    let text = String::from_utf8(bytes).map_err(|_| wrong("document"))?;
    sql::add(c, organisation, at, &line, &text, &hash).await
}
