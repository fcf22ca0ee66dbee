//! Stored pathways named in a body: an id, or an id with a revision.

use crate::core::documents::Problems;
use crate::core::documents::reader::{Fields, Place, text_of};
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;
use uuid::Uuid;

/// A revision of a stored pathway.
#[derive(Debug, Serialize, ToSchema)]
#[allow(
    dead_code,
    reason = "describes bodies, which are read by hand so that every problem has its pointer"
)]
pub(super) struct StoredChoice {
    /// Id of the pathway.
    id: Uuid,
    /// Number of the revision; the current one when left out.
    #[schema(minimum = 1)]
    revision: Option<i64>,
}

/// Reads an id, or an object with an id and perhaps the number of a revision.
pub(super) fn stored(value: &Value, at: &Place<'_>, problems: &mut Problems) -> Option<(Uuid, Option<i64>)> {
    if value.is_string() {
        return Some((id(value, at, problems)?, None));
    }
    let mut fields = Fields::open(value, at, problems)?;
    fields.need("id", at, problems);
    let named = fields.part("id", at, problems, id);
    let revision = fields
        .take("revision")
        .map(|value| (value, value.as_i64().filter(|number| *number >= 1)));
    if let Some((_, None)) = revision {
        problems.add(
            at.field("revision"),
            "This is not the number of a revision.",
            "Give a whole number from 1.",
        );
    }
    fields.close(at, problems);
    Some((named?, revision.and_then(|(_, number)| number)))
}

fn id(value: &Value, at: &Place<'_>, problems: &mut Problems) -> Option<Uuid> {
    let id = text_of(value, at, problems)?.parse().ok();
    if id.is_none() {
        problems.add(
            at,
            "This is not the id of a pathway.",
            "Give an id from the list of pathways, or what stands in its place.",
        );
    }
    id
}

/// Problems of a document that stands inside another.
pub(super) fn under(at: &str, found: Problems, problems: &mut Problems) {
    for problem in found.into_list() {
        problems.add(format!("{at}{}", problem.pointer), problem.detail, problem.remedy);
    }
}
