//! `verify`: a verdict on standard output, and an exit code that says it.

use super::run;
use crate::statements::made::{BYTES, changed, public};
use serde_json::json;
use std::ffi::OsStr;
use std::path::{Path, PathBuf};
use tempfile::TempDir;

fn file(folder: &TempDir, name: &str, bytes: &[u8]) -> PathBuf {
    let path = folder.path().join(name);
    std::fs::write(&path, bytes).expect("writes");
    path
}

/// Exit code and standard output.
fn verified(arguments: &[&OsStr], input: &[u8]) -> (Option<i32>, String) {
    let all: Vec<&OsStr> = std::iter::once(OsStr::new("verify"))
        .chain(arguments.iter().copied())
        .collect();
    let output = run(&all, input);
    (
        output.status.code(),
        String::from_utf8(output.stdout).expect("UTF-8"),
    )
}

fn of(path: &Path) -> (Option<i32>, String) {
    verified(&[path.as_os_str()], b"")
}

#[test]
fn each_end_has_its_code() {
    let folder = tempfile::tempdir().unwrap();
    let good = file(&folder, "good.json", &BYTES);
    let (code, text) = of(&good);
    assert_eq!(code, Some(0), "{text}");
    assert!(text.contains("WW-2027-0031 is verified in itself"), "{text}");

    let net = "/assessment/document/net/g_co2e_per_mj";
    let bad = file(&folder, "bad.json", &changed(net, json!(1.0), true));
    let (code, text) = of(&bad);
    assert_eq!(code, Some(1), "{text}");
    assert!(text.contains(net), "{text}");

    for (name, bytes) in [
        (
            "newer.json",
            changed("/format", json!("wheelwort.statement/2"), false),
        ),
        ("none.json", b"hello".to_vec()),
    ] {
        let (code, text) = of(&file(&folder, name, &bytes));
        assert_eq!(code, Some(2), "{name}: {text}");
    }
    assert_eq!(of(&folder.path().join("absent.json")).0, Some(2));
    let (code, text) = verified(&[OsStr::new("-")], &BYTES);
    assert_eq!(code, Some(0), "{text}");
}

#[test]
fn keys_are_named_in_hexadecimal_or_in_a_file() {
    let folder = tempfile::tempdir().unwrap();
    let good = file(&folder, "good.json", &BYTES);
    let hex = public().hex();
    let list = file(
        &folder,
        "keys",
        format!("# ours\n{} {hex}\n", public().id()).as_bytes(),
    );
    for key in [OsStr::new(&hex), list.as_os_str()] {
        let (code, text) = verified(&[good.as_os_str(), OsStr::new("--key"), key], b"");
        assert_eq!(code, Some(0), "{text}");
        assert!(text.contains("is verified: every figure"), "{text}");
    }
    let other = "3d4017c3e843895a92b70aa74d1b7ebc9c982ccf2ec4968cc0cd55f12af4660c";
    let (code, text) = verified(&[good.as_os_str(), OsStr::new("--key"), OsStr::new(other)], b"");
    assert_eq!(code, Some(1), "{text}");
    assert!(text.contains("none of the keys you named"), "{text}");
    let (code, text) = verified(&[good.as_os_str(), OsStr::new("--key"), OsStr::new("abc")], b"");
    assert_eq!((code, text.as_str()), (Some(2), ""));
}

#[test]
fn several_files_are_a_series() {
    let folder = tempfile::tempdir().unwrap();
    let good = file(&folder, "good.json", &BYTES);
    let twin = file(
        &folder,
        "twin.json",
        &changed("/facts/consignment_id", json!("HV-2"), true),
    );
    let (code, text) = verified(&[good.as_os_str(), twin.as_os_str()], b"");
    assert_eq!(code, Some(1), "{text}");
    assert_eq!(text.lines().count(), 3, "{text}");
    assert!(text.contains("share a number"), "{text}");
}
