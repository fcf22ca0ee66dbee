//! `Idempotency-Key`: done once, answered the same, also after a restart; never mistaken for another request.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::{Answer, answer_of, preparer, request};
use axum::Router;
use serde_json::{Value, json};
use std::time::Duration;
use wheelwort::app::App;
use wheelwort::app::who::Who;

const ADDRESS: &str = "/api/v1/pathways";

async fn post(router: &Router, key: &str, body: &Value) -> Answer {
    let headers = [("content-type", "application/json"), ("idempotency-key", key)];
    answer_of(router, request("POST", ADDRESS, &headers, body.to_string())).await
}

fn named(name: &str) -> Value {
    let mut document = chain();
    document["name"] = json!(name);
    document
}

#[tokio::test]
async fn a_repeat_is_given_the_first_answer() {
    let app = TestApp::new().await;
    let first = post(&app.router, "a key", &chain()).await;
    assert_eq!(
        (first.status.as_u16(), first.header("idempotency-replayed")),
        (201, "")
    );
    let again = post(&app.router, "a key", &chain()).await;
    assert_eq!(again.status, 201, "{}", again.text());
    assert_eq!(again.header("idempotency-replayed"), "true");
    assert_eq!(again.bytes, first.bytes);
    for name in ["location", "etag", "content-type"] {
        assert_eq!(again.header(name), first.header(name), "{name}");
    }
    assert_eq!(app.stored().await, 1);
    // Without a key, or with another, it is another request.
    post(&app.router, "another key", &chain()).await;
    app.post(ADDRESS, &chain()).await;
    assert_eq!(app.stored().await, 3);
}

#[tokio::test]
async fn a_key_stands_for_one_request_of_one_person() {
    let app = TestApp::new().await;
    post(&app.router, "k", &chain()).await;
    let other = post(&app.router, "k", &named("other")).await;
    let words = other.refused(422)["detail"].as_str().unwrap().to_owned();
    assert!(words.contains("used for another request"), "{words}");
    let headers = [("content-type", "application/json"), ("idempotency-key", "k")];
    let with_reason = format!("{ADDRESS}?reason=x");
    app.ask("POST", &with_reason, &headers, chain().to_string())
        .await
        .refused(422);
    let neighbour = app.asked_by(Who {
        person: Some(uuid::Uuid::from_u128(8)),
        ..preparer()
    });
    assert_eq!(post(&neighbour, "k", &named("other")).await.status, 201);
    assert_eq!(app.stored().await, 2);
}

#[tokio::test]
async fn a_refusal_is_repeated_too_and_a_wrong_key_is_told() {
    let app = TestApp::new().await;
    let bad = json!({ "format": "wheelwort.pathway/1" });
    let first = post(&app.router, "k", &bad).await;
    let again = post(&app.router, "k", &bad).await;
    assert_eq!((first.status.as_u16(), again.status.as_u16()), (422, 422));
    assert_eq!(again.header("idempotency-replayed"), "true");
    assert_eq!(again.json()["errors"], first.json()["errors"]);
    for wrong in ["", &"x".repeat(256)] {
        let answer = post(&app.router, wrong, &chain()).await;
        assert!(
            answer.refused(400)["detail"]
                .as_str()
                .unwrap()
                .contains("Idempotency-Key")
        );
    }
    assert_eq!(app.stored().await, 0);
}

#[tokio::test]
async fn strangers_and_pure_questions_leave_nothing() {
    let app = TestApp::new().await;
    let stranger = app.asked_by(Who::stranger());
    post(&stranger, "k", &chain()).await.refused(401);
    let headers = [("content-type", "application/json"), ("idempotency-key", "k")];
    for _ in 0..2 {
        let answer = app
            .ask("POST", "/api/v1/evaluate", &headers, chain().to_string())
            .await;
        assert_eq!(
            (answer.status.as_u16(), answer.header("idempotency-replayed")),
            (200, "")
        );
    }
    assert_eq!(kept(&app.app).await, 0);
}

async fn kept(app: &App) -> i64 {
    crate::store::support::number(&app.store, "SELECT count(*) FROM idempotency").await
}

#[tokio::test]
async fn it_outlives_a_restart_and_is_forgotten_after_a_day() {
    let app = TestApp::new().await;
    let first = post(&app.router, "k", &chain()).await;
    let app = app.restarted().await;
    let again = post(&app.router, "k", &chain()).await;
    assert_eq!(
        (again.header("idempotency-replayed"), &again.bytes),
        ("true", &first.bytes)
    );
    app.app.clock.advance(Duration::from_secs(24 * 3_600 + 1));
    let later = post(&app.router, "k", &chain()).await;
    assert_eq!(
        (later.status.as_u16(), later.header("idempotency-replayed")),
        (201, "")
    );
    assert_ne!(later.header("location"), first.header("location"));
    assert_eq!(kept(&app.app).await, 1);
}

/// Whatever a killed program leaves: a change that was made is not made again, one that was not is.
#[tokio::test]
async fn what_a_killed_program_leaves_is_told_or_done() {
    let app = TestApp::new().await;
    post(&app.router, "made", &chain()).await;
    let gone = "UPDATE idempotency SET status = NULL, headers = NULL, body = NULL";
    crate::store::support::force(&app.app.store, gone)
        .await
        .expect("as a kill leaves it");
    assert_eq!(
        crate::store::support::number(&app.app.store, "SELECT made FROM idempotency").await,
        1,
        "marked in the transaction of the change"
    );
    let app = app.restarted().await;
    // The test's clock gives the same ids again at the same time.
    app.app.clock.advance(Duration::from_secs(1));
    let again = post(&app.router, "made", &chain()).await;
    assert!(
        again.refused(409)["detail"]
            .as_str()
            .unwrap()
            .contains("answer was kept")
    );
    assert_eq!(app.stored().await, 1);
    let unmade = "UPDATE idempotency SET made = 0";
    crate::store::support::force(&app.app.store, unmade)
        .await
        .expect("as an earlier kill leaves it");
    assert_eq!(post(&app.router, "made", &chain()).await.status, 201);
    assert_eq!(app.stored().await, 2);
}

#[tokio::test]
async fn of_many_at_once_one_is_done() {
    let app = TestApp::new().await;
    let mut tasks = tokio::task::JoinSet::new();
    for _ in 0..24 {
        let router = app.router.clone();
        tasks.spawn(async move { post(&router, "k", &chain()).await });
    }
    let (mut done, mut running) = (0, 0);
    while let Some(answer) = tasks.join_next().await {
        match answer.unwrap().status.as_u16() {
            201 => done += 1,
            409 => running += 1,
            other => panic!("{other}"),
        }
    }
    assert!(done >= 1 && done + running == 24);
    assert_eq!(app.stored().await, 1);
    assert_eq!(post(&app.router, "k", &chain()).await.status, 201);
}

/// A client that hangs up while its request is worked on finds the answer when it asks again.
#[tokio::test]
async fn a_client_that_hangs_up_finds_its_answer() {
    let app = TestApp::new().await;
    for wait in [0, 1, 3, 10, 30] {
        let key = format!("k{wait}");
        let document = chain();
        let asked = post(&app.router, &key, &document);
        let _ = tokio::time::timeout(Duration::from_millis(wait), asked).await;
        let mut turns = 0;
        loop {
            let again = post(&app.router, &key, &chain()).await;
            turns += 1;
            match again.status.as_u16() {
                201 => break,
                409 if turns < 200 => tokio::time::sleep(Duration::from_millis(20)).await,
                other => panic!("{other}: {}", again.text()),
            }
        }
    }
    assert_eq!(app.stored().await, 5);
}
