//! Published data as documents.

use crate::support::TestApp;
use crate::support::documents::chain;
use wheelwort::library;

#[tokio::test]
async fn every_list_is_whole_when_read_page_by_page() {
    let app = TestApp::new().await;
    let book = library::book();
    let factors: usize = book.editions.values().map(|edition| edition.factors.len()).sum();
    for (path, count) in [
        ("/api/v1/editions", book.editions.len()),
        ("/api/v1/factors", factors),
        (
            "/api/v1/editions/eu-2022-996/factors",
            book.editions["eu-2022-996"].factors.len(),
        ),
        ("/api/v1/materials", book.materials.len()),
        ("/api/v1/rule-sets", book.rule_sets.len()),
        ("/api/v1/models", wheelwort::core::models::ALL.len()),
    ] {
        for limit in [37, 200] {
            let (mut seen, mut next) = (Vec::new(), format!("{path}?limit={limit}"));
            loop {
                let answer = app.get(&next).await;
                assert_eq!(answer.status, 200, "{next}");
                for item in answer.json()["items"].as_array().unwrap() {
                    let id = item.get("id").or_else(|| item.get("kind")).unwrap();
                    seen.push(id.as_str().unwrap().to_owned());
                }
                match answer
                    .header("link")
                    .strip_prefix('<')
                    .and_then(|link| link.strip_suffix(">; rel=\"next\""))
                {
                    Some(link) => next = link.to_owned(),
                    None => break,
                }
            }
            assert_eq!(seen.len(), count, "{path}");
            assert!(
                seen.is_sorted() && seen.windows(2).all(|pair| pair[0] != pair[1]),
                "{path}"
            );
        }
    }
}

#[tokio::test]
async fn each_thing_has_an_address() {
    let app = TestApp::new().await;
    let book = library::book();
    for id in book.editions.keys() {
        assert_eq!(app.get(&format!("/api/v1/editions/{id}")).await.json()["id"], *id);
    }
    for id in book.materials.keys() {
        assert_eq!(
            app.get(&format!("/api/v1/materials/{id}")).await.json()["id"],
            *id
        );
    }
    for id in book.rule_sets.keys() {
        let rules = app.get(&format!("/api/v1/rule-sets/{id}")).await.json();
        assert_eq!(
            (rules["id"].as_str(), rules["gas_weights"]["n2o"].is_number()),
            (Some(id.as_str()), true)
        );
    }
    for factor in book
        .editions
        .values()
        .flat_map(|edition| edition.factors.values())
    {
        let answer = app.get(&format!("/api/v1/factors/{}", factor.id)).await.json();
        assert_eq!(
            (answer["id"].as_str(), answer["row"].as_str()),
            (Some(factor.id.as_str()), Some(factor.row()))
        );
        assert_eq!(
            answer["citation"]["source"].as_str(),
            Some(factor.citation.source.as_str())
        );
    }
    for missing in [
        "editions/none",
        "editions/none/factors",
        "factors/none/none",
        "factors/eu-2022-996/none",
        "factors/eu-2018-2001/cereal_ng_chp",
        "factors/none/none/uses",
        "materials/none",
        "rule-sets/none",
        "models/haul",
    ] {
        app.get(&format!("/api/v1/{missing}")).await.refused(404);
    }
}

#[tokio::test]
async fn factors_are_found_by_words_and_group() {
    let app = TestApp::new().await;
    let found = app.get("/api/v1/factors?search=ammonium+nitrate").await.json();
    let ids: Vec<&str> = found["items"]
        .as_array()
        .unwrap()
        .iter()
        .map(|f| f["id"].as_str().unwrap())
        .collect();
    assert!(ids.contains(&"eu-2022-996/fert_n_an"), "{ids:?}");
    let edition = app.get("/api/v1/editions/eu-2022-996").await.json();
    for group in edition["groups"].as_array().unwrap() {
        let name = group["group"]
            .as_str()
            .unwrap()
            .replace(' ', "+")
            .replace('&', "%26");
        let found = app
            .get(&format!(
                "/api/v1/editions/eu-2022-996/factors?limit=200&group={name}"
            ))
            .await
            .json();
        assert_eq!(
            found["items"].as_array().unwrap().len() as u64,
            group["factors"].as_u64().unwrap().min(200),
            "{name}"
        );
    }
}

#[tokio::test]
async fn a_row_knows_who_uses_it() {
    let app = TestApp::new().await;
    let uses = "/api/v1/factors/eu-2022-996/fert_n_an/uses";
    assert_eq!(app.get(uses).await.json()["items"].as_array().unwrap().len(), 0);
    for _ in 0..3 {
        app.stores_chain().await;
    }
    let page = app.get(&format!("{uses}?limit=2")).await;
    let first = &page.json()["items"][0];
    assert_eq!(first["pointer"], "/stages/0/inputs/0/factor");
    assert_eq!(first["pathway_name"], chain()["name"]);
    assert!(
        page.header("link").ends_with("limit=2&after=2>; rel=\"next\""),
        "{}",
        page.header("link")
    );
    assert_eq!(
        app.get(&format!("{uses}?limit=2&after=2")).await.json()["items"]
            .as_array()
            .unwrap()
            .len(),
        1
    );
}
