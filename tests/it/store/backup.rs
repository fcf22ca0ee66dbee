//! Backups: whole under load, brought back byte for byte, refused where anything is missing, and never half written.

use super::support::{Bench, fertilised, pathway};
use std::fs;
use std::path::Path;
use std::time::Duration;
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::pathways::{self, Expected};
use wheelwort::store::backup::{BackupError, back_up, restore};
use wheelwort::{audit_trail, library};

fn folder_of(bench: &Bench) -> std::path::PathBuf {
    bench.file().parent().expect("a folder").to_owned()
}

/// Names in a folder, sorted.
fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(folder)
        .expect("read")
        .map(|entry| entry.expect("read").file_name().to_string_lossy().into_owned())
        .collect();
    names.sort();
    names
}

async fn opened(folder: &Path) -> App {
    App::open(&folder.join("wheelwort.db"), Clock::system(), library::book())
        .await
        .expect("opens")
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_backup_under_load_is_whole_and_answers_the_same() {
    let bench = Bench::new().await;
    let app = &bench.app;
    let first = pathways::create(app, pathway("first"), None)
        .await
        .expect("saved");
    let evidence = folder_of(&bench).join("evidence/ab");
    fs::create_dir_all(&evidence).expect("made");
    fs::write(evidence.join("abcd"), b"a meter reading").expect("written");
    fs::write(evidence.join("abcd#1"), b"half an upload").expect("written");
    let writing = {
        let app = app.clone();
        tokio::spawn(async move {
            for number in 1.. {
                let document = fertilised("first", 100.0 + f64::from(number));
                let saved = pathways::replace(&app, first.id, document, Expected::Any, None).await;
                if saved.is_err() {
                    return;
                }
                tokio::task::yield_now().await;
            }
        })
    };
    tokio::time::sleep(Duration::from_millis(100)).await;
    let out = tempfile::tempdir().expect("a folder");
    let file = out.path().join("today.zip");
    let manifest = back_up(&folder_of(&bench), &file, &app.clock)
        .await
        .expect("backed up");
    writing.abort();
    let paths: Vec<&str> = manifest.files.iter().map(|held| held.path.as_str()).collect();
    assert_eq!(paths, ["wheelwort.db", "evidence/ab/abcd"]);
    assert_eq!(names(out.path()), ["today.zip"]);

    let back = out.path().join("deep/data");
    let read = restore(&file, &back).await.expect("restored");
    assert_eq!(read, manifest);
    assert_eq!(names(out.path()), ["deep", "today.zip"]);
    assert_eq!(
        fs::read(back.join("evidence/ab/abcd")).expect("read"),
        b"a meter reading"
    );
    let copy = opened(&back).await;
    assert!(copy.store.unsound().await.expect("looked").is_empty());
    let chains = audit_trail::verify(&copy.store).await.expect("walked");
    assert!(chains[0].broken.is_none() && chains[0].number >= 2, "{chains:?}");
    assert!(pathways::damaged(&copy).await.expect("looked").is_empty());
    // The same revision gives the same assessment, byte for byte.
    let there = pathways::read(&copy, first.id).await.expect("there");
    let number = Some(there.revision);
    let one = pathways::assessment(&copy, first.id, number, None)
        .await
        .expect("assessed");
    let other = pathways::assessment(app, first.id, number, None)
        .await
        .expect("assessed");
    assert_eq!(one.bytes, other.bytes);
    copy.close().await;
    bench.app.close().await;
}

#[tokio::test]
async fn what_is_there_is_left_alone() {
    let bench = Bench::new().await;
    let folder = folder_of(&bench);
    let out = tempfile::tempdir().expect("a folder");
    let file = out.path().join("today.zip");
    fs::write(&file, b"mine").expect("written");
    let refused = back_up(&folder, &file, &bench.app.clock).await;
    assert!(matches!(refused, Err(BackupError::Exists(_))));
    assert_eq!(fs::read(&file).expect("read"), b"mine");
    let empty = back_up(out.path(), &out.path().join("x.zip"), &bench.app.clock).await;
    assert!(matches!(empty, Err(BackupError::NoData(_))));
    fs::remove_file(&file).expect("gone");
    back_up(&folder, &file, &bench.app.clock)
        .await
        .expect("backed up");
    let full = restore(&file, &folder).await;
    assert!(matches!(full, Err(BackupError::NotEmpty(_))));
    let a_file = restore(&file, &file).await;
    assert!(matches!(a_file, Err(BackupError::NotEmpty(_))), "{a_file:?}");
    let empty = out.path().join("empty");
    fs::create_dir(&empty).expect("made");
    restore(&file, &empty).await.expect("an empty folder takes it");
    assert_eq!(names(&empty), ["wheelwort.db"]);
    bench.app.close().await;
}

/// Cut anywhere, or changed anywhere: refused, and nothing stands afterwards.
#[tokio::test]
async fn a_damaged_backup_is_refused_with_nothing_written() {
    let bench = Bench::new().await;
    pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    let out = tempfile::tempdir().expect("a folder");
    let file = out.path().join("whole.zip");
    back_up(&folder_of(&bench), &file, &bench.app.clock)
        .await
        .expect("backed up");
    let whole = fs::read(&file).expect("read");
    let bad = out.path().join("bad.zip");
    let to = out.path().join("data");
    let refused = async |bytes: &[u8]| {
        fs::write(&bad, bytes).expect("written");
        let words = match restore(&bad, &to).await {
            Err(error @ BackupError::Unusable { .. }) => error.to_string(),
            other => panic!("{other:?}"),
        };
        assert_eq!(names(out.path()), ["bad.zip", "whole.zip"]);
        words
    };
    for part in [0, 1, 3, 5, 7, 9] {
        let cut = whole.len() * part / 10;
        let words = refused(&whole[..cut]).await;
        assert!(
            words.contains("bad.zip") && words.contains("Nothing was brought back"),
            "{words}"
        );
    }
    refused(&whole[..whole.len() - 1]).await;
    let mut changed = whole.clone();
    changed[whole.len() / 2] ^= 1;
    refused(&changed).await;
    refused(b"This is a letter, not a backup.").await;
    restore(&file, &to).await.expect("the whole one is taken");
    bench.app.close().await;
}

/// An archive that names places outside of the folder, or files that its manifest does not know.
#[tokio::test]
async fn an_archive_that_reaches_out_is_refused() {
    use std::io::Write;
    let out = tempfile::tempdir().expect("a folder");
    let hash = "sha256:e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855";
    let held = |path: &str| format!("{{\"path\":\"{path}\",\"bytes\":0,\"sha256\":\"{hash}\"}}");
    let manifest = |files: &str| {
        format!(
            "{{\"format\":\"wheelwort.backup/1\",\"program\":\"0\",\"made_at\":\"\",\"files\":[{files}]}}"
        )
    };
    let both = |path: &str| format!("{},{}", held("wheelwort.db"), held(path));
    for (files, names) in [
        (both("../out"), vec!["wheelwort.db", "../out"]),
        (
            both("evidence/../../out"),
            vec!["wheelwort.db", "evidence/../../out"],
        ),
        (both("wheelwort.db"), vec!["wheelwort.db"]),
        (held("wheelwort.db"), vec!["wheelwort.db", "evidence/more"]),
        (held("evidence/x"), vec!["evidence/x"]),
        (held("wheelwort.db"), vec![]),
        ("".into(), vec![]),
    ] {
        let file = out.path().join("bad.zip");
        let mut archive = zip::ZipWriter::new(fs::File::create(&file).expect("made"));
        let options = zip::write::SimpleFileOptions::default();
        for name in names {
            archive.start_file(name, options).expect("begun");
        }
        archive.start_file("manifest.json", options).expect("begun");
        archive.write_all(manifest(&files).as_bytes()).expect("written");
        archive.finish().expect("finished");
        let refused = restore(&file, &out.path().join("data")).await;
        assert!(
            matches!(refused, Err(BackupError::Unusable { .. })),
            "{files}: {refused:?}"
        );
        assert_eq!(self::names(out.path()), ["bad.zip"], "{files}");
    }
}
