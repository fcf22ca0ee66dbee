//! The API of published data: editions, factors, materials, models. Reading only.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::{EditionDocument, EditionLine, FactorDocument, ModelDocument, models, search};
use crate::app::App;
use crate::core::domain::{Factor, GwpSet, Material};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{NoQuery, Path, Query};
use crate::web::paging::{self, Page, PageQuestion};
use axum::Json;
use axum::extract::OriginalUri;
use axum::response::Response;
use serde::Deserialize;
use utoipa::IntoParams;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(editions))
        .routes(routes!(edition))
        .routes(routes!(edition_factors))
        .routes(routes!(factors))
        .routes(routes!(factor))
        .routes(routes!(materials))
        .routes(routes!(material))
        .routes(routes!(gwp_sets))
        .routes(routes!(gwp_set))
        .routes(routes!(model_list))
}

/// What to look for among factors.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct FactorQuestion {
    /// Words that must all stand in the id, name, group, unit or note, in any case.
    search: Option<String>,
    /// A group of the edition.
    group: Option<String>,
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    limit: Option<u32>,
    /// `next` of the page before.
    after: Option<String>,
}

/// Editions
///
/// Published, read-only collections of factors and default values.
#[utoipa::path(get, path = "/editions", tag = "published data", params(PageQuestion),
    responses((status = 200, description = "Editions in order of id.", body = Page<EditionLine>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn editions(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let all = app.library.editions.values().map(EditionLine::of);
    Ok(Page::cut(
        all,
        |line| &line.id,
        ask.after.as_deref(),
        paging::limit(ask.limit)?,
    )
    .answer(&uri))
}

/// An edition
///
/// With its groups of factors, and its published pathways with their default values.
#[utoipa::path(get, path = "/editions/{id}", tag = "published data", params(("id" = String, Path, description = "Id of the edition.")),
    responses((status = 200, description = "The edition.", body = EditionDocument)))]
async fn edition(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Json<EditionDocument>, Refusal> {
    let edition = app
        .library
        .editions
        .get(&id)
        .ok_or_else(|| Refusal::not_here("edition", &id))?;
    Ok(Json(EditionDocument::of(edition)))
}

/// Factors of an edition
#[utoipa::path(get, path = "/editions/{id}/factors", tag = "published data",
    params(("id" = String, Path, description = "Id of the edition."), FactorQuestion),
    responses((status = 200, description = "Factors in order of id.", body = Page<FactorDocument>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn edition_factors(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<FactorQuestion>,
) -> Result<Response, Refusal> {
    if !app.library.editions.contains_key(&id) {
        return Err(Refusal::not_here("edition", &id));
    }
    found(&app, &uri, Some(&id), &ask)
}

/// Factors of all editions
#[utoipa::path(get, path = "/factors", tag = "published data", params(FactorQuestion),
    responses((status = 200, description = "Factors in order of id.", body = Page<FactorDocument>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn factors(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<FactorQuestion>,
) -> Result<Response, Refusal> {
    found(&app, &uri, None, &ask)
}

fn found(
    app: &App,
    uri: &axum::http::Uri,
    edition: Option<&str>,
    ask: &FactorQuestion,
) -> Result<Response, Refusal> {
    let limit = paging::limit(ask.limit)?;
    let mut found: Vec<&Factor> =
        search(app.library, edition, ask.search.as_deref(), ask.group.as_deref()).collect();
    found.sort_by(|a, b| a.id.cmp(&b.id));
    let page = Page::cut(found, |factor| &factor.id, ask.after.as_deref(), limit);
    Ok(page
        .map(|factor| FactorDocument::of(app.library, factor))
        .answer(uri))
}

/// A factor
///
/// As published, digits kept, with its source and whether anybody has read it there.
#[utoipa::path(get, path = "/factors/{edition}/{row}", tag = "published data",
    params(("edition" = String, Path, description = "Id of the edition."), ("row" = String, Path, description = "Id of the row.")),
    responses((status = 200, description = "The factor.", body = FactorDocument)))]
async fn factor(
    Actor { app, .. }: Actor<CanRead>,
    Path((edition, row)): Path<(String, String)>,
    _: NoQuery,
) -> Result<Json<FactorDocument>, Refusal> {
    let id = format!("{edition}/{row}");
    match app.library.factor(&id) {
        Some(factor) => Ok(Json(FactorDocument::of(app.library, factor))),
        None if app.library.pathway_default(&id).is_some() => {
            Err(Refusal::not_here("factor", &id).detail(format!(
                "{id} is a published pathway with default values, not a factor: see /api/v1/editions/{edition}."
            )))
        }
        None => Err(Refusal::not_here("factor", &id)),
    }
}

/// Materials
///
/// Built-in materials with their published figures.
#[utoipa::path(get, path = "/materials", tag = "published data", params(PageQuestion),
    responses((status = 200, description = "Materials in order of id.", body = Page<Material>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn materials(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let all = app.library.materials.values();
    let page = Page::cut(
        all,
        |material| &material.id,
        ask.after.as_deref(),
        paging::limit(ask.limit)?,
    );
    Ok(page.answer(&uri))
}

/// A material
#[utoipa::path(get, path = "/materials/{id}", tag = "published data", params(("id" = String, Path, description = "Id of the material.")),
    responses((status = 200, description = "The material.", body = Material)))]
async fn material(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Json<Material>, Refusal> {
    let material = app
        .library
        .materials
        .get(&id)
        .ok_or_else(|| Refusal::not_here("material", &id))?;
    Ok(Json(material.clone()))
}

/// Models
///
/// What an input can use instead of a factor, with every parameter, its unit and its range.
#[utoipa::path(get, path = "/models", tag = "published data", params(PageQuestion),
    responses((status = 200, description = "Models in order of kind.", body = Page<ModelDocument>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn model_list(
    _: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    Ok(Page::cut(
        models(),
        |model| &model.kind,
        ask.after.as_deref(),
        paging::limit(ask.limit)?,
    )
    .answer(&uri))
}

/// Sets of gas weights
///
/// CO2e in kg per kg of gas over 100 years, as each source prints it.
#[utoipa::path(get, path = "/gwp-sets", tag = "published data", params(PageQuestion),
    responses((status = 200, description = "Sets in order of id.", body = Page<GwpSet>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn gwp_sets(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageQuestion>,
) -> Result<Response, Refusal> {
    let all = app.library.gwp_sets.values();
    Ok(Page::cut(
        all,
        |set| &set.id,
        ask.after.as_deref(),
        paging::limit(ask.limit)?,
    )
    .answer(&uri))
}

/// A set of gas weights
#[utoipa::path(get, path = "/gwp-sets/{id}", tag = "published data", params(("id" = String, Path, description = "Id of the set.")),
    responses((status = 200, description = "The set.", body = GwpSet)))]
async fn gwp_set(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Json<GwpSet>, Refusal> {
    let set = app
        .library
        .gwp_sets
        .get(&id)
        .ok_or_else(|| Refusal::not_here("set of gas weights", &id))?;
    Ok(Json(set.clone()))
}
