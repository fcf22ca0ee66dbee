//! The page of one factor with the pathways that use it. It stands here because factors know nothing of pathways.

use super::{answers, links};
use crate::factors::{ShowFactor, UseRow};
use crate::pathways;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::Path;
use axum::response::Response;

/// One row of an edition.
pub(super) async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path((edition, row)): Path<(String, String)>,
) -> Result<Response, Refusal> {
    let id = format!("{edition}/{row}");
    let uses = pathways::uses_of_factor(&app, &id).await?;
    let rows = uses.into_iter().filter(|one| !one.archived).map(|one| {
        let pathway = one.pathway.to_string();
        let inside = one.input.as_deref().or(one.co_product.as_deref());
        let (place, at) = match (&one.stage, inside) {
            (Some(stage), Some(input)) => (
                format!("{stage}, {input}"),
                format!("{}#input-{input}", links::stage(&pathway, stage)),
            ),
            (Some(stage), None) => (stage.clone(), links::stage(&pathway, stage)),
            (None, _) => ("default values".to_owned(), links::pathway(&pathway)),
        };
        UseRow {
            pathway: one.pathway_name,
            href: links::pathway(&pathway),
            place,
            at,
            revision: one.revision,
        }
    });
    let shown =
        ShowFactor::of(app.library, &id, rows.collect()).ok_or_else(|| Refusal::not_here("factor", &id))?;
    answers::page(&shown)
}
