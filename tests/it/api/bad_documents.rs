//! Documents that do not hold: each is answered with a problem that says where and what to do, and nothing is stored.

use crate::support::documents::{NAMES, all_bad, chain, chain_with, ten_megabytes};
use crate::support::test_app::pointers;
use crate::support::{Answer, TestApp};
use serde_json::json;

const JSON: (&str, &str) = ("content-type", "application/json");

#[tokio::test]
async fn each_kind_is_refused_and_nothing_is_stored() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    for bad in all_bad() {
        let check = |answer: &Answer, way: &str| {
            let problem = answer.refused(bad.status);
            if let Some(pointer) = bad.pointer {
                let found = pointers(&problem);
                assert!(
                    found.iter().any(|found| found.starts_with(pointer)),
                    "{}, {way}: {found:?}",
                    bad.name
                );
            }
            for error in problem["errors"].as_array().into_iter().flatten() {
                assert!(
                    !error["detail"].as_str().unwrap().is_empty()
                        && !error["remedy"].as_str().unwrap().is_empty()
                );
            }
        };
        check(
            &app.ask("POST", "/api/v1/pathways", &[JSON], bad.bytes.clone())
                .await,
            "create",
        );
        check(
            &app.ask("POST", "/api/v1/evaluate", &[JSON], bad.bytes.clone())
                .await,
            "evaluate",
        );
        let if_match = ("if-match", etag.as_str());
        check(
            &app.ask("PUT", &address, &[JSON, if_match], bad.bytes.clone())
                .await,
            "replace",
        );
    }
    assert_eq!(app.stored().await, 1);
    let revisions = app.get(&format!("{address}/revisions")).await.json();
    assert_eq!(revisions["items"].as_array().unwrap().len(), 1);
    assert_eq!(app.get(&address).await.header("etag"), etag);
}

#[tokio::test]
async fn everything_that_is_wrong_is_told_at_once() {
    let app = TestApp::new().await;
    let mut document = chain_with("/colour", "green".into());
    document["stages"][0]["inputs"][0]["amount"] = "many".into();
    document["period"]["from"] = "summer".into();
    let problem = app.post("/api/v1/pathways", &document).await.refused(422);
    for pointer in ["/colour", "/stages/0/inputs/0/amount", "/period/from"] {
        assert!(pointers(&problem).contains(&pointer), "{problem}");
    }
}

#[tokio::test]
async fn ten_megabytes_are_refused() {
    let app = TestApp::new().await;
    app.ask("POST", "/api/v1/pathways", &[JSON], ten_megabytes())
        .await
        .refused(413);
    app.ask("POST", "/api/v1/evaluate", &[JSON], ten_megabytes())
        .await
        .refused(413);
    app.ask("POST", "/api/v1/compare", &[JSON], ten_megabytes())
        .await
        .refused(413);
    assert_eq!(app.stored().await, 0);
}

#[tokio::test]
async fn names_come_back_as_they_were_given() {
    let app = TestApp::new().await;
    for name in NAMES {
        let (address, _) = app.stores(&chain_with("/name", (*name).into())).await;
        let answer = app.get(&address).await;
        assert_eq!(answer.json()["name"], *name);
        assert_eq!(answer.header("content-type"), "application/json");
        assert_eq!(answer.header("x-content-type-options"), "nosniff");
    }
    assert_eq!(app.stored().await, NAMES.len());
    let refused = app
        .post("/api/v1/pathways", &chain_with("/rule_set", "<b>".into()))
        .await;
    assert!(
        refused.refused(422)["errors"][0]["detail"]
            .as_str()
            .unwrap()
            .contains("<b>")
    );
    let page = app
        .ask(
            "GET",
            "/%3Cscript%3Ealert(1)%3C/script%3E",
            &[("accept", "text/html")],
            "",
        )
        .await;
    assert_eq!(page.status, 404);
    assert!(!page.text().contains("<script>"));
}

#[tokio::test]
async fn another_content_type_is_refused() {
    let app = TestApp::new().await;
    for kind in [
        "text/plain",
        "application/x-www-form-urlencoded",
        "application/xml",
        "json",
    ] {
        app.ask(
            "POST",
            "/api/v1/pathways",
            &[("content-type", kind)],
            chain().to_string(),
        )
        .await
        .refused(415);
    }
    app.ask("POST", "/api/v1/pathways", &[], chain().to_string())
        .await
        .refused(415);
    let with_charset = [("content-type", "application/json; charset=utf-8")];
    assert_eq!(
        app.ask("POST", "/api/v1/pathways", &with_charset, chain().to_string())
            .await
            .status,
        201
    );
}

#[tokio::test]
async fn queries_are_read_strictly() {
    let app = TestApp::new().await;
    let (address, _) = app.stores_chain().await;
    for path in [
        "/api/v1/pathways?colour=green".to_owned(),
        "/api/v1/pathways?limit=0".into(),
        "/api/v1/pathways?limit=201".into(),
        "/api/v1/pathways?limit=ten".into(),
        "/api/v1/pathways?limit=1&limit=2".into(),
        "/api/v1/pathways?after=nowhere".into(),
        "/api/v1/pathways?sort=colour".into(),
        "/api/v1/pathways?example=perhaps".into(),
        format!("{address}?colour=green"),
        format!("{address}/assessment?rule_set=none"),
        format!("{address}/assessment?revision=first"),
        format!("{address}/revisions?after=x"),
        "/api/v1/factors?colour=green".into(),
        "/api/v1/materials?search=x".into(),
        "/api/v1/factors/eu-2022-996/fert_n_an?x".into(),
        "/api/v1/factors/eu-2022-996/fert_n_an/uses?after=x".into(),
        "/api/v1/openapi.json?x=1".into(),
        "/health/live?x=1".into(),
    ] {
        let answer = app.get(&path).await;
        assert_eq!(answer.status, 400, "{path}");
        answer.refused(400);
    }
    app.post("/api/v1/evaluate?colour=green", &chain())
        .await
        .refused(400);
    app.post("/api/v1/evaluate?rule_set=none", &chain())
        .await
        .refused(400);
    let long = "x".repeat(1_001);
    app.post(&format!("/api/v1/pathways?reason={long}"), &chain())
        .await
        .refused(400);
    let json = json!({ "pathways": [chain(), chain()], "rule_set": "none" });
    app.post("/api/v1/compare", &json).await.refused(400);
}
