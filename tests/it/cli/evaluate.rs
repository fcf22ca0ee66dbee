//! `evaluate`: assessments on standard output, or errors on standard error and nothing else.

use super::run;
use crate::support::TestApp;
use crate::support::documents::{NAMES, all_bad, chain, chain_with, ten_megabytes};
use serde_json::Value;
use std::path::PathBuf;
use tempfile::TempDir;
use wheelwort::core::documents::Assessment;

fn file(folder: &TempDir, name: &str, bytes: &[u8]) -> PathBuf {
    let path = folder.path().join(name);
    std::fs::write(&path, bytes).expect("writes");
    path
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).expect("UTF-8")
}

#[tokio::test]
async fn a_file_gives_the_assessment_that_the_api_gives() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(&folder, "wheat.json", chain().to_string().as_bytes());
    let output = run(&["evaluate".as_ref(), path.as_os_str()], b"");
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert!(output.stderr.is_empty());
    let read = |bytes: &[u8]| serde_json::from_slice::<Assessment>(bytes).expect("an assessment");
    let answered = TestApp::new().await.post("/api/v1/evaluate", &chain()).await;
    assert_eq!(read(&output.stdout), read(&answered.bytes));
}

#[test]
fn standard_input_and_a_rule_set_are_taken() {
    let output = run(
        &["evaluate", "--rule-set", "eu-2018-2001", "-"],
        chain().to_string().as_bytes(),
    );
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let other = run(
        &["evaluate", "--rule-set", "none", "-"],
        chain().to_string().as_bytes(),
    );
    assert_eq!((other.status.code(), other.stdout.len()), (Some(2), 0));
    assert!(text(&other.stderr).contains("none"));
}

#[test]
fn several_files_give_a_line_each_in_their_order() {
    let folder = tempfile::tempdir().unwrap();
    let first = file(&folder, "a.json", chain().to_string().as_bytes());
    let second = file(
        &folder,
        "b.json",
        chain_with("/name", "Second".into()).to_string().as_bytes(),
    );
    let output = run(&["evaluate".as_ref(), first.as_os_str(), second.as_os_str()], b"");
    assert_eq!(output.status.code(), Some(0));
    let names: Vec<Value> = text(&output.stdout)
        .lines()
        .map(|line| serde_json::from_str::<Value>(line).expect("JSON")["pathway_name"].clone())
        .collect();
    assert_eq!(names, [chain()["name"].clone(), "Second".into()]);
}

#[test]
fn each_bad_document_ends_with_2_and_prints_nothing() {
    for bad in all_bad() {
        let output = run(&["evaluate", "-"], &bad.bytes);
        assert_eq!(
            (output.status.code(), output.stdout.len()),
            (Some(2), 0),
            "{}",
            bad.name
        );
        let errors = text(&output.stderr);
        assert!(!errors.is_empty(), "{}", bad.name);
        let pointer = bad.pointer.filter(|pointer| !pointer.is_empty()).unwrap_or("/");
        assert!(
            errors.lines().any(|line| line.starts_with(pointer)),
            "{}: {errors}",
            bad.name
        );
        assert!(
            errors.lines().all(|line| line.starts_with('/')),
            "{}: {errors}",
            bad.name
        );
    }
    let large = run(&["evaluate", "-"], &ten_megabytes());
    assert_eq!((large.status.code(), large.stdout.len()), (Some(2), 0));
}

#[test]
fn one_bad_file_among_several_keeps_all_from_being_printed() {
    let folder = tempfile::tempdir().unwrap();
    let good = file(&folder, "good.json", chain().to_string().as_bytes());
    let bad = file(
        &folder,
        "bad.json",
        chain_with("/colour", "green".into()).to_string().as_bytes(),
    );
    let output = run(&["evaluate".as_ref(), good.as_os_str(), bad.as_os_str()], b"");
    assert_eq!((output.status.code(), output.stdout.len()), (Some(2), 0));
    let errors = text(&output.stderr);
    assert_eq!(errors.lines().count(), 1);
    assert!(errors.contains("bad.json: /colour: "), "{errors}");
}

#[test]
fn an_error_is_one_line_whatever_was_typed() {
    let document = chain_with("/stages/0/key", "a\nb\u{1b}[31m".into());
    let output = run(&["evaluate", "-"], document.to_string().as_bytes());
    let errors = text(&output.stderr);
    assert!(errors.lines().all(|line| line.starts_with('/')), "{errors:?}");
    assert!(!errors.contains('\u{1b}'));
}

#[test]
fn names_do_no_harm() {
    for name in NAMES {
        let output = run(
            &["evaluate", "-"],
            chain_with("/name", (*name).into()).to_string().as_bytes(),
        );
        assert_eq!(output.status.code(), Some(0));
        let printed: Value = serde_json::from_slice(&output.stdout).expect("JSON");
        assert_eq!(printed["pathway_name"], *name);
    }
}

#[test]
fn a_file_that_is_not_there_is_told() {
    let output = run(&["evaluate", "nowhere/none.json"], b"");
    assert_eq!((output.status.code(), output.stdout.len()), (Some(2), 0));
    assert!(text(&output.stderr).contains("none.json"));
}
