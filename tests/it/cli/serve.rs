//! `serve` and `demo`: they say where they are, answer there, and stop in order when asked.

use super::program;
use crate::support::client;
use crate::support::documents::chain;
use std::io::{BufRead, BufReader, Read};
use std::process::{Child, ChildStdout, Command, Stdio};
use std::time::Duration;

/// A running program; killed if the test fails before it stops it.
pub struct Running {
    child: Child,
    out: BufReader<ChildStdout>,
    pub address: String,
}

impl Running {
    pub fn start(command: &mut Command) -> Running {
        let mut child = command
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("starts");
        let mut out = BufReader::new(child.stdout.take().expect("output"));
        let mut address = String::new();
        out.read_line(&mut address).expect("a line");
        let address = address.trim_end().to_owned();
        Running { child, out, address }
    }

    pub fn url(&self, path: &str) -> String {
        format!("{}{path}", self.address)
    }

    /// Asks it to stop; its exit code, the rest of its standard output, and its standard error.
    pub fn stop(mut self, signal: &str) -> (Option<i32>, String, String) {
        let asked = Command::new("kill")
            .args([signal, &self.child.id().to_string()])
            .status()
            .expect("kill");
        assert!(asked.success());
        let status = self.child.wait().expect("ends");
        let (mut rest, mut errors) = (String::new(), String::new());
        self.out.read_to_string(&mut rest).expect("text");
        self.child
            .stderr
            .take()
            .expect("errors")
            .read_to_string(&mut errors)
            .expect("text");
        (status.code(), rest, errors)
    }
}

impl Drop for Running {
    fn drop(&mut self) {
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}

#[tokio::test]
async fn serve_keeps_its_data_over_a_stop() {
    let folder = tempfile::tempdir().unwrap();
    let data = folder.path().join("deep/data");
    let serve = || {
        let mut command = program();
        command
            .arg("serve")
            .arg("--data")
            .arg(&data)
            .args(["--listen", "127.0.0.1:0"]);
        Running::start(&mut command)
    };
    let token = super::people::preparer_of(&data);
    let client = client();
    let running = serve();
    assert!(
        running.address.starts_with("http://127.0.0.1:"),
        "{}",
        running.address
    );
    let answer = client
        .post(running.url("/api/v1/pathways"))
        .bearer_auth(&token)
        .json(&chain())
        .send()
        .await
        .expect("answers");
    assert_eq!(answer.status(), 201);
    let location = answer.headers()["location"].to_str().unwrap().to_owned();
    let document = client
        .get(running.url(&location))
        .bearer_auth(&token)
        .send()
        .await
        .unwrap()
        .bytes()
        .await
        .unwrap();
    let (code, rest, log) = running.stop("-TERM");
    assert_eq!((code, rest.as_str()), (Some(0), ""), "{log}");
    assert!(!log.contains("people add"), "somebody can sign in: {log}");
    assert!(
        !data.join("wheelwort.db-wal").exists(),
        "an orderly end leaves one file"
    );

    let running = serve();
    let stranger = client.get(running.url(&location)).send().await.unwrap();
    assert_eq!(stranger.status(), 401);
    let again = client
        .get(running.url(&location))
        .bearer_auth(&token)
        .send()
        .await
        .unwrap();
    assert_eq!(again.bytes().await.unwrap(), document);
    assert_eq!(running.stop("-INT").0, Some(0));
}

#[tokio::test]
async fn a_stop_does_not_wait_for_idle_connections() {
    let folder = tempfile::tempdir().unwrap();
    let mut command = program();
    command
        .arg("serve")
        .arg("--data")
        .arg(folder.path())
        .args(["--listen", "127.0.0.1:0"]);
    let running = Running::start(&mut command);
    let client = client();
    assert_eq!(
        client
            .get(running.url("/health/ready"))
            .send()
            .await
            .unwrap()
            .status(),
        200
    );
    let (done, ended) = std::sync::mpsc::channel();
    std::thread::spawn(move || done.send(running.stop("-TERM").0));
    assert_eq!(ended.recv_timeout(Duration::from_secs(15)), Ok(Some(0)));
    drop(client);
}

#[test]
fn an_address_in_use_is_told() {
    let taken = std::net::TcpListener::bind("127.0.0.1:0").unwrap();
    let folder = tempfile::tempdir().unwrap();
    let listen = taken.local_addr().unwrap().to_string();
    let output = super::run(
        &[
            "serve".as_ref(),
            "--data".as_ref(),
            folder.path().as_os_str(),
            "--listen".as_ref(),
            listen.as_ref(),
        ],
        b"",
    );
    assert_eq!((output.status.code(), output.stdout.len()), (Some(1), 0));
    assert!(String::from_utf8(output.stderr).unwrap().contains(&listen));
}

#[test]
fn an_address_that_others_can_reach_is_cautioned() {
    let folder = tempfile::tempdir().unwrap();
    let mut command = program();
    command
        .arg("serve")
        .arg("--data")
        .arg(folder.path())
        .args(["--listen", "0.0.0.0:0"]);
    let (code, _, errors) = Running::start(&mut command).stop("-TERM");
    assert_eq!(code, Some(0));
    assert!(
        errors.contains("Caution") && errors.contains("TLS") && errors.contains("Nobody can sign in yet"),
        "{errors}"
    );
}

#[tokio::test]
async fn the_demo_shows_its_pathways_and_leaves_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let mut command = program();
    command
        .args(["demo", "--listen", "127.0.0.1:0"])
        .env("TMPDIR", folder.path());
    let running = Running::start(&mut command);
    let answer = client()
        .get(running.url("/api/v1/pathways?example=true"))
        .send()
        .await
        .expect("answers");
    let list: serde_json::Value = answer.json().await.expect("JSON");
    assert_eq!(
        list["items"].as_array().unwrap().len(),
        wheelwort::demo::PATHWAYS.len()
    );
    // Whoever comes through a proxy, or by another name, is not on this machine.
    for (name, value) in [("x-forwarded-for", "192.0.2.1"), ("host", "example.org")] {
        let asked = client().get(running.url("/api/v1/me")).header(name, value);
        assert_eq!(asked.send().await.unwrap().status(), 401, "{name}");
    }
    let me = client().get(running.url("/api/v1/me")).send().await.unwrap();
    let me: serde_json::Value = me.json().await.expect("JSON");
    assert_eq!(me["rights"], serde_json::json!(["read", "write"]), "the preparer");
    let (code, rest, errors) = running.stop("-TERM");
    assert_eq!((code, rest.as_str()), (Some(0), ""), "{errors}");
    assert!(
        errors.contains("a token that reads, for scripts: wwt_"),
        "{errors}"
    );
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 0);
}

#[tokio::test]
async fn it_is_measured_by_route_and_asked_for_its_health() {
    let folder = tempfile::tempdir().unwrap();
    // Port 0 would do, but then nobody outside knows it: take one that was free a moment ago.
    let free = std::net::TcpListener::bind("127.0.0.1:0").unwrap();
    let measured = free.local_addr().unwrap();
    drop(free);
    let mut command = program();
    command
        .arg("serve")
        .arg("--data")
        .arg(folder.path())
        .args(["--listen", "127.0.0.1:0"])
        .arg("--set")
        .arg(format!("metrics_listen={measured}"));
    let running = Running::start(&mut command);
    let client = client();
    for path in [
        "/health/ready",
        "/api/v1/pathways/0199-not-an-id",
        "/nowhere/at-all",
    ] {
        client.get(running.url(path)).send().await.unwrap();
    }
    let ready = running.url("/health/ready");
    let asked = tokio::task::spawn_blocking(move || super::run(&["health", "--url", &ready], b""))
        .await
        .unwrap();
    assert_eq!(asked.status.code(), Some(0), "{asked:?}");
    let answer = client
        .get(format!("http://{measured}/metrics"))
        .send()
        .await
        .unwrap();
    assert_eq!(answer.status(), 200);
    let text = answer.text().await.unwrap();
    for line in [
        "wheelwort_requests_total{route=\"/health/ready\",method=\"GET\",class=\"2xx\"} 2",
        "route=\"/api/v1/pathways/{id}\",method=\"GET\",class=\"4xx\"",
        "route=\"nowhere\",method=\"GET\",class=\"4xx\"} 1",
        "wheelwort_request_seconds_bucket{route=\"/health/ready\",le=\"0.001\"}",
        "wheelwort_request_seconds_count{route=\"/health/ready\"} 2",
        "wheelwort_writes_waiting 0",
        "wheelwort_readers_idle ",
        "wheelwort_sign_in_refusals_total 0",
        "# HELP wheelwort_evaluations_total",
        "wheelwort_requests_running 0",
    ] {
        assert!(text.contains(line), "{line}\n{text}");
    }
    assert!(
        !text.contains("not-an-id") && !text.contains("at-all"),
        "an address is no label\n{text}"
    );
    // The measurements are nowhere else.
    assert_eq!(
        client.get(running.url("/metrics")).send().await.unwrap().status(),
        404
    );
    let gone = running.url("/health/ready");
    assert_eq!(running.stop("-TERM").0, Some(0));
    let asked = tokio::task::spawn_blocking(move || super::run(&["health", "--url", &gone], b""))
        .await
        .unwrap();
    assert_eq!(asked.status.code(), Some(1), "{asked:?}");
}

#[test]
fn settings_are_printed_with_who_gave_them() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("wheelwort.toml");
    std::fs::write(
        &file,
        "connections = 300\nadministrator = \"ada\"\nadministrator_password = \"hush-hush\"",
    )
    .unwrap();
    let output = program()
        .args(["settings", "--set", "batch_lines=9", "--config"])
        .arg(&file)
        .env("WHEELWORT_LOG", "warn")
        .output()
        .unwrap();
    let table = String::from_utf8(output.stdout).unwrap();
    assert_eq!(output.status.code(), Some(0), "{table}");
    for (name, words) in [
        ("connections", ["300", "file"]),
        ("batch_lines", ["9", "command line"]),
        ("log", ["warn", "environment"]),
        ("administrator_password", ["(hidden)", "file"]),
        ("listen", ["127.0.0.1:8080", "default"]),
    ] {
        let row = table
            .lines()
            .find(|line| line.split(' ').next() == Some(name))
            .unwrap();
        assert!(words.iter().all(|word| row.contains(word)), "{row}");
    }
    assert!(!table.contains("hush"), "{table}");
    for wrong in [
        &["settings", "--set", "administrator_password=x"][..],
        &["settings", "--set", "colour=red"],
        &["settings", "--set", "connections"],
        &["serve", "--set", "connections=0"],
    ] {
        let output = super::run(wrong, b"");
        assert_eq!(output.status.code(), Some(2), "{wrong:?}");
    }
}
