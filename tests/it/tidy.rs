//! Keeps the house in order: who may import whom, and the habits that no compiler checks. The rules are the tables below;
//! each finding names file, line and rule. DEVELOPERS.md tells why each rule is there.

mod examples;
mod paths;
mod rules;

use std::{fs, path::Path};

// ---- the rules ----------------------------------------------------------------------------------------------------------------

/// Our own name in `use wheelwort::...`.
const CRATE: &str = "wheelwort";

/// The things people work with, lowest first: each sees the use cases of those before it, so there is no circle.
const THINGS: &[&str] = &[
    "audit_trail",
    "people",
    "evidence",
    "calculators",
    "rules",
    "factors",
    "pathways",
    "statements",
    "consignments",
];

/// Rooms inside `core` with their height: a room sees itself and every lower one, not its neighbours.
const CORE: &[(&str, u8)] = &[
    ("units", 0),
    ("domain", 1),
    ("documents", 2),
    ("models", 3),
    ("engine", 4),
    ("uncertainty", 5),
    ("levers", 5),
    ("checks", 5),
    ("ledger", 5),
    ("evaluate", 6),
    ("statement", 7),
];

/// What each room (a folder of `src`, or a file of it) sees beside itself. `THINGS` stands for all things in their order.
/// A room that is not here may not be named at all.
const ROOMS: &[(&str, &[&str])] = &[
    ("core", &[]),
    ("library", &["core"]),
    ("charts", &["core"]),
    ("exchange", &["core"]),
    ("clock", &[]),
    ("config", &[]),
    ("telemetry", &["config"]),
    ("app", &["core", "library", "store", "clock", "config"]),
    ("store", &["core", "app", "clock"]),
    ("web", &["core", "app", "store", "clock", "config", "telemetry"]),
    (
        "things",
        &[
            "core", "library", "charts", "exchange", "store", "web", "app", "clock", "config", "THINGS",
        ],
    ),
    (
        "demo",
        &["core", "library", "exchange", "store", "app", "clock", "THINGS"],
    ),
    ("cli", &["*"]),
    ("lib", &["*"]),
    ("main", &["cli"]),
];

/// Single files that see more than their room does: the router lays the things' routes together.
const MORE: &[(&str, &[&str])] = &[("src/web/router.rs", &["THINGS", "api", "pages", "demo"])];

/// Crates that only some places may name: a file name, or the beginning of a path.
const CRATES: &[(&str, &[&str])] = &[
    ("sqlx", &["sql.rs", "sql/", "src/store/", "src/store.rs"]),
    (
        "axum",
        &["api.rs", "api/", "pages.rs", "pages/", "src/web/", "src/web.rs"],
    ),
    (
        "axum_extra",
        &["api.rs", "api/", "pages.rs", "pages/", "src/web/", "src/web.rs"],
    ),
    ("utoipa_axum", &["api.rs", "api/", "src/web/", "src/web.rs"]),
    ("anyhow", &["src/cli/", "src/cli.rs", "src/main.rs"]),
];

/// What the pure core may not name: no I/O, no clock, no chance of the machine's, and no order that changes between runs.
const NOT_IN_CORE: &[&str] = &[
    "std::fs",
    "std::net",
    "std::env",
    "std::process",
    "std::time::SystemTime",
    "std::time::Instant",
    "std::collections::HashMap",
    "std::collections::HashSet",
    "tokio",
    "tower",
    "tower_http",
    "tracing",
    "rand",
];

/// No code file is longer; data, snapshots and assets are not code.
const LONGEST_FILE: usize = 600;

/// Words and beginnings of paths that no file of ours holds, whatever its kind. Cut in two so that this file does not hold it either.
const NOWHERE: &[&str] = &[
    concat!("/ho", "me/"),
    concat!("/ro", "ot/"),
    concat!("/Us", "ers/"),
    concat!("/wo", "rk/"),
    concat!("TO", "DO"),
    concat!("FIX", "ME"),
    concat!("XX", "X"),
    concat!("lorem ", "ipsum"),
];

/// The only `|safe` of the templates: template and expression. A type that escapes itself (`HtmlSafe`) needs no entry.
const SAFE: &[(&str, &str)] = &[];

// ---- the house ----------------------------------------------------------------------------------------------------------------

/// A file of ours, its path from the root of the repository.
struct Source {
    path: String,
    text: String,
}

/// Every text file of the folders that hold code, sorted by path.
fn sources() -> Vec<Source> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut found = Vec::new();
    for folder in ["src", "tests", "templates", "migrations", "docker", "docs", ".ci"] {
        collect(root, &root.join(folder), &mut found);
    }
    for entry in fs::read_dir(root)
        .unwrap()
        .map(Result::unwrap)
        .filter(|entry| entry.path().is_file())
    {
        add(root, &entry.path(), &mut found);
    }
    found.sort_by(|a, b| a.path.cmp(&b.path));
    found
}

fn collect(root: &Path, folder: &Path, found: &mut Vec<Source>) {
    let Ok(entries) = fs::read_dir(folder) else { return };
    for path in entries.map(|entry| entry.unwrap().path()) {
        if path.is_dir() {
            collect(root, &path, found);
        } else {
            add(root, &path, found);
        }
    }
}

fn add(root: &Path, file: &Path, found: &mut Vec<Source>) {
    let path = file
        .strip_prefix(root)
        .unwrap()
        .to_str()
        .unwrap()
        .replace('\\', "/");
    if path == ".git" {
        return; // a linked work tree names its repository here; it is no file of the project
    }
    // Fonts and pictures are not text, and are left out; a Rust file that is not text does not compile.
    if let Ok(text) = String::from_utf8(fs::read(file).unwrap()) {
        found.push(Source { path, text });
    }
}

#[test]
fn the_house_is_tidy() {
    let sources = sources();
    assert!(
        sources.iter().any(|source| source.path == "src/lib.rs"),
        "the scan found no src/lib.rs"
    );
    let findings: Vec<String> = sources
        .iter()
        .flat_map(|source| rules::all(&source.path, &source.text))
        .collect();
    assert!(
        findings.is_empty(),
        "{} findings\n{}\n",
        findings.len(),
        findings.join("\n")
    );
}

#[test]
fn every_allowed_safe_is_used() {
    let sources = sources();
    for (template, expression) in SAFE {
        let used = sources.iter().any(|source| {
            source.path == *template && rules::safe_expressions(&source.text).any(|(_, e)| e == *expression)
        });
        assert!(
            used,
            "{template} no longer marks `{expression}` as safe: take it off the list"
        );
    }
}
