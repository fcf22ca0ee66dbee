//! Every page answers, names its data, and carries nothing that the policy forbids.

use super::form::{Form, encoded};
use super::{follow, of_pages, page, send};
use crate::support::documents::chain;
use crate::support::test_app::TestApp;
use serde_json::json;

#[tokio::test]
async fn every_page_answers_and_every_link_leads_somewhere() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let mut other = chain();
    other["name"] = json!("Second & last");
    let (two, _) = app.stores(&other).await;
    let (one, two) = (of_pages(&one), of_pages(&two));
    let id = |path: &str| path.rsplit('/').next().expect("an id").to_owned();
    let compare = format!("/compare?ids={}&ids={}", id(&one), id(&two));
    let mut open = vec![
        "/".to_owned(),
        one.clone(),
        format!("{one}?carbon=in-line"),
        format!("{one}/workings?open=all"),
        format!("{one}/revisions/1"),
        format!("{one}/document"),
        format!("{one}/new-stage?kind=preparation&name=Milling&after=1"),
        compare,
        "/factors".to_owned(),
        "/rule-sets".to_owned(),
        "/settings".to_owned(),
        "/calculators".to_owned(),
        "/materials/wheat".to_owned(),
        "/api".to_owned(),
    ];
    let mut seen = std::collections::BTreeSet::new();
    while let Some(path) = open.pop() {
        if !seen.insert(path.clone()) || seen.len() > 120 {
            continue;
        }
        let answer = app.get(&path).await;
        assert_eq!(answer.status, 200, "{path}: {}", answer.text());
        if !answer.header("content-type").starts_with("text/html") {
            continue;
        }
        let html = answer.text();
        let ours = html.replace("<script src=\"/assets/", "");
        for banned in [" style=\"", "<style", "<script", "onclick="] {
            assert!(!ours.contains(banned), "{path} holds {banned}");
        }
        for link in html
            .split(" href=\"/")
            .skip(1)
            .filter_map(|rest| rest.split('"').next())
        {
            let link = super::form::unescaped(link);
            let link = link.split('#').next().unwrap_or_default();
            // Rows of editions and materials are all alike: a library test renders each.
            if !(link.starts_with("factors/") || link.starts_with("materials/")) {
                open.push(format!("/{link}"));
            }
        }
    }
    assert!(seen.len() > 30, "{seen:?}");
}

#[tokio::test]
async fn pages_say_which_request_gives_the_same_as_data_and_it_does() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    for path in [
        "/".to_owned(),
        one.clone(),
        format!("{one}/workings"),
        format!("{one}/stages/works"),
        "/factors?q=diesel".to_owned(),
    ] {
        let html = page(&app, &path).await;
        let data = html.split("Same as data: <code>GET ").nth(1).expect("a request");
        let data = super::form::unescaped(data.split('<').next().expect("an end"));
        let answer = app.get(&data).await;
        assert_eq!(answer.status, 200, "{path}: {data}: {}", answer.text());
    }
}

#[tokio::test]
async fn the_example_comes_and_goes_in_one_step() {
    let app = TestApp::new().await;
    let html = page(&app, "/").await;
    assert!(html.contains("No pathways yet."), "{html}");
    let html = follow(&app, &Form::find(&html, "/example/load")).await;
    assert!(html.contains("The example is here:") && html.contains("invented for demonstration"));
    assert!(app.stored().await > 1);
    let html = follow(&app, &Form::find(&html, "/example/remove")).await;
    assert!(html.contains("The example is gone.") && html.contains("No pathways yet."));
    assert_eq!(app.stored().await, 0);
}

#[tokio::test]
async fn a_pathway_begins_with_a_short_form_or_with_a_document() {
    let app = TestApp::new().await;
    let html = page(&app, "/pathways/new").await;
    let mut short = Form::find(&html, "/pathways");
    short
        .set("name", "Own <wheat>")
        .set("from", "2026-07-01")
        .set("to", "no day");
    let answer = send(&app, &short).await;
    assert_eq!(answer.status, 422);
    assert!(answer.text().contains("The last day is no day of the calendar."));
    assert!(answer.text().contains("id=\"to-err\""), "said at its field too");
    assert!(
        answer.text().contains("There is no such feedstock."),
        "no feedstock is chosen for anybody"
    );
    let mut short = Form::find(&answer.text(), "/pathways");
    assert_eq!(
        (short.get("name"), short.get("to")),
        ("Own <wheat>", "no day"),
        "kept as typed"
    );
    short.set("feedstock", "wheat").set("to", "2020-06-30");
    let backwards = send(&app, &short).await.text();
    assert!(
        backwards.contains("<a href=\"#to\">Last day</a>") && !backwards.contains("/period/to"),
        "{backwards}"
    );
    short.set("to", "2027-06-30");
    let html = follow(&app, &short).await;
    assert!(
        html.contains("Saved as revision 1.") && html.contains("Own &#60;wheat&#62;"),
        "{html}"
    );

    let html = page(&app, "/pathways/new").await;
    let mut document = Form::find(&html, "/pathways/document");
    document.set("document", "{ \"format\": 1 ");
    let answer = send(&app, &document).await;
    assert_eq!(answer.status, 422);
    assert!(answer.text().contains("This is not JSON"));
    document.set("document", &chain().to_string());
    let html = follow(&app, &document).await;
    assert!(html.contains("Saved as revision 1."));
    assert_eq!(app.stored().await, 2);
}

#[tokio::test]
async fn archived_pathways_leave_the_list_and_come_back() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    let html = page(&app, &one).await;
    let html = follow(&app, &Form::find(&html, "/archive")).await;
    assert!(html.contains("Bring it back from the archive"));
    assert!(!page(&app, "/").await.contains(&one));
    assert!(page(&app, "/?state=archived").await.contains(&one));
    follow(&app, &Form::find(&html, "/archive")).await;
    assert!(page(&app, "/").await.contains(&one));
}

#[tokio::test]
async fn a_warning_takes_a_written_reason() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    let html = page(&app, &one).await;
    let mut form = Form::find(&html, "/reasons");
    form.set("text", "Asked the supplier <b>twice</b>; kept.");
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Reason given: Asked the supplier &#60;b&#62;twice&#60;/b&#62;; kept."),
        "{html}"
    );
    let mut form = Form::find(&html, "/reasons");
    form.set("text", " ");
    let html = follow(&app, &form).await;
    assert!(!html.contains("Reason given"), "{html}");
}

#[tokio::test]
async fn an_earlier_revision_can_be_brought_back() {
    let app = TestApp::new().await;
    let (one, etag) = app.stores_chain().await;
    let mut changed = chain();
    changed["name"] = json!("Another name");
    assert_eq!(app.put(&one, &etag, &changed).await.status, 200);
    let one = of_pages(&one);
    let html = page(&app, &format!("{one}/revisions/2")).await;
    assert!(
        html.contains("Another name") && html.contains("changed"),
        "{html}"
    );
    let html = page(&app, &format!("{one}/revisions/1")).await;
    let html = follow(&app, &Form::find(&html, "/restore")).await;
    assert!(html.contains("Saved as revision 3.") && !html.contains("Another name</h1>"));
}

#[tokio::test]
async fn what_is_not_there_gets_a_page_with_the_nearest_name() {
    let app = TestApp::new().await;
    let mut named = chain();
    named["name"] = json!("Autumn wheat, Tarn Bridge works");
    let (one, _) = app.stores(&named).await;
    let answer = app.get("/pathways/autumn-weat-tarn-bridge-works").await;
    assert_eq!(answer.status, 404);
    let html = answer.text();
    assert!(
        html.contains("There is no pathway at this address") && html.contains(&of_pages(&one)),
        "{html}"
    );
    let nowhere = app.get("/nowhere").await;
    assert_eq!(nowhere.status, 404);
    assert!(nowhere.text().contains("There is nothing at this address"));
    let wrong = app.ask("DELETE", "/factors", &[], "").await;
    assert_eq!(wrong.status, 405);
    assert!(wrong.text().contains("This address does not take that") && !wrong.header("allow").is_empty());
}

#[tokio::test]
async fn tables_download_as_csv_without_formulas() {
    let app = TestApp::new().await;
    let mut named = chain();
    named["name"] = json!("=SUM(1)");
    named["stages"][0]["name"] = json!("@field");
    let (one, _) = app.stores(&named).await;
    let one = of_pages(&one);
    for (path, first) in [
        (format!("{one}/stages.csv"), "stage,name,"),
        (format!("{one}/terms.csv"), "term,"),
        (format!("{one}/carbon.csv"), "where,"),
        (format!("{one}/checks.csv"), "check,"),
        (format!("{one}/workings.csv"), "stage,input,"),
        ("/pathways.csv".to_owned(), "id,name,"),
        ("/rule-sets.csv".to_owned(), "jurisdiction,law,"),
        (
            format!("/factors.csv?q={}", encoded("ammonium nitrate")),
            "id,name,",
        ),
    ] {
        let answer = app.get(&path).await;
        assert_eq!(answer.status, 200, "{path}");
        assert!(answer.header("content-type").starts_with("text/csv"), "{path}");
        let text = answer.text();
        assert!(
            text.starts_with(first) && text.lines().count() > 1,
            "{path}: {text}"
        );
        assert!(
            !text.contains(",=SUM") && !text.contains(",@field"),
            "{path}: {text}"
        );
    }
}
