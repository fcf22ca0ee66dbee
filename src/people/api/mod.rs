//! The API of people: members and what they may do, one's own tokens, and who one is.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

pub(super) mod read;
mod refusals;

use super::{
    Person, Token, TokenMade, add, change, disable, find, make_token, people, reset_password, revoke_token,
    tokens,
};
use crate::app::App;
use crate::app::who::Sight;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanAdminister, CanRead};
use crate::web::extract::{JsonBody, NoQuery, Path};
use axum::Json;
use axum::http::header::{CACHE_CONTROL, LOCATION};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use read::{NewPersonDocument, NewTokenDocument, PersonDocument};
use serde::Serialize;
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;
use uuid::Uuid;

/// The routes of this folder.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(me))
        .routes(routes!(list_people, add_person))
        .routes(routes!(read_person, change_person))
        .routes(routes!(reset))
        .routes(routes!(list_tokens, new_token))
        .routes(routes!(revoke))
}

/// Who asks.
#[derive(Debug, Serialize, ToSchema)]
struct Me {
    /// Public id; null for the command line.
    id: Option<Uuid>,
    /// Name.
    name: String,
    /// Name they sign in with.
    sign_in_name: String,
    /// Name of the organisation.
    organisation: String,
    /// `session` or `token`.
    via: &'static str,
    /// What they may do by these means: `read`, `write`, `approve`, `administer`.
    rights: Vec<&'static str>,
    /// Public ids of the pathways they see; null where they see all.
    pathways: Option<Vec<Uuid>>,
    /// Public ids of the statements they see; null where they see all.
    statements: Option<Vec<Uuid>>,
}

/// A list of people.
#[derive(Debug, Serialize, ToSchema)]
struct People {
    /// Everybody, in the order in which they were added.
    items: Vec<Person>,
}

/// A list of tokens.
#[derive(Debug, Serialize, ToSchema)]
struct Tokens {
    /// Newest first.
    items: Vec<Token>,
}

/// A person who was added, with the password to begin with.
#[derive(Debug, Serialize, ToSchema)]
struct PersonAdded {
    /// The person.
    #[serde(flatten)]
    person: Person,
    /// A password for the first sign-in, where they must choose their own. It is told this once.
    temporary_password: Option<String>,
}

/// A password that was set for somebody.
#[derive(Debug, Serialize, ToSchema)]
struct PasswordReset {
    /// A password for the next sign-in, where they must choose their own. It is told this once.
    temporary_password: String,
}

fn id_of(what: &str, text: &str) -> Result<Uuid, Refusal> {
    match text.parse::<Uuid>() {
        Ok(id) if text.len() == 36 => Ok(id),
        _ => Err(Refusal::not_here(what, text)),
    }
}

/// An answer that holds a secret: nothing keeps it.
fn told_once(status: StatusCode, body: impl Serialize) -> Response {
    let never = [(CACHE_CONTROL, HeaderValue::from_static("no-store"))];
    (status, never, Json(body)).into_response()
}

/// Who you are
#[utoipa::path(get, path = "/me", tag = "people",
    responses((status = 200, description = "Who asks, and what they may do.", body = Me)))]
async fn me(Actor { app, .. }: Actor<CanRead>, _: NoQuery) -> Json<Me> {
    let who = &app.who;
    let (pathways, statements) = match &who.sight {
        Sight::All => (None, None),
        Sight::Chosen { pathways, statements } => (
            Some(pathways.iter().copied().collect()),
            Some(statements.iter().copied().collect()),
        ),
    };
    Json(Me {
        id: who.person,
        name: who.name.clone(),
        sign_in_name: who.sign_in_name.clone(),
        organisation: who.organisation_name.clone(),
        via: who.via.kind(),
        rights: who.rights.iter().map(|right| right.name()).collect(),
        pathways,
        statements,
    })
}

/// People
///
/// Everybody who belongs to the organisation. Needs the right to administer, which no token has: sign in.
#[utoipa::path(get, path = "/people", tag = "people",
    responses((status = 200, description = "Everybody.", body = People)))]
async fn list_people(Actor { app, .. }: Actor<CanAdminister>, _: NoQuery) -> Result<Json<People>, Refusal> {
    Ok(Json(People {
        items: people(&app).await?,
    }))
}

/// Add a person
///
/// The answer holds a password for the first sign-in.
#[utoipa::path(post, path = "/people", tag = "people",
    request_body(content = NewPersonDocument, content_type = "application/json"),
    responses((status = 201, description = "Added.", body = PersonAdded, headers(("Location" = String, description = "Address of the person.")))))]
async fn add_person(
    Actor { app, .. }: Actor<CanAdminister>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let new = read::new_person(&body).map_err(Refusal::invalid)?;
    let added = add(&app, new).await?;
    let location = HeaderValue::try_from(format!("/api/v1/people/{}", added.person.id));
    let mut response = told_once(
        StatusCode::CREATED,
        PersonAdded {
            person: added.person,
            temporary_password: added.temporary_password,
        },
    );
    if let Ok(location) = location {
        response.headers_mut().insert(LOCATION, location);
    }
    Ok(response)
}

/// A person
#[utoipa::path(get, path = "/people/{id}", tag = "people",
    params(("id" = Uuid, Path, description = "Id of the person.")),
    responses((status = 200, description = "The person.", body = Person)))]
async fn read_person(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Json<Person>, Refusal> {
    Ok(Json(find(&app, id_of("person", &id)?).await?))
}

/// Change a person
///
/// Name, roles, what an auditor is invited to, and whether they can come in. What takes rights away holds at once.
#[utoipa::path(put, path = "/people/{id}", tag = "people",
    params(("id" = Uuid, Path, description = "Id of the person.")),
    request_body(content = PersonDocument, content_type = "application/json"),
    responses((status = 200, description = "Changed.", body = Person),
        (status = 409, description = "Nobody would be left to administer the organisation.", body = crate::web::problem::ProblemDocument,
            content_type = "application/problem+json")))]
async fn change_person(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<Person>, Refusal> {
    let id = id_of("person", &id)?;
    let (new, disabled) = read::change(&body).map_err(Refusal::invalid)?;
    change(&app, id, new).await?;
    Ok(Json(disable(&app, id, disabled).await?))
}

/// Set a password for a person
///
/// They sign in with it once and choose their own. Their sessions end; their tokens go on.
#[utoipa::path(post, path = "/people/{id}/password", tag = "people",
    params(("id" = Uuid, Path, description = "Id of the person.")),
    responses((status = 200, description = "Set.", body = PasswordReset)))]
async fn reset(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<Response, Refusal> {
    let temporary_password = reset_password(&app, id_of("person", &id)?, None, false).await?;
    Ok(told_once(StatusCode::OK, PasswordReset { temporary_password }))
}

/// Your tokens
///
/// Of whoever signed in. A token cannot ask: one that leaked must not find the others.
#[utoipa::path(get, path = "/tokens", tag = "people",
    responses((status = 200, description = "Your tokens, without their secrets.", body = Tokens)))]
async fn list_tokens(Actor { app, .. }: Actor<CanRead>, _: NoQuery) -> Result<Json<Tokens>, Refusal> {
    Ok(Json(Tokens {
        items: tokens(&app).await?,
    }))
}

/// Make a token
///
/// What it may do is what its scopes say, as long as you may do that yourself. A token cannot make tokens.
#[utoipa::path(post, path = "/tokens", tag = "people",
    request_body(content = NewTokenDocument, content_type = "application/json"),
    responses((status = 201, description = "Made. The token is shown this once.", body = TokenMade)))]
async fn new_token(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Response, Refusal> {
    let new = read::new_token(&body).map_err(Refusal::invalid)?;
    Ok(told_once(StatusCode::CREATED, make_token(&app, None, new).await?))
}

/// Revoke a token
///
/// It is refused from now on.
#[utoipa::path(delete, path = "/tokens/{id}", tag = "people",
    params(("id" = Uuid, Path, description = "Id of the token.")),
    responses((status = 204, description = "Revoked.")))]
async fn revoke(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    _: NoQuery,
) -> Result<StatusCode, Refusal> {
    revoke_token(&app, id_of("token", &id)?).await?;
    Ok(StatusCode::NO_CONTENT)
}
