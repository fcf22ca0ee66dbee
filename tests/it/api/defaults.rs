//! Defaults beside actuals of a stored pathway.

use crate::support::TestApp;
use crate::support::documents::own_rules;

#[tokio::test]
async fn defaults_stand_beside_the_own_figures() {
    let app = TestApp::new().await;
    let (address, _) = app.stores_chain().await;
    let answer = app.get(&format!("{address}/defaults")).await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    assert_eq!(answer.header("wheelwort-revision"), "1");
    let table = answer.json();
    assert_eq!(table["format"], "wheelwort.defaults/1");
    assert!(!table["rows"].as_array().unwrap().is_empty());
    let assessment = app.get(&format!("{address}/assessment")).await.json();
    assert_eq!(table["pathway_hash"], assessment["pathway_hash"]);
    let actual = table["combinations"].as_array().unwrap();
    let actual = actual.iter().find(|one| one["route"] == "all_actual").unwrap();
    assert_eq!(actual["net_g_co2e_per_mj"], assessment["net"]["g_co2e_per_mj"]);
    app.get(&format!("{address}/defaults?rule_set=none"))
        .await
        .refused(400);
    app.get("/api/v1/pathways/x/defaults").await.refused(404);
}

#[tokio::test]
async fn a_rule_set_of_ones_own_has_them_too() {
    let app = TestApp::new().await;
    let (address, _) = app.stores_chain().await;
    app.put("/api/v1/rule-sets/own-2027", "", &own_rules()).await;
    let table = app
        .get(&format!("{address}/defaults?rule_set=own-2027"))
        .await
        .json();
    assert_eq!(table["comparator_g_co2e_per_mj"], 90.0, "{table}");
}
