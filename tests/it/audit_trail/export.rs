//! The trail taken along: an outsider verifies it with the file alone, and a spreadsheet runs nothing of it.

use crate::support::TestApp;
use crate::support::documents::chain;
use crate::support::test_app::preparer;
use serde_json::{Value, json};
use sha2::{Digest, Sha256};
use wheelwort::app::who::Who;

fn sha256(text: &str) -> String {
    let digits: String = Sha256::digest(text)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect();
    format!("sha256:{digits}")
}

/// What somebody without our program does: hash each line, hold it against the next.
fn verified(file: &str) -> Result<usize, String> {
    let mut lines: Vec<&str> = file.lines().collect();
    let end: Value = serde_json::from_str(lines.pop().ok_or("empty")?).map_err(|e| e.to_string())?;
    if end["format"] != "wheelwort.audit-end/1" {
        return Err("the file broke off".into());
    }
    let mut previous = String::new();
    for (index, text) in lines.iter().enumerate() {
        let line: Value = serde_json::from_str(text).map_err(|e| e.to_string())?;
        if line["number"] != json!(index + 1) || line["previous"] != json!(previous) {
            return Err(format!("line {}", index + 1));
        }
        previous = sha256(text);
    }
    let closed = end["number"] == json!(lines.len()) && end["lines"] == json!(lines.len());
    if closed && end["hash"] == json!(previous) {
        Ok(lines.len())
    } else {
        Err("the end".into())
    }
}

#[tokio::test]
async fn an_outsider_verifies_the_export_with_the_file_alone() {
    let app = TestApp::new().await;
    let empty = app.get("/api/v1/audit-trail.ndjson").await.text();
    assert_eq!(verified(&empty), Ok(0));
    for number in 0..1_203 {
        let mut document = chain();
        document["name"] = json!(format!("Pathway {number}"));
        // More lines than are read at once; settings are the cheapest change.
        let answer = app
            .put(
                "/api/v1/settings",
                "*",
                &json!({ "capacity_percent": 101 + number % 90 }),
            )
            .await;
        assert_eq!(answer.status, 200, "{}", answer.text());
    }
    app.stores_chain().await;
    let answer = app.get("/api/v1/audit-trail.ndjson").await;
    assert_eq!(answer.header("content-type"), "application/x-ndjson");
    assert!(
        answer
            .header("content-disposition")
            .contains("audit-trail.ndjson")
    );
    let file = answer.text();
    assert_eq!(verified(&file), Ok(1_204));
    let without: Vec<&str> = file
        .lines()
        .enumerate()
        .filter(|(n, _)| *n != 600)
        .map(|(_, l)| l)
        .collect();
    assert_eq!(verified(&without.join("\n")), Err("line 601".into()));
    let cut: Vec<&str> = file.lines().take(1_000).collect();
    assert_eq!(verified(&cut.join("\n")), Err("the file broke off".into()));
    let changed = file.replacen("I. Marsh", "I. Harsh", 1);
    assert_eq!(verified(&changed), Err("line 2".into()));
    let some = app.get("/api/v1/audit-trail.ndjson?thing=pathway").await.text();
    assert_eq!(some.lines().count(), 2);
}

#[tokio::test]
async fn formulas_in_the_table_are_made_harmless() {
    let app = TestApp::new().await;
    let router = app.asked_by(Who {
        name: "=cmd|' /C calc'!A0".into(),
        ..preparer()
    });
    let request = crate::support::test_app::request(
        "POST",
        "/api/v1/pathways?reason=%40SUM(1)",
        &[("content-type", "application/json")],
        chain().to_string(),
    );
    let answer = crate::support::test_app::answer_of(&router, request).await;
    assert_eq!(answer.status, 201, "{}", answer.text());
    let answer = app.get("/api/v1/audit-trail.csv").await;
    assert_eq!(answer.header("content-type"), "text/csv; charset=utf-8");
    let table = answer.text();
    let lines: Vec<&str> = table.lines().collect();
    assert_eq!(lines.len(), 2);
    assert!(lines[0].starts_with("number,at,by,"), "{table}");
    assert!(
        lines[1].contains("\"'=cmd|' /C calc'!A0\"") && lines[1].contains("\"'@SUM(1)\""),
        "{table}"
    );
}
