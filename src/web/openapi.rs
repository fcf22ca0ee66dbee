//! The description of the API (OpenAPI 3.1): put together from the handlers, completed with what every answer may be,
//! and served from bytes that are made once.

use super::conditional::IfNoneMatch;
use super::extract::NoQuery;
use super::idempotency;
use super::problem::{PROBLEM_JSON, ProblemDocument};
use crate::core::documents::{Problem, canonical};
use axum::extract::Extension;
use axum::response::Response;
use std::collections::BTreeMap;
use std::sync::Arc;
use utoipa::openapi::path::{Operation, ParameterBuilder, ParameterIn, PathItem};
use utoipa::openapi::security::{
    ApiKey, ApiKeyValue, HttpAuthScheme, HttpBuilder, SecurityRequirement, SecurityScheme,
};
use utoipa::openapi::{
    ContentBuilder, HeaderBuilder, InfoBuilder, Object, OpenApi, OpenApiBuilder, Ref, RefOr, ResponseBuilder,
    Schema, Type,
};
use utoipa::{PartialSchema, ToSchema};
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The words at the top of the description.
const ABOUT: &str = "Well-to-wheel greenhouse-gas accounting of fuel ethanol: documents in, assessments out. \
    Figures are JSON numbers, units are texts. Every refusal is problem JSON (RFC 9457); whatever is wrong with a \
    document is told all at once, each with its JSON pointer and a remedy. Writes name the revision they read in \
    If-Match. Scripts send a token as `Authorization: Bearer ...`: make one at /me, or with `wheelwort people token`. \
    A page that writes with its cookie sends the token of its forms in `X-Form-Token`, or comes from the same origin.";

/// The description as it is served.
#[derive(Clone, Debug)]
pub struct Document {
    bytes: Arc<[u8]>,
    hash: Arc<str>,
}

impl Document {
    /// The bytes of a description.
    pub fn of(api: OpenApi) -> Document {
        let bytes = serde_json::to_vec_pretty(&completed(api)).unwrap_or_default();
        Document {
            hash: canonical::hash(&bytes).into(),
            bytes: bytes.into(),
        }
    }

    /// JSON.
    pub fn bytes(&self) -> &[u8] {
        &self.bytes
    }
}

/// A description with nothing in it yet.
pub fn begun() -> OpenApi {
    let info = InfoBuilder::new()
        .title("Wheelwort")
        .version(crate::app::PROGRAM)
        .description(Some(ABOUT))
        .license(Some(
            utoipa::openapi::LicenseBuilder::new()
                .name("MIT OR Apache-2.0")
                .build(),
        ))
        .build();
    OpenApiBuilder::new().info(info).build()
}

/// The route of this file.
pub fn routes<S: Clone + Send + Sync + 'static>() -> OpenApiRouter<S> {
    OpenApiRouter::new().routes(routes!(openapi))
}

/// This description
#[utoipa::path(get, path = "/openapi.json", tag = "description",
    responses((status = 200, description = "OpenAPI 3.1.", body = serde_json::Value, content_type = "application/json"),
              (status = 304, description = "You have it.")))]
async fn openapi(Extension(document): Extension<Document>, _: NoQuery, seen: IfNoneMatch) -> Response {
    seen.json(&document.hash, document.bytes.to_vec())
}

/// Adds the answers that layers and extractors give, so that no handler has to repeat them.
fn completed(mut api: OpenApi) -> OpenApi {
    let components = api.components.get_or_insert_default();
    components
        .schemas
        .insert(ProblemDocument::name().into_owned(), ProblemDocument::schema());
    components
        .schemas
        .insert(Problem::name().into_owned(), Problem::schema());
    components
        .security_schemes
        .extend(schemes().map(|(name, scheme)| (name, RefOr::T(scheme))));
    let either = ["token", "session"].map(|name| SecurityRequirement::new(name, Vec::<String>::new()));
    api.security = Some(either.into());
    for (path, item) in &mut api.paths.paths {
        if let Some(post) = item.post.as_mut().filter(|_| idempotency::honoured(path)) {
            takes_a_key(post);
        }
        for operation in operations(item) {
            let has_body = operation.request_body.is_some();
            let named = path.contains('{');
            let compares = operation
                .parameters
                .iter()
                .flatten()
                .any(|parameter| match parameter {
                    RefOr::T(parameter) => parameter.name == "If-Match",
                    RefOr::Ref(_) => false,
                });
            let mut may_be = vec![
                (400, "The query, a header or the JSON cannot be read."),
                (405, "Not that method."),
            ];
            may_be.push((500, "The program made a mistake; nothing was saved."));
            may_be.push((
                503,
                "Too busy, or it took too long; `Retry-After` says when to come back.",
            ));
            if named {
                may_be.push((404, "There is nothing of that name."));
            }
            if path.starts_with("/health/") || path == "/api/v1/openapi.json" {
                operation.security = Some(Vec::new());
            }
            if !path.starts_with("/health/") {
                may_be.push((401, "Nobody signed in, or the token is not good (any more)."));
                may_be.push((
                    403,
                    "Whoever asks has not the right, or a page of another site sent it.",
                ));
                may_be.push((429, "Too many tries; `Retry-After` says when to come back."));
            }
            if has_body {
                may_be.push((408, "The body did not arrive in time."));
                may_be.push((413, "The body is too large."));
                may_be.push((415, "The body has another content type."));
                may_be.push((422, "The document does not hold: `errors` names everything."));
            }
            if compares {
                if named {
                    may_be.push((409, "The pathway is archived."));
                }
                may_be.push((
                    412,
                    "Somebody saved in between: `ETag` names the present revision.",
                ));
                may_be.push((422, "The document would not hold: `errors` names everything."));
                may_be.push((428, "If-Match is missing."));
            }
            for (status, words) in may_be {
                operation
                    .responses
                    .responses
                    .entry(status.to_string())
                    .or_insert_with(|| problem(status, words));
            }
        }
    }
    api
}

/// By what means one comes in.
fn schemes() -> [(String, SecurityScheme); 2] {
    let token = HttpBuilder::new()
        .scheme(HttpAuthScheme::Bearer)
        .bearer_format("wwt_ and 43 letters")
        .description(Some(
            "A token of a person, for scripts: scoped, with an end, revocable.",
        ))
        .build();
    let session =
        ApiKeyValue::with_description(super::cookies::SESSION, "The cookie of a browser that signed in.");
    [
        ("token".into(), SecurityScheme::Http(token)),
        ("session".into(), SecurityScheme::ApiKey(ApiKey::Cookie(session))),
    ]
}

/// What a POST that honours `Idempotency-Key` takes, and what it may answer because of it.
fn takes_a_key(post: &mut Operation) {
    let text = utoipa::openapi::ObjectBuilder::new()
        .schema_type(Type::String)
        .min_length(Some(1))
        .max_length(Some(255))
        .build();
    let key = ParameterBuilder::new()
        .name("Idempotency-Key")
        .parameter_in(ParameterIn::Header)
        .required(utoipa::openapi::Required::False)
        .description(Some(
            "A key of your own for this request, such as a UUID: 1 to 255 printable ASCII characters. The same request with \
             the same key is done once; for 24 hours a repeat is given the first answer, with `Idempotency-Replayed: true`. \
             Answers of 500 and above are not kept.",
        ))
        .schema(Some(Schema::Object(text)))
        .build();
    post.parameters.get_or_insert_default().push(RefOr::T(key));
    for (status, words) in [
        (
            409,
            "The same request is being worked on, or was done and its answer was lost.",
        ),
        (
            422,
            "The document does not hold, or the Idempotency-Key was used for another request.",
        ),
    ] {
        post.responses
            .responses
            .entry(status.to_string())
            .or_insert_with(|| problem(status, words));
    }
}

fn operations(item: &mut PathItem) -> impl Iterator<Item = &mut Operation> {
    [&mut item.get, &mut item.put, &mut item.post, &mut item.delete]
        .into_iter()
        .filter_map(Option::as_mut)
}

fn problem(status: u16, words: &str) -> RefOr<utoipa::openapi::Response> {
    let content = ContentBuilder::new()
        .schema(Some(Ref::from_schema_name("ProblemDocument")))
        .build();
    let mut response = ResponseBuilder::new()
        .description(words)
        .content(PROBLEM_JSON, content);
    let headers: BTreeMap<u16, (&str, &str)> = BTreeMap::from([
        (401, ("WWW-Authenticate", "By what means to come in.")),
        (429, ("Retry-After", "Seconds to wait.")),
        (405, ("Allow", "The methods that this address takes.")),
        (412, ("ETag", "The present revision.")),
        (503, ("Retry-After", "Seconds to wait.")),
    ]);
    if let Some((name, words)) = headers.get(&status) {
        let text = Schema::Object(Object::with_type(Type::String));
        response = response.header(
            *name,
            HeaderBuilder::new()
                .schema(Some(text))
                .description(Some(*words))
                .build(),
        );
    }
    RefOr::T(response.build())
}
