//! Evidence of the demonstration comes and goes with it.

use super::{count, kept_files};
use crate::support::TestApp;
use wheelwort::demo;
use wheelwort::evidence::verify;

#[tokio::test]
async fn the_demonstration_brings_its_evidence_and_takes_it_away() {
    let app = TestApp::new().await;
    super::attach(&app, &[("file", Some("own.txt"), b"own")]).await;
    demo::load(&app.app).await.expect("loaded");
    let all = demo::evidence().len() + 1;
    assert_eq!((count(&app).await, kept_files(&app).len()), (all, all));
    assert_eq!(verify(&app.app).await.expect("looks"), []);
    let record = app.get("/api/v1/evidence/EV-2026-201").await.json();
    assert_eq!(record["example"], true);
    assert!(!record["uses"].as_array().unwrap().is_empty());
    let file = app.get("/api/v1/evidence/EV-2026-201/file").await;
    assert!(file.text().starts_with("Invented for demonstration"));
    // Once more brings nothing new.
    demo::load(&app.app).await.expect("loaded");
    assert_eq!(count(&app).await, all);
    demo::remove(&app.app).await.expect("removed");
    assert_eq!((count(&app).await, kept_files(&app).len()), (1, 1));
    assert_eq!(verify(&app.app).await.expect("looks"), []);
}

#[tokio::test]
async fn what_a_copy_still_names_stays() {
    let app = TestApp::new().await;
    demo::load(&app.app).await.expect("loaded");
    let (_, text) = demo::PATHWAYS
        .iter()
        .find(|(name, _)| name.starts_with('d'))
        .expect("there");
    let mut copy: serde_json::Value = serde_json::from_str(text).expect("JSON");
    copy["name"] = "A copy of one's own".into();
    app.stores(&copy).await;
    demo::remove(&app.app).await.expect("removed");
    let named = wheelwort::core::documents::Pathway::from_value(&copy).expect("reads");
    let named: std::collections::BTreeSet<String> = wheelwort::pathways::rows::Rows::of(&named)
        .evidence
        .into_iter()
        .map(|place| place.evidence)
        .collect();
    assert_eq!(
        (count(&app).await, kept_files(&app).len()),
        (named.len(), named.len())
    );
    assert_eq!(verify(&app.app).await.expect("looks"), []);
}
