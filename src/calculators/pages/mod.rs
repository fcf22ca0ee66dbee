//! Pages of the calculators. Their fields have the names of the API, so that an address reads like a document.

mod alcoholometry;
mod dehydration;
mod distillation;
mod fermentation;
mod index;
#[cfg(test)]
mod tests;

pub use index::Index;

use crate::app::App;
use crate::core::models::refusal::{Figure, Refusal as Untaken};
use crate::web::actor::{Actor, CanRead};
use crate::web::calculator::{Asked, Calculator, Wrong};
use crate::web::extract::Query;
use crate::web::{Refusal, answers, blocking};
use axum::Router;
use axum::response::Response;
use axum::routing::get;

type Pairs = Query<Vec<(String, String)>>;

/// Makes the page of what was asked.
type Page = fn(&Asked) -> Calculator;

/// The calculators: the name in their address, and their page.
const CALCULATORS: [(&str, Page); 4] = [
    ("alcoholometry", alcoholometry::page),
    ("distillation", distillation::page),
    ("fermentation", fermentation::page),
    ("dehydration", dehydration::page),
];

/// The routes of this file. The blend stands with the pathways, which it can take its ethanol from.
pub fn routes() -> Router<App> {
    let index = get(|_: Actor<CanRead>| async { answers::page(&Index::new()) });
    CALCULATORS.into_iter().fold(
        Router::new().route("/calculators", index),
        |routes, (name, page)| {
            routes
                .route(
                    &format!("/calculators/{name}"),
                    get(move |_: Actor<CanRead>, query: Pairs| shown(page, query)),
                )
                .route(
                    &format!("/calculators/{name}.csv"),
                    get(move |_: Actor<CanRead>, query: Pairs| file(name, page, query)),
                )
        },
    )
}

/// Works a page out where it holds up nobody: a column takes a search.
async fn worked(page: Page, Query(pairs): Pairs) -> Result<Calculator, Refusal> {
    let asked = Asked::of(pairs);
    blocking::run(move || page(&asked)).await
}

async fn shown(page: Page, query: Pairs) -> Result<Response, Refusal> {
    worked(page, query).await?.answer()
}

async fn file(name: &'static str, page: Page, query: Pairs) -> Result<Response, Refusal> {
    worked(page, query).await?.file(name)
}

/// What a calculator does not take, at the fields of their names.
fn wrong(refusals: Vec<Untaken>) -> Vec<Wrong> {
    refusals
        .into_iter()
        .map(|one| Wrong::new(one.field, one.detail, one.remedy))
        .collect()
}

/// The range of a figure in words, and what stands in where it is left empty.
fn range(figure: &Figure, otherwise: &str) -> String {
    let unit = match figure.unit {
        "percent" => "%",
        unit => unit,
    };
    let range = crate::web::filters::capital(&figure.hard.words(unit));
    if otherwise.is_empty() {
        format!("{range}.")
    } else {
        format!("{range}. Left empty: {otherwise}.")
    }
}
