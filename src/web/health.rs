//! Is the program alive, and can it do its work: for whoever starts, watches and restarts it.

use super::extract::NoQuery;
use super::problem::Refusal;
use crate::app::App;
use axum::Json;
use axum::extract::State;
use axum::http::StatusCode;
use serde::Serialize;
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// How the program is.
#[derive(Clone, Copy, Debug, Serialize, ToSchema)]
pub struct Health {
    /// `live` or `ready`.
    pub status: &'static str,
}

/// The routes of this file.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(live)).routes(routes!(ready))
}

/// The program runs
///
/// Says nothing of its data: see `/health/ready`.
#[utoipa::path(get, path = "/health/live", tag = "health", responses((status = 200, description = "It runs.", body = Health)))]
async fn live(_: NoQuery) -> Json<Health> {
    Json(Health { status: "live" })
}

/// The program can do its work
///
/// 503 when its data cannot be read.
#[utoipa::path(get, path = "/health/ready", tag = "health", responses((status = 200, description = "It can.", body = Health)))]
async fn ready(State(app): State<App>, _: NoQuery) -> Result<Json<Health>, Refusal> {
    match app.store.reader().await {
        Ok(_) => Ok(Json(Health { status: "ready" })),
        Err(error) => Err(Refusal::of(StatusCode::SERVICE_UNAVAILABLE).detail(error.to_string())),
    }
}
