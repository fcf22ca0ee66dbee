//! Full disk, a file that cannot be written, a lock, a broken file, data of a newer program: a clear message, no half
//! write, no crash.

use super::support::{Bench, chain, fertilised, force, number, pathway, settings};
use std::path::Path;
use wheelwort::app::App;
use wheelwort::pathways::{self, Expected, PathwayError};
use wheelwort::store::{Store, StoreError};

/// How many rows each table holds.
const ROWS: [&str; 9] = [
    "SELECT count(*) FROM pathway",
    "SELECT count(*) FROM revision",
    "SELECT count(*) FROM stage",
    "SELECT count(*) FROM intake",
    "SELECT count(*) FROM input",
    "SELECT count(*) FROM co_product",
    "SELECT count(*) FROM factor_use",
    "SELECT count(*) FROM assessment",
    "SELECT count(*) FROM audit_line",
];

async fn rows(app: &App) -> Vec<i64> {
    let mut counts = Vec::new();
    for sql in ROWS {
        counts.push(number(&app.store, sql).await);
    }
    counts
}

/// Lets the file grow by so many pages and no more.
async fn let_grow(store: &Store, spare: i64) {
    let job = store.write(move |c| {
        Box::pin(async move {
            let used: i64 = sqlx::query_scalar("PRAGMA page_count").fetch_one(&mut *c).await?;
            let set = format!("PRAGMA max_page_count = {}", used + spare);
            sqlx::query(sqlx::AssertSqlSafe(set)).execute(c).await?;
            Ok::<_, StoreError>(())
        })
    });
    job.await.expect("set");
}

/// A save may need any number of pages; whichever page is the first that is refused, all of it is stored or nothing.
#[tokio::test]
async fn a_full_disk_at_any_page_stores_all_or_nothing() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let first = pathways::create(app, pathway("first"), None)
        .await
        .expect("saved");
    let mut refused = [0, 0];
    for (turn, failures) in refused.iter_mut().enumerate() {
        for spare in 0.. {
            let before = rows(app).await;
            let_grow(&app.store, spare).await;
            let outcome = if turn == 0 {
                pathways::create(app, pathway("second"), None).await
            } else {
                let document = fertilised("first", 170.0);
                pathways::replace(app, first.id, document, Expected::Number(1), None).await
            };
            match outcome {
                Err(PathwayError::Store(StoreError::Full(_))) => *failures += 1,
                Err(other) => panic!("{}", chain(&other)),
                Ok(saved) => {
                    assert_eq!(saved.revision, if turn == 0 { 1 } else { 2 });
                    break;
                }
            }
            assert_eq!(rows(app).await, before, "{spare} spare pages");
            assert_eq!(pathways::read(app, first.id).await.expect("there").revision, 1);
            assert!(spare < 200, "never succeeds");
        }
    }
    assert!(
        refused.iter().all(|failures| *failures >= 2),
        "failing pages: {refused:?}"
    );
    assert_eq!(
        number(
            &app.store,
            "SELECT count(*) FROM pragma_integrity_check WHERE integrity_check = 'ok'"
        )
        .await,
        1
    );
    assert!(pathways::rows_differ(app).await.expect("compared").is_empty());
    bench.app.close().await;
}

/// SQLite may answer a full disk by rolling the whole transaction back; the jobs beside it must hear of it.
#[tokio::test]
async fn a_full_disk_leaves_nobody_with_a_false_answer() {
    let bench = Bench::new().await;
    let store = &bench.app.store;
    force(
        store,
        "CREATE TABLE blot (n INTEGER PRIMARY KEY, ink BLOB NOT NULL) STRICT",
    )
    .await
    .expect("made");
    let_grow(store, 3).await;
    let jobs: Vec<_> = (0..40_i64)
        .map(|n| {
            let store = store.clone();
            tokio::spawn(async move {
                let job = store.write(move |c| {
                    Box::pin(async move {
                        let add =
                            sqlx::query("INSERT INTO blot (n, ink) VALUES ($1, zeroblob(1000))").bind(n);
                        Ok::<_, StoreError>(add.execute(c).await.map(drop)?)
                    })
                });
                (n, job.await)
            })
        })
        .collect();
    let (mut kept, mut lost) = (Vec::new(), 0);
    for job in jobs {
        match job.await.expect("joined") {
            (n, Ok(())) => kept.push(n),
            (_, Err(StoreError::Full(_) | StoreError::Lost(_))) => lost += 1,
            (_, Err(other)) => panic!("{}", chain(&other)),
        }
    }
    let mut reader = store.reader().await.expect("a reader");
    let there = sqlx::query_scalar::<_, i64>("SELECT n FROM blot ORDER BY n")
        .fetch_all(&mut *reader)
        .await;
    assert_eq!(there.expect("read"), kept);
    drop(reader);
    assert!(lost > 0);
    bench.app.close().await;
}

#[tokio::test]
async fn a_store_that_cannot_be_written_says_so_and_still_reads() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let saved = pathways::create(app, pathway("first"), None)
        .await
        .expect("saved");
    force(&app.store, "PRAGMA query_only = ON").await.expect("set");
    let refused = pathways::create(app, pathway("second"), None)
        .await
        .expect_err("refused");
    assert!(
        matches!(refused, PathwayError::Store(StoreError::ReadOnly(_))),
        "{}",
        chain(&refused)
    );
    assert_eq!(
        pathways::read(app, saved.id).await.expect("there").hash,
        saved.hash
    );
    // An assessment that cannot be kept is given all the same.
    let other = pathways::assessment(app, saved.id, None, Some("eu-2018-2001"))
        .await
        .expect("given");
    assert_eq!(other.hash, saved.assessment.assessment_hash);
    bench.app.close().await;
}

#[tokio::test]
async fn a_lock_of_another_program_is_told_and_passes() {
    let bench = Bench::new().await;
    let other =
        sqlx::SqlitePool::connect_with(sqlx::sqlite::SqliteConnectOptions::new().filename(bench.file()))
            .await
            .expect("opens");
    let mut holder = other.acquire().await.expect("a connection");
    sqlx::query("BEGIN IMMEDIATE")
        .execute(&mut *holder)
        .await
        .expect("held");
    let refused = pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect_err("locked");
    let PathwayError::Store(error) = &refused else {
        panic!("{}", chain(&refused))
    };
    assert!(matches!(error, StoreError::Locked(_)) && error.is_passing());
    sqlx::query("ROLLBACK")
        .execute(&mut *holder)
        .await
        .expect("let go");
    pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    drop(holder);
    other.close().await;
    bench.app.close().await;
}

#[tokio::test]
async fn what_is_no_database_is_not_opened_and_not_touched() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("data.db");
    let text = "This is a letter, not a database. ".repeat(200);
    std::fs::write(&file, &text).expect("written");
    let error = refusal(&file).await;
    assert!(matches!(error, StoreError::Corrupt(_)), "{}", chain(&error));
    assert_eq!(std::fs::read_to_string(&file).expect("read"), text);
    let error = refusal(&folder.path().join("no folder").join("data.db")).await;
    assert!(matches!(error, StoreError::Unopenable(_)), "{}", chain(&error));
}

#[tokio::test]
async fn a_broken_page_is_an_error_and_no_crash() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    bench.app.close().await;
    let mut bytes = std::fs::read(bench.file()).expect("read");
    for byte in &mut bytes[8_192..] {
        *byte = 0x5a;
    }
    std::fs::write(bench.file(), bytes).expect("written");
    let error = match App::open(&bench.file(), bench.app.clock.clone(), wheelwort::library::book()).await {
        Err(error) => error,
        Ok(app) => {
            let error = pathways::read(&app, saved.id).await.expect_err("broken");
            app.close().await;
            match error {
                PathwayError::Store(error) => error,
                other => panic!("{}", chain(&other)),
            }
        }
    };
    assert!(matches!(error, StoreError::Corrupt(_)), "{}", chain(&error));
}

#[tokio::test]
async fn data_of_a_newer_program_are_left_alone() {
    let bench = Bench::new().await;
    const NEWER: &str = "INSERT INTO _sqlx_migrations (version, description, success, checksum, execution_time) \
                         VALUES (9999, 'later', 1, x'00', 0)";
    bench.force(NEWER).await.expect("written");
    bench.app.close().await;
    assert!(matches!(refusal(&bench.file()).await, StoreError::Newer(_)));
}

#[tokio::test]
async fn people_are_told_no_sql() {
    let bench = Bench::new().await;
    let error: Result<(), StoreError> = bench
        .app
        .store
        .write(|c| {
            Box::pin(async move {
                Ok(sqlx::query("SELECT secret FROM nowhere")
                    .execute(c)
                    .await
                    .map(drop)?)
            })
        })
        .await;
    let error = error.expect_err("refused");
    assert!(!error.to_string().contains("nowhere") && !error.to_string().to_lowercase().contains("sql"));
    assert!(
        chain(&error).contains("nowhere"),
        "the log must tell: {}",
        chain(&error)
    );
    bench.app.close().await;
}

async fn refusal(file: &Path) -> StoreError {
    match Store::open_with(file, settings()).await {
        Err(error) => error,
        Ok(_) => panic!("opened"),
    }
}
