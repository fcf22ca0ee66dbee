//! The pages of evidence, and evidence on the card of a stage and in the workings.

use super::{form, kept_files, post};
use crate::support::documents::chain_with;
use crate::support::{TestApp, attach_text};
use serde_json::json;
use wheelwort::web::Shell;
use wheelwort::web::extract::Limits;

async fn page(app: &TestApp, path: &str) -> String {
    let answer = app.get(path).await;
    assert_eq!(answer.status, 200, "{path}: {}", answer.text());
    answer.text()
}

#[tokio::test]
async fn a_file_is_attached_on_the_page_of_all_evidence() {
    let app = TestApp::new().await;
    assert!(page(&app, "/evidence").await.contains("No file is attached yet"));
    let body = form(&[
        ("form_token", None, b"whatever"),
        ("file", Some("bill.txt"), b"abc"),
        ("id", None, b""),
        ("note", None, b"Gas bill"),
    ]);
    let answer = post(&app, "/evidence", body).await;
    assert_eq!(
        (answer.status.as_u16(), answer.header("location")),
        (303, "/evidence/EV-0001")
    );
    let shown = page(&app, "/evidence/EV-0001").await;
    assert!(shown.contains("Gas bill") && shown.contains("href=\"/evidence/EV-0001/file\""));
    assert!(page(&app, "/evidence").await.contains("ba7816bf8f01"));
    let file = app.get("/evidence/EV-0001/file").await;
    assert_eq!(
        (file.header("content-type"), file.bytes.as_slice()),
        ("application/octet-stream", &b"abc"[..])
    );
    // Refused: told on the page, what was typed is still there.
    let taken = form(&[
        ("id", None, b"EV-0001"),
        ("note", None, b"Another"),
        ("file", Some("b"), b"b"),
    ]);
    let answer = post(&app, "/evidence", taken).await;
    assert_eq!(answer.status, 409);
    assert!(answer.text().contains("value=\"Another\"") && answer.text().contains("already"));
    let empty = post(&app, "/evidence", form(&[("file", Some(""), b"")])).await;
    assert_eq!(empty.status, 422);
    assert!(empty.text().contains("There is no file."));
}

#[tokio::test]
async fn a_card_shows_what_backs_its_inputs() {
    let app = TestApp::new().await;
    attach_text(&app.app, Some("EV-1"), "Rübenschein.pdf", "abc")
        .await
        .expect("attached");
    let (api, _) = app
        .stores(&chain_with("/stages/0/inputs/0/evidence", json!(["EV-1"])))
        .await;
    let at = api.trim_start_matches("/api/v1");
    let card = page(&app, &format!("{at}/stages/field")).await;
    assert!(card.contains("<a href=\"/evidence/EV-1\">EV-1</a> Rübenschein.pdf (3 bytes, hash <code>ba7816bf8f01</code>, command line, "));
    assert!(card.contains("type=\"file\"") && card.contains("name=\"/inputs/0/evidence/file\""));
    assert!(card.contains("<option value=\"EV-1\">Rübenschein.pdf</option>"));
    let workings = page(&app, &format!("{at}/workings")).await;
    assert!(workings.contains("Backed by <a href=\"/evidence/EV-1\">EV-1</a>"));
}

#[tokio::test]
async fn a_file_that_comes_with_a_card_backs_its_input() {
    let app = TestApp::new().await;
    let (api, _) = app
        .stores(&chain_with("/stages/0/inputs/0/origin", json!("measured")))
        .await;
    let at = api.trim_start_matches("/api/v1");
    let card = page(&app, &format!("{at}/stages/field")).await;
    assert!(card.contains("no document is attached") && card.contains("<details open>"));
    let begun: &[super::Part] = &[("expected", None, b"1"), ("/inputs/0/was", None, b"0")];
    let file: super::Part = ("/inputs/0/evidence/file", Some("bill.txt"), b"abc");
    // A button that saves nothing keeps the file all the same, and the id stands in the field.
    let other = form(&[begun, &[file, ("do", None, b"add:/inputs")]].concat());
    let shown = post(&app, &format!("{at}/stages/field"), other).await;
    assert_eq!(shown.status, 200);
    assert!(shown.text().contains("value=\"EV-0001\"") && shown.text().contains("bill.txt (3 bytes"));
    let fields: &[super::Part] = &[
        ("/inputs/0/evidence", None, b"EV-0001"),
        ("/inputs/0/evidence/file", Some("more.txt"), b"abd"),
        ("/inputs/0/amount", None, b"121"),
        ("do", None, b"save"),
    ];
    let saved = post(
        &app,
        &format!("{at}/stages/field"),
        form(&[begun, fields].concat()),
    )
    .await;
    assert_eq!(saved.status, 303, "{}", saved.text());
    let document = app.get(&api).await.json();
    assert_eq!(
        document["stages"][0]["inputs"][0]["evidence"],
        json!(["EV-0001", "EV-0002"])
    );
    assert_eq!(document["stages"][0]["inputs"][0]["amount"], 121);
    let history = app.get(&format!("{api}/revisions")).await.text();
    assert!(history.contains("EV-0002 attached"), "{history}");
    // Left alone, the field of the file changes nothing.
    let alone: &[super::Part] = &[
        ("expected", None, b"2"),
        ("/inputs/0/was", None, b"0"),
        ("/inputs/0/evidence/file", Some(""), b""),
    ];
    assert_eq!(
        post(&app, &format!("{at}/stages/field"), form(alone))
            .await
            .status,
        303
    );
    assert_eq!(kept_files(&app).len(), 2);
    let astray = post(
        &app,
        &format!("{at}/stages/field"),
        form(&[("/name", Some("a"), b"a")]),
    )
    .await;
    assert_eq!(astray.status, 400);
}

#[tokio::test]
async fn a_file_that_is_too_large_is_told_at_its_field_and_nothing_typed_is_lost() {
    let app = TestApp::with(Shell {
        limits: Limits {
            evidence_bytes: 1_000,
            ..Limits::default()
        },
        ..Shell::default()
    })
    .await;
    let (api, _) = app.stores_chain().await;
    let at = api.trim_start_matches("/api/v1");
    let body = form(&[
        ("expected", None, b"1"),
        ("/inputs/0/was", None, b"0"),
        ("/inputs/0/evidence", None, b""),
        ("/inputs/0/evidence/file", Some("a"), &[b'x'; 1_001]),
        ("/inputs/0/amount", None, b"122"),
        ("do", None, b"save"),
    ]);
    let refused = post(&app, &format!("{at}/stages/field"), body).await;
    assert_eq!(refused.status, 422);
    let text = refused.text();
    assert!(
        text.contains("larger than the 1000 bytes") && text.contains("value=\"122\""),
        "{text}"
    );
    assert!(text.contains("href=\"#f-inputs-0-evidence\""));
    // An id that nothing has is told there too.
    let named = form(&[
        ("expected", None, b"1"),
        ("/inputs/0/was", None, b"0"),
        ("/inputs/0/evidence", None, b"EV-7"),
        ("do", None, b"save"),
    ]);
    let refused = post(&app, &format!("{at}/stages/field"), named).await;
    assert_eq!(refused.status, 422);
    let text = refused.text();
    assert!(
        text.contains("There is no evidence") && text.contains("EV-7"),
        "{text}"
    );
    assert_eq!(super::count(&app).await, 0);
}
