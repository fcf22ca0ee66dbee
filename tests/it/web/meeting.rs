//! Two people, one pathway: nothing typed is lost, each field can be chosen, and the other's save stays a revision.

use super::form::Form;
use super::stage::card;
use super::{follow, of_pages, page, send};
use crate::support::TestApp;
use crate::support::test_app::{Answer, answer_of, preparer, request};
use serde_json::{Value, json};
use wheelwort::app::who::Who;

/// Sends a form as T. Hale does.
async fn hale_sends(app: &TestApp, form: &Form) -> Answer {
    let hale = app.asked_by(Who {
        name: "T. Hale".into(),
        person: Some(uuid::Uuid::from_u128(8)),
        ..preparer()
    });
    let headers = [("content-type", "application/x-www-form-urlencoded")];
    let answer = answer_of(&hale, request("POST", &form.action, &headers, form.body())).await;
    assert_eq!(answer.status, 303, "{}", answer.text());
    answer
}

/// Both open the card of the works; the name of its first amount.
async fn cards(app: &TestApp) -> (String, Form, Form, String) {
    let (path, form, amount) = card(app).await;
    (path, form.clone(), form, amount)
}

#[tokio::test]
async fn a_card_names_who_saved_and_takes_either_figure() {
    for (pick, expected) in [("as it is", "88"), ("theirs", "77")] {
        let app = TestApp::new().await;
        let (_, mut theirs, mut mine, amount) = cards(&app).await;
        theirs.set(&amount, "77").set("do", "save");
        hale_sends(&app, &theirs).await;
        mine.set(&amount, "88")
            .set("why", "June reading")
            .set("do", "save");
        let answer = send(&app, &mine).await;
        assert_eq!(answer.status, 412);
        let html = answer.text();
        for words in [
            "Not saved: T. Hale saved revision 2 while you were typing",
            "One field differs.",
            "You started from, 1",
            "T. Hale, 2, 12:00 UTC",
            "June reading",
        ] {
            assert!(html.contains(words), "{words}: {html}");
        }
        let mut again = Form::find(&html, "/stages/works");
        assert_eq!(again.get(&amount), "88");
        again.set(&format!("pick:{amount}"), pick).set("do", "save");
        let html = if expected == "77" {
            // Theirs is what stands already: no revision is made.
            follow(&app, &again).await
        } else {
            let html = follow(&app, &again).await;
            assert!(html.contains("Saved as revision 3."), "{html}");
            html
        };
        assert!(html.contains(&format!("value=\"{expected}\"")), "{html}");
    }
}

#[tokio::test]
async fn what_only_the_other_changed_can_be_put_back() {
    let app = TestApp::new().await;
    let (_, mut theirs, mut mine, amount) = cards(&app).await;
    let was = mine.get(&amount).to_owned();
    theirs.set(&amount, "77").set("do", "save");
    hale_sends(&app, &theirs).await;
    mine.set("/name", "Mine").set("do", "save");
    let html = send(&app, &mine).await.text();
    let mut again = Form::find(&html, "/stages/works");
    assert_eq!((again.get(&amount), again.get("/name")), ("77", "Mine"));
    assert!(
        html.contains(&format!("name=\"mine:{amount}\" value=\"{was}\"")),
        "{html}"
    );
    again
        .set(&format!("pick:{amount}"), "mine")
        .set(&format!("mine:{amount}"), &was)
        .set("do", "save");
    let html = follow(&app, &again).await;
    assert!(
        html.contains("Saved as revision 3.") && html.contains(&format!("value=\"{was}\"")),
        "{html}"
    );
}

#[tokio::test]
async fn a_card_whose_stage_was_taken_out_is_kept() {
    let app = TestApp::new().await;
    let (path, _, mut mine, amount) = cards(&app).await;
    let document = path.replace("/stages/works", "/document");
    // T. Hale makes another chain of it, without the works.
    let mut form = Form::find(&page(&app, &document).await, "/document");
    let mut whole: Value = serde_json::from_str(form.get("document")).expect("JSON");
    let stages = whole["stages"].as_array_mut().expect("stages");
    for stage in stages.iter_mut() {
        if stage["key"] == "works" {
            stage["key"] = json!("plant");
        }
        for intake in stage["intakes"].as_array_mut().into_iter().flatten() {
            if intake["from"] == "works" {
                intake["from"] = json!("plant");
            }
        }
    }
    form.set("document", &whole.to_string());
    hale_sends(&app, &form).await;
    mine.set(&amount, "88").set("/name", "My works").set("do", "save");
    let answer = send(&app, &mine).await;
    assert_eq!(answer.status, 412, "{}", answer.text());
    let html = answer.text();
    assert!(
        html.contains("The stage was taken out. Yours stands here as a new one"),
        "{html}"
    );
    let again = Form::find(&html, "/stages/works");
    assert_eq!((again.get(&amount), again.get("/name")), ("88", "My works"));
    assert_eq!((again.get("expected"), again.get("new")), ("2", "yes"));
}

/// The form of the whole document, with its document read.
async fn whole(app: &TestApp, path: &str) -> (Form, Value) {
    let form = Form::find(&page(app, path).await, "/document");
    let document = serde_json::from_str(form.get("document")).expect("JSON");
    (form, document)
}

#[tokio::test]
async fn a_whole_document_meets_another_and_each_field_is_chosen() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let path = format!("{}/document", of_pages(&one));
    let (mut theirs, mut document) = whole(&app, &path).await;
    let (mut mine, mut own) = (theirs.clone(), document.clone());
    document["name"] = json!("Hale's name");
    document["note"] = json!("Hale's note");
    theirs.set("document", &document.to_string());
    hale_sends(&app, &theirs).await;
    own["name"] = json!("My name");
    own["stages"][0]["name"] = json!("My field");
    mine.set("document", &own.to_string()).set("why", "My why");
    let answer = send(&app, &mine).await;
    assert_eq!(answer.status, 412);
    let html = answer.text();
    for words in [
        "Not saved: T. Hale saved revision 2 while you were typing",
        "2 fields differ.",
        "My why",
        "Hale&#39;s name",
    ] {
        assert!(html.contains(words), "{words}: {html}");
    }
    let again = Form::find(&html, "/document");
    assert_eq!(again.get("expected"), "2");
    let joined: Value = serde_json::from_str(again.get("document")).expect("JSON");
    assert_eq!(joined["name"], "My name");
    assert_eq!(joined["note"], "Hale's note");
    assert_eq!(joined["stages"][0]["name"], "My field");
    // Theirs for the name, and mine (nothing) for the note.
    let mut chosen = again.clone();
    for (pointer, stands, other) in [
        ("/name", "\"My name\"", "\"Hale's name\""),
        ("/note", "\"Hale's note\"", ""),
    ] {
        for (name, text) in [("pick", "other"), ("stands", stands), ("other", other)] {
            chosen.set(&format!("{name}:{pointer}"), text);
        }
    }
    let saved = send(&app, &chosen).await;
    assert_eq!(saved.status, 303, "{}", saved.text());
    let now = app.get(&one).await.json();
    assert_eq!(now["name"], "Hale's name");
    assert_eq!(now.get("note"), None);
    assert_eq!(now["stages"][0]["name"], "My field");
    // A field that was changed by hand as well is not overwritten by its choice.
    let (mut form, mut document) = whole(&app, &path).await;
    document["name"] = json!("By hand");
    form.set("document", &document.to_string());
    for (name, text) in [
        ("pick", "other"),
        ("stands", "\"My name\""),
        ("other", "\"Hale's name\""),
    ] {
        form.set(&format!("{name}:/name"), text);
    }
    let told = send(&app, &form).await;
    assert_eq!(told.status, 422);
    assert!(
        told.text().contains("was changed in the document as well"),
        "{}",
        told.text()
    );
    assert!(
        Form::find(&told.text(), "/document")
            .get("document")
            .contains("By hand")
    );
}

/// A document that cannot be read is shown again on top of the revision it began from: the other save is still met.
#[tokio::test]
async fn a_slip_does_not_hide_the_other_save() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let path = format!("{}/document", of_pages(&one));
    let (mut theirs, mut document) = whole(&app, &path).await;
    let mut mine = theirs.clone();
    let own = mine.get("document").replace("\"name\"", "\"name\" ");
    document["note"] = json!("Hale's note");
    theirs.set("document", &document.to_string());
    hale_sends(&app, &theirs).await;
    mine.set("document", "{ \"format\": ");
    let slipped = send(&app, &mine).await;
    assert_eq!(slipped.status, 422);
    let mut again = Form::find(&slipped.text(), "/document");
    assert_eq!(again.get("expected"), "1");
    again.set("document", &own);
    let met = send(&app, &again).await;
    assert_eq!(met.status, 412);
    assert!(met.text().contains("Hale&#39;s note"), "{}", met.text());
}
