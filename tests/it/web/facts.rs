//! The facts of a pathway, a copy of it, and pages that are kept as they were rendered.

use super::form::Form;
use super::{follow, of_pages, page, send};
use crate::support::TestApp;

#[tokio::test]
async fn facts_are_changed_and_told() {
    let app = TestApp::new().await;
    let (api, _) = app.stores_chain().await;
    let at = of_pages(&api);
    let before = page(&app, &at).await;
    let mut form = Form::find(&page(&app, &format!("{at}/facts")).await, "/facts");
    form.set("name", "Renamed chain")
        .set("why", "The works has a new name");
    let after = follow(&app, &form).await;
    assert!(after.contains("<h1>Renamed chain</h1>"));
    assert!(!before.contains("Renamed chain"));
    // The kept page of the revision before is gone with it.
    let again = page(&app, &at).await;
    assert!(again.contains("<h1>Renamed chain</h1>") && again.contains("The works has a new name"));
}

#[tokio::test]
async fn a_wrong_day_is_refused_at_its_field_and_a_stale_form_keeps_what_was_typed() {
    let app = TestApp::new().await;
    let (api, _) = app.stores_chain().await;
    let at = of_pages(&api);
    let mut form = Form::find(&page(&app, &format!("{at}/facts")).await, "/facts");
    let late = form.clone();
    form.set("to", "never");
    let refused = send(&app, &form).await;
    assert_eq!(refused.status, 422);
    assert!(refused.text().contains("id=\"to-err\"") && refused.text().contains("value=\"never\""));

    follow(&app, late.clone().set("name", "First")).await;
    let stale = send(&app, late.clone().set("name", "Second")).await;
    assert_eq!(stale.status, 422);
    let text = stale.text();
    assert!(text.contains("value=\"Second\"") && text.contains("somebody saved another revision"));
    // Sent again, it becomes the next revision.
    let saved = follow(&app, &Form::find(&text, "/facts")).await;
    assert!(saved.contains("<h1>Second</h1>") && saved.contains("Saved as revision 3"));
}

#[tokio::test]
async fn a_workbook_is_there_to_keep() {
    let app = TestApp::new().await;
    let (api, _) = app.stores_chain().await;
    let answer = app.get(&format!("{}/workbook.xlsx", of_pages(&api))).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    assert!(answer.header("content-type").ends_with("spreadsheetml.sheet"));
    assert!(
        answer
            .header("content-disposition")
            .starts_with("attachment; filename=\"")
            && answer
                .header("content-disposition")
                .ends_with("-revision-1.xlsx\"")
    );
    let again = app.get(&format!("{}/workbook.xlsx", of_pages(&api))).await;
    assert!(
        answer.bytes.starts_with(b"PK") && answer.bytes == again.bytes,
        "the same bytes each time"
    );
}

#[tokio::test]
async fn a_copy_is_a_pathway_of_its_own() {
    let app = TestApp::new().await;
    let (api, _) = app.stores_chain().await;
    let at = of_pages(&api);
    let form = Form::find(&page(&app, &at).await, "/copy");
    let copied = follow(&app, &form).await;
    assert!(copied.contains("(copy)</h1>"));
    assert_eq!(app.stored().await, 2);
}

#[tokio::test]
async fn a_kept_page_follows_the_archive() {
    let app = TestApp::new().await;
    let (api, _) = app.stores_chain().await;
    let at = of_pages(&api);
    let words = "Bring it back from the archive";
    let first = page(&app, &at).await;
    assert!(!first.contains(words));
    assert_eq!(page(&app, &at).await, first, "kept as it was");
    let there = send(&app, &Form::find(&first, "/archive")).await;
    assert_eq!(there.status, 303);
    let archived = page(&app, &at).await;
    assert!(archived.contains(words));
    let back = send(&app, &Form::find(&archived, "/archive")).await;
    assert_eq!(back.status, 303);
    assert!(!page(&app, &at).await.contains(words));
}
