//! An auditor from outside sees what they were invited to, until the day, and changes nothing.

use super::{House, PASSWORD};
use std::time::Duration;
use uuid::Uuid;
use wheelwort::demo;
use wheelwort::people::{self, Audit, NewPerson, Role};

#[tokio::test]
async fn an_auditor_sees_chosen_pathways_until_the_day() {
    let house = House::new().await;
    house.adds("boss", &[Role::Administrator]).await;
    let saved = demo::load(&house.app).await.expect("stored");
    let (seen, hidden) = (saved[0].id, saved[1].id);
    let boss = house.signed_in("boss").await;
    let address = format!("http://127.0.0.1:8080/pathways/{seen}#checks");
    let fields = [
        ("name", "Outside"),
        ("sign_in_name", "auditor"),
        ("auditor", "on"),
        ("until", "2026-12-03"),
        ("pathways", address.as_str()),
    ];
    let answer = boss.fills("/people", "/people", &fields).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    let person = people::by_sign_in_name(&house.app, "auditor")
        .await
        .expect("there");
    assert_eq!(
        person.audit.as_ref().map(|audit| audit.pathways.clone()),
        Some(vec![seen])
    );
    let temporary = people::reset_password(&house.app, person.id, None, false)
        .await
        .expect("reset");
    let browser = house.browser();
    browser.signs_in("auditor", &temporary).await;
    let change = [
        ("old", temporary.as_str()),
        ("new", PASSWORD),
        ("again", PASSWORD),
    ];
    assert_eq!(
        browser
            .fills("/me/password", "/me/password", &change)
            .await
            .status,
        303
    );

    let list = browser.get("/api/v1/pathways?limit=200").await.json();
    let ids: Vec<_> = list["items"]
        .as_array()
        .expect("a list")
        .iter()
        .map(|item| &item["id"])
        .collect();
    assert_eq!(ids, [&serde_json::json!(seen)]);
    let paths = |id: Uuid| {
        let (api, page) = (format!("/api/v1/pathways/{id}"), format!("/pathways/{id}"));
        [
            api.clone(),
            format!("{api}/assessment"),
            format!("{api}/revisions"),
            format!("{api}/revisions/1"),
            format!("{api}/reasons"),
            format!("{api}/defaults"),
            format!("{page}/workings"),
            format!("{page}/document"),
            format!("{page}/revisions/1"),
            page,
        ]
    };
    for path in paths(seen) {
        let status = browser.get(&path).await.status.as_u16();
        assert!(status == 200 || path.ends_with("/document"), "{path}: {status}");
    }
    for path in paths(hidden) {
        let answer = browser.get(&path).await;
        assert!(
            [403, 404].contains(&answer.status.as_u16()),
            "{path}: {}",
            answer.status
        );
        assert!(
            !answer
                .text()
                .contains("Same as data: <code>GET /api/v1/pathways/"),
            "{path}"
        );
    }
    let names = browser.get("/").await.text();
    let other = boss.get(&format!("/api/v1/pathways/{hidden}")).await.json()["name"].clone();
    assert!(
        !names.contains(other.as_str().expect("a name")),
        "names of others stay hidden"
    );
    let used = browser.get("/api/v1/factors/eu-2022-996/fert_n_an/uses").await;
    assert!(!used.text().contains(&hidden.to_string()));
    assert_eq!(browser.get("/pathways/new").await.status, 403);

    house.app.clock.advance(Duration::from_secs(3 * 24 * 3_600));
    let browser = house.browser();
    assert_eq!(browser.signs_in("auditor", PASSWORD).await.status, 303);
    let refused = browser.get("/api/v1/pathways").await;
    refused.refused(403);
}

#[tokio::test]
async fn an_auditor_holds_no_other_role() {
    let house = House::new().await;
    let new = NewPerson {
        name: "Both".into(),
        sign_in_name: "both".into(),
        roles: [Role::Auditor, Role::Preparer].into(),
        audit: Some(Audit {
            until: "2027-01-01T00:00:00Z".parse().expect("a time"),
            pathways: Vec::new(),
            statements: Vec::new(),
        }),
        password: None,
    };
    assert!(people::add(&house.app, new).await.is_err());
}
