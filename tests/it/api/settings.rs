//! Settings of the checks: read, replaced, and what assessments rest on.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::pointers;
use serde_json::{Value, json};

const ADDRESS: &str = "/api/v1/settings";

#[tokio::test]
async fn settings_are_replaced_by_whoever_has_seen_them() {
    let app = TestApp::new().await;
    let standard = app.get(ADDRESS).await;
    assert_eq!(standard.json()["capacity_percent"], 110.0);
    let etag = standard.header("etag").to_owned();
    let same = app.ask("GET", ADDRESS, &[("if-none-match", &etag)], "").await;
    assert_eq!(same.status, 304);
    let without = app
        .ask("PUT", ADDRESS, &[("content-type", "application/json")], "{}")
        .await;
    without.refused(428);
    assert_eq!(without.header("etag"), etag);
    let body = json!({ "capacity_percent": 120 });
    app.put(ADDRESS, "\"0000\"", &body).await.refused(412);
    let put = app.put(ADDRESS, &etag, &body).await;
    assert_eq!(put.status, 200, "{}", put.text());
    assert_eq!(
        put.json()["delivery_percent"],
        105.0,
        "what is left out is at its standard"
    );
    let read = app.get(ADDRESS).await;
    assert_eq!(
        (read.header("etag"), &read.bytes),
        (put.header("etag"), &put.bytes)
    );
    let stale = app.put(ADDRESS, &etag, &json!({})).await;
    stale.refused(412);
    assert_eq!(stale.header("etag"), put.header("etag"));
    let back = app.put(ADDRESS, "*", &json!({})).await;
    assert_eq!(
        (back.header("etag"), &back.bytes),
        (standard.header("etag"), &standard.bytes)
    );
}

#[tokio::test]
async fn wrong_settings_are_refused_with_pointers() {
    let app = TestApp::new().await;
    let body = json!({ "capacity": 1, "typical_low": "x", "steam_works_mj_per_l": { "low": 9 } });
    let refused = app.put(ADDRESS, "*", &body).await.refused(422);
    let mut found = pointers(&refused);
    found.sort_unstable();
    assert_eq!(found, ["/capacity", "/steam_works_mj_per_l/high", "/typical_low"]);
    let body = json!({ "capacity_percent": 1000, "closure_warn_points": 40 });
    let refused = app.put(ADDRESS, "*", &body).await.refused(422);
    assert_eq!(pointers(&refused), ["/capacity_percent", "/closure_block_points"]);
    assert_eq!(app.get(ADDRESS).await.json()["capacity_percent"], 110.0);
}

fn ids(assessment: &Value) -> Vec<&str> {
    let findings = assessment["findings"].as_array().unwrap();
    findings
        .iter()
        .map(|finding| finding["id"].as_str().unwrap())
        .collect()
}

#[tokio::test]
async fn assessments_are_made_again_under_other_settings() {
    let app = TestApp::new().await;
    let (address, _) = app.stores_chain().await;
    let assessment = format!("{address}/assessment");
    let before = app.get(&assessment).await;
    assert!(ids(&before.json()).contains(&"C-11"), "{}", before.text());
    let summary = async || app.get("/api/v1/pathways").await.json()["items"][0]["assessment"].clone();
    let short = summary().await;
    // Two fifths of the typical value are nothing to ask about here.
    let other = app.put(ADDRESS, "*", &json!({ "typical_low": 0.2 })).await;
    assert_eq!(other.status, 200, "{}", other.text());
    let after = app.get(&assessment).await;
    assert!(!ids(&after.json()).contains(&"C-11"), "{}", after.text());
    assert_eq!(before.json()["net"], after.json()["net"]);
    assert_eq!(
        summary().await["warnings"].as_u64(),
        short["warnings"].as_u64().map(|count| count - 1)
    );
    let evaluated = app.post("/api/v1/evaluate", &chain()).await;
    assert_eq!(evaluated.bytes, after.bytes);
    // Back to the standard: the same bytes as at first.
    app.put(ADDRESS, "*", &json!({})).await;
    assert_eq!(app.get(&assessment).await.bytes, before.bytes);
    assert_eq!(summary().await, short);
}
