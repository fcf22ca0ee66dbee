//! Comparison of stored pathways and documents.

use crate::support::TestApp;
use crate::support::documents::{chain, chain_with};
use crate::support::test_app::pointers;
use serde_json::json;

#[tokio::test]
async fn ids_revisions_and_documents_are_compared() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let id = address.rsplit('/').next().unwrap();
    app.put(
        &address,
        &etag,
        &chain_with("/stages/0/inputs/0/amount", 140.into()),
    )
    .await;
    let other = chain_with("/period/to", "2027-07-31".into());
    let body = json!({ "pathways": [id, { "id": id, "revision": 1 }, other] });
    let answer = app.post("/api/v1/compare", &body).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    let comparison = answer.json();
    assert_eq!(comparison["format"], "wheelwort.comparison/1");
    let difference = |index: usize| {
        comparison["pathways"][index]["difference_g_co2e_per_mj"]
            .as_f64()
            .unwrap()
    };
    assert!(
        difference(0) == 0.0 && difference(1) < 0.0,
        "less fertiliser, less gas"
    );
    assert!(
        (difference(1) - difference(2)).abs() < 1e-12,
        "the period changes no figure"
    );
    assert_eq!(comparison["pathways"][1]["largest"]["kind"], "cultivation");
    let points = comparison["pathways"][1]["saving_difference_points"]
        .as_f64()
        .unwrap();
    assert!(points > 0.0);
    let settings: Vec<&str> = comparison["unlike"]
        .as_array()
        .unwrap()
        .iter()
        .map(|unlike| unlike["setting"].as_str().unwrap())
        .collect();
    assert_eq!(settings, ["period"]);
    assert_eq!(app.stored().await, 1);
}

#[tokio::test]
async fn a_wrong_question_is_refused_with_pointers() {
    let app = TestApp::new().await;
    let ask =
        async |body: serde_json::Value, status: u16| app.post("/api/v1/compare", &body).await.refused(status);
    let one = ask(json!({ "pathways": [chain()] }), 422).await;
    assert_eq!(pointers(&one), ["/pathways"]);
    let seven = ask(json!({ "pathways": vec![chain(); 7] }), 422).await;
    assert_eq!(pointers(&seven), ["/pathways"]);
    ask(json!([]), 422).await;
    ask(json!({}), 422).await;
    let odd = ask(
        json!({ "pathways": ["x", 7, { "id": "y", "revision": 0, "z": 1 }, {}], "colour": 1 }),
        422,
    )
    .await;
    for pointer in [
        "/pathways/0",
        "/pathways/1",
        "/pathways/2/id",
        "/pathways/2/revision",
        "/pathways/2/z",
        "/pathways/3/id",
        "/colour",
    ] {
        assert!(pointers(&odd).contains(&pointer), "{pointer}: {odd}");
    }
    let shape = ask(
        json!({ "pathways": [chain(), chain_with("/colour", 1.into())] }),
        422,
    )
    .await;
    assert_eq!(pointers(&shape), ["/pathways/1/colour"]);
    let unit = ask(
        json!({ "pathways": [chain(), chain_with("/stages/0/inputs/0/unit", "kg".into())] }),
        422,
    )
    .await;
    assert_eq!(pointers(&unit), ["/pathways/1/stages/0/inputs/0/unit"]);
    let nobody = "00000000-0000-7000-8000-000000000000";
    ask(json!({ "pathways": [nobody, chain()] }), 404).await;
}

#[tokio::test]
async fn figures_of_unlike_gases_or_heating_values_are_not_compared() {
    let app = TestApp::new().await;
    let other = chain_with("/rule_set", "inventory-ar6".into());
    let question = json!({ "pathways": [chain(), other] });
    let refused = app.post("/api/v1/compare", &question).await.refused(422);
    assert_eq!(pointers(&refused), ["/pathways/1"]);
    let text = refused.to_string();
    assert!(
        text.contains("gases weigh differently") && text.contains("heating value"),
        "{text}"
    );
    let mut under_one = question;
    under_one["rule_set"] = json!("inventory-ar6");
    assert_eq!(app.post("/api/v1/compare", &under_one).await.status, 200);
}
