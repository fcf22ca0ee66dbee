//! Pathways and the evidence they name: it must be there before they are stored, and knows what it backs.

use crate::support::documents::{chain, chain_with};
use crate::support::test_app::pointers;
use crate::support::{TestApp, attach_text};
use serde_json::{Value, json};
use std::collections::BTreeMap;
use wheelwort::core::documents::Pathway;
use wheelwort::pathways::rows::Rows;

/// The chain with evidence at its inputs, and at an amount inside a model.
fn backed(ids: [&str; 3]) -> Value {
    let mut document = chain();
    document["stages"][0]["inputs"][0]["evidence"] = json!([ids[0], ids[1]]);
    document["stages"][2]["inputs"][0]["model"]["distance"]["evidence"] = json!([ids[2]]);
    document
}

#[tokio::test]
async fn a_stored_pathway_names_only_what_is_there() {
    let app = TestApp::new().await;
    attach_text(&app.app, Some("EV-1"), "a.txt", "a")
        .await
        .expect("attached");
    let document = backed(["EV-1", "EV-2", "EV-3"]);
    // Working it out without storing asks for none.
    assert_eq!(app.post("/api/v1/evaluate", &document).await.status, 200);
    let refused = app.post("/api/v1/pathways", &document).await.refused(422);
    assert_eq!(
        pointers(&refused),
        [
            "/stages/0/inputs/0/evidence/1",
            "/stages/2/inputs/0/model/distance/evidence/0"
        ]
    );
    let error = &refused["errors"][0];
    assert_eq!(error["detail"], "There is no evidence \"EV-2\" here.");
    assert!(
        error["remedy"]
            .as_str()
            .unwrap()
            .starts_with("Attach the file first")
    );
    assert_eq!(app.stored().await, 0);
    // With whatever else is wrong, at once.
    let mut worse = document.clone();
    worse["stages"][1]["inputs"][0]["unit"] = "t km".into();
    let refused = app.post("/api/v1/pathways", &worse).await.refused(422);
    assert!(
        pointers(&refused).contains(&"/stages/1/inputs/0/unit"),
        "{refused}"
    );
    assert!(
        pointers(&refused).contains(&"/stages/0/inputs/0/evidence/1"),
        "{refused}"
    );
    for id in ["EV-2", "EV-3"] {
        attach_text(&app.app, Some(id), "b.txt", id)
            .await
            .expect("attached");
    }
    assert_eq!(app.post("/api/v1/pathways", &document).await.status, 201);
}

/// Every list called `evidence` in a document, by pointer.
fn lists(at: &str, value: &Value, found: &mut BTreeMap<String, String>) {
    match value {
        Value::Object(fields) => {
            for (name, value) in fields {
                let at = format!("{at}/{name}");
                if let (Value::Array(ids), "evidence") = (value, name.as_str()) {
                    for (index, id) in ids.iter().enumerate() {
                        found.insert(format!("{at}/{index}"), id.as_str().expect("an id").to_owned());
                    }
                } else {
                    lists(&at, value, found);
                }
            }
        }
        Value::Array(items) => {
            for (index, item) in items.iter().enumerate() {
                lists(&format!("{at}/{index}"), item, found);
            }
        }
        _ => {}
    }
}

/// Whatever learns to carry evidence later must be looked for, too.
#[test]
fn every_list_of_evidence_in_a_document_is_found() {
    let mut document = backed(["EV-1", "EV-2", "EV-3"]);
    document["audits"] = json!([
        { "scope": "actual_values", "passed_on": "2026-05-04", "evidence": ["EV-4"] },
        { "scope": "actual_values", "stage": "works", "passed_on": "2026-05-04", "evidence": ["EV-5", "EV-6"] },
    ]);
    document["stages"][1]["meters"] = json!([{ "id": "M-1", "unit": "TJ", "evidence": ["EV-7"] }]);
    let demo = wheelwort::demo::PATHWAYS
        .iter()
        .map(|(_, text)| serde_json::from_str(text).expect("JSON"));
    for document in std::iter::once(document).chain(demo) {
        let mut expected = BTreeMap::new();
        lists("", &document, &mut expected);
        let pathway = Pathway::from_value(&document).unwrap_or_else(|error| panic!("{error:?}"));
        let found: BTreeMap<String, String> = Rows::of(&pathway)
            .evidence
            .into_iter()
            .map(|place| (place.pointer, place.evidence))
            .collect();
        assert_eq!(found, expected);
    }
}

#[tokio::test]
async fn a_save_and_a_stage_are_held_to_it_too() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let named = chain_with("/stages/0/inputs/0/evidence", json!(["EV-9"]));
    let refused = app.put(&address, &etag, &named).await.refused(422);
    assert_eq!(pointers(&refused), ["/stages/0/inputs/0/evidence/0"]);
    let stage = format!("{address}/stages/field");
    let refused = app.put(&stage, &etag, &named["stages"][0]).await.refused(422);
    assert_eq!(pointers(&refused).len(), 1);
    attach_text(&app.app, Some("EV-9"), "b.txt", "b")
        .await
        .expect("attached");
    assert_eq!(app.put(&address, &etag, &named).await.status, 200);
}

#[tokio::test]
async fn evidence_knows_what_it_backs() {
    let app = TestApp::new().await;
    let document = backed(["EV-1", "EV-2", "EV-1"]);
    let (address, etag) = app.stores(&document).await;
    let id = address.rsplit('/').next().unwrap();
    let record = app.get("/api/v1/evidence/EV-1").await.json();
    assert_eq!(record["pathways"], 1);
    let places: Vec<(&str, &str, bool)> = record["uses"]
        .as_array()
        .unwrap()
        .iter()
        .map(|one| {
            assert_eq!((&one["pathway"], &one["revision"]), (&id.into(), &1.into()));
            let text = |name: &str| one[name].as_str().unwrap();
            (text("stage"), text("input"), one["current"].as_bool().unwrap())
        })
        .collect();
    assert_eq!(places, [("field", "n", true), ("truck", "haul", true)]);
    // Taken out again, the older revision still names it.
    assert_eq!(app.put(&address, &etag, &chain()).await.status, 200);
    let record = app.get("/api/v1/evidence/EV-1").await.json();
    assert_eq!(
        (&record["pathways"], &record["uses"][0]["current"]),
        (&0.into(), &false.into())
    );
    assert_eq!(record["uses"][0]["input_label"], "Ammonium nitrate");
    assert!(
        wheelwort::pathways::rows_differ(&app.app)
            .await
            .expect("compares")
            .is_empty()
    );
}
