//! `people`: accounts made on the machine that holds the data, and the first administrator of a container.

use super::{program, run};
use std::path::Path;
use std::process::{Output, Stdio};

const PASSWORD: &[u8] = b"barley tram seven\n";

fn people(data: &Path, what: &str, more: &[&str], input: &[u8]) -> Output {
    let data = data.to_str().expect("text");
    let arguments: Vec<&str> = ["people", what, "--data", data]
        .into_iter()
        .chain(more.iter().copied())
        .collect();
    run(&arguments, input)
}

fn out(output: &Output) -> String {
    assert_eq!(
        output.status.code(),
        Some(0),
        "{}",
        String::from_utf8_lossy(&output.stderr)
    );
    String::from_utf8(output.stdout.clone())
        .expect("text")
        .trim_end()
        .to_owned()
}

/// Makes a preparer in a folder of data; a token of theirs that writes.
pub fn preparer_of(data: &Path) -> String {
    let who = [
        "--name",
        "I. Marsh",
        "--sign-in-name",
        "Marsh",
        "--role",
        "administrator",
        "--role",
        "preparer",
    ];
    out(&people(data, "add", &who, PASSWORD));
    let what = [
        "--sign-in-name",
        "marsh",
        "--label",
        "test",
        "--scope",
        "read",
        "--scope",
        "write",
        "--days",
        "2",
    ];
    out(&people(data, "token", &what, b""))
}

#[test]
fn accounts_are_made_listed_and_closed() {
    let folder = tempfile::tempdir().unwrap();
    let data = folder.path().join("data");
    let token = preparer_of(&data);
    assert!(token.starts_with("wwt_") && token.len() == 47, "{token}");
    assert_eq!(
        out(&people(&data, "list", &[], b"")),
        "marsh\tI. Marsh\tadministrator,preparer"
    );
    let second = [
        "--name",
        "Second",
        "--sign-in-name",
        "second",
        "--role",
        "administrator",
    ];
    out(&people(&data, "add", &second, PASSWORD));
    let reset = out(&people(
        &data,
        "reset-password",
        &["--sign-in-name", "marsh"],
        b"",
    ));
    assert_eq!(reset.len(), 23, "{reset}");
    out(&people(&data, "disable", &["--sign-in-name", "marsh"], b""));
    assert!(
        out(&people(&data, "list", &[], b"")).contains("marsh\tI. Marsh\tadministrator,preparer\tdisabled")
    );
}

#[test]
fn what_is_wrong_is_told_and_ends_with_2() {
    let folder = tempfile::tempdir().unwrap();
    let data = folder.path();
    let wrong = |what: &str, more: &[&str], input: &[u8], words: &str| {
        let output = people(data, what, more, input);
        let errors = String::from_utf8(output.stderr).expect("text");
        assert_eq!(
            (output.status.code(), output.stdout.len()),
            (Some(2), 0),
            "{errors}"
        );
        assert!(errors.contains(words), "{errors}");
        assert!(!errors.contains("short secret"), "{errors}");
    };
    let who = [
        "--name",
        "I. Marsh",
        "--sign-in-name",
        "marsh",
        "--role",
        "administrator",
    ];
    wrong("add", &who, b"short secre\n", "12 are the least");
    wrong(
        "add",
        &["--name", "x", "--sign-in-name", "x", "--role", "owner"],
        PASSWORD,
        "administrator, preparer",
    );
    wrong(
        "disable",
        &["--sign-in-name", "nobody"],
        b"",
        "nobody and nothing of that id",
    );
    out(&people(data, "add", &who, PASSWORD));
    wrong("add", &who, PASSWORD, "signs in with that name already");
    wrong(
        "disable",
        &["--sign-in-name", "marsh"],
        b"",
        "Nobody would be left to administer",
    );
}

#[test]
fn the_environment_makes_the_first_administrator_once() {
    let folder = tempfile::tempdir().unwrap();
    let data = folder.path().join("data");
    let secret = folder.path().join("secret");
    std::fs::write(&secret, PASSWORD).unwrap();
    let start = |name: &str| {
        let mut child = program()
            .args(["serve", "--listen", "127.0.0.1:0", "--data"])
            .arg(&data)
            .env("WHEELWORT_ADMINISTRATOR", name)
            .env("WHEELWORT_ADMINISTRATOR_PASSWORD_FILE", &secret)
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .expect("starts");
        let mut line = String::new();
        let out = child.stdout.take().expect("output");
        std::io::BufRead::read_line(&mut std::io::BufReader::new(out), &mut line).expect("a line");
        assert!(line.starts_with("http://"), "{line}");
        child.kill().expect("stops");
        child.wait().expect("ends");
    };
    start("keeper");
    start("somebody.else");
    assert_eq!(
        out(&people(&data, "list", &[], b"")),
        "keeper\tkeeper\tadministrator,preparer"
    );
}
