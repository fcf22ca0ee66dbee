//! Files that are what they were: laws of content under its hash, and the check that finds what is altered, gone or named
//! by nothing.

use super::{attach, kept_files};
use crate::support::{TestApp, attach_text};
use proptest::prelude::*;
use sha2::{Digest, Sha256};
use sqlx::Connection;
use tokio_stream::StreamExt;
use wheelwort::evidence::{FaultKind, Incoming, Naming, attach as keep, open, verify};

/// The bytes of a piece of evidence, as they are read.
async fn bytes_of(app: &TestApp, id: &str) -> (String, Vec<u8>) {
    let (record, mut pieces) = open(&app.app, id).await.expect("opens");
    let mut bytes = Vec::new();
    while let Some(piece) = pieces.next().await {
        bytes.extend(piece.expect("sound"));
    }
    (record.hash, bytes)
}

fn hash(bytes: &[u8]) -> String {
    let digits: String = Sha256::digest(bytes)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect();
    format!("sha256:{digits}")
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 24, ..ProptestConfig::default() })]

    /// What is read hashes to the id of the content, and is what came in, however it came in.
    #[test]
    fn what_is_read_hashes_to_its_name(
        pieces in prop::collection::vec(prop::collection::vec(any::<u8>(), 1..5_000), 1..6),
        times in 1_usize..40,
    ) {
        tokio::runtime::Runtime::new().expect("threads").block_on(async {
            let app = TestApp::new().await;
            let mut incoming = Incoming::begin(&app.app).await.expect("begins");
            let mut sent = Vec::new();
            for piece in pieces.iter().cycle().take(pieces.len() * times) {
                incoming.add(piece).await.expect("put down");
                sent.extend_from_slice(piece);
            }
            let arrived = incoming.arrived().await.expect("arrived");
            let attached = keep(&app.app, arrived, Naming::default()).await.expect("kept");
            let (name, read) = bytes_of(&app, &attached.record.id).await;
            assert_eq!(hash(&read), name);
            assert_eq!(read, sent);
            assert_eq!(attached.record.size, i64::try_from(sent.len()).expect("fits"));
            assert!(verify(&app.app).await.expect("looks").is_empty());
            app.app.close().await;
        });
    }
}

#[tokio::test]
async fn an_altered_file_is_found_and_not_served() {
    let app = TestApp::new().await;
    attach(&app, &[("file", Some("bill.txt"), b"abc")]).await;
    attach(&app, &[("file", Some("copy.txt"), b"abc")]).await;
    attach(&app, &[("file", Some("other.txt"), b"xyz")]).await;
    assert_eq!(verify(&app.app).await.expect("looks"), []);
    let (_, pieces_before) = open(&app.app, "EV-0001").await.expect("opens");
    let place = kept_files(&app)
        .into_iter()
        .find(|file| std::fs::read(file).expect("reads") == b"abc")
        .expect("there");
    // Of the same length: only the hash can tell.
    std::fs::write(&place, b"abd").expect("written");
    let faults = verify(&app.app).await.expect("looks");
    let found: Vec<(FaultKind, &str)> = faults
        .iter()
        .map(|fault| (fault.kind, fault.id.as_str()))
        .collect();
    assert_eq!(
        found,
        [(FaultKind::Altered, "EV-0001"), (FaultKind::Altered, "EV-0002")]
    );
    assert_eq!(
        faults[0].to_string(),
        "Own organisation, EV-0001: bill.txt is not the file that was attached on 2026-12-01. Restore that file, or \
         attach this one as new evidence."
    );
    let refused = app.get("/api/v1/evidence/EV-0001/file").await.refused(409);
    assert!(
        refused["detail"]
            .as_str()
            .unwrap()
            .starts_with("bill.txt is not the file")
    );
    // One that is altered after it was looked through breaks off.
    let mut pieces = pieces_before;
    let mut last = None;
    while let Some(piece) = pieces.next().await {
        last = Some(piece);
    }
    let broken_off = last.expect("a piece").is_err();
    assert!(broken_off || cfg!(unix), "an open file may still be the old one");
    assert_eq!(app.get("/api/v1/evidence/EV-0003/file").await.bytes, b"xyz");
    // The same bytes, attached once more, put it right.
    attach(&app, &[("file", Some("bill.txt"), b"abc")]).await;
    assert_eq!(verify(&app.app).await.expect("looks"), []);
    assert_eq!(app.get("/api/v1/evidence/EV-0001/file").await.bytes, b"abc");
}

#[tokio::test]
async fn missing_files_and_those_that_nothing_names_are_found() {
    let app = TestApp::new().await;
    attach_text(&app.app, Some("bill"), "bill.txt", "abc")
        .await
        .expect("attached");
    let place = kept_files(&app).remove(0);
    std::fs::remove_file(&place).expect("gone");
    let stray = "f".repeat(64);
    let folder = app.app.folder.join("evidence");
    std::fs::create_dir_all(folder.join("ff")).expect("a folder");
    std::fs::write(folder.join("ff").join(&stray), b"left over").expect("written");
    std::fs::write(folder.join("note.txt"), b"put here by hand").expect("written");
    let faults = verify(&app.app).await.expect("looks");
    let found: Vec<(FaultKind, String, bool)> = faults
        .iter()
        .map(|fault| (fault.kind, fault.id.clone(), fault.is_serious()))
        .collect();
    assert_eq!(
        found,
        [
            (FaultKind::Missing, "bill".to_owned(), true),
            (FaultKind::Unreferenced, "evidence/note.txt".to_owned(), false),
            (FaultKind::Unreferenced, format!("sha256:{stray}"), false),
        ]
    );
    let refused = app.get("/api/v1/evidence/bill/file").await.refused(409);
    assert!(
        refused["detail"]
            .as_str()
            .unwrap()
            .starts_with("bill.txt, attached on 2026-12-01, is missing.")
    );
}

#[tokio::test]
async fn a_record_is_neither_changed_nor_deleted_and_stands_in_the_trail() {
    let app = TestApp::new().await;
    attach_text(&app.app, None, "bill.txt", "abc")
        .await
        .expect("attached");
    let file = app.app.folder.join("wheelwort.db");
    let address = format!("sqlite://{}", file.display());
    let mut c = sqlx::SqliteConnection::connect(&address).await.expect("opens");
    for (sql, says) in [
        ("UPDATE evidence SET note = 'better'", "evidence never changes"),
        ("DELETE FROM evidence", "evidence is never deleted"),
    ] {
        let refused = sqlx::query(sql).execute(&mut c).await.expect_err(sql).to_string();
        assert!(refused.contains(says), "{refused}");
    }
    let line: String = sqlx::query_scalar(
        "SELECT document FROM audit_line WHERE thing = 'evidence' AND thing_id = 'EV-0001'",
    )
    .fetch_one(&mut c)
    .await
    .expect("a line");
    assert!(
        line.contains("\"did\":\"attached\"") && line.contains(&hash(b"abc")),
        "{line}"
    );
}
