//! The API in words: every route of its description with a request to try, for people who write programs.

use super::answers::page;
use super::filters;
use super::frame::{Frame, Section};
use super::openapi::Document;
use super::problem::Refusal;
use askama::Template;
use axum::extract::Extension;
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
    pub fn of(description: &Value) -> ApiPage {
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
                    .push(route(path, method, operation));
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

fn route(path: &str, method: &str, operation: &Value) -> Route {
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
        example: example(&method, path, operation, &parameters),
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

fn example(method: &str, path: &str, operation: &Value, parameters: &[Parameter]) -> String {
    let address = format!("http://localhost:8080{}", path.replace('{', "$").replace('}', ""));
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
        let file = if kind.contains("ndjson") {
            "pathways.ndjson"
        } else {
            "pathway.json"
        };
        out.push_str(&format!(" -H \"Content-Type: {kind}\" --data-binary @{file}"));
    }
    format!("{out} \"{address}\"")
}

/// `GET /api`.
pub async fn show(Extension(document): Extension<Document>) -> Result<Response, Refusal> {
    let description: Value = serde_json::from_slice(document.bytes()).unwrap_or_default();
    page(&ApiPage::of(&description))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_route_of_the_description_is_told() {
        let description: Value =
            serde_json::from_slice(crate::web::router::description().bytes()).expect("json");
        let page = ApiPage::of(&description);
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
        assert!(page.render().expect("renders").contains("openapi.json"));
    }
}
