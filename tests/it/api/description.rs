//! The description of the API says what there is, and what it says is true.

use crate::support::documents::{chain, e10, own_rules};
use crate::support::{TestApp, attach_text};
use serde_json::{Value, json};
use std::collections::BTreeSet;

const METHODS: [&str; 4] = ["get", "put", "post", "delete"];

async fn description(app: &TestApp) -> Value {
    app.get("/api/v1/openapi.json").await.json()
}

fn operations(description: &Value) -> Vec<(String, &'static str, &Value)> {
    let paths = description["paths"].as_object().unwrap();
    let of = |(path, item): (&String, &'_ Value)| {
        let path = path.clone();
        METHODS
            .into_iter()
            .filter(|method| item.get(*method).is_some())
            .map(move |method| (path.clone(), method))
            .collect::<Vec<_>>()
    };
    paths
        .iter()
        .flat_map(of)
        .map(|(path, method)| {
            let operation = &description["paths"][&path][method];
            (path, method, operation)
        })
        .collect()
}

#[tokio::test]
async fn it_lists_what_there_is() {
    let app = TestApp::new().await;
    let description = description(&app).await;
    assert_eq!(description["openapi"], "3.1.0");
    assert_eq!(description["info"]["title"], "Wheelwort");
    let found: BTreeSet<String> = operations(&description)
        .into_iter()
        .map(|(path, method, _)| format!("{method} {path}"))
        .collect();
    let expected = [
        "delete /api/v1/pathways/{id}",
        "delete /api/v1/pathways/{id}/stages/{key}",
        "delete /api/v1/tokens/{id}",
        "get /api/v1/audit-trail",
        "get /api/v1/audit-trail.csv",
        "get /api/v1/audit-trail.ndjson",
        "get /api/v1/editions",
        "get /api/v1/editions/{id}",
        "get /api/v1/editions/{id}/factors",
        "get /api/v1/evidence",
        "get /api/v1/evidence/{id}",
        "get /api/v1/evidence/{id}/file",
        "get /api/v1/factors",
        "get /api/v1/factors/{edition}/{row}",
        "get /api/v1/factors/{edition}/{row}/uses",
        "get /api/v1/gwp-sets",
        "get /api/v1/gwp-sets/{id}",
        "get /api/v1/materials",
        "get /api/v1/materials/{id}",
        "get /api/v1/me",
        "get /api/v1/models",
        "get /api/v1/openapi.json",
        "get /api/v1/pathways",
        "get /api/v1/pathways/{id}",
        "get /api/v1/pathways/{id}/assessment",
        "get /api/v1/pathways/{id}/defaults",
        "get /api/v1/pathways/{id}/reasons",
        "get /api/v1/pathways/{id}/revisions",
        "get /api/v1/pathways/{id}/revisions/{number}",
        "get /api/v1/pathways/{id}/revisions/{number}/changes",
        "get /api/v1/pathways/{id}/stages/{key}",
        "get /api/v1/people",
        "get /api/v1/people/{id}",
        "get /api/v1/rule-sets",
        "get /api/v1/rule-sets/{id}",
        "get /api/v1/rule-sets/{id}/versions",
        "get /api/v1/settings",
        "get /api/v1/tokens",
        "get /health/live",
        "get /health/ready",
        "post /api/v1/blend",
        "post /api/v1/calculators/alcoholometry",
        "post /api/v1/calculators/dehydration",
        "post /api/v1/calculators/distillation",
        "post /api/v1/calculators/fermentation",
        "post /api/v1/compare",
        "post /api/v1/evaluate",
        "post /api/v1/evaluate/batch",
        "post /api/v1/evidence",
        "post /api/v1/pathways",
        "post /api/v1/people",
        "post /api/v1/people/{id}/password",
        "post /api/v1/per-km",
        "post /api/v1/tokens",
        "put /api/v1/pathways/{id}",
        "put /api/v1/pathways/{id}/reasons",
        "put /api/v1/pathways/{id}/stages/{key}",
        "put /api/v1/people/{id}",
        "put /api/v1/rule-sets/{id}",
        "put /api/v1/settings",
    ];
    assert_eq!(found, expected.map(str::to_owned).into());
}

#[tokio::test]
async fn every_reference_leads_somewhere_and_every_operation_is_named_once() {
    let app = TestApp::new().await;
    let description = description(&app).await;
    let text = description.to_string();
    for part in text.split("\"$ref\":\"#").skip(1) {
        let pointer = part.split('"').next().unwrap();
        assert!(description.pointer(pointer).is_some(), "{pointer}");
    }
    let operations = operations(&description);
    let names: BTreeSet<&str> = operations
        .iter()
        .map(|(_, _, operation)| operation["operationId"].as_str().unwrap())
        .collect();
    assert_eq!(names.len(), operations.len());
    for (path, method, operation) in &operations {
        assert!(operation["summary"].is_string(), "{method} {path}");
        let parameters = operation["parameters"]
            .as_array()
            .map_or(0, |p| p.iter().filter(|p| p["in"] == "path").count());
        assert_eq!(parameters, path.matches('{').count(), "{method} {path}");
    }
}

#[tokio::test]
async fn every_refusal_is_described_as_problem_json() {
    let app = TestApp::new().await;
    let description = description(&app).await;
    for (path, method, operation) in operations(&description) {
        let responses = operation["responses"].as_object().unwrap();
        for (status, response) in responses.iter().filter(|(status, _)| status.as_str() >= "400") {
            let content: Vec<&String> = response["content"].as_object().expect("content").keys().collect();
            assert_eq!(content, ["application/problem+json"], "{method} {path} {status}");
        }
        for status in ["400", "405", "500", "503"] {
            assert!(responses.contains_key(status), "{method} {path} {status}");
        }
        if operation.get("requestBody").is_some() {
            for status in ["408", "413", "415", "422"] {
                assert!(responses.contains_key(status), "{method} {path} {status}");
            }
        }
        if operation.to_string().contains("If-Match") {
            for status in ["412", "422", "428"] {
                assert!(responses.contains_key(status), "{method} {path} {status}");
            }
            for status in ["404", "409"] {
                assert_eq!(
                    responses.contains_key(status),
                    path.contains('{'),
                    "{method} {path} {status}"
                );
            }
        }
    }
}

#[tokio::test]
async fn every_described_address_is_routed() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let id = address.rsplit('/').next().unwrap();
    attach_text(&app.app, Some("EV-1"), "bill.txt", "a bill")
        .await
        .expect("attached");
    let description = description(&app).await;
    // Those of people are asked by people with a session of their own: see tests/it/people.
    let of_people = |path: &str| path.contains("/people") || path.contains("/tokens");
    for (path, method, operation) in operations(&description)
        .into_iter()
        .filter(|(path, ..)| !of_people(path))
    {
        let real = path
            .replace("/pathways/{id}", &format!("/pathways/{id}"))
            .replace("{number}", "1")
            .replace("{key}", "truck")
            .replace("{edition}", "eu-2022-996")
            .replace("{row}", "fert_n_an")
            .replace("/editions/{id}", "/editions/eu-2022-996")
            .replace("/evidence/{id}", "/evidence/EV-1")
            .replace("/materials/{id}", "/materials/wheat")
            .replace(
                "/rule-sets/{id}",
                if method == "put" {
                    "/rule-sets/own-2027"
                } else {
                    "/rule-sets/eu-2018-2001"
                },
            )
            .replace("/gwp-sets/{id}", "/gwp-sets/ar5");
        if method == "delete" {
            continue; // asked in tests of their own
        }
        let stage = chain()["stages"][2].clone();
        let body = match (method, real.as_str()) {
            ("get", _) => String::new(),
            (_, path) if path.contains("/stages/") => stage.to_string(),
            (_, path) if path.ends_with("/compare") => json!({ "pathways": [chain(), id] }).to_string(),
            (_, path) if path.ends_with("/blend") => e10(id).to_string(),
            (_, path) if path.ends_with("/per-km") => {
                json!({ "blend": e10(id), "l_per_100_km": 6.0, "source": "a log book" }).to_string()
            }
            (_, path) if path.contains("/calculators/") => calculation(path).to_string(),
            (_, path) if path.contains("/rule-sets/") => own_rules().to_string(),
            (_, path) if path.ends_with("/settings") => json!({ "capacity_percent": 120 }).to_string(),
            (_, path) if path.ends_with("/evidence") => {
                "--x\r\nContent-Disposition: form-data; name=\"file\"; filename=\"a\"\r\n\r\na\r\n--x--\r\n"
                    .to_owned()
            }
            (_, path) if path.ends_with("/reasons") => json!({ "reasons": [] }).to_string(),
            _ => chain().to_string(),
        };
        let kind = if real.ends_with("/batch") {
            "application/x-ndjson"
        } else if real.ends_with("/evidence") {
            "multipart/form-data; boundary=x"
        } else {
            "application/json"
        };
        let any = real.ends_with("/settings") || real.ends_with("/reasons");
        let headers = [
            ("content-type", kind),
            ("if-match", if any { "*" } else { etag.as_str() }),
        ];
        let answer = app
            .ask(
                &method.to_uppercase(),
                &real,
                &headers[..if method == "get" { 0 } else { 2 }],
                body,
            )
            .await;
        assert!(
            answer.status.is_success(),
            "{method} {real}: {} {}",
            answer.status,
            answer.text()
        );
        let described = &operation["responses"][answer.status.as_str()];
        let kinds: Vec<&String> = described["content"]
            .as_object()
            .unwrap_or_else(|| panic!("{method} {path} {}", answer.status))
            .keys()
            .collect();
        assert_eq!(kinds, [answer.header("content-type")], "{method} {path}");
    }
}

/// A question that each calculator answers.
fn calculation(path: &str) -> Value {
    match path.rsplit('/').next() {
        Some("alcoholometry") => json!({ "strength_percent_vol": 96, "litres": 1000 }),
        Some("distillation") => {
            json!({ "wash_strength_percent_vol": 10, "product_strength_percent_mass": 92 })
        }
        Some("dehydration") => {
            json!({ "feed_strength_percent_mass": 92.5, "product_strength_percent_mass": 99.7 })
        }
        _ => json!({ "substrates": [{ "substrate": "starch", "kg": 600 }], "efficiency_percent": 92 }),
    }
}
