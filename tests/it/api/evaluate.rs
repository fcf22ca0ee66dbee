//! Evaluation without storing.

use crate::support::TestApp;
use crate::support::documents::{chain, chain_with};

#[tokio::test]
async fn a_document_is_evaluated_and_not_stored() {
    let app = TestApp::new().await;
    let answer = app.post("/api/v1/evaluate?rule_set=eu-2018-2001", &chain()).await;
    assert_eq!(
        (answer.status.as_u16(), answer.header("content-type")),
        (200, "application/json")
    );
    let assessment = answer.json();
    let terms = assessment["terms_g_co2e_per_mj"].as_object().unwrap();
    let sum: f64 = terms.values().map(|term| term.as_f64().unwrap()).sum();
    let net = assessment["net"]["g_co2e_per_mj"].as_f64().unwrap();
    assert!((sum - net).abs() <= 1e-9 * net, "{sum} {net}");
    assert_eq!(app.stored().await, 0);
}

#[tokio::test]
async fn the_same_document_in_other_words_gives_the_same_bytes() {
    let app = TestApp::new().await;
    let compact = app.post("/api/v1/evaluate", &chain()).await;
    let pretty = serde_json::to_string_pretty(&chain()).unwrap();
    let pretty = app
        .ask(
            "POST",
            "/api/v1/evaluate",
            &[("content-type", "application/json")],
            pretty,
        )
        .await;
    assert_eq!(compact.bytes, pretty.bytes);
    let other = app
        .post(
            "/api/v1/evaluate",
            &chain_with("/stages/0/inputs/0/amount", 121.into()),
        )
        .await;
    assert_ne!(compact.bytes, other.bytes);
}
