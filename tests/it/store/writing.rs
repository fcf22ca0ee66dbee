//! The writer task: jobs that share a transaction, jobs that fail, and how it stops.

use super::support::{Bench, force, number, settings};
use std::collections::BTreeSet;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use tempfile::TempDir;
use tokio::sync::Semaphore;
use wheelwort::store::{MOST_TOGETHER, Settings, Store, StoreError};

const COUNT: &str = "SELECT count(*) FROM tally";

/// What a defect of the program does inside a job.
fn defect() {
    panic!("a defect of the program");
}

async fn tally(settings: Settings) -> (Store, TempDir) {
    let folder = tempfile::tempdir().expect("a folder");
    let store = Store::open_with(&folder.path().join("t.db"), settings)
        .await
        .expect("opens");
    force(
        &store,
        "CREATE TABLE tally (n INTEGER PRIMARY KEY, tag TEXT NOT NULL) STRICT",
    )
    .await
    .expect("made");
    (store, folder)
}

async fn add(store: &Store, n: i64) -> Result<(), StoreError> {
    let job = store.write(move |c| {
        Box::pin(async move {
            let add = sqlx::query("INSERT INTO tally (n, tag) VALUES ($1, 'x')").bind(n);
            Ok(add.execute(c).await.map(drop)?)
        })
    });
    job.await
}

/// Holds the writer inside a job until told, so that what comes meanwhile must wait.
async fn hold(store: &Store) -> (Arc<Semaphore>, tokio::task::JoinHandle<Result<(), StoreError>>) {
    let (go, inside) = (Arc::new(Semaphore::new(0)), Arc::new(Semaphore::new(0)));
    let (store, gate, here) = (store.clone(), go.clone(), inside.clone());
    let held = tokio::spawn(async move {
        let job = store.write(move |_| {
            Box::pin(async move {
                here.add_permits(1);
                let _ = gate.acquire().await;
                Ok(())
            })
        });
        job.await
    });
    let _ = inside.acquire().await.expect("the job runs");
    (go, held)
}

/// Adds a row and looks, in the middle of its transaction, at what others can see: how many rows are committed. Jobs
/// that see the same number share a transaction.
async fn add_and_look(store: &Store, n: i64) -> Result<i64, StoreError> {
    let other = store.clone();
    let job = store.write(move |c| {
        Box::pin(async move {
            sqlx::query("INSERT INTO tally (n, tag) VALUES ($1, 'x')")
                .bind(n)
                .execute(c)
                .await?;
            Ok(number(&other, COUNT).await)
        })
    });
    job.await
}

#[tokio::test]
async fn jobs_that_wait_share_a_transaction() {
    let (store, _folder) = tally(settings()).await;
    let (go, held) = hold(&store).await;
    let spawn = |n| {
        let store = store.clone();
        tokio::spawn(async move { add_and_look(&store, n).await })
    };
    let waiting: Vec<_> = (0..40).map(spawn).collect();
    tokio::task::yield_now().await;
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    for job in waiting {
        assert_eq!(job.await.expect("joined").expect("kept"), 0);
    }
    assert_eq!(number(&store, COUNT).await, 40);
    store.close().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn concurrent_writers_take_fewer_commits_than_writes() {
    let (store, _folder) = tally(settings()).await;
    let spawn = |n| {
        let store = store.clone();
        tokio::spawn(async move { add_and_look(&store, n).await })
    };
    let jobs: Vec<_> = (0..512).map(spawn).collect();
    let mut transactions = BTreeSet::new();
    for job in jobs {
        transactions.insert(job.await.expect("joined").expect("kept"));
    }
    assert!(
        transactions.len() <= 128,
        "{} commits for 512 writes",
        transactions.len()
    );
    assert_eq!(number(&store, COUNT).await, 512);
    store.close().await;
}

#[tokio::test]
async fn a_bad_job_rolls_back_alone() {
    let (store, _folder) = tally(settings()).await;
    let (go, held) = hold(&store).await;
    let (a, b) = (store.clone(), store.clone());
    let first = tokio::spawn(async move { add(&a, 1).await });
    let bad = tokio::spawn(async move {
        let job = b.write(|c| {
            Box::pin(async move {
                sqlx::query("INSERT INTO tally (n, tag) VALUES (2, 'x')")
                    .execute(&mut *c)
                    .await?;
                sqlx::query("INSERT INTO tally (n, tag) VALUES (2, 'x')")
                    .execute(&mut *c)
                    .await?;
                Ok::<_, StoreError>(())
            })
        });
        job.await
    });
    let c = store.clone();
    let panics = tokio::spawn(async move {
        let job = c.write(|c| {
            Box::pin(async move {
                sqlx::query("INSERT INTO tally (n, tag) VALUES (3, 'x')")
                    .execute(&mut *c)
                    .await?;
                defect();
                Ok::<_, StoreError>(())
            })
        });
        job.await
    });
    let d = store.clone();
    let last = tokio::spawn(async move { add(&d, 4).await });
    tokio::task::yield_now().await;
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    first.await.expect("joined").expect("kept");
    last.await.expect("joined").expect("kept");
    assert!(bad.await.expect("joined").expect_err("refused").is_constraint());
    assert!(matches!(panics.await.expect("joined"), Err(StoreError::Stopped)));
    assert_eq!(number(&store, COUNT).await, 2);
    assert_eq!(number(&store, "SELECT sum(n) FROM tally").await, 5);
    store.close().await;
}

#[tokio::test]
async fn a_bad_job_alone_leaves_nothing() {
    let (store, _folder) = tally(settings()).await;
    for text in [
        "INSERT INTO tally (n, tag) VALUES (1, NULL)",
        "INSERT INTO nowhere VALUES (1)",
    ] {
        assert!(force(&store, text).await.is_err());
    }
    let panicking = store.write(|_| {
        Box::pin(async {
            defect();
            Ok::<_, StoreError>(())
        })
    });
    assert!(matches!(panicking.await, Err(StoreError::Stopped)));
    add(&store, 5).await.expect("the writer lives on");
    assert_eq!(number(&store, COUNT).await, 1);
    store.close().await;
}

#[tokio::test]
async fn a_commit_that_fails_is_told_to_all() {
    let (store, _folder) = tally(settings()).await;
    force(
        &store,
        "CREATE TABLE child (t INTEGER NOT NULL REFERENCES tally (n) DEFERRABLE INITIALLY DEFERRED)",
    )
    .await
    .expect("made");
    let (go, held) = hold(&store).await;
    let (a, b) = (store.clone(), store.clone());
    let good = tokio::spawn(async move { add(&a, 1).await });
    // A deferred foreign key is checked by COMMIT: nothing fails before.
    let orphan = tokio::spawn(async move { force(&b, "INSERT INTO child (t) VALUES (99)").await });
    tokio::task::yield_now().await;
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    assert!(good.await.expect("joined").expect_err("lost").is_constraint());
    assert!(
        orphan
            .await
            .expect("joined")
            .expect_err("lost")
            .contains("FOREIGN KEY")
    );
    add(&store, 2).await.expect("the writer lives on");
    assert_eq!(number(&store, COUNT).await, 1);
    store.close().await;
}

#[tokio::test]
async fn a_full_queue_says_busy_and_recovers() {
    let (store, _folder) = tally(Settings {
        queue: 2,
        ..settings()
    })
    .await;
    let (go, held) = hold(&store).await;
    let mut waiting = Vec::new();
    for n in 0..2 {
        let store = store.clone();
        waiting.push(tokio::spawn(async move { add(&store, n).await }));
    }
    tokio::task::yield_now().await;
    let refused = add(&store, 9).await.expect_err("full");
    assert!(matches!(refused, StoreError::Busy) && refused.is_passing());
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    for job in waiting {
        job.await.expect("joined").expect("kept");
    }
    add(&store, 9).await.expect("room again");
    store.close().await;
}

#[tokio::test]
async fn a_write_outlives_its_caller() {
    let (store, _folder) = tally(settings()).await;
    let told = Arc::new(AtomicUsize::new(0));
    let (go, held) = hold(&store).await;
    let (other, count) = (store.clone(), told.clone());
    let caller = tokio::spawn(async move {
        let job = other.write_then(
            |c| {
                Box::pin(async move {
                    sqlx::query("INSERT INTO tally (n, tag) VALUES (1, 'x')")
                        .execute(c)
                        .await?;
                    Ok::<_, StoreError>(())
                })
            },
            move |()| {
                count.fetch_add(1, Ordering::SeqCst);
            },
        );
        job.await
    });
    tokio::task::yield_now().await;
    caller.abort();
    let _ = caller.await;
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    store.close().await;
    assert_eq!(told.load(Ordering::SeqCst), 1);
    let again = Store::open(&_folder.path().join("t.db")).await.expect("opens");
    assert_eq!(number(&again, COUNT).await, 1);
    again.close().await;
}

#[tokio::test]
async fn closing_finishes_what_waits_and_takes_no_more() {
    let (store, folder) = tally(settings()).await;
    let (go, held) = hold(&store).await;
    let many = i64::try_from(MOST_TOGETHER).expect("fits") + 20;
    let waiting: Vec<_> = (0..many)
        .map(|n| {
            let store = store.clone();
            tokio::spawn(async move { add(&store, n).await })
        })
        .collect();
    tokio::task::yield_now().await;
    let closing = {
        let store = store.clone();
        tokio::spawn(async move { store.close().await })
    };
    tokio::task::yield_now().await;
    go.add_permits(1);
    held.await.expect("joined").expect("kept");
    for job in waiting {
        job.await.expect("joined").expect("kept");
    }
    closing.await.expect("closed");
    assert!(matches!(add(&store, 9_999).await, Err(StoreError::Closed)));
    assert!(matches!(store.reader().await, Err(StoreError::Closed)));
    store.close().await;
    assert!(
        !folder.path().join("t.db-wal").exists(),
        "the log is folded into the file"
    );
    let again = Store::open(&folder.path().join("t.db")).await.expect("opens");
    assert_eq!(number(&again, COUNT).await, many);
    again.close().await;
}

#[tokio::test]
async fn every_connection_has_every_pragma() {
    let bench = Bench::new().await;
    const PRAGMAS: [(&str, &str, &str); 8] = [
        ("PRAGMA journal_mode", "wal", "wal"),
        ("PRAGMA synchronous", "2", "2"),
        ("PRAGMA foreign_keys", "1", "1"),
        ("PRAGMA cache_size", "-16000", "-16000"),
        ("PRAGMA mmap_size", "268435456", "268435456"),
        ("PRAGMA temp_store", "2", "2"),
        ("PRAGMA trusted_schema", "0", "0"),
        ("PRAGMA query_only", "0", "1"),
    ];
    let mut readers = Vec::new();
    for _ in 0..settings().readers {
        readers.push(bench.app.store.reader().await.expect("a reader"));
    }
    for (pragma, writing, reading) in PRAGMAS {
        for reader in &mut readers {
            assert_eq!(said(reader, pragma).await, reading, "{pragma} of a reader");
        }
        let job = bench
            .app
            .store
            .write(move |c| Box::pin(async move { Ok::<_, StoreError>(said(c, pragma).await) }));
        assert_eq!(job.await.expect("asked"), writing, "{pragma} of the writer");
    }
    let job = bench
        .app
        .store
        .write(|c| Box::pin(async move { Ok::<_, StoreError>(said(c, "PRAGMA journal_size_limit").await) }));
    assert_eq!(job.await.expect("asked"), "67108864");
    drop(readers);
    bench.app.close().await;
}

async fn said(c: &mut wheelwort::store::Connection, pragma: &'static str) -> String {
    use sqlx::{Row, ValueRef};
    let row = sqlx::query(pragma).fetch_one(c).await.expect("says");
    let is_text = row.try_get_raw(0).expect("a value").type_info().to_string() == "TEXT";
    if is_text {
        row.get::<String, _>(0)
    } else {
        row.get::<i64, _>(0).to_string()
    }
}
