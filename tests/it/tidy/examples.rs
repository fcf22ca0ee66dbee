//! Small bad files, one for each rule, so that the scan is known to find something; and good ones that it must leave alone.

use super::paths::{module_of, named_in};
use super::rules::all;
use super::{LONGEST_FILE, NOWHERE};

/// The findings for a Rust file with this body below its first line, which is line 1.
fn rust(path: &str, body: &str) -> Vec<String> {
    all(path, &format!("//! An example.\n{body}"))
}

#[track_caller]
fn refused(path: &str, body: &str, place_and_words: &str) {
    let found = rust(path, body);
    assert_eq!(found.len(), 1, "{path}: {body}\n{found:#?}");
    let (place, words) = place_and_words.split_once(' ').unwrap();
    assert!(found[0].starts_with(&format!("{path}:{place}: ")), "{found:?}");
    assert!(found[0].contains(words), "{found:?}");
}

#[track_caller]
fn fine(path: &str, body: &str) {
    assert_eq!(rust(path, body), Vec::<String>::new(), "{path}: {body}");
}

#[test]
fn core_names_nothing_of_ours_outside() {
    refused(
        "src/core/engine/graph.rs",
        "use crate::store::Store;",
        "2 `core` sees only",
    );
    refused(
        "src/core/engine/graph.rs",
        "\nfn f() { crate::pathways::list(); }",
        "3 `core` does not see the things",
    );
    refused(
        "src/core/engine/graph.rs",
        "use super::super::super::library::gwp;",
        "2 `core` sees only",
    );
}

#[test]
fn rooms_of_core_look_down() {
    fine(
        "src/core/engine/graph.rs",
        "use crate::core::{units::Quantity, models::haul, engine::resolve};",
    );
    refused(
        "src/core/units/parse.rs",
        "use crate::core::domain::Gas;",
        "2 `domain` does not stand below `units`",
    );
    refused(
        "src/core/levers/target.rs",
        "use crate::core::{engine::run, checks::Finding};",
        "2 `checks` does not",
    );
    refused(
        "src/core/models/chp.rs",
        "use crate::{\n core::{\n  units::Quantity,\n  engine,\n }};",
        "5 `engine` does not",
    );
    refused(
        "src/core/models/chp.rs",
        "use crate::core;",
        "2 not core as a whole",
    );
    refused(
        "src/core/models/chp.rs",
        "use crate::core::*;",
        "2 is no room of core",
    );
    fine("src/core/mod.rs", "pub use self::engine::evaluate;");
}

#[test]
fn super_and_inline_modules_are_followed() {
    fine(
        "src/core/models/chp.rs",
        "use super::boiler;\nmod tests { use super::*; use super::super::haul; }",
    );
    refused(
        "src/core/models/chp.rs",
        "mod tests {\n use super::super::super::engine::run; }",
        "3 `engine`",
    );
    refused(
        "src/core/models/chp.rs",
        "mod a {} fn f() { super::super::engine::run() }",
        "2 `engine`",
    );
}

#[test]
fn an_import_is_followed_to_where_it_is_used() {
    refused(
        "src/statements/mod.rs",
        "use crate::pathways;\nfn f() { pathways::sql::all(); }",
        "3 never its `sql`",
    );
    refused(
        "src/statements/mod.rs",
        "use crate::pathways as p;\nfn f() { p::sql::all(); }",
        "3 never its `sql`",
    );
}

#[test]
fn things_have_an_order_and_keep_their_sql() {
    fine(
        "src/statements/mod.rs",
        "use crate::{pathways, people::Actor, statements::sql, library::Library, web::paging};",
    );
    refused(
        "src/factors/mod.rs",
        "use crate::pathways::Pathway;",
        "2 `pathways` stands above `factors`",
    );
    refused(
        "src/consignments/api.rs",
        "use crate::statements::api::get;",
        "2 never its `api`",
    );
    refused(
        "src/store/pool.rs",
        "use crate::people;",
        "2 does not see the things",
    );
}

#[test]
fn outer_rooms_see_what_the_table_says() {
    fine(
        "src/cli/serve.rs",
        "use crate::{app::App, web::router, pathways::list, config::Config};",
    );
    fine("src/main.rs", "use wheelwort::cli;");
    fine("src/web/router.rs", "use crate::pathways::{api, pages};");
    refused(
        "src/web/problem.rs",
        "use crate::pathways;",
        "2 does not see the things",
    );
    refused(
        "src/main.rs",
        "use wheelwort::store::Store;",
        "2 `main` sees only",
    );
    refused(
        "src/charts/ladder.rs",
        "use crate::library::Library;",
        "2 `charts` sees only",
    );
    refused(
        "src/attic/mod.rs",
        "use crate::core::units;",
        "2 `attic` is no room",
    );
    refused("src/app.rs", "use crate::attic;", "2 `attic` is no room");
}

#[test]
fn crates_stay_in_their_places() {
    fine("src/pathways/sql.rs", "use sqlx::query;");
    fine("src/pathways/api/list.rs", "use axum::Json;");
    fine(
        "src/core/units/parse.rs",
        "// sqlx::query\nconst A: &str = \"axum::Json\"; /* axum::Json */ const B: char = '\"';",
    );
    refused("src/pathways/mod.rs", "use sqlx::query;", "2 sqlx belongs in");
    refused(
        "src/pathways/mod.rs",
        "#[derive(sqlx::FromRow)]\nstruct Row;",
        "2 sqlx belongs in",
    );
    refused(
        "src/people/rights.rs",
        "fn f(_: axum::http::StatusCode) {}",
        "2 axum belongs in",
    );
    refused("src/apis.rs", "use axum::Json;", "2 axum belongs in");
    refused(
        "src/store/pool.rs",
        "fn f() -> anyhow::Result<()> { Ok(()) }",
        "2 anyhow belongs in",
    );
}

#[test]
fn core_is_pure() {
    refused(
        "src/core/ledger/mod.rs",
        "use std::{collections::{BTreeMap, HashMap}, fmt};",
        "2 no std::collections::HashMap",
    );
    refused(
        "src/core/ledger/mod.rs",
        "fn f() { let _ = std::fs::read(\"a\"); }",
        "2 no std::fs",
    );
    refused("src/core/ledger/mod.rs", "pub async fn f() {}", "2 no `async`");
    refused("src/core/ledger/mod.rs", "fn f() { unsafe {} }", "2 no `unsafe`");
    fine("src/core/uncertainty/sampler.rs", "fn f() { unsafe {} }");
    fine("src/store/pool.rs", "use std::fs; pub async fn f() {}");
}

#[test]
fn a_file_says_its_job_and_stays_short() {
    assert_eq!(all("src/app.rs", "use std::fmt;\n").len(), 1);
    let long = format!("//! Long.\n{}", "\n".repeat(LONGEST_FILE));
    assert_eq!(
        all("src/app.rs", &long),
        [format!(
            "src/app.rs:601: a code file has at most {LONGEST_FILE} lines: split it"
        )]
    );
    assert_eq!(all("tests/it/api.rs", &long).len(), 1);
    assert!(all("tests/it/snapshots/api.snap", &long).is_empty());
    assert!(all("src/library/editions/a/factors.csv", &long).is_empty());
}

#[test]
fn some_text_stands_nowhere() {
    for banned in NOWHERE {
        assert_eq!(
            all("README.md", &format!("One\nsee {banned} there\n")).len(),
            1,
            "{banned}"
        );
    }
}

#[test]
fn templates_carry_no_style_script_or_raw_text() {
    let page = |text: &str| all("templates/pathways/show.html", &format!("{text}\n")).len();
    assert_eq!(
        page("<p class=\"net\">{{ net }}</p><script src=\"/assets/a.js\" defer></script>"),
        0
    );
    assert_eq!(
        page("<p title='style=x onclick=y'>the style=\"\" of it</p><a href=\"https://example.org/\">law</a>"),
        0
    );
    assert_eq!(
        page("<p {% if a > b %}class=\"x\"{% endif %}>a</p>{{ one | default(\"safe\") }}{{ a|safer }}"),
        0
    );
    assert_eq!(page("<p\n style=\"color: red\">"), 1);
    assert_eq!(page("<p {% if wide %}style=\"width: 1px\"{% endif %}>"), 1);
    assert_eq!(page("<style>p {}</style>"), 1);
    assert_eq!(page("<script>go()</script>"), 1);
    assert_eq!(page("<script type=\"module\">go()</script>"), 1);
    assert_eq!(page("<button class=\"{{ a > b }}\" onClick=\"go()\">"), 1);
    assert_eq!(page("<img alt=\"\" src=\"https://example.org/a.png\">"), 1);
    assert_eq!(page("<link rel=\"stylesheet\" href=\"//example.org/a.css\">"), 1);
    assert_eq!(page("{{ name|safe }}"), 1);
    assert_eq!(page("{{ name | trim | safe }}"), 1);
    assert_eq!(page("{{ name|escape(\"none\") }}"), 1);
    assert_eq!(page("{% autoescape false %}"), 1);
    assert_eq!(
        rust(
            "src/web/page.rs",
            "#[template(path = \"a.html\", escape = \"none\")]\nstruct A;"
        )
        .len(),
        1
    );
}

#[test]
fn paths_are_written_out_with_their_lines() {
    let module = module_of("src/core/engine/graph.rs");
    assert_eq!(module, ["core", "engine", "graph"]);
    let source = "use super::{self as up, resolve::{Plan, *}};\nfn f<'a>(_: &'a str) { let _ = r#\"crate::x\"#; up::go() }\n";
    let found: Vec<(usize, String)> = named_in(&module, source, "wheelwort")
        .into_iter()
        .map(|named| (named.line, named.path.join("::")))
        .collect();
    let want = [
        (1, "crate::core::engine"),
        (1, "crate::core::engine::resolve::Plan"),
        (1, "crate::core::engine::resolve::*"),
        (2, "crate::core::engine::go"),
    ];
    assert_eq!(found, want.map(|(line, path)| (line, path.to_owned())));
}
