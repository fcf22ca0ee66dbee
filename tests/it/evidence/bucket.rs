//! Files in a store elsewhere that speaks the S3 protocol. Asks a stand-in on this machine, which `tests/evidence_store/run`
//! starts and names in `EVIDENCE_ENDPOINT`.

use super::{attach, count, form, kept_files, post};
use crate::support::{TestApp, client};
use axum::Extension;
use reqwest::Method;
use sha2::{Digest, Sha256};
use std::sync::Arc;
use wheelwort::app::{EvidenceStore, S3};
use wheelwort::config::Secret;
use wheelwort::evidence::{FaultKind, verify};
use wheelwort::web::actor::Asking;
use wheelwort::web::{Shell, router};

fn endpoint() -> String {
    std::env::var("EVIDENCE_ENDPOINT").expect("EVIDENCE_ENDPOINT: start me with tests/evidence_store/run")
}

/// A request to the stand-in by somebody with a key: it asks that there is one, and looks no closer.
async fn with_key(method: Method, address: String, body: &'static str) -> reqwest::Response {
    let asked = client()
        .request(method, address)
        .header("authorization", "AWS made-up:made-up")
        .body(body);
    let answer = asked.send().await.expect("the stand-in answers");
    assert!(answer.status().is_success(), "{}", answer.status());
    answer
}

/// The service with its evidence in a bucket of that name, fresh.
async fn with_bucket(name: &str) -> TestApp {
    with_key(Method::PUT, format!("{}/{name}", endpoint()), "").await;
    let mut app = TestApp::new().await;
    let bucket = S3 {
        endpoint: endpoint(),
        bucket: name.to_owned(),
        region: "us-east-1".into(),
        key_id: "made-up".into(),
        secret: Secret::new("made-up"),
    };
    app.app = app.app.clone().keeping_evidence_in(EvidenceStore::S3(bucket));
    let asking = Asking {
        organisation: app.app.organisation,
        who: Arc::new(crate::support::test_app::preparer()),
    };
    app.router = router(app.app.clone(), Shell::default()).layer(Extension(asking));
    app
}

/// Where the stand-in has the object of some bytes.
fn object(bucket: &str, bytes: &[u8]) -> String {
    let digits: String = Sha256::digest(bytes)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect();
    let (first, _) = digits.split_at(2);
    format!("{}/{bucket}/evidence/{first}/{digits}", endpoint())
}

#[tokio::test]
#[ignore = "needs a store that speaks S3: tests/evidence_store/run"]
async fn a_file_goes_into_the_bucket_once_and_comes_back() {
    let app = with_bucket("once").await;
    for id in ["EV-0001", "EV-0002"] {
        let answer = attach(&app, &[("file", Some("bill.txt"), b"abc")]).await;
        assert_eq!(answer.status, 201, "{}", answer.text());
        assert_eq!(answer.json()["id"], id);
        assert_eq!(
            app.get(&format!("/api/v1/evidence/{id}/file")).await.bytes,
            b"abc"
        );
    }
    let there = with_key(Method::GET, object("once", b"abc"), "").await;
    assert_eq!(there.bytes().await.expect("bytes").as_ref(), b"abc");
    assert_eq!(verify(&app.app).await.expect("looks"), []);
    assert!(kept_files(&app).is_empty(), "nothing beside the data");
}

#[tokio::test]
#[ignore = "needs a store that speaks S3: tests/evidence_store/run"]
async fn a_large_file_goes_in_parts() {
    let app = with_bucket("parts").await;
    let large: Vec<u8> = (0..23_000_000_u32)
        .map(|n| n.to_le_bytes()[n as usize % 3])
        .collect();
    let answer = attach(&app, &[("file", Some("large.bin"), &large)]).await;
    assert_eq!(answer.status, 201, "{}", answer.text());
    let file = app.get("/api/v1/evidence/EV-0001/file").await;
    assert!(file.bytes == large, "{} bytes came back", file.bytes.len());
    assert_eq!(verify(&app.app).await.expect("looks"), []);
}

#[tokio::test]
#[ignore = "needs a store that speaks S3: tests/evidence_store/run"]
async fn altered_missing_and_unnamed_objects_are_found() {
    let app = with_bucket("faults").await;
    for bytes in [&b"abc"[..], b"xyz"] {
        attach(&app, &[("file", Some("bill.txt"), bytes)]).await;
    }
    with_key(Method::PUT, object("faults", b"abc"), "abd").await;
    with_key(Method::DELETE, object("faults", b"xyz"), "").await;
    with_key(Method::PUT, object("faults", b"stray"), "stray").await;
    let mut found: Vec<(FaultKind, String)> = verify(&app.app)
        .await
        .expect("looks")
        .into_iter()
        .map(|fault| (fault.kind, fault.id))
        .collect();
    found.sort();
    let stray = Sha256::digest(b"stray")
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect::<String>();
    assert_eq!(
        found,
        [
            (FaultKind::Missing, "EV-0002".to_owned()),
            (FaultKind::Altered, "EV-0001".to_owned()),
            (FaultKind::Unreferenced, format!("sha256:{stray}")),
        ]
    );
    for id in ["EV-0001", "EV-0002"] {
        app.get(&format!("/api/v1/evidence/{id}/file")).await.refused(409);
    }
    // The same bytes put it right.
    attach(&app, &[("file", Some("bill.txt"), b"abc")]).await;
    assert_eq!(app.get("/api/v1/evidence/EV-0001/file").await.bytes, b"abc");
}

#[tokio::test]
#[ignore = "needs a store that speaks S3: tests/evidence_store/run"]
async fn a_store_that_refuses_is_told_and_leaves_no_row() {
    let mut app = with_bucket("refused").await;
    let EvidenceStore::S3(bucket) = (*app.app.evidence_store).clone() else {
        panic!("a bucket");
    };
    let gone = S3 {
        bucket: "not-there".into(),
        ..bucket
    };
    app.app = app.app.clone().keeping_evidence_in(EvidenceStore::S3(gone));
    let asking = Asking {
        organisation: app.app.organisation,
        who: Arc::new(crate::support::test_app::preparer()),
    };
    app.router = router(app.app.clone(), Shell::default()).layer(Extension(asking));
    let refused = post(&app, "/api/v1/evidence", form(&[("file", Some("a"), b"a")]))
        .await
        .refused(503);
    assert!(!refused.to_string().contains("127.0.0.1"), "{refused}");
    assert_eq!(count(&app).await, 0);
}
