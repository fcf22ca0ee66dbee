//! People of the organisation: added, changed, kept out, given new passwords.

use super::{House, PASSWORD};
use wheelwort::people::{self, PeopleError, Role};

/// The secret that a page shows once.
fn shown(html: &str) -> String {
    let from = html.split("role=\"status\"").nth(1).expect("a notice");
    let code = from.split("<code>").nth(1).expect("a secret");
    code.split('<').next().expect("text").to_owned()
}

#[tokio::test]
async fn an_administrator_adds_a_person_who_chooses_a_password() {
    let house = House::new().await;
    house.adds("boss", &[Role::Administrator]).await;
    let boss = house.signed_in("boss").await;
    let fields = [
        ("name", "Ines Marsh"),
        ("sign_in_name", "Ines.Marsh"),
        ("preparer", "on"),
    ];
    let answer = boss.fills("/people", "/people", &fields).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    assert_eq!(answer.header("cache-control"), "no-store");
    let temporary = shown(&answer.text());
    assert!(boss.get("/people").await.text().contains("Ines Marsh"));
    let again = boss.fills("/people", "/people", &fields).await;
    assert_eq!(again.status, 422);
    assert!(again.text().contains("signs in with that name already"));

    let ines = house.browser();
    let answer = ines.signs_in("ines.marsh", &temporary).await;
    assert_eq!(
        (answer.status.as_u16(), answer.header("location")),
        (303, "/me/password")
    );
    // Nothing else goes before.
    assert_eq!(ines.get("/").await.header("location"), "/me/password");
    ines.get("/api/v1/me").await.refused(403);
    let new = "gravel oat lantern";
    let fields = [("old", temporary.as_str()), ("new", new), ("again", new)];
    assert_eq!(
        ines.fills("/me/password", "/me/password", &fields).await.status,
        303
    );
    assert_eq!(ines.get("/").await.status, 200);
    assert_eq!(
        house.browser().signs_in("ines.marsh", &temporary).await.status,
        422
    );
}

#[tokio::test]
async fn a_reset_ends_sessions_and_holds_until_a_password_is_chosen() {
    let house = House::new().await;
    house.adds("boss", &[Role::Administrator]).await;
    let marsh = house.adds("marsh", &[Role::Preparer]).await;
    let (boss, browser) = (house.signed_in("boss").await, house.signed_in("marsh").await);
    assert_eq!(browser.get("/me").await.status, 200);
    let page = format!("/people/{marsh}");
    let answer = boss.fills(&page, &format!("{page}/password"), &[]).await;
    let temporary = shown(&answer.text());
    assert_eq!(browser.get("/me").await.status, 303, "signed out");
    assert_eq!(house.browser().signs_in("marsh", PASSWORD).await.status, 422);
    let answer = house.browser().signs_in("marsh", &temporary).await;
    assert_eq!(answer.header("location"), "/me/password");
}

#[tokio::test]
async fn whoever_is_kept_out_is_out_at_once() {
    let house = House::new().await;
    house.adds("boss", &[Role::Administrator]).await;
    let marsh = house.adds("marsh", &[Role::Preparer]).await;
    let (boss, browser) = (house.signed_in("boss").await, house.signed_in("marsh").await);
    assert_eq!(browser.get("/api/v1/me").await.status, 200);
    let page = format!("/people/{marsh}");
    let answer = boss
        .fills(&page, &format!("{page}/disable"), &[("disabled", "yes")])
        .await;
    assert_eq!(answer.status, 303);
    assert_eq!(browser.get("/api/v1/me").await.status, 401);
    assert_eq!(house.browser().signs_in("marsh", PASSWORD).await.status, 422);
    boss.fills(&page, &format!("{page}/disable"), &[("disabled", "no")])
        .await;
    house.signed_in("marsh").await;
}

#[tokio::test]
async fn roles_hold_at_once_and_the_last_administrator_stays() {
    let house = House::new().await;
    let boss_id = house.adds("boss", &[Role::Administrator]).await;
    let marsh = house.adds("marsh", &[Role::Viewer]).await;
    let (boss, browser) = (house.signed_in("boss").await, house.signed_in("marsh").await);
    assert_eq!(browser.get("/people").await.status, 403);
    assert_eq!(browser.get("/pathways/new").await.status, 403);
    let page = format!("/people/{marsh}");
    let fields = [
        ("name", "Marsh"),
        ("viewer", "on"),
        ("administrator", "on"),
        ("preparer", "on"),
    ];
    assert_eq!(boss.fills(&page, &page, &fields).await.status, 303);
    assert_eq!(browser.get("/people").await.status, 200);
    assert_eq!(browser.get("/pathways/new").await.status, 200);
    // Now there are two; the last one stays.
    people::disable(&house.app, marsh, true).await.expect("disabled");
    let refused = people::disable(&house.app, boss_id, true)
        .await
        .expect_err("the last");
    assert!(matches!(refused, PeopleError::LastAdministrator));
    let page = format!("/people/{boss_id}");
    let answer = boss
        .fills(&page, &page, &[("name", "Boss"), ("viewer", "on")])
        .await;
    assert_eq!(answer.status, 422);
    assert!(answer.text().contains("Nobody would be left to administer"));
}

#[tokio::test]
async fn people_over_the_api() {
    let house = House::new().await;
    house.adds("boss", &[Role::Administrator]).await;
    let boss = house.signed_in("boss").await;
    let token = boss.form_token("/me").await;
    let headers = [
        ("content-type", "application/json"),
        ("x-form-token", token.as_str()),
    ];
    let body = r#"{"name": "Ines Marsh", "sign_in_name": "ines", "roles": ["preparer", "approver"]}"#;
    let added = boss.ask("POST", "/api/v1/people", &headers, body).await;
    assert_eq!(added.status, 201, "{}", added.text());
    let address = added.header("location").to_owned();
    let added = added.json();
    assert!(
        added["temporary_password"]
            .as_str()
            .is_some_and(|word| word.len() > 20)
    );
    assert_eq!(added["roles"], serde_json::json!(["preparer", "approver"]));
    let body = r#"{"name": "Ines M.", "roles": ["viewer"], "disabled": true}"#;
    let changed = boss.ask("PUT", &address, &headers, body).await.json();
    assert_eq!(
        (changed["name"].as_str(), changed["disabled_at"].is_null()),
        (Some("Ines M."), false)
    );
    assert_eq!(boss.get(&address).await.json(), changed);
    for (wrong, pointer) in [
        (
            r#"{"name": "x", "sign_in_name": "a b", "roles": ["viewer"]}"#,
            "/sign_in_name",
        ),
        (r#"{"name": "x", "sign_in_name": "y", "roles": []}"#, "/roles"),
        (
            r#"{"name": "x", "sign_in_name": "y", "roles": ["auditor"]}"#,
            "/audit",
        ),
        (
            r#"{"name": "x", "sign_in_name": "y", "roles": ["owner"]}"#,
            "/roles/0",
        ),
        (
            r#"{"name": "x", "sign_in_name": "y", "roles": ["viewer"], "audit": {"until": "2027-01-01"}}"#,
            "/audit",
        ),
        (
            r#"{"name": "x", "sign_in_name": "y", "roles": ["auditor"], "audit": {"until": "2020-01-01"}}"#,
            "/audit/until",
        ),
    ] {
        let problem = boss
            .ask("POST", "/api/v1/people", &headers, wrong)
            .await
            .refused(422);
        assert_eq!(crate::support::test_app::pointers(&problem), [pointer], "{wrong}");
    }
}
