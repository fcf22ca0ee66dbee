//! Stored pathways: stored, listed, read, replaced, archived; conditional requests; history.

use crate::support::TestApp;
use crate::support::documents::{chain, chain_with};
use serde_json::{Value, json};

#[tokio::test]
async fn a_pathway_is_stored_and_read_back() {
    let app = TestApp::new().await;
    let answer = app.post("/api/v1/pathways?reason=first%20try", &chain()).await;
    assert_eq!(answer.status, 201);
    let saved = answer.json();
    let address = format!("/api/v1/pathways/{}", saved["id"].as_str().unwrap());
    assert_eq!(answer.header("location"), address);
    assert_eq!(saved["revision"], 1);
    assert!(saved["assessment"]["net_g_co2e_per_mj"].as_f64().unwrap() > 0.0);
    let read = app.get(&address).await;
    assert_eq!(read.status, 200);
    assert_eq!(read.header("etag"), answer.header("etag"));
    assert_eq!(read.header("wheelwort-revision"), "1");
    let hash = wheelwort::core::documents::canonical::hash(&read.bytes);
    assert_eq!(
        read.header("etag"),
        format!("\"{}\"", hash.trim_start_matches("sha256:"))
    );
    assert_eq!(
        read.json()["stages"][0]["inputs"][0]["amount"].as_f64(),
        Some(120.0)
    );
    let history = app.get(&format!("{address}/revisions")).await.json();
    assert_eq!(history["items"][0]["reason"], "first try");
}

#[tokio::test]
async fn what_a_reader_has_is_not_sent_again() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    for path in [
        address.clone(),
        format!("{address}/assessment"),
        format!("{address}/revisions/1"),
        format!("{address}/stages/field"),
        "/api/v1/openapi.json".into(),
    ] {
        let first = app.get(&path).await;
        assert_eq!(first.status, 200, "{path}");
        let tag = first.header("etag").to_owned();
        let again = app.ask("GET", &path, &[("if-none-match", &tag)], "").await;
        assert_eq!((again.status.as_u16(), again.bytes.len()), (304, 0), "{path}");
        assert_eq!(again.header("etag"), tag);
        let other = app.ask("GET", &path, &[("if-none-match", "\"other\"")], "").await;
        assert_eq!(
            (other.status.as_u16(), &other.bytes),
            (200, &first.bytes),
            "{path}"
        );
    }
    assert_eq!(app.get(&address).await.header("etag"), etag);
}

#[tokio::test]
async fn a_write_follows_what_was_read() {
    let app = TestApp::new().await;
    let (address, first) = app.stores_chain().await;
    let second = chain_with("/stages/0/inputs/0/amount", 110.into());

    let without = app
        .ask(
            "PUT",
            &address,
            &[("content-type", "application/json")],
            second.to_string(),
        )
        .await;
    without.refused(428);
    assert_eq!(without.header("etag"), first);
    app.put(&address, "\"0000\"", &second).await.refused(412);
    app.put(&address, "0000", &second).await.refused(400);

    let saved = app.put(&format!("{address}?reason=less"), &first, &second).await;
    assert_eq!(saved.status, 200);
    assert_eq!(
        (
            saved.json()["revision"].as_i64(),
            saved.json()["changed"].as_bool()
        ),
        (Some(2), Some(true))
    );
    let etag = saved.header("etag").to_owned();
    assert_ne!(etag, first);

    let stale = app
        .put(&address, &first, &chain_with("/name", "Mine".into()))
        .await;
    stale.refused(412);
    assert_eq!(stale.header("etag"), etag);
    assert_eq!(app.get(&address).await.header("etag"), etag);

    let again = app.put(&address, &etag, &second).await;
    assert_eq!(again.json()["changed"], false);
    let any = app.put(&address, "*", &chain()).await;
    assert_eq!(any.json()["revision"], 3);
    let several = app.put(&address, &format!("\"0000\", {first}"), &second).await;
    assert_eq!(several.json()["revision"], 4);
}

#[tokio::test]
async fn history_keeps_every_revision_and_says_what_changed() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let first = app.get(&address).await;
    app.put(
        &address,
        &etag,
        &chain_with("/stages/0/inputs/0/amount", 110.into()),
    )
    .await;

    let history = app.get(&format!("{address}/revisions")).await.json();
    let numbers: Vec<i64> = history["items"]
        .as_array()
        .unwrap()
        .iter()
        .map(|r| r["number"].as_i64().unwrap())
        .collect();
    assert_eq!(numbers, [2, 1]);
    let page = app.get(&format!("{address}/revisions?limit=1")).await;
    assert!(
        page.header("link").contains("limit=1&after=2"),
        "{}",
        page.header("link")
    );
    let rest = app.get(&format!("{address}/revisions?limit=1&after=2")).await;
    assert_eq!(
        (rest.json()["items"][0]["number"].as_i64(), rest.header("link")),
        (Some(1), "")
    );

    assert_eq!(
        app.get(&format!("{address}/revisions/1")).await.bytes,
        first.bytes
    );
    let changes = app.get(&format!("{address}/revisions/2/changes")).await.json();
    assert_eq!(changes["since"], 1);
    let [change] = &changes["changes"].as_array().unwrap()[..] else {
        panic!("{changes}")
    };
    assert_eq!(change["pointer"], "/stages/0/inputs/0/amount");
    assert_eq!(
        (change["before"].as_f64(), change["after"].as_f64()),
        (Some(120.0), Some(110.0))
    );
    assert!(app.get(&format!("{address}/revisions/1/changes")).await.json()["since"].is_null());
    for missing in ["3", "0", "-1", "x", "99999999999999999999"] {
        app.get(&format!("{address}/revisions/{missing}"))
            .await
            .refused(404);
        app.get(&format!("{address}/revisions/{missing}/changes"))
            .await
            .refused(404);
    }
}

#[tokio::test]
async fn an_archived_pathway_is_hidden_and_can_still_be_read() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    app.ask("DELETE", &address, &[], "").await.refused(428);
    app.ask("DELETE", &address, &[("if-match", "\"00\"")], "")
        .await
        .refused(412);
    let gone = app.ask("DELETE", &address, &[("if-match", &etag)], "").await;
    assert_eq!((gone.status.as_u16(), gone.bytes.len()), (204, 0));
    let items = |answer: Value| answer["items"].as_array().unwrap().len();
    assert_eq!(items(app.get("/api/v1/pathways").await.json()), 0);
    assert_eq!(items(app.get("/api/v1/pathways?archived=true").await.json()), 1);
    assert_eq!(app.get(&address).await.header("etag"), etag);
    app.put(&address, &etag, &chain_with("/name", "New".into()))
        .await
        .refused(409);
}

#[tokio::test]
async fn an_assessment_is_the_same_bytes_every_time() {
    let app = TestApp::new().await;
    let (address, etag) = app.stores_chain().await;
    let first = app.get(&format!("{address}/assessment")).await;
    let assessment = first.json();
    assert_eq!(assessment["format"], "wheelwort.assessment/1");
    assert_eq!(
        assessment["pathway_hash"],
        format!("sha256:{}", etag.trim_matches('"'))
    );
    for path in [
        "",
        "?revision=1",
        "?rule_set=eu-2018-2001",
        "?rule_set=eu-2018-2001&revision=1",
    ] {
        let again = app.get(&format!("{address}/assessment{path}")).await;
        assert_eq!(
            (again.bytes == first.bytes, again.header("etag")),
            (true, first.header("etag")),
            "{path}"
        );
    }
    let evaluated = app.post("/api/v1/evaluate", &chain()).await;
    assert_eq!(evaluated.bytes, first.bytes);
    app.put(
        &address,
        &etag,
        &chain_with("/stages/0/inputs/0/amount", 110.into()),
    )
    .await;
    let moved = app.get(&format!("{address}/assessment")).await;
    assert_ne!(moved.header("etag"), first.header("etag"));
    assert_eq!(
        app.get(&format!("{address}/assessment?revision=1")).await.bytes,
        first.bytes
    );
    app.get(&format!("{address}/assessment?revision=9"))
        .await
        .refused(404);
}

#[tokio::test]
async fn a_list_is_filtered_sorted_and_read_page_by_page() {
    let app = TestApp::new().await;
    for (number, name) in ["Cedar", "Alder", "Birch", "Elm", "Dogwood"].iter().enumerate() {
        let mut document = chain_with("/name", (*name).into());
        document["stages"][0]["inputs"][0]["amount"] = json!(100 + number);
        app.stores(&document).await;
    }
    let names = |answer: &Value| -> Vec<String> {
        answer["items"]
            .as_array()
            .unwrap()
            .iter()
            .map(|line| line["name"].as_str().unwrap().to_owned())
            .collect()
    };
    let by_name = app.get("/api/v1/pathways?sort=name").await.json();
    assert_eq!(names(&by_name), ["Alder", "Birch", "Cedar", "Dogwood", "Elm"]);
    assert_eq!(
        names(&app.get("/api/v1/pathways?sort=net").await.json())[0],
        "Cedar"
    );
    assert_eq!(
        names(&app.get("/api/v1/pathways?name=ALD").await.json()),
        ["Alder"]
    );
    assert_eq!(
        names(&app.get("/api/v1/pathways?feedstock=rye").await.json()).len(),
        0
    );
    assert_eq!(
        names(
            &app.get("/api/v1/pathways?rule_set=eu-2018-2001&example=false")
                .await
                .json()
        )
        .len(),
        5
    );

    let (mut seen, mut path, mut turns) = (Vec::new(), "/api/v1/pathways?sort=name&limit=2".to_owned(), 0);
    loop {
        let page = app.get(&path).await;
        seen.extend(names(&page.json()));
        turns += 1;
        match page
            .header("link")
            .strip_prefix('<')
            .and_then(|link| link.strip_suffix(">; rel=\"next\""))
        {
            Some(next) => path = next.to_owned(),
            None => break,
        }
    }
    assert_eq!((seen, turns), (names(&by_name), 3));
}

#[tokio::test]
async fn what_is_not_there_is_404() {
    let app = TestApp::new().await;
    for id in ["00000000-0000-7000-8000-000000000000", "x", "%3Cb%3E"] {
        let address = format!("/api/v1/pathways/{id}");
        for rest in [
            "",
            "/revisions",
            "/revisions/1",
            "/revisions/1/changes",
            "/assessment",
            "/stages/field",
        ] {
            app.get(&format!("{address}{rest}")).await.refused(404);
        }
        app.put(&address, "*", &chain()).await.refused(404);
        app.put(&address, "\"00\"", &chain()).await.refused(404);
        app.ask("DELETE", &address, &[("if-match", "*")], "")
            .await
            .refused(404);
        app.ask("DELETE", &address, &[], "").await.refused(404);
    }
    app.get("/api/v1/pathways/%ff").await.refused(400);
}
