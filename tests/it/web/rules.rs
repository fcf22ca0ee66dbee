//! Settings of the checks and own rule sets, by their forms alone.

use super::form::Form;
use super::{follow, page, send};
use crate::support::test_app::TestApp;

#[tokio::test]
async fn settings_are_changed_and_refused_at_their_fields() {
    let app = TestApp::new().await;
    let mut form = Form::find(&page(&app, "/settings").await, "/settings");
    form.set("capacity_percent", "105")
        .set("steam_works_mj_per_l/high", "9.5");
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Saved. The checks of every pathway follow"),
        "{html}"
    );
    let stored = app.get("/api/v1/settings").await.json();
    assert_eq!(stored["capacity_percent"], 105.0);
    assert_eq!(stored["steam_works_mj_per_l"]["high"], 9.5);
    let fresh = Form::find(&html, "/settings");
    assert_eq!(fresh.get("capacity_percent"), "105");
    // Left empty it is at its standard again.
    let mut back = fresh.clone();
    back.set("capacity_percent", "");
    follow(&app, &back).await;
    assert_eq!(
        app.get("/api/v1/settings").await.json()["capacity_percent"],
        110.0
    );

    // The first form began from older settings: both are shown, nothing is lost, and the next save stands.
    form.set("delivery_percent", "120");
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 412);
    let html = answer.text();
    assert!(
        html.contains("somebody changed the settings") && html.contains("Saved meanwhile: 110"),
        "{html}"
    );
    let again = Form::find(&html, "/settings");
    assert_eq!(again.get("delivery_percent"), "120");
    follow(&app, &again).await;

    let mut wrong = Form::find(&page(&app, "/settings").await, "/settings");
    wrong.set("capacity_percent", "1").set("typical_low", "0,7");
    let answer = send(&app, &wrong).await;
    assert_eq!(answer.status, 422);
    let html = answer.text();
    assert!(html.contains("Write a point, such as 0.7."), "{html}");
    let mut wrong = Form::find(&html, "/settings");
    assert_eq!(wrong.get("typical_low"), "0,7");
    wrong.set("typical_low", "0.7");
    let answer = send(&app, &wrong).await;
    assert_eq!(answer.status, 422);
    let html = answer.text();
    assert!(
        html.contains("1 % is outside 100 to 200") || html.contains("outside 100 to 200"),
        "{html}"
    );
    assert!(html.contains("aria-invalid=\"true\""));
}

#[tokio::test]
async fn an_own_rule_set_is_written_in_versions() {
    let app = TestApp::new().await;
    let html = page(&app, "/rule-sets/eu-2018-2001").await;
    assert!(
        html.contains("href=\"/rule-sets/eu-2018-2001/versions\""),
        "{html}"
    );
    let versions = page(&app, "/rule-sets/eu-2018-2001/versions").await;
    assert!(versions.contains("Begin one of your own from it"));
    let mut form = Form::find(&page(&app, "/rule-sets/eu-2018-2001/next").await, "/next");
    let text = form.get("text").to_owned();
    assert!(
        text.contains("id = \"own-eu-2018-2001\"") && text.contains("[limits.soil_carbon_cap]"),
        "{text}"
    );

    form.set("text", &text.replace("value = 94.0", "value = 940.0"));
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 422);
    let html = answer.text();
    assert!(
        html.contains("<code>/comparator/value</code>") && html.contains("Line "),
        "{html}"
    );
    form.set("text", "id = = 3");
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 422);
    assert!(answer.text().contains("Line 1 is no TOML"), "{}", answer.text());
    assert_eq!(Form::find(&answer.text(), "/next").get("text"), "id = = 3");

    form.set("text", &text);
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Version 1 is saved") && html.contains("Write the next version"),
        "{html}"
    );
    // The same version that says something else is refused; the next one is not.
    form.set("text", &text.replace("value = 94.0", "value = 93.0"));
    assert_eq!(send(&app, &form).await.status, 409);
    let next = Form::find(&page(&app, "/rule-sets/own-eu-2018-2001/next").await, "/next");
    assert!(
        next.get("text").contains("version = \"2\""),
        "{}",
        next.get("text")
    );
    let html = follow(&app, &next).await;
    assert!(html.contains("Version 2 is saved"), "{html}");
    let first = page(&app, "/rule-sets/own-eu-2018-2001@1").await;
    assert!(
        first.contains("version 1") && first.contains("cap on a soil-carbon claim".get(1..).unwrap()),
        "{first}"
    );
    assert_eq!(app.get("/rule-sets/none/versions").await.status, 404);
}
