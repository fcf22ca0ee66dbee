//! Starting on data that cannot be used: a full disk, no right to write, a lock, a file that is something else. Each is
//! told in a line, ends with 1, and leaves the data as they were.

use crate::cli::program;
use std::io::{BufRead, BufReader};
use std::path::Path;
use std::process::{Command, Output, Stdio};
use tempfile::TempDir;

/// Runs `serve` through a shell that prepares the ground; what it says must be one clear line.
fn refused(prepare: &str, data: &Path) -> String {
    let output = served(prepare, data);
    let errors = String::from_utf8(output.stderr).expect("text");
    assert_eq!(output.status.code(), Some(1), "{prepare}: {errors}");
    assert!(output.stdout.is_empty());
    assert!(!errors.contains("panicked"), "{errors}");
    let told: Vec<&str> = errors
        .lines()
        .filter(|line| line.starts_with("wheelwort: "))
        .collect();
    let [told] = told[..] else { panic!("{errors}") };
    assert!(told.contains(data.to_str().expect("text")), "{told}");
    told.to_owned()
}

/// Starts and, if it gets so far against all hope, is stopped.
fn served(prepare: &str, data: &Path) -> Output {
    let script =
        format!("as=; {prepare} exec $as timeout -s TERM 60 \"$0\" serve --data \"$1\" --listen 127.0.0.1:0");
    let mut command = Command::new("bash");
    command
        .arg("-c")
        .arg(script)
        .arg(program().get_program())
        .arg(data);
    for (name, _) in std::env::vars_os() {
        if name.to_string_lossy().starts_with("WHEELWORT_") {
            command.env_remove(name);
        }
    }
    command.output().expect("bash")
}

/// Makes data as a first start makes them, and stops in order.
fn begun(data: &Path) {
    let mut command = program();
    command
        .arg("serve")
        .arg("--data")
        .arg(data)
        .args(["--listen", "127.0.0.1:0"])
        .stdout(Stdio::piped())
        .stderr(Stdio::null());
    let mut child = command.spawn().expect("starts");
    let mut line = String::new();
    let mut out = BufReader::new(child.stdout.take().expect("output"));
    out.read_line(&mut line).expect("text");
    let asked = Command::new("kill")
        .args(["-TERM", &child.id().to_string()])
        .status();
    assert!(asked.expect("kill").success());
    assert!(child.wait().expect("ends").success());
    assert!(line.starts_with("http://"), "it did not start: {line}");
}

fn folder() -> TempDir {
    tempfile::tempdir().expect("a folder")
}

/// The system refuses to let files grow (RLIMIT_FSIZE), as a full disk does, at a size that a first start needs more than.
#[test]
fn a_disk_that_is_full_is_told_and_spoils_nothing() {
    let data = folder();
    // Blocks of 1024 bytes: nothing at all, the first page, some of the tables, most of them.
    for blocks in [0, 4, 24, 64] {
        let told = refused(
            &format!("trap '' XFSZ; ulimit -f {blocks};"),
            &data.path().join("data"),
        );
        assert!(told.contains("disk"), "{blocks}: {told}");
    }
    // With room it starts on the same folder: nothing was left half made.
    begun(&data.path().join("data"));
}

#[test]
fn data_without_the_right_to_write_are_told() {
    let data = folder();
    begun(data.path());
    // The superuser may write everywhere, unless it gives that up.
    let plain =
        "if [ \"$(id -u)\" = 0 ]; then as='setpriv --bounding-set=-dac_override,-dac_read_search'; fi;";
    let script = |mode: &str, what: &str| format!("chmod {mode} \"$1\"{what}; {plain}");
    let told = refused(&script("0444", "/wheelwort.db"), data.path());
    assert!(told.contains("can be read but not written"), "{told}");
    let mode = Command::new("chmod")
        .arg("0644")
        .arg(data.path().join("wheelwort.db"))
        .status();
    assert!(mode.expect("chmod").success());
    let told = refused(&script("0555", ""), data.path());
    let mode = Command::new("chmod").arg("0755").arg(data.path()).status();
    assert!(mode.expect("chmod").success());
    assert!(
        told.contains("written") || told.contains("rights") || told.contains("cannot be opened"),
        "{told}"
    );
}

#[tokio::test]
async fn data_that_another_program_holds_are_told() {
    let data = folder();
    begun(data.path());
    let file = data.path().join("wheelwort.db");
    let options = sqlx::sqlite::SqliteConnectOptions::new()
        .filename(&file)
        .locking_mode(sqlx::sqlite::SqliteLockingMode::Exclusive);
    let other = sqlx::SqlitePool::connect_with(options).await.expect("opens");
    let mut holder = other.acquire().await.expect("a connection");
    sqlx::query("BEGIN EXCLUSIVE")
        .execute(&mut *holder)
        .await
        .expect("held");
    let path = data.path().to_owned();
    let told = tokio::task::spawn_blocking(move || refused("", &path))
        .await
        .expect("joined");
    assert!(told.contains("Another program holds the data"), "{told}");
    drop(holder);
    other.close().await;
}

#[test]
fn a_file_that_is_something_else_is_told_and_left_alone() {
    let data = folder();
    let file = data.path().join("wheelwort.db");
    let letter = "This is a letter, not a database. ".repeat(500);
    std::fs::write(&file, &letter).expect("written");
    let told = refused("", data.path());
    assert!(told.contains("broken") && told.contains("backup"), "{told}");
    assert_eq!(std::fs::read_to_string(&file).expect("read"), letter);
}
