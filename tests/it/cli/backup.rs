//! `check`, `backup` and `restore` as people meet them, beside a service that runs; and a folder that is served already.

use super::serve::Running;
use super::{program, run};
use crate::support::documents::chain;
use std::path::Path;
use std::process::Output;

fn serve(data: &Path) -> Running {
    Running::start(
        program()
            .arg("serve")
            .arg("--data")
            .arg(data)
            .args(["--listen", "127.0.0.1:0"]),
    )
}

fn told(output: &Output) -> (Option<i32>, String, String) {
    let text = |bytes: &[u8]| String::from_utf8(bytes.to_vec()).expect("text");
    (output.status.code(), text(&output.stdout), text(&output.stderr))
}

fn check(data: &Path) -> (Option<i32>, String, String) {
    told(&run(
        &["check".as_ref(), "--data".as_ref(), data.as_os_str()],
        b"",
    ))
}

fn copy(command: &str, data: &Path, file: &Path) -> (Option<i32>, String, String) {
    told(&run(
        &[
            command.as_ref(),
            "--data".as_ref(),
            data.as_os_str(),
            file.as_os_str(),
        ],
        b"",
    ))
}

/// Stores a pathway as the command line may: without a network.
async fn filled(data: &Path) -> (uuid::Uuid, Vec<u8>) {
    let app = wheelwort::app::App::open(
        &data.join("wheelwort.db"),
        wheelwort::clock::Clock::system(),
        wheelwort::library::book(),
    )
    .await
    .expect("opens");
    let document = wheelwort::core::documents::Pathway::from_value(&chain()).expect("a pathway");
    let id = wheelwort::pathways::create(&app, document, None)
        .await
        .expect("saved")
        .id;
    let assessment = wheelwort::pathways::assessment(&app, id, None, None)
        .await
        .expect("assessed");
    crate::support::attach_text(&app, Some("EV-1"), "bill.txt", "abc")
        .await
        .expect("attached");
    app.close().await;
    (id, assessment.bytes.to_vec())
}

#[tokio::test]
async fn a_restored_copy_passes_the_check_and_answers_the_same() {
    let folder = tempfile::tempdir().unwrap();
    let data = folder.path().join("data");
    std::fs::create_dir(&data).unwrap();
    let (id, before) = filled(&data).await;
    let running = serve(&data);
    let (code, out, errors) = check(&data);
    assert_eq!(code, Some(0), "{out}{errors}");
    assert!(
        out.starts_with("Sound: ") && out.contains("ends at line 2 with sha256:"),
        "{out}"
    );
    let file = folder.path().join("today.zip");
    let (code, out, errors) = copy("backup", &data, &file);
    assert_eq!(code, Some(0), "{errors}");
    assert!(out.contains("today.zip"), "{out}");
    assert_eq!(running.stop("-TERM").0, Some(0));
    let (code, _, errors) = copy("backup", &data, &file);
    assert_eq!(code, Some(1));
    assert!(errors.contains("is there already"), "{errors}");

    let back = folder.path().join("back");
    let (code, out, errors) = copy("restore", &back, &file);
    assert_eq!(code, Some(0), "{errors}");
    assert!(out.starts_with("Restored into"), "{out}");
    assert_eq!(check(&back).0, Some(0));
    let bill = "evidence/ba/ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
    std::fs::write(back.join(bill), "abd").unwrap();
    let (code, out, _) = check(&back);
    assert_eq!(code, Some(1));
    assert!(
        out.starts_with("evidence of Own organisation, EV-1: bill.txt is not the file that was attached"),
        "{out}"
    );
    std::fs::write(back.join(bill), "abc").unwrap();
    let (code, _, errors) = copy("restore", &back, &file);
    assert_eq!(code, Some(1));
    assert!(errors.contains("is not empty"), "{errors}");
    let app = wheelwort::app::App::open(
        &back.join("wheelwort.db"),
        wheelwort::clock::Clock::system(),
        wheelwort::library::book(),
    )
    .await
    .unwrap();
    let after = wheelwort::pathways::assessment(&app, id, None, None)
        .await
        .unwrap();
    assert_eq!(after.bytes.to_vec(), before);
    app.close().await;
}

#[tokio::test]
async fn what_was_changed_behind_its_back_is_found() {
    for (sql, words) in [
        (
            "DROP TRIGGER revision_never_changes; UPDATE revision SET document = replace(document, 'period', 'perioc')",
            "Its document was changed",
        ),
        (
            "UPDATE input SET amount = amount + 1 WHERE amount IS NOT NULL",
            "rows written from",
        ),
        (
            "DROP TRIGGER audit_line_never_changes; UPDATE audit_line SET did = 'read'",
            "audit trail of Own organisation",
        ),
        (
            "UPDATE pathway SET organisation_id = 99",
            "organisation that is not there",
        ),
    ] {
        let folder = tempfile::tempdir().unwrap();
        filled(folder.path()).await;
        let options = sqlx::sqlite::SqliteConnectOptions::new()
            .filename(folder.path().join("wheelwort.db"))
            .foreign_keys(false);
        let pool = sqlx::SqlitePool::connect_with(options).await.unwrap();
        if sql.contains("organisation_id = 99") {
            sqlx::query("DROP TRIGGER pathway_keeps_its_identity")
                .execute(&pool)
                .await
                .unwrap();
        }
        sqlx::raw_sql(sql).execute(&pool).await.unwrap();
        pool.close().await;
        let (code, out, errors) = check(folder.path());
        assert_eq!(code, Some(1), "{sql}: {out}{errors}");
        assert!(out.contains(words), "{sql}: {out}");
        assert!(out.lines().last().unwrap().starts_with("Not sound: "), "{out}");
    }
}

#[test]
fn a_folder_without_data_and_a_broken_file_are_told() {
    let folder = tempfile::tempdir().unwrap();
    let (code, out, _) = check(folder.path());
    assert_eq!(code, Some(1));
    assert!(out.contains("there is no wheelwort.db in it"), "{out}");
    assert_eq!(
        std::fs::read_dir(folder.path()).unwrap().count(),
        0,
        "nothing was made"
    );
    std::fs::write(folder.path().join("wheelwort.db"), "not a database ".repeat(600)).unwrap();
    let (code, out, _) = check(folder.path());
    assert_eq!(code, Some(1));
    assert!(out.contains("broken"), "{out}");
}

#[tokio::test]
async fn a_folder_is_served_once() {
    let folder = tempfile::tempdir().unwrap();
    let running = serve(folder.path());
    let second = run(
        &[
            "serve".as_ref(),
            "--data".as_ref(),
            folder.path().as_os_str(),
            "--listen".as_ref(),
            "127.0.0.1:0".as_ref(),
        ],
        b"",
    );
    let (code, out, errors) = told(&second);
    assert_eq!((code, out.as_str()), (Some(1), ""));
    let named = folder.path().display().to_string();
    assert!(
        errors.contains("Another wheelwort serves") && errors.contains(&named),
        "{errors}"
    );
    assert_eq!(running.stop("-TERM").0, Some(0));
    assert_eq!(serve(folder.path()).stop("-TERM").0, Some(0), "free again");
}
