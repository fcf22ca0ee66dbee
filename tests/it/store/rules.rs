//! What an organisation adds: rows that never change, a cache that follows, a file of the version before.

use super::support::{Bench, pathway, settings};
use crate::support::documents::own_rules;
use serde_json::json;
use wheelwort::app::App;
use wheelwort::core::checks::reasons::Reason;
use wheelwort::core::documents::Pathway;
use wheelwort::core::evaluate::evaluate;
use wheelwort::pathways::{self, Expected, ReasonsDocument};
use wheelwort::rules;

const KEPT: &str = "SELECT count(*) FROM assessment WHERE rule_set = 'own-2027'";

fn version(version: &str) -> serde_json::Value {
    let mut rules = own_rules();
    rules["version"] = version.into();
    rules
}

fn own(name: &str) -> Pathway {
    let mut document = pathway(name);
    document.rule_set = "own-2027".into();
    document
}

fn one_reason() -> ReasonsDocument {
    ReasonsDocument {
        reasons: vec![Reason {
            id: "K-02".into(),
            stage: "works".into(),
            field: "inputs.gas".into(),
            text: "as the edition prints it".into(),
            who: None,
            when: None,
        }],
    }
}

#[tokio::test]
async fn versions_settings_and_reasons_are_neither_changed_nor_deleted() {
    let bench = Bench::new().await;
    rules::add_version(&bench.app, "own-2027", &version("1"))
        .await
        .expect("added");
    rules::put_settings(&bench.app, &json!({ "typical_low": 0.5 }), None)
        .await
        .expect("put");
    let saved = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    pathways::put_reasons(&bench.app, saved.id, one_reason(), Expected::Any)
        .await
        .expect("put");
    for (sql, says) in [
        ("UPDATE own_rule_set SET document = '{}'", "never changes"),
        ("DELETE FROM own_rule_set", "never deleted"),
        ("UPDATE check_settings SET document = '{}'", "never change"),
        ("DELETE FROM check_settings", "never deleted"),
        ("UPDATE reasons SET document = '{}'", "never change"),
        ("DELETE FROM reasons", "never deleted"),
    ] {
        let refused = bench.force(sql).await.expect_err(sql);
        assert!(refused.contains(says), "{sql}: {refused}");
    }
    // They are there after a restart.
    let bench = bench.restarted().await;
    let basis = rules::basis(&bench.app).await.expect("read");
    assert!(basis.book.rule_sets.contains_key("own-2027@1"));
    assert_eq!(basis.settings.typical_low, 0.5);
    let reasons = pathways::reasons(&bench.app, saved.id).await.expect("read");
    assert_eq!(reasons.reasons[0].text, "as the edition prints it");
    bench.app.close().await;
}

#[tokio::test]
async fn reasons_of_an_example_go_with_it() {
    let bench = Bench::new().await;
    let mut example = pathway("one");
    example.example = true;
    let saved = pathways::load_examples(&bench.app, vec![example.clone()])
        .await
        .expect("loaded");
    pathways::put_reasons(&bench.app, saved[0].id, one_reason(), Expected::Any)
        .await
        .expect("put");
    assert_eq!(bench.number("SELECT count(*) FROM reasons").await, 1);
    assert_eq!(
        pathways::remove_examples(&bench.app, &[example])
            .await
            .expect("removed"),
        1
    );
    assert_eq!(bench.number("SELECT count(*) FROM reasons").await, 0);
    bench.app.close().await;
}

#[tokio::test]
async fn nothing_is_kept_that_rests_on_the_version_before() {
    let bench = Bench::new().await;
    rules::add_version(&bench.app, "own-2027", &version("1"))
        .await
        .expect("added");
    let first = pathways::create(&bench.app, own("one"), None)
        .await
        .expect("saved");
    assert_eq!(bench.number(KEPT).await, 1);
    // Another program on the same file adds a version; this one still trusts what it has read within the second.
    let clock = bench.app.clock.clone();
    let other = App::open_with(&bench.file(), clock, bench.app.library, evaluate, settings())
        .await
        .expect("opens");
    rules::add_version(&other, "own-2027", &version("2"))
        .await
        .expect("added");
    assert_eq!(bench.number(KEPT).await, 0);
    let late = pathways::create(&bench.app, own("two"), None)
        .await
        .expect("saved");
    assert_eq!(
        bench.number(KEPT).await,
        0,
        "made under version 1, so it is not kept"
    );
    for id in [first.id, late.id] {
        let made = pathways::assessment(&other, id, None, None).await.expect("made");
        let made: serde_json::Value = serde_json::from_slice(&made.bytes).expect("JSON");
        assert_eq!(made["rule_set"], "own-2027@2");
    }
    assert_eq!(bench.number(KEPT).await, 2);
    other.close().await;
    bench.app.close().await;
}

#[tokio::test]
async fn a_file_of_the_version_before_is_brought_up_to_date() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    let before = pathways::assessment(&bench.app, saved.id, None, None)
        .await
        .expect("kept");
    bench
        .force(
            "DROP TABLE own_rule_set; DROP TABLE check_settings; DROP TABLE reasons; \
             ALTER TABLE assessment DROP COLUMN settings; DELETE FROM _sqlx_migrations WHERE version = 2",
        )
        .await
        .expect("as it was");
    let bench = bench.restarted().await;
    assert_eq!(
        bench
            .number("SELECT count(*) FROM assessment WHERE settings = ''")
            .await,
        1
    );
    let after = pathways::assessment(&bench.app, saved.id, None, None)
        .await
        .expect("kept");
    assert_eq!(after.bytes, before.bytes);
    rules::add_version(&bench.app, "own-2027", &version("1"))
        .await
        .expect("added");
    bench.app.close().await;
}
