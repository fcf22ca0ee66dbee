//! kill -9 under write load, twenty times over on one file: whatever was answered is there, whole, and nothing is half there.
//! The program that is killed is this test program again, asked to do nothing but write and say what was answered.

use crate::store::support::{fertilised, number};
use std::collections::BTreeMap;
use std::io::{BufRead, BufReader};
use std::path::Path;
use std::process::{Command, Stdio};
use std::sync::atomic::{AtomicU64, Ordering};
use std::time::Duration;
use uuid::Uuid;
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::library;
use wheelwort::pathways::{self, Expected};

const ROUNDS: u64 = 20;
const WRITERS: u64 = 8;
/// Names the data file to the program that is killed.
const FILE: &str = "WHEELWORT_TEST_KILLED_FILE";
/// The name of the test that is that program.
const PROGRAM: &str = "faults::kill::writes_until_it_is_killed";

/// What was answered: the newest revision of each pathway, and the hashes of all.
#[derive(Default)]
struct Answered {
    newest: BTreeMap<Uuid, i64>,
    hashes: BTreeMap<(Uuid, i64), String>,
}

async fn open(file: &Path) -> App {
    App::open(file, Clock::system(), library::book())
        .await
        .expect("opens")
}

/// Not a test of its own: the program that the test below starts and kills.
#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
#[ignore = "the program that the kill test starts"]
async fn writes_until_it_is_killed() {
    let Some(file) = std::env::var_os(FILE) else {
        return;
    };
    let app = open(Path::new(&file)).await;
    let turns = AtomicU64::new(0);
    let writers = (0..WRITERS).map(async |writer| {
        let mut kept: Option<(Uuid, i64)> = None;
        loop {
            let turn = turns.fetch_add(1, Ordering::Relaxed);
            let document = fertilised(&format!("writer {writer}"), 100.0 + turn as f64 / 64.0);
            let saved = match kept {
                // Every fifth write begins a new pathway.
                Some((id, revision)) if !turn.is_multiple_of(5) => {
                    pathways::replace(&app, id, document, Expected::Number(revision), None).await
                }
                _ => pathways::create(&app, document, None).await,
            };
            let saved = saved.expect("saved");
            println!("kept {} {} {}", saved.id, saved.revision, saved.hash);
            kept = Some((saved.id, saved.revision));
        }
    });
    let mut writers: Vec<_> = writers.map(Box::pin).collect();
    std::future::poll_fn::<(), _>(|context| {
        for writer in &mut writers {
            let _ = writer.as_mut().poll(context);
        }
        std::task::Poll::Pending
    })
    .await;
}

/// Starts the program, kills it `after` so long of answers, and notes what was answered.
fn killed(file: &Path, after: Duration, answered: &mut Answered) -> usize {
    let mut child = Command::new(std::env::current_exe().expect("this program"))
        .args([PROGRAM, "--exact", "--ignored", "--nocapture"])
        .env(FILE, file)
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()
        .expect("starts");
    let mut out = BufReader::new(child.stdout.take().expect("output"));
    let id = child.id().to_string();
    let mut killer = None;
    let mut count = 0;
    let mut line = String::new();
    while out.read_line(&mut line).expect("text") > 0 {
        // A line without its end was cut off by the kill.
        if let Some((_, answer)) = line.trim_end_matches('\n').split_once("kept ")
            && line.ends_with('\n')
        {
            let parts: Vec<&str> = answer.split(' ').collect();
            let (id_of, revision) = (
                parts[0].parse().expect("an id"),
                parts[1].parse().expect("a number"),
            );
            answered.hashes.insert((id_of, revision), parts[2].to_owned());
            let newest = answered.newest.entry(id_of).or_default();
            *newest = revision.max(*newest);
            count += 1;
            // The clock of the kill begins with the first answer: the load is on.
            if killer.is_none() {
                let id = id.clone();
                killer = Some(std::thread::spawn(move || {
                    std::thread::sleep(after);
                    Command::new("kill").args(["-9", &id]).status().expect("kill")
                }));
            }
        }
        line.clear();
    }
    let status = child.wait().expect("ends");
    let killed = killer.map(|killer| killer.join().expect("joined").success());
    assert_eq!(
        killed,
        Some(true),
        "it ended by itself after {count} answers: {status}"
    );
    assert_eq!(
        std::os::unix::process::ExitStatusExt::signal(&status),
        Some(9),
        "{status}"
    );
    count
}

#[tokio::test(flavor = "multi_thread")]
async fn what_was_answered_survives_a_kill() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("wheelwort.db");
    let mut answered = Answered::default();
    let mut counts = Vec::new();
    for round in 0..ROUNDS {
        // From the first commits to a load that has been on for a while.
        let after = Duration::from_millis(round * round * 2 % 331);
        counts.push(killed(&file, after, &mut answered));
        // Opening it is the restart: the log is taken over, nothing else is done.
        let app = open(&file).await;
        let whole = "SELECT count(*) FROM pragma_integrity_check WHERE integrity_check = 'ok'";
        assert_eq!(number(&app.store, whole).await, 1, "round {round}");
        assert_eq!(
            number(&app.store, "SELECT count(*) FROM pragma_foreign_key_check").await,
            0
        );
        for (id, revision) in &answered.newest {
            let stored = pathways::read(&app, *id)
                .await
                .expect("what was answered is there");
            assert!(
                stored.revision >= *revision,
                "round {round}: {id} is back at {}",
                stored.revision
            );
        }
        for ((id, revision), hash) in &answered.hashes {
            let stored = pathways::revision(&app, *id, *revision).await.expect("there");
            assert_eq!(&stored.hash, hash, "round {round}: {id} {revision}");
        }
        // Each revision whole: its rows say what its document says, and there is a line of the trail for it.
        assert!(
            pathways::rows_differ(&app).await.expect("compared").is_empty(),
            "round {round}"
        );
        let revisions = number(&app.store, "SELECT count(*) FROM revision").await;
        let lines = number(&app.store, "SELECT count(*) FROM audit_line").await;
        assert_eq!(
            revisions, lines,
            "round {round}: a line for each write and no more"
        );
        app.close().await;
    }
    let writes: usize = counts.iter().sum();
    assert!(writes >= 100, "hardly any load: {counts:?}");
}
