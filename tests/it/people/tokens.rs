//! Tokens of scripts.

use super::{House, PASSWORD};
use crate::support::documents::chain;
use std::time::Duration;
use wheelwort::people::{self, Role};

/// Makes a token on the page `/me`.
async fn made(browser: &super::Browser<'_>, scopes: &[&str], days: &str) -> String {
    let mut fields = vec![("label", "nightly"), ("days", days)];
    fields.extend(scopes.iter().map(|scope| (*scope, "on")));
    let answer = browser.fills("/me", "/me/tokens", &fields).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    assert_eq!(answer.header("cache-control"), "no-store");
    let html = answer.text();
    let token = html
        .split("<code>wwt_")
        .nth(1)
        .expect("shown once")
        .split('<')
        .next();
    format!("wwt_{}", token.expect("a token"))
}

#[tokio::test]
async fn a_token_does_what_its_scopes_say_and_its_person_may() {
    let house = House::new().await;
    let marsh = house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let reads = made(&browser, &["read"], "30").await;
    let all = made(&browser, &["read", "write", "approve"], "30").await;
    assert!(
        !browser.get("/me").await.text().contains(&all),
        "it was shown once"
    );
    let body = chain().to_string();
    assert_eq!(
        house
            .with_token(&reads, "GET", "/api/v1/pathways", "")
            .await
            .status,
        200
    );
    house
        .with_token(&reads, "POST", "/api/v1/pathways", &body)
        .await
        .refused(403);
    assert_eq!(
        house
            .with_token(&all, "POST", "/api/v1/pathways", &body)
            .await
            .status,
        201
    );
    let me = house.with_token(&all, "GET", "/api/v1/me", "").await.json();
    assert_eq!(
        me["rights"],
        serde_json::json!(["read", "write"]),
        "its person may not approve"
    );
    assert_eq!(me["via"], "token");
    house
        .with_token(&all, "GET", "/api/v1/people", "")
        .await
        .refused(403);
    // What its person loses today, it loses today.
    let change = people::Change {
        name: "Marsh".into(),
        roles: [Role::Viewer].into(),
        audit: None,
    };
    people::change(&house.app, marsh, change).await.expect("changed");
    house
        .with_token(&all, "POST", "/api/v1/pathways", &body)
        .await
        .refused(403);
}

#[tokio::test]
async fn a_token_ends_is_revoked_and_goes_with_its_person() {
    let house = House::new().await;
    let marsh = house.adds("marsh", &[Role::Preparer]).await;
    house.adds("boss", &[Role::Administrator]).await;
    let browser = house.signed_in("marsh").await;
    let (short, long) = (
        made(&browser, &["read"], "1").await,
        made(&browser, &["read"], "30").await,
    );
    let status = async |token: &str| {
        house
            .with_token(token, "GET", "/api/v1/me", "")
            .await
            .status
            .as_u16()
    };
    assert_eq!((status(&short).await, status(&long).await), (200, 200));
    people::disable(&house.app, marsh, true).await.expect("disabled");
    assert_eq!(status(&long).await, 401, "at once");
    people::disable(&house.app, marsh, false).await.expect("enabled");
    assert_eq!(status(&long).await, 200);
    house.app.clock.advance(Duration::from_secs(24 * 3_600));
    assert_eq!(status(&short).await, 401, "its day has come");
    let browser = house.signed_in("marsh").await;
    let list = browser.get("/api/v1/tokens").await.json();
    let id = list["items"][0]["id"].as_str().expect("an id").to_owned();
    let answer = browser
        .fills("/me", &format!("/me/tokens/{id}/revoke"), &[])
        .await;
    assert_eq!(answer.status, 303);
    let refused = house.with_token(&long, "GET", "/api/v1/me", "").await;
    refused.refused(401);
    assert!(refused.header("www-authenticate").contains("invalid_token"));
    let deeds = house.deeds().await;
    let did = |word: &str| deeds.iter().filter(|(did, _)| did == word).count();
    assert_eq!(
        (did("made"), did("revoked"), did("disabled"), did("enabled")),
        (2, 1, 1, 1)
    );
}

#[tokio::test]
async fn the_last_use_is_seen_to_the_minute() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let token = made(&browser, &["read"], "30").await;
    let used = async || browser.get("/api/v1/tokens").await.json()["items"][0]["last_used_at"].clone();
    assert!(used().await.is_null());
    house.with_token(&token, "GET", "/api/v1/me", "").await;
    for _ in 0..100 {
        if !used().await.is_null() {
            break;
        }
        tokio::time::sleep(Duration::from_millis(10)).await;
    }
    assert_eq!(used().await, "2026-12-01T12:00:00Z");
}

#[tokio::test]
async fn a_token_makes_no_tokens_and_lists_none() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let token = made(&house.signed_in("marsh").await, &["read", "write"], "30").await;
    let body = r#"{"label": "next", "scopes": ["read"], "days": 700}"#;
    house
        .with_token(&token, "POST", "/api/v1/tokens", body)
        .await
        .refused(403);
    house
        .with_token(&token, "GET", "/api/v1/tokens", "")
        .await
        .refused(403);
}

#[tokio::test]
async fn tokens_are_made_over_the_api_by_whoever_signed_in() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let form_token = browser.form_token("/me").await;
    let headers = [
        ("content-type", "application/json"),
        ("x-form-token", form_token.as_str()),
    ];
    let make = async |body: &str| {
        browser
            .ask("POST", "/api/v1/tokens", &headers, body.to_owned())
            .await
    };
    let answer = make(r#"{"label": "a", "scopes": ["read", "write"], "days": 7}"#).await;
    assert_eq!(answer.status, 201, "{}", answer.text());
    let token = answer.json()["token"].as_str().expect("a token").to_owned();
    assert_eq!(
        house.with_token(&token, "GET", "/api/v1/me", "").await.status,
        200
    );
    for (wrong, pointer) in [
        (r#"{"label": "", "scopes": ["read"], "days": 7}"#, "/label"),
        (r#"{"label": "a", "scopes": [], "days": 7}"#, "/scopes"),
        (
            r#"{"label": "a", "scopes": ["administer"], "days": 7}"#,
            "/scopes/0",
        ),
        (r#"{"label": "a", "scopes": ["read"], "days": 0.5}"#, "/days"),
        (r#"{"label": "a", "scopes": ["read"], "days": 731}"#, "/days"),
    ] {
        let problem = make(wrong).await.refused(422);
        assert_eq!(crate::support::test_app::pointers(&problem), [pointer], "{wrong}");
    }
}

#[tokio::test]
async fn unknown_tokens_are_refused_and_many_of_them_wait() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    for wrong in ["", "wwt_", "wwt_x", PASSWORD, &format!("wwt_{}", "A".repeat(43))] {
        house
            .with_token(wrong, "GET", "/api/v1/me", "")
            .await
            .refused(401);
    }
    let mut last = 401;
    for _ in 0..130 {
        last = house
            .with_token("wwt_x", "GET", "/api/v1/me", "")
            .await
            .status
            .as_u16();
    }
    assert_eq!(last, 429);
}
