//! Blends and kilometres: on a figure, on a stored pathway, under a rule set of one's own.

use crate::support::TestApp;
use crate::support::documents::{chain_with, e10, own_rules};
use crate::support::test_app::pointers;
use serde_json::{Value, json};

fn figure(percent: f64) -> Value {
    json!({ "rule_set": "eu-2018-2001", "ethanol_percent_vol": percent, "temperature_c": 20,
            "heating_values": "consignment_energy", "ethanol": { "g_co2e_per_mj": 30, "source": "a statement" } })
}

#[tokio::test]
async fn a_figure_is_blended() {
    let app = TestApp::new().await;
    let blend = app.post("/api/v1/blend", &figure(10.0)).await.json();
    // Directive (EU) 2018/2001 Annex III: 21 MJ/L of ethanol, 32 MJ/L of petrol.
    let share = 2.1 / (2.1 + 0.9 * 32.0);
    let found = blend["ethanol"]["percent_energy"].as_f64().unwrap();
    assert!((found - 100.0 * share).abs() < 1e-9, "{blend}");
    assert_eq!(blend["rule_set"], "eu-2018-2001");
    assert_eq!(blend["ethanol"]["intensity"]["source"], "a statement");
}

#[tokio::test]
async fn a_stored_pathway_is_blended_at_its_net() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let id = address.rsplit('/').next().unwrap();
    let net = async |query: &str| {
        let assessment = app.get(&format!("{address}/assessment{query}")).await.json();
        assessment["net"]["g_co2e_per_mj"].as_f64().unwrap()
    };
    let blended = async |ethanol: Value| {
        let mut body = e10(id);
        body["ethanol"] = ethanol;
        let answer = app.post("/api/v1/blend", &body).await;
        assert_eq!(answer.status, 200, "{}", answer.text());
        answer.json()["ethanol"]["intensity"]["g_co2e_per_mj"]
            .as_f64()
            .unwrap()
    };
    assert_eq!(blended(json!(id)).await, net("").await);
    let less = chain_with("/stages/0/inputs/0/amount", 60.into());
    assert_eq!(app.put(&address, &etag, &less).await.status, 200);
    assert_eq!(blended(json!(id)).await, net("").await);
    let first = blended(json!({ "id": id, "revision": 1 })).await;
    assert_eq!(first, net("?revision=1").await);
    assert!(first > blended(json!({ "id": id })).await);
}

#[tokio::test]
async fn a_kilometre_is_driven_on_it() {
    let app = TestApp::new().await;
    let (address, _) = app.stores_chain().await;
    let id = address.rsplit('/').next().unwrap();
    let body =
        json!({ "blend": e10(id), "vehicle": "A made-up car", "l_per_100_km": 6, "source": "a log book" });
    let answer = app.post("/api/v1/per-km", &body).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    let answer = answer.json();
    let of = |pointer: &str| answer.pointer(pointer).and_then(Value::as_f64).unwrap();
    let expected = 0.06 * of("/blend/g_co2e_per_l");
    assert!((of("/per_km/g_co2e_per_km") - expected).abs() < 1e-9 * expected);
    assert!(of("/per_km/saved_g_co2e_per_km") > 0.0);
}

#[tokio::test]
async fn a_rule_set_of_ones_own_serves_too() {
    let app = TestApp::new().await;
    let mut rules = own_rules();
    rules["petrol"]["value"] = json!(80);
    assert_eq!(
        app.put("/api/v1/rule-sets/own-2027", "", &rules).await.status,
        201
    );
    let mut body = figure(10.0);
    body["rule_set"] = "own-2027".into();
    let blend = app.post("/api/v1/blend", &body).await.json();
    assert_eq!(blend["petrol"]["intensity"]["g_co2e_per_mj"], 80.0, "{blend}");
}

#[tokio::test]
async fn a_wrong_question_is_refused_with_pointers() {
    let app = TestApp::new().await;
    let refused = async |path: &str, body: Value| {
        let problem = app.post(path, &body).await.refused(422);
        pointers(&problem)
            .iter()
            .map(|pointer| (*pointer).to_owned())
            .collect::<Vec<String>>()
    };
    let mut body = figure(110.0);
    assert_eq!(
        refused("/api/v1/blend", body.clone()).await,
        ["/ethanol_percent_vol"]
    );
    body["rule_set"] = "none".into();
    assert_eq!(refused("/api/v1/blend", body.clone()).await, ["/rule_set"]);
    body["rule_set"] = Value::Null;
    body["ethanol"] = json!({ "g_co2e_per_mj": "x" });
    assert_eq!(
        refused("/api/v1/blend", body.clone()).await,
        ["/rule_set", "/ethanol/g_co2e_per_mj", "/ethanol/source"]
    );
    body["ethanol"] = "x".into();
    body["colour"] = 1.into();
    assert_eq!(
        refused("/api/v1/blend", body.clone()).await,
        ["/ethanol", "/colour"]
    );
    assert_eq!(refused("/api/v1/per-km", json!({})).await, ["/blend", "/source"]);
    assert_eq!(
        refused("/api/v1/per-km", json!({ "blend": body, "source": "x" })).await,
        ["/blend/ethanol", "/blend/colour"]
    );
    let outside = json!({ "blend": figure(110.0), "source": "x" });
    assert_eq!(
        refused("/api/v1/per-km", outside).await,
        ["/blend/ethanol_percent_vol"]
    );
    let nothing = json!({ "blend": figure(10.0), "source": "x" });
    assert_eq!(refused("/api/v1/per-km", nothing).await, ["/mj_per_km"]);
    let nobody = "00000000-0000-7000-8000-000000000000";
    app.post("/api/v1/blend", &e10(nobody)).await.refused(404);
    refused("/api/v1/blend", json!([])).await;
    refused("/api/v1/per-km", json!("x")).await;
}
