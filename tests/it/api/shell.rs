//! What surrounds every request: headers, refusals in their shape, other sites, overload, time, panics.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::{answer_of, request};
use axum::Router;
use axum::routing::get;
use std::time::Duration;
use wheelwort::web::extract::Limits;
use wheelwort::web::layers::{around_all, around_work};
use wheelwort::web::problem::bare_page;

#[tokio::test]
async fn every_answer_carries_the_security_headers() {
    let app = TestApp::new().await;
    for path in [
        "/health/live",
        "/api/v1/pathways",
        "/api/v1/nothing",
        "/nothing",
        "/assets/nothing.css",
    ] {
        let answer = app.get(path).await;
        let policy = answer.header("content-security-policy");
        assert!(
            policy.starts_with("default-src 'none'") && policy.contains("frame-ancestors 'none'"),
            "{path}"
        );
        assert!(!policy.contains("unsafe") && !policy.contains('*'), "{path}");
        assert_eq!(answer.header("x-content-type-options"), "nosniff", "{path}");
        assert_eq!(answer.header("referrer-policy"), "no-referrer", "{path}");
        assert!(
            !answer.header("x-request-id").is_empty() && !answer.header("cache-control").is_empty(),
            "{path}"
        );
    }
}

#[tokio::test]
async fn ids_of_requests_are_ours() {
    let app = TestApp::new().await;
    let answer = app
        .ask("GET", "/api/v1/nothing", &[("x-request-id", "forged")], "")
        .await;
    assert_ne!(answer.header("x-request-id"), "forged");
    assert_eq!(answer.refused(404)["request"], answer.header("x-request-id"));
}

#[tokio::test]
async fn programs_get_json_and_people_get_pages() {
    let app = TestApp::new().await;
    let html = [("accept", "text/html,*/*;q=0.8")];
    app.ask("GET", "/api/v1/nothing", &html, "").await.refused(404);
    app.ask("GET", "/api/", &html, "").await.refused(404);
    app.ask("GET", "/nothing", &[("accept", "application/json")], "")
        .await
        .refused(404);
    let page = app.ask("GET", "/nothing", &html, "").await;
    assert_eq!(
        (page.status.as_u16(), page.header("content-type")),
        (404, "text/html; charset=utf-8")
    );
}

#[tokio::test]
async fn a_wrong_method_names_the_right_ones() {
    let app = TestApp::new().await;
    for (method, path, allow) in [
        ("PATCH", "/api/v1/pathways", "GET,HEAD,POST"),
        ("DELETE", "/api/v1/pathways", "GET,HEAD,POST"),
        ("POST", "/api/v1/pathways/x", "GET,HEAD,PUT,DELETE"),
        ("GET", "/api/v1/evaluate", "POST"),
        ("TRACE", "/api/v1/factors", "GET,HEAD"),
        ("PUT", "/health/live", "GET,HEAD"),
    ] {
        let answer = app.ask(method, path, &[], "").await;
        answer.refused(405);
        assert_eq!(answer.header("allow"), allow, "{method} {path}");
    }
}

#[tokio::test]
async fn pages_of_other_sites_may_not_write() {
    let app = TestApp::new().await;
    let json = ("content-type", "application/json");
    let body = chain().to_string();
    for other in [
        ("sec-fetch-site", "cross-site"),
        ("origin", "http://other.example"),
    ] {
        app.ask(
            "POST",
            "/api/v1/pathways",
            &[json, ("host", "here.example"), other],
            body.clone(),
        )
        .await
        .refused(403);
    }
    assert_eq!(app.stored().await, 0);
    let same = [
        json,
        ("host", "here.example"),
        ("origin", "http://here.example"),
        ("sec-fetch-site", "same-origin"),
    ];
    assert_eq!(app.ask("POST", "/api/v1/pathways", &same, body).await.status, 201);
}

fn around(router: Router, at_once: usize, timeout: Duration) -> Router {
    let limits = Limits::default();
    around_all(around_work(router, at_once, timeout, limits), bare_page, limits)
}

#[tokio::test]
async fn a_panic_is_an_answer_without_its_words() {
    let boom = || async {
        if true {
            panic!("secret words at src/somewhere.rs:1");
        }
    };
    let router = around(
        Router::new()
            .route("/api/boom", get(boom))
            .route("/boom", get(boom)),
        9,
        Duration::from_secs(9),
    );
    let answer = answer_of(&router, request("GET", "/api/boom", &[], "")).await;
    answer.refused(500);
    assert!(!answer.text().contains("secret"));
    assert_eq!(answer.header("x-content-type-options"), "nosniff");
    let page = answer_of(&router, request("GET", "/boom", &[("accept", "text/html")], "")).await;
    assert!(
        page.status == 500
            && page.header("content-type").starts_with("text/html")
            && !page.text().contains("secret")
    );
}

#[tokio::test]
async fn too_long_and_too_many_are_503_with_retry_after() {
    let slow = || tokio::time::sleep(Duration::from_millis(400));
    let router = Router::new()
        .route("/api/slow", get(slow))
        .route("/api/quick", get(|| async {}));
    let timed = around(router.clone(), 9, Duration::from_millis(50));
    let answer = answer_of(&timed, request("GET", "/api/slow", &[], "")).await;
    answer.refused(503);
    assert!(!answer.header("retry-after").is_empty());

    let crowded = around(router, 1, Duration::from_secs(9));
    let first = tokio::spawn({
        let crowded = crowded.clone();
        async move {
            answer_of(&crowded, request("GET", "/api/slow", &[], ""))
                .await
                .status
        }
    });
    tokio::time::sleep(Duration::from_millis(100)).await;
    let answer = answer_of(&crowded, request("GET", "/api/quick", &[], "")).await;
    answer.refused(503);
    assert!(!answer.header("retry-after").is_empty());
    assert_eq!(first.await.unwrap(), 200);
    assert_eq!(
        answer_of(&crowded, request("GET", "/api/quick", &[], ""))
            .await
            .status,
        200,
        "it recovers"
    );
}

#[tokio::test]
async fn answers_are_compressed_for_those_who_ask() {
    let app = TestApp::new().await;
    let plain = app.get("/api/v1/materials?limit=200").await;
    let packed = app
        .ask(
            "GET",
            "/api/v1/materials?limit=200",
            &[("accept-encoding", "gzip")],
            "",
        )
        .await;
    assert_eq!(packed.header("content-encoding"), "gzip");
    assert!(packed.bytes.len() * 3 < plain.bytes.len());
    assert_eq!(plain.header("content-encoding"), "");
}

#[tokio::test]
async fn health_tells_whether_the_data_is_open() {
    let app = TestApp::new().await;
    assert_eq!(app.get("/health/live").await.json()["status"], "live");
    assert_eq!(app.get("/health/ready").await.json()["status"], "ready");
    app.app.close().await;
    app.get("/health/ready").await.refused(503);
    assert_eq!(app.get("/health/live").await.status, 200);
    app.get("/api/v1/pathways").await.refused(503);
    app.post("/api/v1/pathways", &chain()).await.refused(503);
}
