//! The API in words: every route of its description with a request to try, for people who write programs.

use super::answers::page;
use super::filters;
use super::frame::{Frame, Section};
use super::openapi::Document;
use super::problem::Refusal;
use askama::Template;
use axum::extract::Extension;
use axum::http::HeaderMap;
use axum::http::header::HOST;
use axum::response::Response;
use serde_json::Value;
use std::collections::BTreeMap;

/// The page of the API.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "api.html")]
pub struct ApiPage {
    /// Round the page.
    pub frame: Frame,
    /// What the description says at its top.
    pub about: String,
    /// Routes by what they are about.
    pub groups: Vec<Group>,
}

/// Routes about one thing.
#[derive(Clone, Debug, PartialEq)]
pub struct Group {
    /// What they are about.
    pub name: String,
    /// Anchor.
    pub anchor: String,
    /// The routes.
    pub routes: Vec<Route>,
}

/// One route.
#[derive(Clone, Debug, PartialEq)]
pub struct Route {
    /// Method, in capitals.
    pub method: String,
    /// Path with its parameters in braces.
    pub path: String,
    /// What it does.
    pub summary: String,
    /// More about it.
    pub description: String,
    /// Parameters: name, where, required, what it is.
    pub parameters: Vec<Parameter>,
    /// Answers: status, what it means.
    pub answers: Vec<(String, String)>,
    /// A request to try.
    pub example: String,
}

/// One parameter.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// Its name.
    pub name: String,
    /// `path`, `query` or `header`.
    pub place: String,
    /// True if it must be given.
    pub required: bool,
    /// What it is.
    pub what: String,
}

fn text(value: &Value, name: &str) -> String {
    value
        .get(name)
        .and_then(Value::as_str)
        .unwrap_or_default()
        .to_owned()
}

impl ApiPage {
    /// The page of a description (OpenAPI 3.1 as JSON).
    pub fn of(description: &Value, host: Option<&str>) -> ApiPage {
        let host = host.filter(|host| is_host(host)).unwrap_or("HOST:PORT");
        let mut groups: BTreeMap<String, Vec<Route>> = BTreeMap::new();
        let paths = description.get("paths").and_then(Value::as_object);
        for (path, item) in paths.into_iter().flatten() {
            let methods = ["get", "post", "put", "delete", "patch"];
            for (method, operation) in methods
                .iter()
                .filter_map(|method| Some((*method, item.get(*method)?)))
            {
                let tag = operation
                    .pointer("/tags/0")
                    .and_then(Value::as_str)
                    .unwrap_or("other");
                groups
                    .entry(tag.to_owned())
                    .or_default()
                    .push(route(path, method, operation, host));
            }
        }
        let frame = Frame::new("API", Section::Api, "GET /api/v1/openapi.json");
        ApiPage {
            frame,
            about: description
                .pointer("/info/description")
                .and_then(Value::as_str)
                .unwrap_or_default()
                .to_owned(),
            groups: groups
                .into_iter()
                .map(|(name, routes)| Group {
                    anchor: format!(
                        "about-{}",
                        name.replace(|c: char| !c.is_ascii_alphanumeric(), "-")
                    ),
                    name: filters::capital(&name),
                    routes,
                })
                .collect(),
        }
    }
}

fn route(path: &str, method: &str, operation: &Value, host: &str) -> Route {
    let list = |name: &str| {
        operation
            .get(name)
            .and_then(Value::as_array)
            .cloned()
            .unwrap_or_default()
    };
    let parameters: Vec<Parameter> = list("parameters")
        .iter()
        .map(|one| Parameter {
            name: text(one, "name"),
            place: text(one, "in"),
            required: one.get("required").and_then(Value::as_bool).unwrap_or(false),
            what: text(one, "description"),
        })
        .collect();
    let answers = operation
        .get("responses")
        .and_then(Value::as_object)
        .into_iter()
        .flatten();
    let method = method.to_uppercase();
    Route {
        example: example(&method, path, operation, &parameters, host),
        path: path.to_owned(),
        summary: text(operation, "summary"),
        description: text(operation, "description"),
        answers: answers
            .map(|(status, answer)| (status.clone(), text(answer, "description")))
            .collect(),
        parameters,
        method,
    }
}

fn example(method: &str, path: &str, operation: &Value, parameters: &[Parameter], host: &str) -> String {
    let address = format!("http://{host}{}", path.replace('{', "$").replace('}', ""));
    let mut out = String::from("curl");
    if method != "GET" {
        out.push_str(&format!(" -X {method}"));
    }
    if parameters
        .iter()
        .any(|one| one.name.eq_ignore_ascii_case("if-match") && method != "GET")
    {
        out.push_str(" -H \"If-Match: $etag\"");
    }
    let body = operation
        .pointer("/requestBody/content")
        .and_then(Value::as_object);
    if let Some(kind) = body.and_then(|kinds| kinds.keys().next()) {
        out.push_str(&format!(
            " -H \"Content-Type: {kind}\" --data-binary {}",
            body_of(path, kind)
        ));
    }
    format!("{out} \"{address}\"")
}

/// The body of a sample: the shape that the route takes, with the files of the reader named in it.
fn body_of(path: &str, kind: &str) -> &'static str {
    if kind.contains("ndjson") {
        "@pathways.ndjson"
    } else if path.ends_with("/compare") {
        "\"{\\\"pathways\\\":[$(cat one.json),$(cat other.json)]}\""
    } else if path.contains("/rule-sets") {
        "@rule-set.json"
    } else if path.contains("/stages/") {
        "@stage.json"
    } else if path.contains("/calculators/") || path.ends_with("/blend") || path.ends_with("/per-km") {
        "@question.json"
    } else if path.ends_with("/reasons") {
        "@reasons.json"
    } else if path.ends_with("/settings") {
        "@settings.json"
    } else {
        "@pathway.json"
    }
}

/// True for a host with or without a port: nothing a shell or a page could take for more than an address.
fn is_host(host: &str) -> bool {
    let fits = |c: char| c.is_ascii_alphanumeric() || matches!(c, '.' | '-' | ':' | '[' | ']');
    !host.is_empty() && host.len() <= 255 && host.chars().all(fits)
}

/// `GET /api`.
pub async fn show(Extension(document): Extension<Document>, headers: HeaderMap) -> Result<Response, Refusal> {
    let description: Value = serde_json::from_slice(document.bytes()).unwrap_or_default();
    let host = headers.get(HOST).and_then(|host| host.to_str().ok());
    page(&ApiPage::of(&description, host))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_route_of_the_description_is_told() {
        let description: Value =
            serde_json::from_slice(crate::web::router::description().bytes()).expect("json");
        let page = ApiPage::of(&description, Some("127.0.0.1:8123"));
        let told: usize = page.groups.iter().map(|group| group.routes.len()).sum();
        let paths = description["paths"].as_object().expect("paths");
        let there: usize = paths
            .values()
            .map(|item| item.as_object().map_or(0, serde_json::Map::len))
            .sum();
        assert!(told > 15 && told == there, "{told} of {there}");
        let put = page
            .groups
            .iter()
            .flat_map(|group| &group.routes)
            .find(|route| route.method == "PUT")
            .expect("a write");
        assert!(
            put.example.contains("If-Match") && put.example.contains("--data-binary"),
            "{}",
            put.example
        );
        let compare = page
            .groups
            .iter()
            .flat_map(|group| &group.routes)
            .find(|route| route.path.ends_with("/compare"))
            .expect("a comparison");
        assert!(
            compare.example.contains("pathways") && compare.example.contains("http://127.0.0.1:8123/api"),
            "{}",
            compare.example
        );
        assert!(!is_host("a b") && !is_host("\"; rm") && is_host("[::1]:80"));
        assert!(page.render().expect("renders").contains("openapi.json"));
    }
}
