//! The trail as it is read: filters, pages of a list, what auditors from outside see, and the page.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::{answer_of, preparer, request};
use serde_json::{Value, json};
use std::collections::BTreeSet;
use wheelwort::app::who::{Right, Sight, Who};

fn numbers(page: &Value) -> Vec<i64> {
    let items = page["items"].as_array().expect("items");
    items
        .iter()
        .map(|item| item["number"].as_i64().expect("a number"))
        .collect()
}

/// Three pathways and a setting: lines 1 to 3 and 4; the ids of the pathways.
async fn four(app: &TestApp) -> Vec<String> {
    let mut ids = Vec::new();
    for name in ["one", "two", "three"] {
        let mut document = chain();
        document["name"] = json!(name);
        let (address, _) = app.stores(&document).await;
        ids.push(address.rsplit('/').next().expect("an id").to_owned());
    }
    app.put("/api/v1/settings", "*", &json!({ "capacity_percent": 120 }))
        .await;
    ids
}

#[tokio::test]
async fn filters_find_their_lines() {
    let app = TestApp::new().await;
    let ids = four(&app).await;
    let person = preparer().person.expect("a person");
    let all = "/api/v1/audit-trail";
    for (query, expected) in [
        (String::new(), vec![4, 3, 2, 1]),
        ("?thing=pathway".into(), vec![3, 2, 1]),
        (format!("?thing=pathway&id={}", ids[1]), vec![2]),
        (format!("?id={}", ids[2]), vec![3]),
        ("?did=created".into(), vec![3, 2, 1]),
        ("?did=changed&thing=check_settings".into(), vec![4]),
        (format!("?person={person}"), vec![4, 3, 2, 1]),
        (format!("?person={person}&thing=pathway&limit=1"), vec![3]),
        (format!("?person={}", uuid::Uuid::nil()), vec![]),
        ("?from=2026-12-01&to=2026-12-01".into(), vec![4, 3, 2, 1]),
        ("?from=2026-12-02".into(), vec![]),
        ("?to=2026-11-30".into(), vec![]),
        (
            "?from=2026-12-01T12:00:00Z&to=2026-12-01T12:00:00Z".into(),
            vec![4, 3, 2, 1],
        ),
        ("?from=2026-12-01T12:00:00.001Z".into(), vec![]),
    ] {
        let page = app.get(&format!("{all}{query}")).await.json();
        assert_eq!(numbers(&page), expected, "{query}");
    }
    for wrong in [
        "from=yesterday",
        "to=2026-13-01",
        "person=me",
        "after=x",
        "after=0",
        "limit=0",
        "when=now",
    ] {
        app.get(&format!("{all}?{wrong}")).await.refused(400);
    }
    let line = &app.get(&format!("{all}?limit=1&did=created")).await.json()["items"][0];
    assert_eq!(line["what"]["name"], "three");
    assert_eq!(
        (line["by"]["name"].as_str(), line["by"]["via"].as_str()),
        (Some("I. Marsh"), Some("session"))
    );
    assert!(line["hash"].as_str().is_some_and(|hash| hash.len() == 71));
}

#[tokio::test]
async fn pages_of_the_trail_are_the_trail() {
    let app = TestApp::new().await;
    four(&app).await;
    for limit in 1..=5 {
        let (mut seen, mut address) = (Vec::new(), format!("/api/v1/audit-trail?limit={limit}"));
        loop {
            let answer = app.get(&address).await;
            seen.extend(numbers(&answer.json()));
            match answer.header("link").split(['<', '>']).nth(1) {
                Some(next) => address = next.to_owned(),
                None => break,
            }
        }
        assert_eq!(seen, [4, 3, 2, 1], "{limit}");
    }
}

#[tokio::test]
async fn an_auditor_from_outside_sees_the_lines_of_what_she_was_invited_to() {
    let app = TestApp::new().await;
    let ids = four(&app).await;
    let auditor = app.asked_by(Who {
        name: "S. Lund".into(),
        person: Some(uuid::Uuid::from_u128(9)),
        rights: [Right::Read].into(),
        sight: Sight::Chosen {
            pathways: [ids[1].parse().expect("an id")].into(),
            statements: BTreeSet::new(),
        },
        ..preparer()
    });
    let get = async |path: &str| answer_of(&auditor, request("GET", path, &[], "")).await;
    assert_eq!(numbers(&get("/api/v1/audit-trail").await.json()), [2]);
    assert_eq!(
        numbers(&get(&format!("/api/v1/audit-trail?id={}", ids[0])).await.json()),
        [0; 0]
    );
    let file = get("/api/v1/audit-trail.ndjson").await.text();
    assert_eq!(file.lines().count(), 2, "her line and the closing line: {file}");
    let page = get("/audit-trail").await.text();
    assert!(page.contains("two") && !page.contains("three"), "{page}");
    assert!(!page.contains("id=\"person\""), "nobody is named to her");
}

#[tokio::test]
async fn the_page_tells_who_did_what() {
    let app = TestApp::new().await;
    assert!(
        app.get("/audit-trail")
            .await
            .text()
            .contains("Nothing has been recorded yet.")
    );
    let ids = four(&app).await;
    let page = app.get("/audit-trail").await.text();
    for words in [
        "Created pathway",
        "signed in",
        "I. Marsh",
        "The chain ends at line 4",
        &format!("href=\"/pathways/{}\"", ids[0]),
    ] {
        assert!(page.contains(words), "{words}: {page}");
    }
    let one = app
        .get(&format!("/audit-trail?thing=pathway&id={}", ids[0]))
        .await
        .text();
    assert!(one.contains("one") && !one.contains(">two<"), "{one}");
    let wrong = app.get("/audit-trail?from=soon").await;
    assert_eq!(wrong.status, 422);
    assert!(wrong.text().contains("is not a day or a moment"));
    let pathway = app.get(&format!("/pathways/{}", ids[0])).await.text();
    assert!(pathway.contains(&format!("/audit-trail?thing=pathway&amp;id={}", ids[0])));
}
