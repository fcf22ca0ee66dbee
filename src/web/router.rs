//! Lays the routes of everything together: the API, its description, health, assets and the pages; answers what is
//! nowhere; and puts the layers around it all.

use super::actor::{Actor, CanWrite};
use super::extract::Limits;
use super::openapi::{self, Document};
use super::problem::{Refusal, RefusalPage};
use super::{api_page, error_page, idempotency};
use super::{assets, health, layers};
use crate::app::App;
use crate::people::pages::gate::{Door, Gate, authenticate};
use crate::{audit_trail, calculators, demo, evidence, factors, pathways, people, rules};
use axum::Router;
use axum::extract::Extension;
use axum::http::{StatusCode, Uri};
use axum::middleware::from_fn_with_state;
use axum::response::Redirect;
use axum::routing::{get, post};
use std::sync::Arc;
use std::time::Duration;
use utoipa_axum::router::OpenApiRouter;

/// How the shell around the use cases is set up.
#[derive(Clone, Debug)]
pub struct Shell {
    /// What a request may take.
    pub limits: Limits,
    /// Requests that are worked on at once; more are answered 503.
    pub at_once: usize,
    /// How long an answer may take to begin.
    pub timeout: Duration,
    /// Makes the page of a refusal.
    pub refusal_page: RefusalPage,
    /// How people come in.
    pub door: Door,
}

impl Default for Shell {
    fn default() -> Shell {
        Shell {
            limits: Limits::default(),
            at_once: 256,
            timeout: Duration::from_secs(30),
            refusal_page: error_page::page,
            door: Door::default(),
        }
    }
}

/// The whole service.
pub fn router(app: App, shell: Shell) -> Router {
    let (api, description) = api().split_for_parts();
    // Inside of the layer that knows who asks: a key belongs to a person.
    let once = from_fn_with_state(app.clone(), idempotency::layer);
    let work = api
        .layer(once)
        .merge(pages_router())
        .merge(assets::routes())
        .fallback(nowhere)
        .layer(Extension(Document::of(description)));
    let gate = Gate {
        app: app.clone(),
        door: Arc::new(shell.door),
    };
    let work = work.layer(from_fn_with_state(gate, authenticate));
    let work = layers::around_work(work, shell.at_once, shell.timeout, shell.limits);
    // Health stands outside: a busy program is a live one.
    let (health, _) = health::routes().split_for_parts();
    layers::around_all(work.merge(health), shell.refusal_page, shell.limits).with_state(app)
}

/// The description of the API, as `/api/v1/openapi.json` serves it.
pub fn description() -> Document {
    Document::of(api().split_for_parts().1)
}

fn api() -> OpenApiRouter<App> {
    let v1 = OpenApiRouter::new()
        .merge(openapi::routes())
        .merge(pathways::api::routes())
        .merge(evidence::api::routes())
        .merge(factors::api::routes())
        .merge(rules::api::routes())
        .merge(calculators::api::routes())
        .merge(audit_trail::api::routes())
        .merge(people::api::routes());
    let mut all = OpenApiRouter::with_openapi(openapi::begun()).nest("/api/v1", v1);
    // Described with the rest, routed apart.
    all.get_openapi_mut().merge(health::routes().into_openapi());
    all
}

/// The pages for people. Their routes come with the pages themselves.
pub fn pages_router() -> Router<App> {
    Router::new()
        .route("/api", get(api_page::show))
        .route("/example/load", post(load_example))
        .route("/example/remove", post(remove_example))
        .merge(pathways::pages::routes())
        .merge(evidence::pages::routes())
        .merge(calculators::pages::routes())
        .merge(factors::pages::routes())
        .merge(rules::pages::routes())
        .merge(audit_trail::pages::routes())
        .merge(people::pages::routes())
}

/// Puts the demonstration in, marked as such.
async fn load_example(Actor { app, .. }: Actor<CanWrite>) -> Result<Redirect, Refusal> {
    let saved = demo::load(&app).await?;
    Ok(Redirect::to(&format!("/?examples={}", saved.len())))
}

/// Takes the demonstration away, in one step.
async fn remove_example(Actor { app, .. }: Actor<CanWrite>) -> Result<Redirect, Refusal> {
    demo::remove(&app).await?;
    Ok(Redirect::to("/?examples=0"))
}

async fn nowhere(uri: Uri) -> Refusal {
    let refusal = Refusal::of(StatusCode::NOT_FOUND);
    if uri.path().starts_with("/api/") {
        refusal.detail("There is nothing at this address. /api/v1/openapi.json describes what there is.")
    } else {
        refusal
    }
}
