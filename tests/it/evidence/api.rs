//! The API of evidence: attach, list, read, fetch; and everything that is refused.

use super::{attach, beside_the_data, count, form, kept_files, post};
use crate::support::TestApp;
use crate::support::test_app::pointers;
use axum::body::{Body, Bytes};
use std::time::Duration;
use tokio_stream::StreamExt;
use wheelwort::web::Shell;
use wheelwort::web::extract::Limits;

/// Of FIPS 180-2, annex B.1: the hash of "abc".
const HASH_OF_ABC: &str = "sha256:ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";

#[tokio::test]
async fn a_file_is_attached_read_and_fetched() {
    let app = TestApp::new().await;
    let answer = attach(
        &app,
        &[
            ("file", Some("bill.txt"), b"abc"),
            ("note", None, b"gas bill, meter 3"),
        ],
    )
    .await;
    assert_eq!(answer.status, 201, "{}", answer.text());
    assert_eq!(answer.header("location"), "/api/v1/evidence/EV-0001");
    let record = answer.json();
    for (field, value) in [
        ("id", "EV-0001"),
        ("file_name", "bill.txt"),
        ("media_type", "text/plain"),
        ("hash", HASH_OF_ABC),
        ("note", "gas bill, meter 3"),
        ("attached_by", "I. Marsh"),
        ("attached_at", "2026-12-01T12:00:00Z"),
    ] {
        assert_eq!(record[field], value, "{field}");
    }
    assert_eq!((&record["size"], &record["example"]), (&3.into(), &false.into()));
    let read = app.get("/api/v1/evidence/EV-0001").await.json();
    assert_eq!(read["uses"], serde_json::json!([]));
    assert_eq!(read["hash"], HASH_OF_ABC);

    let file = app.get("/api/v1/evidence/EV-0001/file").await;
    assert_eq!((file.status.as_u16(), file.bytes.as_slice()), (200, &b"abc"[..]));
    assert_eq!(file.header("content-type"), "application/octet-stream");
    assert_eq!(file.header("content-length"), "3");
    assert_eq!(file.header("x-content-type-options"), "nosniff");
    assert_eq!(
        file.header("content-disposition"),
        "attachment; filename=\"EV-0001\"; filename*=UTF-8''bill.txt"
    );
    let have = [("if-none-match", file.header("etag"))];
    let again = app
        .ask("GET", "/api/v1/evidence/EV-0001/file", &have, Body::empty())
        .await;
    assert_eq!((again.status.as_u16(), again.bytes.len()), (304, 0));
    app.get("/api/v1/evidence/EV-0002").await.refused(404);
    app.get("/api/v1/evidence/EV-0002/file").await.refused(404);
}

#[tokio::test]
async fn the_same_file_twice_is_two_records_and_one_file() {
    let app = TestApp::new().await;
    for (id, name) in [("EV-0001", "one.txt"), ("EV-0002", "two.txt")] {
        let record = attach(&app, &[("file", Some(name), b"abc")]).await.json();
        assert_eq!(
            (&record["id"], &record["hash"]),
            (&id.into(), &HASH_OF_ABC.into())
        );
    }
    attach(&app, &[("file", Some("three.txt"), b"abd")]).await;
    assert_eq!((count(&app).await, kept_files(&app).len()), (3, 2));
    let folder = app.app.folder.join("evidence").join("ba");
    assert!(
        kept_files(&app).iter().any(|file| file.starts_with(&folder)),
        "by the first two digits"
    );
    assert_eq!(
        beside_the_data(&app),
        ["evidence"],
        "nothing is left of the way in"
    );
}

#[tokio::test]
async fn ids_are_wished_or_counted_past_wished_ones() {
    let app = TestApp::new().await;
    let wished = attach(&app, &[("id", None, b"EV-0001"), ("file", Some("a"), b"a")]).await;
    assert_eq!(wished.header("location"), "/api/v1/evidence/EV-0001");
    let counted = attach(&app, &[("file", Some("b"), b"b")]).await.json();
    assert_eq!(counted["id"], "EV-0002");
    let taken = attach(&app, &[("id", None, b"EV-0001"), ("file", Some("c"), b"c")]).await;
    assert!(taken.refused(409)["detail"].as_str().unwrap().contains("EV-0001"));
    // The same bytes once more under their id: a request that is sent again changes nothing.
    let again = attach(&app, &[("id", None, b"EV-0001"), ("file", Some("a"), b"a")]).await;
    assert_eq!(
        (again.status.as_u16(), again.header("location")),
        (200, "/api/v1/evidence/EV-0001")
    );
    assert_eq!(again.json(), wished.json());
    assert_eq!((count(&app).await, kept_files(&app).len()), (2, 2));
}

#[tokio::test]
async fn the_list_comes_in_pages_newest_first() {
    let app = TestApp::new().await;
    for n in 0..5 {
        attach(&app, &[("file", Some("a"), format!("{n}").as_bytes())]).await;
    }
    let (mut seen, mut path) = (Vec::new(), "/api/v1/evidence?limit=2".to_owned());
    loop {
        let answer = app.get(&path).await;
        let page = answer.json();
        for item in page["items"].as_array().unwrap() {
            seen.push(item["id"].as_str().unwrap().to_owned());
        }
        let Some(next) = page["next"].as_str() else { break };
        assert!(answer.header("link").contains("rel=\"next\""));
        path = format!("/api/v1/evidence?limit=2&after={next}");
    }
    assert_eq!(seen, ["EV-0005", "EV-0004", "EV-0003", "EV-0002", "EV-0001"]);
    app.get("/api/v1/evidence?after=EV-9").await.refused(400);
    app.get("/api/v1/evidence?limit=0").await.refused(400);
}

#[tokio::test]
async fn what_is_wrong_is_told_at_its_part() {
    let app = TestApp::new().await;
    let long = "x".repeat(1_001);
    let parts: [super::Part; 3] = [
        ("id", None, b"a b"),
        ("note", None, long.as_bytes()),
        ("file", Some("a"), b""),
    ];
    let all = attach(&app, &parts).await;
    assert_eq!(pointers(&all.refused(422)), ["/id", "/note", "/file"]);
    assert_eq!(pointers(&attach(&app, &[]).await.refused(422)), ["/file"]);
    assert_eq!(
        pointers(&attach(&app, &[("file", Some(""), b"")]).await.refused(422)),
        ["/file"]
    );
    let dots = attach(&app, &[("id", None, b".."), ("file", Some("a"), b"a")]).await;
    assert_eq!(pointers(&dots.refused(422)), ["/id"]);
    let unknown = attach(&app, &[("colour", None, b"green"), ("file", Some("a"), b"a")]).await;
    assert!(
        unknown.refused(400)["detail"]
            .as_str()
            .unwrap()
            .contains("colour")
    );
    attach(&app, &[("file", Some("a"), b"a"), ("file", Some("b"), b"b")])
        .await
        .refused(400);
    attach(&app, &[("id", None, b"\xff"), ("file", Some("a"), b"a")])
        .await
        .refused(400);
    app.post("/api/v1/evidence", &serde_json::json!({}))
        .await
        .refused(415);
    let bare = [("content-type", "multipart/form-data")];
    app.ask("POST", "/api/v1/evidence", &bare, "x").await.refused(400);
    post(&app, "/api/v1/evidence", "no form at all")
        .await
        .refused(400);
    assert_eq!((count(&app).await, kept_files(&app).len()), (0, 0));
}

#[tokio::test]
async fn hostile_file_names_are_shown_and_lead_nowhere() {
    let app = TestApp::new().await;
    let names = [
        "../../../../etc/passwd",
        "..\\..\\evil.bat",
        "/absolute",
        "CON",
        "x%22; filename=%22y",
        "<script>alert(1)</script>",
        "\u{202e}fdp.exe",
        "小麦 \u{1F33E}.pdf",
        "'; DROP TABLE evidence; --",
    ];
    for (index, name) in names.iter().enumerate() {
        let answer = attach(&app, &[("file", Some(name), format!("{index}").as_bytes())]).await;
        assert_eq!(answer.status, 201, "{name}: {}", answer.text());
        let record = answer.json();
        let shown = record["file_name"].as_str().unwrap();
        assert!(
            !shown.contains(['/', '\\', '\u{0}', '\u{202e}', '\r', '\n']),
            "{shown}"
        );
        let file = app
            .get(&format!(
                "/api/v1/evidence/{}/file",
                record["id"].as_str().unwrap()
            ))
            .await;
        let disposition = file.header("content-disposition");
        let rest = disposition
            .strip_prefix("attachment; filename=\"")
            .expect(disposition);
        assert_eq!(rest.matches(['"', ';']).count(), 2, "{disposition}");
        assert_eq!(file.bytes, format!("{index}").into_bytes());
    }
    assert_eq!(
        (kept_files(&app).len(), beside_the_data(&app)),
        (names.len(), vec!["evidence".to_owned()])
    );
}

fn with_limits(evidence_bytes: usize) -> Shell {
    Shell {
        limits: Limits {
            evidence_bytes,
            body_bytes: 2_000,
            body_pause: Duration::from_millis(200),
            ..Limits::default()
        },
        ..Shell::default()
    }
}

#[tokio::test]
async fn a_file_beyond_the_limit_is_refused_and_leaves_nothing() {
    let app = TestApp::with(with_limits(10_000)).await;
    let most = vec![b'x'; 10_000];
    assert_eq!(attach(&app, &[("file", Some("a"), &most)]).await.status, 201);
    for more in [10_001, 11_500, 100_000] {
        let body = form(&[("file", Some("a"), &vec![b'x'; more])]);
        let pieces: Vec<Result<Bytes, std::io::Error>> = body
            .chunks(512)
            .map(|piece| Ok(Bytes::copy_from_slice(piece)))
            .collect();
        let untold = post(
            &app,
            "/api/v1/evidence",
            Body::from_stream(tokio_stream::iter(pieces)),
        )
        .await;
        for refused in [
            attach(&app, &[("file", Some("a"), &vec![b'x'; more])]).await,
            untold,
        ] {
            let problem = refused.refused(413);
            assert!(
                problem["errors"][0]["remedy"]
                    .as_str()
                    .unwrap()
                    .contains("10000 bytes"),
                "{problem}"
            );
        }
    }
    let long = vec![b'x'; 3_000];
    attach(&app, &[("note", None, &long), ("file", Some("a"), b"a")])
        .await
        .refused(413);
    assert_eq!((count(&app).await, kept_files(&app).len()), (1, 1));
    assert_eq!(beside_the_data(&app), ["evidence"]);
}

#[tokio::test]
async fn an_upload_that_breaks_off_or_stops_leaves_no_row() {
    let app = TestApp::with(with_limits(10_000)).await;
    let whole = form(&[("file", Some("a"), &[b'x'; 5_000])]);
    for half in [1, 60, 200, 3_000, whole.len() - 4] {
        let begin = Ok(Bytes::copy_from_slice(&whole[..half]));
        let broken = tokio_stream::iter(vec![begin, Err(std::io::Error::other("gone"))]);
        post(&app, "/api/v1/evidence", Body::from_stream(broken))
            .await
            .refused(400);
        let short = tokio_stream::iter(vec![Ok::<_, std::io::Error>(Bytes::copy_from_slice(
            &whole[..half],
        ))]);
        post(&app, "/api/v1/evidence", Body::from_stream(short))
            .await
            .refused(400);
    }
    let begin = Ok::<_, std::io::Error>(Bytes::copy_from_slice(&whole[..3_000]));
    let silent = tokio_stream::iter(vec![begin]).chain(tokio_stream::pending());
    post(&app, "/api/v1/evidence", Body::from_stream(silent))
        .await
        .refused(408);
    assert_eq!((count(&app).await, kept_files(&app).len()), (0, 0));
    assert!(beside_the_data(&app).is_empty(), "{:?}", beside_the_data(&app));
}

#[tokio::test]
async fn a_sender_that_goes_away_leaves_no_row() {
    let app = TestApp::new().await;
    let whole = form(&[("file", Some("a"), &[b'x'; 5_000])]);
    let begin = Ok::<_, std::io::Error>(Bytes::copy_from_slice(&whole[..3_000]));
    let silent = Body::from_stream(tokio_stream::iter(vec![begin]).chain(tokio_stream::pending()));
    let asked = post(&app, "/api/v1/evidence", silent);
    assert!(
        tokio::time::timeout(Duration::from_millis(200), asked)
            .await
            .is_err()
    );
    assert_eq!((count(&app).await, kept_files(&app).len()), (0, 0));
    assert!(beside_the_data(&app).is_empty());
}
