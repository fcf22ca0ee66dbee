//! Rule sets of one's own: versions that never change, and evaluation under them everywhere.

use crate::support::TestApp;
use crate::support::documents::{chain, chain_with, own_rules};
use crate::support::test_app::pointers;
use serde_json::{Value, json};

const ADDRESS: &str = "/api/v1/rule-sets/own-2027";

fn version(version: &str, comparator: f64) -> Value {
    let mut rules = own_rules();
    rules["version"] = version.into();
    rules["comparator"]["value"] = comparator.into();
    rules
}

async fn adds(app: &TestApp, rules: &Value) {
    let answer = app.put(ADDRESS, "", rules).await;
    assert_eq!(answer.status, 201, "{}", answer.text());
}

fn own_chain() -> Value {
    chain_with("/rule_set", "own-2027".into())
}

#[tokio::test]
async fn versions_are_added_and_read_back() {
    let app = TestApp::new().await;
    app.get(ADDRESS).await.refused(404);
    let added = app.put(ADDRESS, "", &own_rules()).await;
    assert_eq!(added.status, 201, "{}", added.text());
    assert_eq!(added.header("location"), "/api/v1/rule-sets/own-2027%401");
    let read = app.get(ADDRESS).await;
    assert_eq!(read.header("etag"), added.header("etag"));
    assert_eq!(read.json()["comparator"]["value"], 90.0);
    // What is read can be sent again; it changes nothing.
    let again = app.put(ADDRESS, "", &read.json()).await;
    assert_eq!(
        (again.status.as_u16(), again.json()["added"].as_bool()),
        (200, Some(false))
    );
    let other = app.put(ADDRESS, "", &version("1", 91.0)).await.refused(409);
    assert!(other["detail"].as_str().unwrap().contains("never changes"));
    adds(&app, &version("2", 91.0)).await;
    assert_eq!(app.get(ADDRESS).await.json()["version"], "2");
    let first = app.get(added.header("location")).await;
    assert_eq!(
        (first.bytes, first.headers["etag"].clone()),
        (read.bytes, read.headers["etag"].clone())
    );
    let seen = app.ask("GET", ADDRESS, &[("if-none-match", "\"x\"")], "").await;
    assert_eq!(seen.status, 200);

    let versions = app.get(&format!("{ADDRESS}/versions")).await.json();
    let names: Vec<&str> = versions["items"]
        .as_array()
        .unwrap()
        .iter()
        .map(|v| v["version"].as_str().unwrap())
        .collect();
    assert_eq!(names, ["2", "1"]);
    let page = app.get(&format!("{ADDRESS}/versions?limit=1")).await.json();
    assert_eq!(page["next"], "2");
    let rest = app
        .get(&format!("{ADDRESS}/versions?limit=1&after=2"))
        .await
        .json();
    assert_eq!(
        (rest["items"][0]["version"].as_str(), rest["next"].is_null()),
        (Some("1"), true)
    );
    app.get(&format!("{ADDRESS}/versions?after=9")).await.refused(400);
    app.get("/api/v1/rule-sets/none/versions").await.refused(404);
    let built_in = app.get("/api/v1/rule-sets/eu-2018-2001/versions").await.json();
    assert!(built_in["items"][0]["saved_at"].is_null());

    let list = app.get("/api/v1/rule-sets?limit=200").await.json();
    let own: Vec<&Value> = list["items"]
        .as_array()
        .unwrap()
        .iter()
        .filter(|line| line["built_in"] == false)
        .collect();
    assert_eq!(
        (own.len(), own[0]["id"].as_str(), own[0]["version"].as_str()),
        (1, Some("own-2027"), Some("2"))
    );
}

#[tokio::test]
async fn what_does_not_hold_is_refused_with_pointers() {
    let app = TestApp::new().await;
    let refused = async |path: &str, rules: &Value| {
        let problem = app.put(path, "", rules).await.refused(422);
        pointers(&problem)
            .iter()
            .map(|pointer| (*pointer).to_owned())
            .collect::<Vec<String>>()
    };
    assert_eq!(refused("/api/v1/rule-sets/other", &own_rules()).await, ["/id"]);
    let mut built_in = own_rules();
    built_in["id"] = "eu-2018-2001".into();
    assert_eq!(
        refused("/api/v1/rule-sets/eu-2018-2001", &built_in).await,
        ["/id"]
    );
    assert_eq!(refused(ADDRESS, &version("a b", 90.0)).await, ["/version"]);
    assert_eq!(
        refused(ADDRESS, &version("1", 900.0)).await,
        ["/comparator/value"]
    );
    let mut odd = own_rules();
    odd["colour"] = 1.into();
    odd["gwp_set"] = "ar9".into();
    let found = refused(ADDRESS, &odd).await;
    assert!(
        found.contains(&"/colour".to_owned()) && found.contains(&"/gwp_set".to_owned()),
        "{found:?}"
    );
    assert!(!refused(ADDRESS, &json!([])).await.is_empty());
    app.get(ADDRESS).await.refused(404);
    app.ask("DELETE", ADDRESS, &[], "").await.refused(405);
}

#[tokio::test]
async fn evaluation_under_it_works_everywhere() {
    let app = TestApp::new().await;
    app.post("/api/v1/pathways", &own_chain()).await.refused(422);
    adds(&app, &own_rules()).await;
    let evaluated = app.post("/api/v1/evaluate", &own_chain()).await;
    assert_eq!(evaluated.status, 200, "{}", evaluated.text());
    let evaluated = evaluated.json();
    // The assessment names the version, so that it can be made again after the next one.
    assert_eq!(evaluated["rule_set"], "own-2027@1");
    assert_eq!(evaluated["comparator_g_co2e_per_mj"], 90.0);
    let asked = app
        .post("/api/v1/evaluate?rule_set=own-2027@1", &chain())
        .await
        .json();
    assert_eq!(asked["net"], evaluated["net"]);
    let lines = app
        .ask(
            "POST",
            "/api/v1/evaluate/batch?rule_set=own-2027",
            &[("content-type", "application/x-ndjson")],
            chain().to_string(),
        )
        .await;
    assert!(lines.text().contains("\"own-2027@1\""), "{}", lines.text());

    let (address, _) = app.stores(&own_chain()).await;
    let assessment = app.get(&format!("{address}/assessment")).await.json();
    assert_eq!(assessment["net"], evaluated["net"]);
    let id = address.rsplit('/').next().unwrap();
    let body = json!({ "pathways": [id, chain()] });
    let comparison = app.post("/api/v1/compare", &body).await;
    assert_eq!(comparison.status, 200, "{}", comparison.text());
    let list = app.get("/api/v1/pathways?rule_set=own-2027").await.json();
    assert_eq!(list["items"][0]["assessment"]["rule_set"], "own-2027");
    assert_eq!(
        list["items"][0]["assessment"]["saving_percent"],
        assessment["saving_percent"]
    );
    let page = app
        .ask("GET", &format!("/pathways/{id}"), &[("accept", "text/html")], "")
        .await;
    assert_eq!(page.status, 200, "{}", page.text());
}

#[tokio::test]
async fn the_next_version_counts_and_the_one_before_can_be_named() {
    let app = TestApp::new().await;
    adds(&app, &version("1", 90.0)).await;
    let (address, _) = app.stores(&own_chain()).await;
    let (pinned, _) = app.stores(&chain_with("/rule_set", "own-2027@1".into())).await;
    let comparator = async |address: &str| {
        let assessment = app.get(&format!("{address}/assessment")).await.json();
        assessment["comparator_g_co2e_per_mj"].as_f64().unwrap()
    };
    let saving = async || {
        let list = app.get("/api/v1/pathways?rule_set=own-2027").await.json();
        list["items"][0]["assessment"]["saving_percent"].as_f64().unwrap()
    };
    let before = saving().await;
    assert_eq!(comparator(&address).await, 90.0);
    let old = app.get(&format!("{address}/assessment")).await;
    adds(&app, &version("2", 95.0)).await;
    assert_eq!(comparator(&address).await, 95.0);
    assert_eq!(comparator(&pinned).await, 90.0);
    assert!(
        saving().await > before,
        "the list shows what was made under the new version"
    );
    // The old assessment can be made again, byte for byte.
    let again = app
        .get(&format!("{address}/assessment?rule_set=own-2027@1"))
        .await;
    assert_eq!(again.bytes, old.bytes);
    app.get(&format!("{address}/assessment?rule_set=own-2027@9"))
        .await
        .refused(400);
}

#[tokio::test]
async fn another_organisation_has_its_own() {
    let app = TestApp::new().await;
    adds(&app, &own_rules()).await;
    let id = app.app.clock.id();
    let stranger = app.app.store.add_organisation(id, "Another", 0).await.unwrap();
    let stranger = app.app.on_behalf_of(stranger);
    let basis = wheelwort::rules::basis(&stranger).await.unwrap();
    assert!(!basis.book.rule_sets.contains_key("own-2027"));
    let basis = wheelwort::rules::basis(&app.app).await.unwrap();
    assert!(basis.book.rule_sets.contains_key("own-2027@1"));
}

#[tokio::test]
async fn toml_says_the_same_as_json() {
    let app = TestApp::new().await;
    let rules =
        wheelwort::core::documents::rule_set::from_value(&own_rules(), wheelwort::library::book()).unwrap();
    let text = wheelwort::core::documents::rule_set::toml_of(&rules).unwrap();
    let toml = [("content-type", "application/toml")];
    let added = app.ask("PUT", ADDRESS, &toml, text.clone()).await;
    assert_eq!(added.status, 201, "{}", added.text());
    // The same as JSON is the same version: one canonical form.
    let again = app.put(ADDRESS, "", &own_rules()).await;
    assert_eq!(
        (again.status.as_u16(), again.header("etag")),
        (200, added.header("etag"))
    );
    let read = app.get(ADDRESS).await.json();
    assert_eq!(read["limits"]["soil_carbon_cap"]["value"], 25.0);
    let broken = app.ask("PUT", ADDRESS, &toml, "id = = 3").await.refused(400);
    assert!(broken["detail"].as_str().unwrap().contains("Line 1"), "{broken}");
    let wrong = text.replace("ethanol_water", "ethanol_wine");
    let problem = app.ask("PUT", ADDRESS, &toml, wrong).await.refused(422);
    assert!(pointers(&problem).contains(&"/ethanol_wine"), "{problem}");
    let other = [("content-type", "text/plain")];
    let refused = app.ask("PUT", ADDRESS, &other, text).await.refused(415);
    assert!(refused["detail"].as_str().unwrap().contains("application/toml"));
}
