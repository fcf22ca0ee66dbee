//! Pages of published data: editions and their rows, materials, rule sets, and what nobody has read at its source.

mod factor;
mod list;
mod published;
mod rule_sets;
#[cfg(test)]
mod tests;

pub use factor::{ShowFactor, UseRow};
pub use list::{Asked, Factors};
pub use published::{Memory, Published};
pub use rule_sets::RuleSets;

use crate::app::App;
use crate::rules::basis;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::answers::{csv, page};
use crate::web::extract::{Path, Query};
use axum::Router;
use axum::response::Response;
use axum::routing::get;

/// The routes of this file. The page of one factor stands with the pathways, which know who uses it.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/factors", get(factors))
        .route("/factors.csv", get(factors_csv))
        .route("/factors/memory", get(memory))
        .route("/materials/{id}", get(material))
        .route("/rule-sets", get(rule_sets))
        .route("/rule-sets.csv", get(rule_sets_csv))
        .route("/rule-sets/{id}", get(rule_set))
}

async fn factors(Actor { app, .. }: Actor<CanRead>, Query(asked): Query<Asked>) -> Result<Response, Refusal> {
    page(&Factors::of(app.library, asked))
}

async fn factors_csv(Actor { app, .. }: Actor<CanRead>, Query(asked): Query<Asked>) -> Response {
    csv("factors", &Factors::table(app.library, &asked))
}

async fn memory(_: Actor<CanRead>) -> Result<Response, Refusal> {
    page(&Memory::of(crate::library::figures_from_memory()))
}

async fn material(Actor { app, .. }: Actor<CanRead>, Path(id): Path<String>) -> Result<Response, Refusal> {
    let material = app
        .library
        .materials
        .get(&id)
        .ok_or_else(|| Refusal::not_here("material", &id))?;
    page(&Published::material(material))
}

async fn rule_sets(Actor { app, .. }: Actor<CanRead>) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    page(&RuleSets::of(&basis.book, crate::library::limits_elsewhere()))
}

async fn rule_sets_csv(Actor { app, .. }: Actor<CanRead>) -> Response {
    csv(
        "limits-elsewhere",
        &RuleSets::of(app.library, crate::library::limits_elsewhere()).table(),
    )
}

async fn rule_set(Actor { app, .. }: Actor<CanRead>, Path(id): Path<String>) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    let rules = basis
        .book
        .rule_sets
        .get(&id)
        .ok_or_else(|| Refusal::not_here("rule set", &id))?;
    page(&Published::rule_set(
        rules,
        basis.book.gwp_sets.get(&rules.gwp_set),
    ))
}
