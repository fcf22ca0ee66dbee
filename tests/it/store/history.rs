//! Saving, replacing, archiving: what becomes a revision, what is refused, and what memory may answer.

use super::support::{Bench, fertilised, number, pathway, read, wheat};
use serde_json::{Value, json};
use std::time::Duration;
use wheelwort::core::documents::Pathway;
use wheelwort::core::documents::pathway::Stage;
use wheelwort::pathways::{self, Expected, PathwayError, What};

#[tokio::test]
async fn a_save_is_a_revision_with_its_reason() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let first = pathways::create(app, fertilised("one", 165.0), Some("first draft".into()))
        .await
        .expect("saved");
    assert_eq!((first.revision, first.changed), (1, true));
    app.clock.advance(Duration::from_secs(60));
    let expected = Expected::Hash(first.hash.clone());
    let second = pathways::replace(
        app,
        first.id,
        fertilised("one", 170.0),
        expected,
        Some("new meter".into()),
    )
    .await;
    let second = second.expect("saved");
    assert_eq!((second.revision, second.changed, second.id), (2, true, first.id));
    assert_ne!(second.hash, first.hash);
    assert!(second.assessment.net_g_co2e_per_mj > first.assessment.net_g_co2e_per_mj);
    let history = pathways::revisions(app, first.id).await.expect("there");
    let told: Vec<_> = history
        .iter()
        .map(|line| (line.number, line.reason.as_deref()))
        .collect();
    assert_eq!(told, [(2, Some("new meter")), (1, Some("first draft"))]);
    assert_eq!(history[0].assessment.as_ref(), Some(&second.assessment));
    assert_eq!(history[1].assessment.as_ref(), Some(&first.assessment));
    assert_eq!(history[0].saved_at.to_string(), "2026-12-01T12:01:00Z");
    let old = pathways::revision(app, first.id, 1).await.expect("there");
    assert_eq!((old.hash, old.current_revision), (first.hash, 2));
    assert_eq!(
        Pathway::from_bytes(&old.document).expect("reads"),
        fertilised("one", 165.0)
    );
    bench.app.close().await;
}

#[tokio::test]
async fn the_same_document_makes_no_revision() {
    let bench = Bench::new().await;
    let first = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    bench.app.clock.advance(Duration::from_secs(60));
    let again = pathways::replace(&bench.app, first.id, pathway("one"), Expected::Number(1), None)
        .await
        .expect("ok");
    assert!(!again.changed);
    assert_eq!(
        (again.revision, again.saved_at, &again.hash),
        (1, first.saved_at, &first.hash)
    );
    assert_eq!(again.assessment, first.assessment);
    assert_eq!(bench.number("SELECT count(*) FROM revision").await, 1);
    bench.app.close().await;
}

#[tokio::test]
async fn a_stale_save_is_a_conflict() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let first = pathways::create(app, pathway("one"), None).await.expect("saved");
    let seen = Expected::Hash(first.hash.clone());
    let second = pathways::replace(app, first.id, fertilised("one", 1.0), seen.clone(), None)
        .await
        .expect("saved");
    for stale in [seen, Expected::Number(1), Expected::Number(3)] {
        let refused = pathways::replace(app, first.id, fertilised("one", 2.0), stale.clone(), None).await;
        let Err(PathwayError::Conflict { revision, hash }) = refused else {
            panic!("{refused:?}")
        };
        assert_eq!((revision, &hash), (2, &second.hash));
        assert!(matches!(
            pathways::archive(app, first.id, stale.clone()).await,
            Err(PathwayError::Conflict { .. })
        ));
        assert!(matches!(
            pathways::delete_stage(app, first.id, "car", stale, None).await,
            Err(PathwayError::Conflict { .. })
        ));
    }
    assert_eq!(bench.number("SELECT count(*) FROM revision").await, 2);
    bench.app.close().await;
}

/// Of many who saw the same revision, one saves; the others are told.
#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn of_many_who_save_at_once_one_wins() {
    let bench = Bench::new().await;
    let first = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    let jobs: Vec<_> = (0..20_u32)
        .map(|n| {
            let app = bench.app.clone();
            let document = fertilised("one", 100.0 + f64::from(n));
            tokio::spawn(async move {
                pathways::replace(&app, first.id, document, Expected::Number(1), None).await
            })
        })
        .collect();
    let mut won = Vec::new();
    for job in jobs {
        match job.await.expect("joined") {
            Ok(saved) => won.push(saved),
            Err(PathwayError::Conflict { revision, .. }) => assert_eq!(revision, 2),
            Err(other) => panic!("{other}"),
        }
    }
    let [winner] = won.as_slice() else {
        panic!("{} won", won.len())
    };
    assert_eq!(
        pathways::read(&bench.app, first.id).await.expect("there").hash,
        winner.hash
    );
    let given = pathways::assessment(&bench.app, first.id, None, None)
        .await
        .expect("given");
    assert_eq!((given.revision, &given.pathway_hash), (2, &winner.hash));
    bench.app.close().await;
}

#[tokio::test]
async fn a_document_with_problems_is_refused_whole() {
    let bench = Bench::new().await;
    let mut document = wheat("one");
    document["stages"][0]["inputs"][0]["factor"] = json!("eu-2022-996/no_such_row");
    document["stages"][1]["inputs"][0]["unit"] = json!("kg N");
    let refused = pathways::create(&bench.app, read(&document), None).await;
    let Err(PathwayError::Problems(problems)) = refused else {
        panic!("{refused:?}")
    };
    let pointers: Vec<_> = problems
        .list()
        .iter()
        .map(|problem| problem.pointer.as_str())
        .collect();
    assert!(pointers.contains(&"/stages/0/inputs/0/factor"), "{pointers:?}");
    assert!(
        pointers
            .iter()
            .any(|pointer| pointer.starts_with("/stages/1/inputs/0")),
        "{pointers:?}"
    );
    assert_eq!(bench.number("SELECT count(*) FROM pathway").await, 0);
    assert_eq!(bench.number("SELECT count(*) FROM revision").await, 0);
    let saved = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    let refused = pathways::replace(&bench.app, saved.id, read(&document), Expected::Any, None).await;
    assert!(matches!(refused, Err(PathwayError::Problems(_))));
    assert_eq!(bench.number("SELECT count(*) FROM revision").await, 1);
    // A document put together in memory is held to the rules of one that was sent.
    let mut twice = pathway("two");
    let field = twice.stages[0].clone();
    twice.stages.push(field);
    assert!(matches!(
        pathways::create(&bench.app, twice, None).await,
        Err(PathwayError::Problems(_))
    ));
    bench.app.close().await;
}

#[tokio::test]
async fn the_archive_hides_and_keeps() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let saved = pathways::create(app, pathway("one"), None).await.expect("saved");
    pathways::archive(app, saved.id, Expected::Number(1))
        .await
        .expect("archived");
    let listed = |archived| {
        let question = pathways::Question {
            archived,
            ..pathways::Question::default()
        };
        async move { pathways::list(app, &question).await.expect("listed").lines.len() }
    };
    assert_eq!((listed(false).await, listed(true).await), (0, 1));
    let stored = pathways::read(app, saved.id).await.expect("there");
    assert_eq!(
        (stored.hash.as_str(), stored.archived_at),
        (saved.hash.as_str(), Some(app.clock.now()))
    );
    let refused = pathways::replace(app, saved.id, fertilised("one", 1.0), Expected::Any, None).await;
    assert!(matches!(refused, Err(PathwayError::Archived)));
    pathways::restore(app, saved.id, Expected::Any)
        .await
        .expect("restored");
    assert_eq!((listed(false).await, listed(true).await), (1, 0));
    bench.app.close().await;
}

fn stage(value: &Value) -> Stage {
    Stage::from_value(value).expect("a stage")
}

#[tokio::test]
async fn one_stage_is_saved_as_a_revision() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let saved = pathways::create(app, pathway("one"), None).await.expect("saved");
    let mut field = wheat("one")["stages"][0].clone();
    field["inputs"][0]["amount"] = json!(120);
    let put = pathways::put_stage(app, saved.id, "field", stage(&field), Expected::Number(1), None).await;
    let put = put.expect("saved");
    assert_eq!(put.hash, {
        let same = wheelwort::core::documents::canonical::bytes(&fertilised("one", 120.0)).expect("json");
        wheelwort::core::documents::canonical::hash(&same)
    });
    let wrong = pathways::put_stage(app, saved.id, "meadow", stage(&field), Expected::Any, None).await;
    let Err(PathwayError::Problems(problems)) = wrong else {
        panic!("{wrong:?}")
    };
    assert_eq!(problems.list()[0].pointer, "/key");
    let (read_back, tag) = pathways::stage(app, saved.id, "field").await.expect("there");
    assert_eq!((read_back, tag), (stage(&field), put.hash));
    let gone = pathways::delete_stage(app, saved.id, "car", Expected::Number(2), None)
        .await
        .expect("saved");
    assert_eq!(gone.revision, 3);
    let none = pathways::delete_stage(app, saved.id, "car", Expected::Any, None).await;
    assert!(matches!(none, Err(PathwayError::NotFound(What::Stage))));
    let back = pathways::put_stage(
        app,
        saved.id,
        "car",
        stage(&wheat("one")["stages"][3]),
        Expected::Any,
        None,
    )
    .await;
    assert_eq!(back.expect("saved").hash, tag_of(&fertilised("one", 120.0)));
    bench.app.close().await;
}

fn tag_of(document: &Pathway) -> String {
    use wheelwort::core::documents::canonical;
    canonical::hash(&canonical::bytes(document).expect("json"))
}

#[tokio::test]
async fn nothing_is_found_that_is_not_ours() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let saved = pathways::create(app, pathway("one"), None).await.expect("saved");
    let theirs = app
        .store
        .add_organisation(app.clock.id(), "Others", app.clock.millis())
        .await
        .expect("added");
    let stranger = app.on_behalf_of(theirs);
    let is_missing = |error: PathwayError| matches!(error, PathwayError::NotFound(What::Pathway));
    assert!(is_missing(
        pathways::read(&stranger, saved.id).await.expect_err("hidden")
    ));
    assert!(is_missing(
        pathways::revisions(&stranger, saved.id)
            .await
            .expect_err("hidden")
    ));
    assert!(is_missing(
        pathways::assessment(&stranger, saved.id, None, None)
            .await
            .expect_err("hidden")
    ));
    assert!(is_missing(
        pathways::archive(&stranger, saved.id, Expected::Any)
            .await
            .expect_err("hidden")
    ));
    let replaced = pathways::replace(&stranger, saved.id, pathway("mine"), Expected::Any, None).await;
    assert!(is_missing(replaced.expect_err("hidden")));
    assert!(
        pathways::list(&stranger, &pathways::Question::default())
            .await
            .expect("listed")
            .lines
            .is_empty()
    );
    assert!(
        pathways::uses_of_factor(&stranger, "eu-2022-996/fert_n_an")
            .await
            .expect("found")
            .is_empty()
    );
    assert_eq!(
        pathways::uses_of_factor(app, "eu-2022-996/fert_n_an")
            .await
            .expect("found")
            .len(),
        1
    );
    for number in [0, 2, -1, i64::MAX] {
        let none = pathways::revision(app, saved.id, number).await;
        assert!(matches!(none, Err(PathwayError::NotFound(What::Revision))));
    }
    bench.app.close().await;
}

#[tokio::test]
async fn an_assessment_is_kept_and_made_again() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("one"), None)
        .await
        .expect("saved");
    let kept = pathways::assessment(&bench.app, saved.id, None, None)
        .await
        .expect("kept");
    let bench = bench.restarted().await;
    bench.force("DELETE FROM assessment").await.expect("emptied");
    let again = pathways::assessment(&bench.app, saved.id, Some(1), None)
        .await
        .expect("made");
    assert_eq!((&again.bytes, &again.hash), (&kept.bytes, &kept.hash));
    assert_eq!(bench.number("SELECT count(*) FROM assessment").await, 1);
    let others: Vec<_> = bench
        .app
        .library
        .rule_sets
        .keys()
        .filter(|id| *id != "eu-2018-2001")
        .collect();
    for rule_set in others {
        match pathways::assessment(&bench.app, saved.id, None, Some(rule_set)).await {
            Ok(other) => assert_eq!(&other.rule_set, rule_set),
            Err(PathwayError::Problems(_)) => {}
            Err(other) => panic!("{other}"),
        }
    }
    let unknown = pathways::assessment(&bench.app, saved.id, None, Some("no-such")).await;
    assert!(matches!(unknown, Err(PathwayError::Problems(_))), "{unknown:?}");
    bench.app.close().await;
}

/// Memory follows our own writes at once and those of another program within a second.
#[tokio::test]
async fn memory_does_not_outlive_the_truth() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let saved = pathways::create(app, pathway("one"), None).await.expect("saved");
    assert_eq!(
        pathways::assessment(app, saved.id, None, None)
            .await
            .expect("given")
            .revision,
        1
    );
    let other = wheelwort::app::App::open(&bench.file(), app.clock.clone(), app.library)
        .await
        .expect("opens");
    pathways::replace(
        &other,
        saved.id,
        fertilised("one", 1.0),
        Expected::Number(1),
        None,
    )
    .await
    .expect("saved");
    app.clock.advance(Duration::from_millis(1_000));
    assert_eq!(
        pathways::assessment(app, saved.id, None, None)
            .await
            .expect("given")
            .revision,
        2
    );
    pathways::replace(app, saved.id, fertilised("one", 2.0), Expected::Number(2), None)
        .await
        .expect("saved");
    assert_eq!(
        pathways::assessment(app, saved.id, None, None)
            .await
            .expect("given")
            .revision,
        3
    );
    other.close().await;
    bench.app.close().await;
}

#[tokio::test]
async fn everything_can_be_assessed_again() {
    let bench = Bench::new().await;
    let mut sum = 0.0;
    for n in 0..300_u32 {
        let saved = pathways::create(&bench.app, fertilised("one", 100.0 + f64::from(n)), None)
            .await
            .expect("saved");
        sum += saved.assessment.net_g_co2e_per_mj;
    }
    bench.force("DELETE FROM assessment").await.expect("emptied");
    let made = pathways::reassess_all(&bench.app, false).await.expect("assessed");
    assert_eq!((made.assessed, made.refused.len()), (300, 0));
    assert!((made.net_sum - sum).abs() < 1e-9 * sum.abs());
    assert_eq!(bench.number("SELECT count(*) FROM assessment").await, 0);
    pathways::reassess_all(&bench.app, true).await.expect("assessed");
    assert_eq!(bench.number("SELECT count(*) FROM assessment").await, 300);
    bench.app.close().await;
}

fn example(name: &str) -> Pathway {
    let mut document = wheat(name);
    document["example"] = json!(true);
    read(&document)
}

#[tokio::test]
async fn examples_come_and_go_whole() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let own = pathways::create(app, pathway("own"), None).await.expect("saved");
    let refused = pathways::load_examples(app, vec![example("a"), pathway("b")]).await;
    assert!(matches!(refused, Err(PathwayError::Problems(_))));
    assert_eq!(bench.number("SELECT count(*) FROM pathway").await, 1);
    let loaded = pathways::load_examples(app, vec![example("a"), example("b")])
        .await
        .expect("loaded");
    assert_eq!(loaded.len(), 2);
    assert!(
        pathways::load_examples(app, vec![example("a"), example("b")])
            .await
            .expect("loaded")
            .is_empty()
    );
    let mut changed = wheat("a");
    changed["example"] = json!(true);
    changed["stages"][0]["inputs"][0]["amount"] = json!(1);
    pathways::replace(app, loaded[0].id, read(&changed), Expected::Any, None)
        .await
        .expect("saved");
    // Taken over as one's own, an example is a record like any other.
    pathways::replace(app, loaded[1].id, pathway("b"), Expected::Any, None)
        .await
        .expect("saved");
    // A copy that somebody brought in keeps its mark and stays.
    let mut copy = wheat("copy");
    copy["example"] = json!(true);
    let copied = pathways::create(app, read(&copy), None).await.expect("saved");
    let brought = [example("a"), example("b")];
    assert_eq!(
        pathways::remove_examples(app, &brought).await.expect("removed"),
        1
    );
    assert!(pathways::read(app, copied.id).await.is_ok());
    pathways::archive(app, copied.id, Expected::Any)
        .await
        .expect("archived");
    assert!(matches!(
        pathways::assessment(app, loaded[0].id, None, None).await,
        Err(PathwayError::NotFound(_))
    ));
    for sql in [
        "revision",
        "stage",
        "intake",
        "input",
        "co_product",
        "factor_use",
        "assessment",
    ] {
        let left = match sql {
            "revision" => "SELECT count(*) FROM revision",
            "stage" => "SELECT count(DISTINCT revision_id) FROM stage",
            "intake" => "SELECT count(DISTINCT revision_id) FROM intake",
            "input" => "SELECT count(DISTINCT revision_id) FROM input",
            "co_product" => "SELECT count(DISTINCT revision_id) FROM co_product",
            "factor_use" => "SELECT count(DISTINCT revision_id) FROM factor_use",
            _ => "SELECT count(DISTINCT revision_id) FROM assessment",
        };
        // One's own, the two of the example that was taken over, and the copy.
        assert_eq!(number(&app.store, left).await, 4, "{sql}");
    }
    assert!(pathways::read(app, own.id).await.is_ok());
    bench.app.close().await;
}
