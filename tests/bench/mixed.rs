//! What a line of the audit trail costs a write, and readers and writers at once; both against the database's own library
//! used plainly, in turn within one run.

use serde_json::json;
use sqlx::SqlitePool;
use sqlx::sqlite::{SqliteConnectOptions, SqliteJournalMode, SqlitePoolOptions, SqliteSynchronous};
use std::path::Path;
use std::time::{Duration, Instant};
use tokio::task::JoinSet;
use wheelwort::app::App;
use wheelwort::audit_trail::{self, Deed};
use wheelwort::clock::Clock;
use wheelwort::library::book;
use wheelwort::store::StoreError;

const TABLE: &str = "CREATE TABLE IF NOT EXISTS reading (id INTEGER PRIMARY KEY, a TEXT, b REAL, c REAL)";
const INSERT: &str = "INSERT INTO reading (a, b, c) VALUES ($1, $2, $3)";
const SELECT: &str = "SELECT a, b, c FROM reading WHERE id = $1";
const STRETCH: Duration = Duration::from_millis(1_500);
const ROUNDS: usize = 3;
const WRITERS: u64 = 32;
const READERS: u64 = 32;

fn say(name: &str, mut rates: Vec<f64>) {
    rates.sort_by(f64::total_cmp);
    let (least, median, most) = (rates[0], rates[rates.len() / 2], rates[rates.len() - 1]);
    println!(
        "{}",
        json!({ "name": name, "median": median, "least": least, "most": most })
    );
}

async fn ours(file: &Path) -> App {
    let app = App::open(file, Clock::system(), book()).await.expect("a store");
    let made: Result<(), StoreError> = app
        .store
        .write(|c| Box::pin(async move { Ok(sqlx::query(TABLE).execute(c).await.map(drop)?) }))
        .await;
    made.expect("a table");
    app
}

/// The library as it comes: a pool, each write a transaction of its own, at the same durability.
async fn plain(file: &Path) -> SqlitePool {
    let options = SqliteConnectOptions::new()
        .filename(file)
        .create_if_missing(true)
        .journal_mode(SqliteJournalMode::Wal)
        .synchronous(SqliteSynchronous::Full)
        .busy_timeout(Duration::from_secs(30));
    let pool = SqlitePoolOptions::new()
        .max_connections(5)
        .acquire_timeout(Duration::from_secs(60))
        .connect_with(options)
        .await
        .expect("a pool");
    sqlx::query(TABLE).execute(&pool).await.expect("a table");
    pool
}

/// Runs so many tasks for a stretch; what they did, a second.
async fn stretch<F, W>(count: u64, task: F) -> f64
where
    F: Fn(u64) -> W,
    W: Future<Output = ()> + Send + 'static,
    F: Clone + Send + 'static,
{
    let start = Instant::now();
    let mut tasks = JoinSet::new();
    for worker in 0..count {
        let task = task.clone();
        tasks.spawn(async move {
            let mut done = 0_u32;
            while start.elapsed() < STRETCH {
                Box::pin(task(worker + u64::from(done) * count)).await;
                done += 1;
            }
            done
        });
    }
    let mut done = 0.0;
    while let Some(one) = tasks.join_next().await {
        done += f64::from(one.expect("a task"));
    }
    done / start.elapsed().as_secs_f64()
}

async fn written(app: App, with_trail: bool) {
    let (organisation, who, now) = (app.organisation, app.who.clone(), app.clock.millis());
    let written: Result<(), StoreError> = app
        .store
        .write(move |c| {
            Box::pin(async move {
                let insert = sqlx::query(INSERT).bind("a line").bind(1.5).bind(2.5);
                insert.execute(&mut *c).await?;
                if with_trail {
                    let what = json!({ "name": "Autumn wheat", "revision": 3, "net_g_co2e_per_mj": 31.05 });
                    let deed = Deed::new("saved", "pathway", "0197d3c8-5b9e-7cc1-9f5e-2a3b4c5d6e7f", what);
                    audit_trail::add(c, organisation, &who, now, deed).await?;
                }
                Ok(())
            })
        })
        .await;
    written.expect("written");
}

/// Durable writes with and without a line of the trail.
async fn trail(app: &App) {
    let (mut without, mut with) = (Vec::new(), Vec::new());
    for _ in 0..ROUNDS {
        for (rates, with_trail) in [(&mut without, false), (&mut with, true)] {
            let app = app.clone();
            rates.push(stretch(WRITERS, move |_| written(app.clone(), with_trail)).await);
        }
    }
    say("writes_without_trail_per_second", without);
    say("writes_with_trail_per_second", with);
}

/// Readers and writers at once.
async fn mixed(app: &App, pool: &SqlitePool) {
    let mut rates = [const { Vec::new() }; 4];
    for _ in 0..ROUNDS {
        let (one, other) = (app.clone(), app.clone());
        let (reads, writes) = tokio::join!(
            stretch(READERS, move |number| {
                let app = one.clone();
                async move {
                    let mut reader = app.store.reader().await.expect("a reader");
                    let id = i64::try_from(number % 1_000).expect("small");
                    let read = sqlx::query(SELECT).bind(id).fetch_optional(&mut *reader).await;
                    std::hint::black_box(read.expect("read"));
                }
            }),
            stretch(WRITERS, move |_| written(other.clone(), false)),
        );
        rates[0].push(reads);
        rates[1].push(writes);
        let (one, other) = (pool.clone(), pool.clone());
        let (reads, writes) = tokio::join!(
            stretch(READERS, move |number| {
                let pool = one.clone();
                async move {
                    let id = i64::try_from(number % 1_000).expect("small");
                    let read = sqlx::query(SELECT).bind(id).fetch_optional(&pool).await;
                    std::hint::black_box(read.expect("read"));
                }
            }),
            stretch(WRITERS, move |_| {
                let pool = other.clone();
                async move {
                    let insert = sqlx::query(INSERT).bind("a line").bind(1.5).bind(2.5);
                    insert.execute(&pool).await.expect("written");
                }
            }),
        );
        rates[2].push(reads);
        rates[3].push(writes);
    }
    let names = [
        "mixed_reads",
        "mixed_writes",
        "plain_mixed_reads",
        "plain_mixed_writes",
    ];
    for (name, rates) in names.into_iter().zip(rates) {
        say(&format!("{name}_per_second"), rates);
    }
}

/// All of it.
pub async fn measure() {
    let folder = tempfile::tempdir().expect("a folder");
    let app = ours(&folder.path().join("ours.sqlite")).await;
    let pool = plain(&folder.path().join("plain.sqlite")).await;
    trail(&app).await;
    mixed(&app, &pool).await;
    pool.close().await;
    app.close().await;
}
