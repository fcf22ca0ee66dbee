//! One stage at a time.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::pointers;

#[tokio::test]
async fn a_stage_is_read_put_and_deleted() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let field = format!("{address}/stages/field");
    let read = app.get(&field).await;
    assert_eq!(
        (read.json()["kind"].as_str(), read.header("etag")),
        (Some("cultivation"), etag.as_str())
    );

    let mut stage = read.json();
    stage["inputs"][0]["amount"] = 100.into();
    let saved = app.put(&format!("{field}?reason=meter"), &etag, &stage).await;
    assert_eq!(
        (saved.status.as_u16(), saved.json()["revision"].as_i64()),
        (200, Some(2))
    );
    assert_eq!(
        app.get(&address).await.json()["stages"][0]["inputs"][0]["amount"].as_f64(),
        Some(100.0)
    );

    app.put(&field, &etag, &stage).await.refused(412);
    app.ask(
        "PUT",
        &field,
        &[("content-type", "application/json")],
        stage.to_string(),
    )
    .await
    .refused(428);
    app.ask("DELETE", &field, &[], "").await.refused(428);
}

#[tokio::test]
async fn a_stage_that_is_needed_stays() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let needed = app
        .ask(
            "DELETE",
            &format!("{address}/stages/works"),
            &[("if-match", &etag)],
            "",
        )
        .await;
    assert!(!pointers(&needed.refused(422)).is_empty());
    let last = app
        .ask(
            "DELETE",
            &format!("{address}/stages/truck"),
            &[("if-match", &etag)],
            "",
        )
        .await;
    assert_eq!(
        (last.status.as_u16(), last.json()["revision"].as_i64()),
        (200, Some(2))
    );
    app.get(&format!("{address}/stages/truck")).await.refused(404);
    app.ask(
        "DELETE",
        &format!("{address}/stages/truck"),
        &[("if-match", "*")],
        "",
    )
    .await
    .refused(404);
}

#[tokio::test]
async fn a_wrong_stage_is_refused() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let mut renamed = chain()["stages"][0].clone();
    renamed["key"] = "meadow".into();
    let problem = app
        .put(&format!("{address}/stages/field"), &etag, &renamed)
        .await
        .refused(422);
    assert_eq!(pointers(&problem), ["/key"]);
    let mut odd = chain()["stages"][0].clone();
    odd["colour"] = "green".into();
    let problem = app
        .put(&format!("{address}/stages/field"), &etag, &odd)
        .await
        .refused(422);
    assert_eq!(pointers(&problem), ["/colour"]);
    assert_eq!(app.get(&address).await.header("etag"), etag);
}
