//! Measures the engine and the store; prints medians of repeated stretches as one JSON object a line.
//!
//! `cargo bench --bench measures -- WORD ...` with `engine FILE10 FILE60 FILE1000`, `store FILE60 COUNT`, `mixed` or
//! `static BYTES`. `tests/bench/run` calls it, sets the figures of one run against each other and prints ratios.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::disallowed_methods,
    reason = "a measurement fails by panicking"
)]

mod mixed;

use serde_json::json;
use sqlx::Connection;
use sqlx::sqlite::{SqliteConnectOptions, SqliteConnection, SqliteJournalMode, SqliteSynchronous};
use std::hint::black_box;
use std::sync::Arc;
use std::time::{Duration, Instant};
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::core::documents::Pathway;
use wheelwort::core::engine::{assess, demand::demand, resolve, totals};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::library::book;
use wheelwort::pathways;
use wheelwort::store::StoreError;

fn main() {
    // cargo adds `--bench`; what is left are our words.
    let words: Vec<String> = std::env::args()
        .skip(1)
        .filter(|word| word != "--bench")
        .collect();
    match words.iter().map(String::as_str).collect::<Vec<_>>()[..] {
        ["engine", ten, sixty, thousand] => engine(ten, sixty, thousand),
        ["store", sixty, count] => tokio(store(sixty, count.parse().expect("a count"))),
        ["mixed"] => tokio(mixed::measure()),
        ["static", bytes] => tokio(static_handler(bytes.parse().expect("a size"))),
        _ => println!(
            "{}",
            json!({ "usage": "engine FILE10 FILE60 FILE1000 | store FILE60 COUNT | mixed | static BYTES" })
        ),
    }
}

fn tokio(work: impl Future<Output = ()>) {
    let runtime = ::tokio::runtime::Builder::new_multi_thread()
        .enable_all()
        .build()
        .expect("a runtime");
    runtime.block_on(work);
}

/// Runs per second: the median of seven stretches of at least 0.15 s, with the least and the most.
fn rate(mut run: impl FnMut()) -> (f64, f64, f64) {
    run();
    let mut rates: Vec<f64> = (0..7)
        .map(|_| {
            let (start, mut runs) = (Instant::now(), 0u32);
            while start.elapsed() < Duration::from_millis(150) {
                run();
                runs += 1;
            }
            f64::from(runs) / start.elapsed().as_secs_f64()
        })
        .collect();
    rates.sort_by(f64::total_cmp);
    (rates[3], rates[0], rates[6])
}

fn say(name: &str, (median, least, most): (f64, f64, f64)) {
    println!(
        "{}",
        json!({ "name": name, "median": median, "least": least, "most": most })
    );
}

fn engine(ten: &str, sixty: &str, thousand: &str) {
    for (label, file) in [("10", ten), ("60", sixty), ("1000", thousand)] {
        let bytes = std::fs::read(file).expect("a document");
        let pathway = Pathway::from_bytes(&bytes).expect("a pathway");
        let resolved = resolve(&pathway, None, book(), false).expect("a plan");
        say(
            &format!("net_{label}"),
            rate(|| {
                black_box(totals(&resolved, &demand(black_box(&resolved))));
            }),
        );
        say(
            &format!("resolved_{label}"),
            rate(|| {
                black_box(
                    assess(black_box(&resolved), false)
                        .expect("an assessment")
                        .assessment,
                );
            }),
        );
        for (what, without_workings) in [("json", true), ("json_with_workings", false)] {
            let options = Options {
                without_workings,
                ..Options::default()
            };
            say(
                &format!("{what}_{label}"),
                rate(|| {
                    let pathway = Pathway::from_bytes(black_box(&bytes)).expect("a pathway");
                    let assessment = evaluate(&pathway, book(), options).expect("an assessment");
                    black_box(serde_json::to_vec(&assessment).expect("json"));
                }),
            );
        }
    }
}

async fn store(file: &str, count: usize) {
    let folder = tempfile::tempdir().expect("a folder");
    let app = App::open(&folder.path().join("data.sqlite"), Clock::system(), book())
        .await
        .expect("a store");
    let pathway = Pathway::from_bytes(&std::fs::read(file).expect("a document")).expect("a pathway");
    let shared = Arc::new((app.clone(), pathway));
    let start = Instant::now();
    let mut tasks = ::tokio::task::JoinSet::new();
    for worker in 0..64usize {
        let shared = shared.clone();
        tasks.spawn(async move {
            for number in (worker..count).step_by(64) {
                let mut pathway = shared.1.clone();
                pathway.name = format!("Measurement {number}");
                pathways::create(&shared.0, pathway, None).await.expect("saved");
            }
        });
    }
    while tasks.join_next().await.is_some() {}
    println!(
        "{}",
        json!({ "name": "pathways_saved_per_second", "median": count as f64 / start.elapsed().as_secs_f64() })
    );
    let start = Instant::now();
    let all = pathways::reassess_all(&app, false).await.expect("assessed");
    assert_eq!(all.assessed, count);
    println!(
        "{}",
        json!({ "name": "reassess_all_seconds", "median": start.elapsed().as_secs_f64(), "count": count })
    );
    rows(&folder.path().join("data.sqlite")).await;
    one_read(&app, &shared.1).await;
    writes(&folder.path().join("writes.sqlite")).await;
    app.store.close().await;
}

/// Reading everything as rows: the way that a plan without documents would have to go.
async fn rows(file: &std::path::Path) {
    let options = SqliteConnectOptions::new().filename(file).read_only(true);
    let mut connection = SqliteConnection::connect_with(&options).await.expect("a reader");
    let start = Instant::now();
    let mut read = 0;
    for sql in [
        "SELECT revision_id, key, kind, name, material, amount, unit FROM stage ORDER BY revision_id, position",
        "SELECT revision_id, stage_key, source, product, amount, unit FROM intake ORDER BY revision_id, stage_key, position",
        "SELECT revision_id, stage_key, key, label, factors, amount, unit, origin FROM input ORDER BY revision_id, stage_key, position",
        "SELECT revision_id, stage_key, key, name, role, material, amount, unit FROM co_product ORDER BY revision_id, stage_key, position",
    ] {
        read += sqlx::query(sql)
            .fetch_all(&mut connection)
            .await
            .expect("rows")
            .len();
    }
    println!(
        "{}",
        json!({ "name": "read_as_rows_seconds", "median": start.elapsed().as_secs_f64(), "count": read })
    );
}

/// One stored document read through sqlx, against evaluating it.
async fn one_read(app: &App, pathway: &Pathway) {
    let saved = pathways::create(app, pathway.clone(), None).await.expect("saved");
    let mut times = Vec::new();
    for _ in 0..400 {
        let start = Instant::now();
        black_box(pathways::read(app, saved.id).await.expect("read"));
        times.push(start.elapsed().as_secs_f64());
    }
    times.sort_by(f64::total_cmp);
    println!(
        "{}",
        json!({ "name": "read_one_document_seconds", "median": times[200] })
    );
    let resolved = resolve(pathway, None, book(), false).expect("a plan");
    let (per_second, ..) = rate(|| {
        black_box(totals(&resolved, &demand(black_box(&resolved))));
    });
    println!(
        "{}",
        json!({ "name": "net_of_one_plan_seconds", "median": 1.0 / per_second })
    );
}

const INSERT: &str = "INSERT INTO line (a, b, c) VALUES ($1, $2, $3)";
const TABLE: &str = "CREATE TABLE IF NOT EXISTS line (id INTEGER PRIMARY KEY, a TEXT, b REAL, c REAL)";

/// Durable inserts: one transaction each with the database's own library, against the grouped writer.
async fn writes(file: &std::path::Path) {
    let options = SqliteConnectOptions::new()
        .filename(file)
        .create_if_missing(true)
        .journal_mode(SqliteJournalMode::Wal)
        .synchronous(SqliteSynchronous::Full);
    let mut connection = SqliteConnection::connect_with(&options).await.expect("a file");
    sqlx::query(TABLE)
        .execute(&mut connection)
        .await
        .expect("a table");
    let start = Instant::now();
    let mut single = 0u32;
    while start.elapsed() < Duration::from_secs(3) {
        let insert = sqlx::query(INSERT).bind("a line").bind(1.5).bind(2.5);
        insert.execute(&mut connection).await.expect("inserted");
        single += 1;
    }
    let alone = f64::from(single) / start.elapsed().as_secs_f64();
    connection.close().await.expect("closed");
    let app = App::open(&file.with_file_name("grouped.sqlite"), Clock::system(), book())
        .await
        .expect("a store");
    let made: Result<(), StoreError> = app
        .store
        .write(|connection| {
            Box::pin(async move {
                sqlx::query(TABLE).execute(connection).await?;
                Ok(())
            })
        })
        .await;
    made.expect("a table");
    let start = Instant::now();
    let mut tasks = ::tokio::task::JoinSet::new();
    for _ in 0..64 {
        let app = app.clone();
        tasks.spawn(async move {
            let mut done = 0u32;
            while start.elapsed() < Duration::from_secs(3) {
                let written: Result<(), StoreError> = app
                    .store
                    .write(|connection| {
                        Box::pin(async move {
                            sqlx::query(INSERT)
                                .bind("a line")
                                .bind(1.5)
                                .bind(2.5)
                                .execute(connection)
                                .await?;
                            Ok(())
                        })
                    })
                    .await;
                written.expect("written");
                done += 1;
            }
            done
        });
    }
    let mut grouped = 0u32;
    while let Some(done) = tasks.join_next().await {
        grouped += done.expect("a task");
    }
    let together = f64::from(grouped) / start.elapsed().as_secs_f64();
    println!(
        "{}",
        json!({ "name": "single_writes_per_second", "median": alone })
    );
    println!(
        "{}",
        json!({ "name": "grouped_writes_per_second", "median": together })
    );
    app.store.close().await;
}

/// A bare handler that answers the same bytes: what the rates of the program are measured against.
async fn static_handler(bytes: usize) {
    let body = axum::body::Bytes::from("x".repeat(bytes));
    let router = axum::Router::new().route("/", axum::routing::get(move || async move { body }));
    let listener = ::tokio::net::TcpListener::bind("127.0.0.1:0")
        .await
        .expect("a port");
    println!("http://{}", listener.local_addr().expect("an address"));
    axum::serve(listener, router).await.expect("served");
}
