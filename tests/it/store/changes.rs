//! What changed between two revisions, followed by keys.

use super::support::{Bench, pathway, read, wheat};
use serde_json::{Value, json};
use wheelwort::pathways::changes::{Change, Kind, between};
use wheelwort::pathways::{self, Expected};

fn changed(edit: impl FnOnce(&mut Value)) -> Vec<Change> {
    let mut document = wheat("one");
    edit(&mut document);
    between(Some(&pathway("one")), &read(&document)).expect("compared")
}

/// Pointer, stage, field and what happened.
fn short(changes: &[Change]) -> Vec<(&str, &str, &str, Kind)> {
    changes
        .iter()
        .map(|change| {
            (
                change.pointer.as_str(),
                change.stage.as_deref().unwrap_or(""),
                change.field.as_str(),
                change.what,
            )
        })
        .collect()
}

#[test]
fn a_figure_that_changed_is_named_by_its_keys() {
    let found = changed(|document| document["stages"][1]["inputs"][0]["amount"] = json!(2_900));
    assert_eq!(
        short(&found),
        [(
            "/stages/1/inputs/0/amount",
            "works",
            "inputs.gas.amount",
            Kind::Changed
        )]
    );
    assert_eq!(
        (&found[0].before, &found[0].after),
        (&Some(json!(3_000.0)), &Some(json!(2_900.0)))
    );
}

#[test]
fn what_moved_is_not_what_changed() {
    let found = changed(|document| {
        document["stages"].as_array_mut().expect("stages").reverse();
        document["stages"][3]["inputs"][2]["label"] = json!("Methane");
    });
    assert_eq!(
        short(&found),
        [
            (
                "/stages/3/inputs/2/label",
                "field",
                "inputs.methane.label",
                Kind::Changed
            ),
            ("/stages", "", "stages", Kind::Reordered)
        ]
    );
    assert_eq!(found[1].after, Some(json!(["car", "truck", "works", "field"])));
}

#[test]
fn what_came_and_went_is_told_whole() {
    let found = changed(|document| {
        let stages = document["stages"].as_array_mut().expect("stages");
        stages[0]["inputs"].as_array_mut().expect("inputs").remove(1);
        stages[0]["note"] = json!("dry year");
        stages[1]["co_products"] = json!([]);
        stages.pop();
        document["name"] = json!("two");
        document["plant_started"].take();
        document
            .as_object_mut()
            .expect("an object")
            .remove("plant_started");
    });
    assert_eq!(
        short(&found),
        [
            ("/name", "", "name", Kind::Changed),
            ("/plant_started", "", "plant_started", Kind::Removed),
            ("/stages/0/inputs/1", "field", "inputs.diesel", Kind::Removed),
            ("/stages/0/note", "field", "note", Kind::Added),
            (
                "/stages/1/co_products/0",
                "works",
                "co_products.grains",
                Kind::Removed
            ),
            ("/stages/3", "car", "", Kind::Removed),
        ]
    );
    assert_eq!(
        found[2].before.as_ref().and_then(|input| input.get("label")),
        Some(&json!("Field diesel"))
    );
    assert_eq!(found[5].after, None);
}

#[test]
fn what_changed_and_back_is_nothing() {
    assert!(changed(|_| ()).is_empty());
    // Keys with the marks of pointers do not occur, but parameters of models might have any name.
    let found = changed(|document| document["stages"][2]["inputs"][0]["model"]["a/b~c"] = json!(1));
    assert_eq!(
        short(&found),
        [(
            "/stages/2/inputs/0/model/a~1b~0c",
            "truck",
            "inputs.haul.model.a/b~c",
            Kind::Added
        )]
    );
}

#[test]
fn without_an_earlier_document_everything_is_added() {
    let found = between(None, &pathway("one")).expect("compared");
    assert!(
        found
            .iter()
            .all(|change| change.what == Kind::Added && change.before.is_none())
    );
    let stages = found
        .iter()
        .filter(|change| change.stage.is_some() && change.field.is_empty())
        .count();
    assert_eq!(stages, 4);
}

#[tokio::test]
async fn revisions_are_compared_with_the_one_before() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    let mut document = wheat("one");
    document["stages"][0]["inputs"][0]["amount"] = json!(120);
    pathways::replace(&bench.app, saved.id, read(&document), Expected::Any, None)
        .await
        .expect("saved");
    let found = pathways::changes(&bench.app, saved.id, 2)
        .await
        .expect("compared");
    assert_eq!(
        short(&found),
        [(
            "/stages/0/inputs/0/amount",
            "field",
            "inputs.n.amount",
            Kind::Changed
        )]
    );
    assert!(
        pathways::changes(&bench.app, saved.id, 1)
            .await
            .expect("compared")
            .len()
            > 4
    );
    assert!(pathways::changes(&bench.app, saved.id, 3).await.is_err());
    bench.app.close().await;
}
