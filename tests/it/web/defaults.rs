//! Default values beside own figures: choosing a combination, and what keeps it from being taken.

use super::form::Form;
use super::{follow, of_pages, page, send};
use crate::support::test_app::TestApp;

/// The values of the radio buttons of a page, in order.
fn choices(html: &str) -> Vec<String> {
    let radios = html.split("type=\"radio\" name=\"combination\"").skip(1);
    let value = |rest: &str| {
        rest.split("value=\"")
            .nth(1)?
            .split('"')
            .next()
            .map(str::to_owned)
    };
    radios.filter_map(value).collect()
}

#[tokio::test]
async fn a_chosen_combination_becomes_a_revision() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    let path = format!("{one}/defaults");
    assert!(
        page(&app, &one).await.contains(&format!("href=\"{path}\"")),
        "the terms lead there"
    );
    let html = page(&app, &path).await;
    let all = choices(&html);
    let growing = all
        .iter()
        .find(|id| id.starts_with("mixed:e_ec=") && !id.contains(','))
        .unwrap_or_else(|| panic!("the default e_ec alone in {all:?}"));
    let mut form = Form::find(&html, "/defaults");
    form.set("combination", growing);
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Saved as revision 2.") && html.contains("default value eu-2018-2001/"),
        "{html}"
    );
    assert!(
        html.contains("Default values: the default e_ec of"),
        "the reason stands beside the revision"
    );
    // The form began from the revision before: nothing is written over what came since.
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 422);
    assert!(
        answer.text().contains("Revision 2 was saved meanwhile"),
        "{}",
        answer.text()
    );
    // And back to own figures.
    let html = page(&app, &path).await;
    let mut form = Form::find(&html, "/defaults");
    form.set("combination", "all_actual")
        .set("why", "Own figures again");
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Saved as revision 3.") && html.contains("Own figures again"),
        "{html}"
    );
    assert!(!html.contains("default value eu-2018-2001/"), "{html}");
}

#[tokio::test]
async fn what_is_not_lawful_is_not_taken() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let path = format!("{}/defaults", of_pages(&one));
    let html = page(&app, &path).await;
    let mut form = Form::find(&html, "/defaults");
    for wrong in [
        "whole_default:eu-2018-2001/sugar_beet_no_biogas_ng_boiler",
        "nothing",
        "",
    ] {
        form.set("combination", wrong).set("why", "<try>");
        let answer = send(&app, &form).await;
        assert_eq!(answer.status, 422, "{wrong}");
        assert!(answer.text().contains("&#60;try&#62;"), "kept as typed");
    }
    assert!(page(&app, &of_pages(&one)).await.contains("Revision</dt><dd>1"));
}

#[tokio::test]
async fn combinations_download_as_csv() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let answer = app.get(&format!("{}/defaults.csv", of_pages(&one))).await;
    assert_eq!(answer.status, 200);
    assert!(
        answer.text().starts_with("combination,what_it_is,lawful,"),
        "{}",
        answer.text()
    );
}
