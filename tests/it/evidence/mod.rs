//! Evidence from outside: files in, records, bytes out, what is altered or gone, and what names what.

mod api;
mod backing;
mod bucket;
mod examples;
mod pages;
mod sight;
mod sound;

use crate::support::{Answer, TestApp};
use axum::body::Body;
use std::path::PathBuf;

/// What parts the fields of the forms sent here.
const BOUNDARY: &str = "made-up-boundary";

/// A part of a form: name, name of the file if it is one, bytes.
type Part<'p> = (&'p str, Option<&'p str>, &'p [u8]);

/// A form with files as a browser writes it.
fn form(parts: &[Part]) -> Vec<u8> {
    let mut out = Vec::new();
    for (name, file_name, bytes) in parts {
        out.extend_from_slice(format!("--{BOUNDARY}\r\n").as_bytes());
        let file = file_name.map_or_else(String::new, |file_name| format!("; filename=\"{file_name}\""));
        out.extend_from_slice(
            format!("Content-Disposition: form-data; name=\"{name}\"{file}\r\n").as_bytes(),
        );
        if file_name.is_some() {
            out.extend_from_slice(b"Content-Type: text/plain\r\n");
        }
        out.extend_from_slice(b"\r\n");
        out.extend_from_slice(bytes);
        out.extend_from_slice(b"\r\n");
    }
    out.extend_from_slice(format!("--{BOUNDARY}--\r\n").as_bytes());
    out
}

/// Posts a form with files.
async fn post(app: &TestApp, path: &str, body: impl Into<Body>) -> Answer {
    let kind = format!("multipart/form-data; boundary={BOUNDARY}");
    app.ask("POST", path, &[("content-type", &kind)], body).await
}

/// Attaches a file over the API.
async fn attach(app: &TestApp, parts: &[Part<'_>]) -> Answer {
    post(app, "/api/v1/evidence", form(parts)).await
}

/// How many records there are.
async fn count(app: &TestApp) -> usize {
    let list = app.get("/api/v1/evidence?limit=200").await.json();
    list["items"].as_array().expect("items").len()
}

/// Every file below the folder of evidence.
fn kept_files(app: &TestApp) -> Vec<PathBuf> {
    let mut found = Vec::new();
    let mut folders = vec![app.app.folder.join("evidence")];
    while let Some(folder) = folders.pop() {
        let Ok(entries) = std::fs::read_dir(folder) else {
            continue;
        };
        for path in entries.map(|entry| entry.expect("an entry").path()) {
            if path.is_dir() {
                folders.push(path);
            } else {
                found.push(path);
            }
        }
    }
    found.sort();
    found
}

/// Names that lie in the folder of the data beside the database.
fn beside_the_data(app: &TestApp) -> Vec<String> {
    let entries = std::fs::read_dir(&app.app.folder).expect("a folder");
    let names = entries.map(|entry| {
        entry
            .expect("an entry")
            .file_name()
            .to_string_lossy()
            .into_owned()
    });
    let mut names: Vec<String> = names.filter(|name| !name.starts_with("wheelwort.db")).collect();
    names.sort();
    names
}
