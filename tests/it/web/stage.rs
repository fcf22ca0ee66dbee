//! The recipe card, by its form alone: changing a figure, adding and taking out, looking up, refusing, meeting.

use super::form::Form;
use super::{follow, of_pages, page, send};
use crate::support::test_app::TestApp;

/// The first input with an amount of a stage, and its card.
pub(super) async fn card(app: &TestApp) -> (String, Form, String) {
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    let path = format!("{one}/stages/works");
    let form = Form::find(&page(app, &path).await, "/stages/works");
    let amount = form
        .fields
        .iter()
        .map(|(name, _)| name)
        .find(|name| name.starts_with("/inputs/") && name.ends_with("/amount"))
        .expect("an amount")
        .clone();
    (path, form, amount)
}

#[tokio::test]
async fn a_changed_figure_becomes_a_revision_that_names_the_change() {
    let app = TestApp::new().await;
    let (_, mut form, amount) = card(&app).await;
    let twice = (form.get(&amount).parse::<f64>().expect("a figure") * 2.0).to_string();
    form.set(&amount, &twice)
        .set("why", "Read again")
        .set("do", "save");
    let html = follow(&app, &form).await;
    assert!(
        html.contains("Saved as revision 2.") && html.contains(" higher than revision 1"),
        "{html}"
    );
    assert!(html.contains("rose by as much"), "{html}");
    assert!(html.contains(&format!("value=\"{twice}\"")));
}

#[tokio::test]
async fn a_card_sent_back_untouched_makes_no_revision() {
    let app = TestApp::new().await;
    let (_, mut form, _) = card(&app).await;
    form.set("do", "save");
    let html = follow(&app, &form).await;
    assert!(
        !html.contains("Saved as revision") && html.contains("<dd>1, saved"),
        "{html}"
    );
}

#[tokio::test]
async fn a_refused_card_keeps_everything_and_points_at_the_field() {
    let app = TestApp::new().await;
    let (_, mut form, amount) = card(&app).await;
    let unit = amount.replace("/amount", "/unit");
    form.set(&amount, "1,5")
        .set(&unit, "furlong")
        .set("/name", "<Works>")
        .set("do", "save");
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 422);
    let html = answer.text();
    let id = format!("f{}", amount.replace('/', "-"));
    assert!(html.contains("Everything you typed is still here."));
    assert!(
        html.contains(&format!("href=\"#{id}\"")) && html.contains(&format!("id=\"{id}-err\"")),
        "{html}"
    );
    assert!(html.contains("Write a point, such as 1.5.") && html.contains("aria-invalid=\"true\""));
    assert!(html.contains("was "), "the last good figure stays");
    let again = Form::find(&html, "/stages/works");
    assert_eq!(
        (again.get(&amount), again.get(&unit), again.get("/name")),
        ("1,5", "furlong", "<Works>")
    );
    assert_eq!(app.stored().await, 1);
}

#[tokio::test]
async fn inputs_are_added_looked_up_and_taken_out_without_script() {
    let app = TestApp::new().await;
    let (_, mut form, _) = card(&app).await;
    form.set("add-as", "factor").set("do", "add:/inputs");
    let html = send(&app, &form).await.text();
    let mut form = Form::find(&html, "/stages/works");
    let index = form
        .fields
        .iter()
        .filter(|(name, _)| name.ends_with("/label"))
        .count()
        - 1;
    let at = |name: &str| format!("/inputs/{index}/{name}");
    form.set(&at("label"), "Ammonia, for pH")
        .set(&at("amount"), "12")
        .set(&at("unit"), "t")
        .set(&at("factor"), "ammonia")
        .set("do", &format!("search:{}", at("factor")));
    let html = send(&app, &form).await.text();
    let choose = html
        .split("value=\"choose:")
        .nth(1)
        .expect("a candidate")
        .split('"')
        .next()
        .expect("its end")
        .to_owned();
    let mut form = Form::find(&html, "/stages/works");
    assert_eq!(form.get(&at("label")), "Ammonia, for pH", "kept as typed");
    form.set("do", &format!("choose:{choose}"));
    let html = send(&app, &form).await.text();
    let mut form = Form::find(&html, "/stages/works");
    assert!(
        choose.ends_with(form.get(&at("factor"))),
        "{choose}: {}",
        form.get(&at("factor"))
    );
    form.set("do", &format!("remove:/inputs/{index}"));
    let html = send(&app, &form).await.text();
    let form = Form::find(&html, "/stages/works");
    assert_eq!(form.get(&at("label")), "(no such field)");
    assert_eq!(
        app.get("/api/v1/pathways").await.json()["items"][0]["revision"],
        1,
        "nothing was saved on the way"
    );
}

#[tokio::test]
async fn two_people_meet_and_nothing_of_either_is_lost() {
    let app = TestApp::new().await;
    let (_, form, amount) = card(&app).await;
    let (mut theirs, mut mine) = (form.clone(), form);
    theirs
        .set("/output/note", "theirs")
        .set(&amount, "77")
        .set("do", "save");
    follow(&app, &theirs).await;
    mine.set("/name", "Mine").set(&amount, "88").set("do", "save");
    let answer = send(&app, &mine).await;
    assert_eq!(answer.status, 412);
    let html = answer.text();
    assert!(
        html.contains("Not saved: you saved revision 2 elsewhere while this page was open"),
        "{html}"
    );
    assert!(
        html.contains("3 fields differ.") || html.contains("2 fields differ."),
        "{html}"
    );
    let mut joined = Form::find(&html, "/stages/works");
    assert_eq!(joined.get("expected"), "2");
    assert_eq!(
        (
            joined.get("/name"),
            joined.get("/output/note"),
            joined.get(&amount)
        ),
        ("Mine", "theirs", "88")
    );
    joined.set("do", "save");
    assert!(follow(&app, &joined).await.contains("Saved as revision 3."));
}

#[tokio::test]
async fn a_stage_comes_into_the_chain_and_goes_again_without_moving_the_net() {
    let app = TestApp::new().await;
    let (path, _, _) = card(&app).await;
    let pathway = path.trim_end_matches("/stages/works").to_owned();
    let html = page(
        &app,
        &format!("{pathway}/new-stage?kind=preparation&name=Milling&after=0"),
    )
    .await;
    let mut form = Form::find(&html, "/stages/milling");
    form.set("do", "save");
    let html = follow(&app, &form).await;
    assert!(html.contains("as in revision 1."), "{html}");
    let html = follow(&app, &Form::find(&html, "/stages/milling/remove")).await;
    assert!(
        html.contains("Saved as revision 3.") && html.contains("as in revision 2."),
        "{html}"
    );
}

#[tokio::test]
async fn every_card_of_the_example_sent_back_untouched_changes_nothing() {
    let app = TestApp::new().await;
    follow(&app, &Form::find(&page(&app, "/").await, "/example/load")).await;
    let list = app.get("/api/v1/pathways?limit=200").await.json();
    let mut cards = 0;
    for line in list["items"].as_array().expect("items") {
        let id = line["id"].as_str().expect("an id");
        let document = app.get(&format!("/api/v1/pathways/{id}")).await.json();
        for stage in document["stages"].as_array().expect("stages") {
            let path = format!("/pathways/{id}/stages/{}", stage["key"].as_str().expect("a key"));
            let mut form = Form::find(&page(&app, &path).await, &path);
            form.set("do", "save");
            let answer = send(&app, &form).await;
            assert_eq!(answer.status, 303, "{path}: {}", answer.text());
            assert_eq!(answer.header("location"), path, "no revision was made");
            cards += 1;
        }
    }
    assert!(cards > 20, "{cards}");
}

#[tokio::test]
async fn a_card_is_worked_out_without_being_saved() {
    let app = TestApp::new().await;
    let (_, mut form, amount) = card(&app).await;
    let twice = (form.get(&amount).parse::<f64>().expect("a figure") * 2.0).to_string();
    form.set(&amount, &twice).set("why", "Trying").set("do", "try");
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    let html = answer.text();
    assert!(
        html.contains("Worked out, not saved: ") && html.contains(" against the revision"),
        "{html}"
    );
    let again = Form::find(&html, "/stages/works");
    assert_eq!((again.get(&amount), again.get("expected")), (twice.as_str(), "1"));
    assert!(html.contains(">Trying</textarea>"), "everything typed is kept");
    assert_eq!(app.stored().await, 1);
    form.set(&amount, "1,5");
    let answer = send(&app, &form).await;
    assert_eq!(answer.status, 422);
    assert!(
        answer.text().contains("Not worked out: one thing does not fit"),
        "{}",
        answer.text()
    );
}

#[tokio::test]
async fn a_model_shows_its_words_its_unit_and_its_workings() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let html = page(&app, &format!("{}/stages/truck", of_pages(&one))).await;
    assert!(
        html.contains(">Comes back empty</label>") && html.contains(">Energy of the empty trip</label>"),
        "{html}"
    );
    assert!(
        html.contains("aria-label=\"Unit of Distance\"") && html.contains("<summary>Workings"),
        "{html}"
    );
}
