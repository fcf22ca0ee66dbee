//! The chain: whole after ordinary work, and broken at the right link after every kind of tampering.

use crate::store::support::{Bench, fertilised, pathway};
use proptest::prelude::*;
use serde_json::json;
use wheelwort::app::who::Who;
use wheelwort::audit_trail::verify::Broken;
use wheelwort::audit_trail::{self, Deed, Line};
use wheelwort::core::documents::canonical;
use wheelwort::pathways::{self, Expected};
use wheelwort::store::StoreError;

const LINES: i64 = 6;

/// A chain of six lines, and the means to tamper with it.
async fn six() -> Bench {
    let bench = Bench::new().await;
    let app = &bench.app;
    let one = pathways::create(app, pathway("one"), Some("begun".into()))
        .await
        .expect("saved")
        .id;
    pathways::create(app, pathway("two"), None).await.expect("saved");
    for (number, amount) in [(1, 170.0), (2, 175.0), (3, 180.0)] {
        pathways::replace(
            app,
            one,
            fertilised("one", amount),
            Expected::Number(number),
            None,
        )
        .await
        .expect("saved");
    }
    pathways::archive(app, one, Expected::Any)
        .await
        .expect("archived");
    bench
}

async fn broken(bench: &Bench) -> Option<Broken> {
    let chains = audit_trail::verify(&bench.app.store).await.expect("walked");
    assert_eq!(chains.len(), 1);
    chains[0].broken.clone()
}

/// What tampering needs: the triggers out of the way, as somebody with the file would do it.
async fn unguarded(bench: &Bench) {
    for trigger in [
        "DROP TRIGGER audit_line_never_changes",
        "DROP TRIGGER audit_line_is_never_deleted",
        "DROP TRIGGER audit_line_follows_the_last",
        "DROP TRIGGER audit_line_moves_the_head",
        "DROP TRIGGER audit_head_only_goes_forward",
        "DROP TRIGGER audit_head_is_never_deleted",
    ] {
        bench.force(trigger).await.expect("dropped");
    }
}

async fn tampered(statements: &[&'static str]) -> (i64, String) {
    let bench = six().await;
    assert_eq!(broken(&bench).await, None, "whole before");
    unguarded(&bench).await;
    for sql in statements {
        bench.force(sql).await.expect("tampered");
    }
    let found = broken(&bench)
        .await
        .unwrap_or_else(|| panic!("not seen: {statements:?}"));
    bench.app.close().await;
    (found.number, found.what)
}

#[tokio::test]
async fn ordinary_work_leaves_a_whole_chain() {
    let bench = six().await;
    let chains = audit_trail::verify(&bench.app.store).await.expect("walked");
    assert_eq!((chains[0].number, chains[0].hash.len()), (LINES, 71));
    assert_eq!(chains[0].broken, None);
    let bench = bench.restarted().await;
    // The test's clock gives the same ids again at the same time.
    bench.app.clock.advance(std::time::Duration::from_secs(1));
    pathways::create(&bench.app, pathway("three"), None)
        .await
        .expect("saved");
    assert_eq!(broken(&bench).await, None);
    bench.app.close().await;
}

#[tokio::test]
async fn the_first_broken_link_is_named() {
    let changed =
        "UPDATE audit_line SET document = replace(document, '\"begun\"', '\"began\"') WHERE number = 1";
    let cases: [(&[&'static str], i64, &str); 9] = [
        (&[changed], 1, "text was changed"),
        (
            &["DELETE FROM audit_line WHERE number = 3"],
            3,
            "Line 3 is missing",
        ),
        (
            &["DELETE FROM audit_line WHERE number = 1"],
            1,
            "Line 1 is missing",
        ),
        (
            &["DELETE FROM audit_line WHERE number = 6"],
            6,
            "lines were taken off its end",
        ),
        (
            &["UPDATE audit_line SET thing_id = 'other' WHERE number = 4"],
            4,
            "\"thing_id\"",
        ),
        (
            &["UPDATE audit_line SET at = at + 1 WHERE number = 4"],
            4,
            "\"at\"",
        ),
        (
            &[
                "UPDATE audit_line SET number = 99 WHERE number = 2",
                "UPDATE audit_line SET number = 2 WHERE number = 3",
                "UPDATE audit_line SET number = 3 WHERE number = 99",
            ],
            2,
            "another hash than line 1",
        ),
        (
            &["UPDATE audit_head SET number = 5"],
            6,
            "head of the chain names line 5",
        ),
        (&["DELETE FROM audit_head"], 1, "head of the chain names line 0"),
    ];
    for (statements, number, words) in cases {
        let (at, what) = tampered(statements).await;
        assert_eq!(at, number, "{statements:?}: {what}");
        assert!(what.contains(words), "{what}");
    }
}

/// Who changes a line and hashes it again is found at the next line, or at the head.
#[tokio::test]
async fn a_line_that_was_hashed_again_is_found() {
    for (number, found_at) in [(2_i64, 3), (LINES, LINES)] {
        let bench = six().await;
        unguarded(&bench).await;
        let again = bench.app.store.write(move |c| {
            Box::pin(async move {
                let text: String = sqlx::query_scalar("SELECT document FROM audit_line WHERE number = $1")
                    .bind(number)
                    .fetch_one(&mut *c)
                    .await?;
                let mut line: Line = serde_json::from_str(&text).expect("a line");
                line.by.name = "somebody else".into();
                let bytes = canonical::bytes(&line).expect("bytes");
                sqlx::query("UPDATE audit_line SET document = $2, hash = $3 WHERE number = $1")
                    .bind(number)
                    .bind(String::from_utf8(bytes.clone()).expect("text"))
                    .bind(canonical::hash(&bytes))
                    .execute(c)
                    .await?;
                Ok::<_, StoreError>(())
            })
        });
        again.await.expect("tampered");
        let found = broken(&bench).await.expect("seen");
        assert_eq!(found.number, found_at, "{}", found.what);
        bench.app.close().await;
    }
}

/// The limit of what a file can tell of itself, stated: whoever cuts lines and the head alike leaves a shorter whole chain.
/// The number and hash that were noted elsewhere show it.
#[tokio::test]
async fn a_cut_with_its_head_shows_only_against_a_note() {
    let bench = six().await;
    let noted = audit_trail::verify(&bench.app.store).await.expect("walked")[0].clone();
    unguarded(&bench).await;
    bench
        .force("DELETE FROM audit_line WHERE number > 4")
        .await
        .expect("cut");
    bench
        .force("UPDATE audit_head SET number = 4, hash = (SELECT hash FROM audit_line WHERE number = 4)")
        .await
        .expect("set back");
    let cut = audit_trail::verify(&bench.app.store).await.expect("walked")[0].clone();
    assert_eq!((cut.broken.clone(), cut.number), (None, 4));
    assert!(noted.number > cut.number && noted.hash != cut.hash);
    bench.app.close().await;
}

#[tokio::test]
async fn the_guards_refuse_what_no_program_of_ours_does() {
    let bench = six().await;
    let insert = "INSERT INTO audit_line (organisation_id, number, at, thing, thing_id, did, document, hash) \
                  SELECT organisation_id, number + 2, at, thing, thing_id, did, document, hash FROM audit_line WHERE number = 6";
    for (sql, words) in [
        (
            "UPDATE audit_line SET did = 'x' WHERE number = 1",
            "never changes",
        ),
        ("DELETE FROM audit_line WHERE number = 6", "never deleted"),
        ("UPDATE audit_head SET number = 2", "only goes forward"),
        ("DELETE FROM audit_head", "never deleted"),
        (insert, "follows the last one"),
    ] {
        let error = bench.force(sql).await.expect_err(sql);
        assert!(error.contains(words), "{sql}: {error}");
    }
    assert_eq!(broken(&bench).await, None);
    bench.app.close().await;
}

/// A save that fails leaves no line, and a chain of another organisation is another chain.
#[tokio::test]
async fn a_line_goes_with_its_change_and_chains_stand_apart() {
    let bench = six().await;
    let lost = bench.app.store.write({
        let organisation = bench.app.organisation;
        move |c| {
            Box::pin(async move {
                let deed = Deed::new("saved", "pathway", "x", json!({}));
                audit_trail::add(c, organisation, &Who::command(), 0, deed).await?;
                Err::<(), _>(StoreError::NotFound)
            })
        }
    });
    lost.await.expect_err("undone");
    let other = bench
        .app
        .store
        .add_organisation(bench.app.clock.id(), "Other", 0)
        .await
        .expect("made");
    pathways::create(&bench.app.on_behalf_of(other), pathway("theirs"), None)
        .await
        .expect("saved");
    let chains = audit_trail::verify(&bench.app.store).await.expect("walked");
    let ends: Vec<(i64, bool)> = chains.iter().map(|c| (c.number, c.broken.is_none())).collect();
    assert_eq!(ends, [(LINES, true), (1, true)]);
    bench.app.close().await;
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(24))]

    /// Whichever byte of whichever document is changed, the chain does not hold, and not after the changed line.
    #[test]
    fn any_changed_byte_is_seen(number in 1..=LINES, place in 0.0f64..1.0, byte in 0x20u8..0x7f) {
        let runtime = tokio::runtime::Builder::new_multi_thread().enable_all().build().expect("threads");
        runtime.block_on(async {
            let bench = six().await;
            unguarded(&bench).await;
            let changed = bench.app.store.write(move |c| Box::pin(async move {
                let text: String = sqlx::query_scalar("SELECT document FROM audit_line WHERE number = $1")
                    .bind(number).fetch_one(&mut *c).await?;
                let mut bytes = text.into_bytes();
                #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a place in a short text")]
                let at = (place * bytes.len() as f64) as usize;
                let same = bytes[at] == byte;
                bytes[at] = byte;
                sqlx::query("UPDATE audit_line SET document = $2 WHERE number = $1")
                    .bind(number).bind(String::from_utf8(bytes).expect("ASCII")).execute(c).await?;
                Ok::<_, StoreError>(same)
            }));
            let same = changed.await.expect("changed");
            let found = broken(&bench).await;
            bench.app.close().await;
            match found {
                None => assert!(same),
                Some(found) => assert_eq!((found.number, same), (number, false)),
            }
        });
    }
}
