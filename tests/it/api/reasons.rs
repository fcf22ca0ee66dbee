//! Written reasons for warnings: stored beside a pathway, shown in the findings of its assessments.

use crate::support::TestApp;
use crate::support::documents::{chain_with, own_rules};
use crate::support::test_app::pointers;
use serde_json::{Value, json};

/// A chain with a warning, its address, and the warning.
async fn with_warning(app: &TestApp) -> (String, Value) {
    let (address, _) = app.stores_chain().await;
    let assessment = app.get(&format!("{address}/assessment")).await.json();
    let findings = assessment["findings"].as_array().unwrap();
    let warning = findings
        .iter()
        .find(|finding| finding["id"] == "K-02" && finding["severity"] == "warn");
    let warning = warning
        .unwrap_or_else(|| panic!("no warning: {assessment}"))
        .clone();
    (address, warning)
}

fn reason_for(finding: &Value, text: &str) -> Value {
    json!({ "id": finding["id"], "stage": finding["stage"], "field": finding["field"], "text": text })
}

fn given(assessment: &Value, finding: &Value) -> Value {
    let findings = assessment["findings"].as_array().unwrap();
    let found = findings.iter().find(|one| {
        ["id", "stage", "field"]
            .iter()
            .all(|name| one[*name] == finding[*name])
    });
    found.expect("there")["reason"].clone()
}

#[tokio::test]
async fn a_reason_stands_in_the_findings_and_nowhere_in_what_is_kept() {
    let app = TestApp::new().await;
    let (address, warning) = with_warning(&app).await;
    let (reasons, assessment) = (format!("{address}/reasons"), format!("{address}/assessment"));
    let bare = app.get(&assessment).await;
    let empty = app.get(&reasons).await;
    assert_eq!(empty.json()["reasons"], json!([]));
    let wanting = empty.json()["wanting"].as_array().unwrap().len();
    assert!(wanting > 0);
    let body = json!({ "reasons": [reason_for(&warning, "a trial field")] });
    let saved = app.put(&reasons, empty.header("etag"), &body).await;
    assert_eq!(saved.status, 200, "{}", saved.text());
    assert_eq!(saved.json()["reasons"][0]["when"], "2026-12-01T12:00:00Z");
    assert_eq!(saved.json()["wanting"].as_array().unwrap().len(), wanting - 1);
    let line = app.get("/api/v1/pathways").await.json()["items"][0].clone();
    assert_eq!(
        (
            line["warnings_without_reason"].as_u64(),
            line["assessment"]["warnings"].as_u64()
        ),
        (Some(wanting as u64 - 1), Some(wanting as u64)),
        "the list counts those that still want one"
    );

    let with = app.get(&assessment).await;
    assert_eq!(given(&with.json(), &warning), "a trial field");
    assert_ne!(with.header("etag"), bare.header("etag"));
    // From memory, and at its revision by number.
    assert_eq!(app.get(&assessment).await.bytes, with.bytes);
    assert_eq!(
        app.get(&format!("{assessment}?revision=1")).await.bytes,
        with.bytes
    );
    // What is kept is the assessment that can be made again.
    let kept = app
        .post("/api/v1/evaluate", &app.get(&address).await.json())
        .await;
    assert_eq!(kept.bytes, bare.bytes);
    let line = app.get("/api/v1/pathways").await.json()["items"][0]["assessment"]["assessment_hash"].clone();
    assert_eq!(
        format!("\"{}\"", line.as_str().unwrap().trim_start_matches("sha256:")),
        bare.header("etag")
    );

    // Taken back: the first bytes again.
    app.put(&reasons, "*", &json!({ "reasons": [] })).await;
    assert_eq!(app.get(&assessment).await.bytes, bare.bytes);
}

#[tokio::test]
async fn reasons_follow_the_pathway_and_say_when_nothing_wants_them() {
    let app = TestApp::new().await;
    let (address, warning) = with_warning(&app).await;
    let reasons = format!("{address}/reasons");
    app.put(
        &reasons,
        "*",
        &json!({ "reasons": [reason_for(&warning, "a trial field")] }),
    )
    .await;
    let more = chain_with("/stages/0/inputs/0/amount", 110.into());
    assert_eq!(app.put(&address, "*", &more).await.status, 200);
    let assessment = app.get(&format!("{address}/assessment")).await.json();
    assert_eq!(given(&assessment, &warning), "a trial field");
    app.put("/api/v1/rule-sets/own-2027", "", &own_rules()).await;
    let under = app
        .get(&format!("{address}/assessment?rule_set=own-2027"))
        .await
        .json();
    assert_eq!(given(&under, &warning), "a trial field");
    // The input that it was about is gone.
    let other = chain_with("/stages/1/inputs/0/key", "steam".into());
    assert_eq!(app.put(&address, "*", &other).await.status, 200);
    let stale = app.get(&reasons).await.json();
    assert_eq!(stale["stale"][0]["because"], "finding_gone", "{stale}");
}

#[tokio::test]
async fn a_reason_keeps_the_time_it_was_given() {
    let app = TestApp::new().await;
    let (address, warning) = with_warning(&app).await;
    let reasons = format!("{address}/reasons");
    let mut body = json!({ "reasons": [reason_for(&warning, "a trial field")] });
    let first = app.put(&reasons, "*", &body).await;
    // Sent back as read, with a time of one's own or without: no change.
    assert_eq!(
        app.put(&reasons, "*", &json!({ "reasons": first.json()["reasons"] }))
            .await
            .bytes,
        first.bytes
    );
    body["reasons"][0]["when"] = "2001-01-01T00:00:00Z".into();
    let again = app.put(&reasons, first.header("etag"), &body).await;
    assert_eq!(
        (again.bytes, again.headers["etag"].clone()),
        (first.bytes.clone(), first.headers["etag"].clone())
    );
    body["reasons"][0]["who"] = "The grower".into();
    let other = app.put(&reasons, first.header("etag"), &body).await;
    assert_ne!(other.header("etag"), first.header("etag"));
    let stale = app.put(&reasons, first.header("etag"), &body).await;
    stale.refused(412);
    assert_eq!(stale.header("etag"), other.header("etag"));
}

#[tokio::test]
async fn wrong_reasons_are_refused_with_pointers() {
    let app = TestApp::new().await;
    let (address, warning) = with_warning(&app).await;
    let reasons = format!("{address}/reasons");
    let refused = async |body: Value| {
        let problem = app.put(&reasons, "*", &body).await.refused(422);
        pointers(&problem)
            .iter()
            .map(|pointer| (*pointer).to_owned())
            .collect::<Vec<String>>()
    };
    assert_eq!(refused(json!({})).await, ["/reasons"]);
    assert_eq!(
        refused(json!({ "reasons": [{ "id": "C-17", "colour": 1, "when": "now" }], "x": 1 })).await,
        ["/reasons/0/text", "/reasons/0/when", "/reasons/0/colour", "/x"]
    );
    let one = reason_for(&warning, "x");
    let unknown = json!({ "id": "Z-99", "text": " " });
    assert_eq!(
        refused(json!({ "reasons": [one, one, unknown] })).await,
        ["/reasons/1", "/reasons/2/text", "/reasons/2/id"]
    );
    let long = reason_for(&warning, &"x".repeat(2_001));
    assert_eq!(refused(json!({ "reasons": [long] })).await, ["/reasons/0/text"]);
    let without = app
        .ask("PUT", &reasons, &[("content-type", "application/json")], "{}")
        .await;
    without.refused(428);
    assert_eq!(without.header("etag"), app.get(&reasons).await.header("etag"));
    let nobody = "/api/v1/pathways/00000000-0000-7000-8000-000000000000/reasons";
    app.get(nobody).await.refused(404);
    app.put(nobody, "*", &json!({ "reasons": [] })).await.refused(404);
    app.ask("DELETE", &address, &[("if-match", "*")], "").await;
    app.put(&reasons, "*", &json!({ "reasons": [] }))
        .await
        .refused(409);
}
