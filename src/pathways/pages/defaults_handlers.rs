//! Defaults beside actuals at work: laying the table, and putting a chosen combination into the document.

use super::defaults::ShowDefaults;
use super::handlers::{REFUSED, Seen, count, refused, seen};
use super::{Fault, fault_rows, links};
use crate::app::App;
use crate::core::levers::defaults::{Answer, DefaultsTable, with_defaults};
use crate::pathways::{self, Expected, PathwayError};
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::answers::{page, see_other, with_status};
use crate::web::extract::{Form, Path};
use axum::response::{IntoResponse, Response};
use serde::Deserialize;

/// The table of what was seen; where the pathway cannot be worked out, its own page tells why.
pub(super) async fn table_of(app: &App, id: &str, seen: &Seen) -> Result<DefaultsTable, Response> {
    if seen.outcome.is_err() {
        return Err(see_other(&links::pathway(id)));
    }
    match pathways::defaults(app, seen.stored.id, None).await {
        Ok(made) if made.revision == seen.stored.revision => Ok(made.table),
        // Somebody saved between two readings: the address, asked again, shows theirs.
        Ok(_) => Err(see_other(&format!("{}/defaults", links::pathway(id)))),
        Err(error) => Err(refused(app, id, error).await),
    }
}

fn shown(seen: &Seen, table: &DefaultsTable) -> ShowDefaults {
    ShowDefaults::of(seen.head(), &seen.pathway, table, &seen.book)
}

/// The page.
pub(super) async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
) -> Result<Response, Response> {
    let seen = seen(&app, &id, None).await?;
    let table = table_of(&app, &id, &seen).await?;
    page(&shown(&seen, &table)).map_err(IntoResponse::into_response)
}

/// Which combination, chosen on which revision.
#[derive(Debug, Deserialize)]
pub(super) struct Chosen {
    expected: i64,
    #[serde(default)]
    combination: String,
    #[serde(default)]
    why: String,
}

/// Puts the defaults of a combination into the document that was on the page, as a new revision. A combination that is not
/// lawful is refused, and so is one chosen on a revision that is no longer current: then the page shows the current one.
pub(super) async fn choose(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(chosen): Form<Chosen>,
) -> Result<Response, Response> {
    let now = seen(&app, &id, None).await?;
    let table = table_of(&app, &id, &now).await?;
    let refuse = |faults: Vec<Fault>| -> Response {
        let mut shown = shown(&now, &table).ticking(&chosen.combination);
        shown.why.clone_from(&chosen.why);
        shown.faults = faults;
        with_status(REFUSED, &shown).unwrap_or_else(IntoResponse::into_response)
    };
    let fault = |detail: &str, remedy: &str| {
        vec![Fault {
            href: Some("#ways".to_owned()),
            place: "Put together".to_owned(),
            detail: detail.to_owned(),
            remedy: remedy.to_owned(),
        }]
    };
    if chosen.expected != now.stored.revision {
        let detail = format!(
            "Revision {} was saved meanwhile, and the table is of that one now.",
            count(now.stored.revision)
        );
        return Ok(refuse(fault(&detail, "Look it over, then choose again.")));
    }
    let combination = table.combinations.iter().find(|one| one.id == chosen.combination);
    let combination = match combination {
        Some(one) if one.lawful != Answer::No => one,
        Some(_) => {
            return Ok(refuse(fault(
                "This combination is not lawful here.",
                "Choose one of the list.",
            )));
        }
        None => return Ok(refuse(fault("Nothing is chosen.", "Choose one of the list."))),
    };
    let document = with_defaults(&now.pathway, &combination.defaults);
    let why = match chosen.why.trim() {
        "" => format!("Default values: {}", combination.words),
        why => why.to_owned(),
    };
    let why = Some(why.chars().take(1_000).collect());
    let expected = Expected::Number(chosen.expected);
    match pathways::replace(&app, now.stored.id, document, expected, why).await {
        Ok(saved) if saved.changed => Ok(see_other(&links::saved(&id, saved.revision))),
        Ok(_) => Ok(see_other(&links::pathway(&id))),
        Err(PathwayError::Problems(problems)) => Ok(refuse(fault_rows(problems.list(), |pointer| {
            links::place(&id, &now.pathway, pointer)
        }))),
        // Somebody was quicker between reading and writing: the next look shows theirs.
        Err(PathwayError::Conflict { .. }) => Ok(refuse(fault(
            "Another revision was saved at the same moment.",
            "Open this page again, then choose.",
        ))),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}
