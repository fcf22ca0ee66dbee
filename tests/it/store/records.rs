//! What the tables themselves promise: records that cannot change, statements that fit, migrations that can run again.

use super::support::{Bench, force, number, pathway, settings, wheat};
use serde_json::json;
use sqlx::{Executor, SqlSafeStr};
use wheelwort::pathways;
use wheelwort::store::Store;

#[tokio::test]
async fn every_statement_can_be_prepared() {
    let bench = Bench::new().await;
    let statements = wheelwort::all_statements();
    assert!(statements.len() > 20);
    let mut reader = bench.app.store.reader().await.expect("a reader");
    for sql in statements {
        (*reader)
            .prepare(sql.into_sql_str())
            .await
            .unwrap_or_else(|error| panic!("{sql}\n{error}"));
        assert!(!sql.contains('?'), "placeholders are $1, $2, ...: {sql}");
    }
    drop(reader);
    bench.app.close().await;
}

/// Lists and what is done once may go through all pathways of an organisation; nothing else may, and nothing goes
/// through a whole table.
#[tokio::test]
async fn every_statement_finds_its_rows_by_an_index() {
    let bench = Bench::new().await;
    let mut reader = bench.app.store.reader().await.expect("a reader");
    // The plan of an INSERT names scans for children of the new row, which run only after a broken foreign key.
    for sql in wheelwort::all_statements()
        .into_iter()
        .filter(|sql| !sql.contains("INSERT INTO"))
    {
        let explain = sqlx::AssertSqlSafe(format!("EXPLAIN QUERY PLAN {sql}"));
        let plan: Vec<(i64, i64, i64, String)> = sqlx::query_as(explain)
            .fetch_all(&mut *reader)
            .await
            .unwrap_or_else(|error| panic!("{sql}\n{error}"));
        let goes_through_all = [
            "LIMIT $10",
            "p.example = 1",
            "example = 1 AND NOT EXISTS",
            // Rule sets and settings are read whole, and seldom; a new version of a rule set drops what was kept under it.
            "FROM own_rule_set",
            "FROM check_settings",
            "DELETE FROM assessment",
            // The people of an organisation are few, and their page shows all.
            "FROM person",
            "FROM member",
            "FROM invitation",
            // The last of a chain, by the index of the chain.
            "ORDER BY number DESC LIMIT 1",
        ];
        for (_, _, _, step) in plan {
            // A list that is bound as JSON, or made on the way, is no table.
            let ours =
                step == "SCAN CONSTANT ROW" || step == "SCAN hop" || step.starts_with("SCAN json_each");
            let whole = step.starts_with("SCAN") && !ours && !sql.contains("FROM organisation");
            let all_of_one = step.ends_with("(organisation_id=?)")
                && !goes_through_all.iter().any(|text| sql.contains(text));
            assert!(!whole && !all_of_one, "{step}\n{sql}");
        }
    }
    drop(reader);
    bench.app.close().await;
}

/// Every statement names the organisation, except those that look for organisations, and one that looks for files which
/// no organisation names.
#[test]
fn every_statement_names_the_organisation() {
    for sql in wheelwort::all_statements() {
        let of_files = sql.contains("e.hash = json_each.value");
        assert!(sql.contains("organisation") || of_files, "{sql}");
    }
}

#[tokio::test]
async fn tables_are_strict_and_migrations_run_again() {
    let bench = Bench::new().await;
    const LOOSE: &str = "SELECT count(*) FROM pragma_table_list \
                         WHERE schema = 'main' AND type = 'table' AND strict = 0 AND name NOT LIKE '\\_sqlx%' ESCAPE '\\' \
                           AND name NOT LIKE 'sqlite\\_%' ESCAPE '\\'";
    assert_eq!(bench.number(LOOSE).await, 0);
    assert!(
        bench
            .number("SELECT count(*) FROM pragma_table_list WHERE strict = 1")
            .await
            >= 9
    );
    pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    let schema = "SELECT count(*) FROM sqlite_schema";
    let before = bench.number(schema).await;
    let bench = bench.restarted().await;
    assert_eq!(bench.number(schema).await, before);
    assert_eq!(bench.number("SELECT count(*) FROM pathway").await, 1);
    assert_eq!(bench.number("SELECT count(*) FROM organisation").await, 1);
    bench.app.close().await;
}

#[tokio::test]
async fn a_revision_is_neither_changed_nor_deleted() {
    let bench = Bench::new().await;
    let mut example = wheat("example");
    example["example"] = json!(true);
    pathways::create(&bench.app, pathway("own"), None)
        .await
        .expect("saved");
    pathways::create(&bench.app, super::support::read(&example), None)
        .await
        .expect("saved");
    for (sql, says) in [
        (
            "UPDATE revision SET reason = 'better'",
            "a revision never changes",
        ),
        (
            "UPDATE revision SET document = '{}' WHERE example = 1",
            "a revision never changes",
        ),
        ("DELETE FROM revision", "a revision is never deleted"),
        (
            "DELETE FROM revision WHERE example = 1",
            "a revision is never deleted",
        ),
        ("DELETE FROM pathway WHERE example = 0", "archived, never deleted"),
        ("UPDATE pathway SET public_id = '0', id = 9", "keeps its identity"),
        ("UPDATE pathway SET current_revision = 0", "only goes forward"),
        // Marking a record as an example does not open a way round.
        (
            "UPDATE pathway SET example = 1; DELETE FROM pathway",
            "a revision is never deleted",
        ),
        ("DELETE FROM organisation", "FOREIGN KEY"),
    ] {
        let refused = bench.force(sql).await.expect_err(sql);
        assert!(refused.contains(says), "{sql}: {refused}");
    }
    assert_eq!(bench.number("SELECT count(*) FROM revision").await, 2);
    assert_eq!(
        bench
            .number("SELECT count(*) FROM pathway WHERE example = 1")
            .await,
        1
    );
    bench.app.close().await;
}

#[tokio::test]
async fn columns_take_only_their_type() {
    let folder = tempfile::tempdir().expect("a folder");
    let store = Store::open_with(&folder.path().join("t.db"), settings())
        .await
        .expect("opens");
    const WRONG: &str = "INSERT INTO organisation (public_id, name, created_at) \
                         VALUES ('00000000-0000-7000-8000-000000000001', 'x', 'today')";
    assert!(
        force(&store, WRONG)
            .await
            .expect_err("refused")
            .contains("cannot store TEXT")
    );
    assert_eq!(number(&store, "SELECT count(*) FROM organisation").await, 0);
    store.close().await;
}
