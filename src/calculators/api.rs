//! The API of the calculators.

use super::{
    AlcoholometryAnswer, AlcoholometryRequest, DehydrationAnswer, DehydrationRequest, DistillationAnswer,
    DistillationRequest, FermentationAnswer, FermentationRequest,
};
use crate::app::App;
use crate::core::documents::Problems;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{JsonBody, NoQuery};
use crate::web::{Refusal, blocking};
use axum::Json;
use serde_json::Value;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(alcoholometry))
        .routes(routes!(distillation))
        .routes(routes!(dehydration))
        .routes(routes!(fermentation))
}

/// Answers where it holds up nobody: a column takes a search.
async fn answered<T: Send + 'static>(
    body: Value,
    work: impl FnOnce(&Value) -> Result<T, Problems> + Send + 'static,
) -> Result<Json<T>, Refusal> {
    let answer = blocking::run(move || work(&body)).await?;
    answer.map(Json).map_err(Refusal::invalid)
}

/// Strength, mass and volume
///
/// One strength and one quantity of a mixture of ethanol and water in, all the others out (OIML R 22).
#[utoipa::path(post, path = "/calculators/alcoholometry", tag = "calculators",
    request_body(content = AlcoholometryRequest, content_type = "application/json"),
    responses((status = 200, description = "The mixture.", body = AlcoholometryAnswer)))]
async fn alcoholometry(
    _: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<AlcoholometryAnswer>, Refusal> {
    answered(body, super::alcoholometry).await
}

/// Heat of a distillation
///
/// Reflux and heat of a column from wash to product by equal molar overflow, with the enthalpy method beside it. For
/// greenhouse-gas accounting only, never for the design or operation of a plant.
#[utoipa::path(post, path = "/calculators/distillation", tag = "calculators",
    request_body(content = DistillationRequest, content_type = "application/json"),
    responses((status = 200, description = "The column.", body = DistillationAnswer)))]
async fn distillation(
    _: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<DistillationAnswer>, Refusal> {
    answered(body, super::distillation).await
}

/// Heat of a dehydration
///
/// Superheat, and the purge distilled again, of a molecular sieve. For greenhouse-gas accounting only, never for the design
/// or operation of a plant.
#[utoipa::path(post, path = "/calculators/dehydration", tag = "calculators",
    request_body(content = DehydrationRequest, content_type = "application/json"),
    responses((status = 200, description = "The sieve.", body = DehydrationAnswer)))]
async fn dehydration(
    _: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<DehydrationAnswer>, Refusal> {
    answered(body, super::dehydration).await
}

/// Yield of a fermentation
///
/// Ethanol, CO2 and yeast from sugars, starch, or the cellulose and xylan of straw and wood; or the efficiency from the
/// ethanol measured.
#[utoipa::path(post, path = "/calculators/fermentation", tag = "calculators",
    request_body(content = FermentationRequest, content_type = "application/json"),
    responses((status = 200, description = "The fermentation.", body = FermentationAnswer)))]
async fn fermentation(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<FermentationAnswer>, Refusal> {
    answered(body, move |body| super::fermentation(body, app.library)).await
}
