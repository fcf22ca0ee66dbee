//! Evaluation of many documents, a line each.

use crate::support::documents::{all_bad, chain, chain_with, ten_megabytes};
use crate::support::{Answer, TestApp};
use axum::body::Body;
use serde_json::{Value, json};
use std::convert::Infallible;
use std::time::Duration;
use tokio_stream::StreamExt;
use tokio_stream::wrappers::ReceiverStream;
use wheelwort::web::Shell;
use wheelwort::web::extract::Limits;

const NDJSON: (&str, &str) = ("content-type", "application/x-ndjson");

fn lines(answer: &Answer) -> Vec<Value> {
    assert_eq!(
        (answer.status.as_u16(), answer.header("content-type")),
        (200, NDJSON.1)
    );
    let text = answer.text();
    assert!(text.is_empty() || text.ends_with('\n'));
    text.lines()
        .map(|line| serde_json::from_str(line).expect("JSON"))
        .collect()
}

async fn batch(app: &TestApp, body: impl Into<Body>) -> Vec<Value> {
    lines(&app.ask("POST", "/api/v1/evaluate/batch", &[NDJSON], body).await)
}

#[tokio::test]
async fn a_bad_line_does_not_stop_the_rest_and_order_is_kept() {
    let app = TestApp::new().await;
    let mut body = Vec::new();
    let mut expected = Vec::new();
    for (number, bad) in all_bad().into_iter().enumerate() {
        let amount = json!(100 + number);
        body.extend(
            chain_with("/stages/0/inputs/0/amount", amount)
                .to_string()
                .into_bytes(),
        );
        body.push(b'\n');
        expected.push(200);
        if !bad.bytes.is_empty() {
            body.extend(bad.bytes);
            body.push(b'\n');
            expected.push(bad.status);
        }
    }
    let lines = batch(&app, body).await;
    assert_eq!(lines.len(), expected.len());
    let mut last = 0.0;
    for (index, (line, status)) in lines.iter().zip(expected).enumerate() {
        assert_eq!(line["line"], index + 1);
        if status == 200 {
            let net = line["assessment"]["net"]["g_co2e_per_mj"].as_f64().unwrap();
            assert!(net > last, "more fertiliser, more gas: {last} {net}");
            last = net;
            assert!(line.get("problem").is_none());
        } else {
            assert_eq!(line["problem"]["status"], status, "{line}");
            assert!(line.get("assessment").is_none());
        }
    }
    assert_eq!(app.stored().await, 0);
}

#[tokio::test]
async fn a_line_is_what_the_single_evaluation_answers() {
    let app = TestApp::new().await;
    let one = app.post("/api/v1/evaluate", &chain()).await;
    let answer = app
        .ask("POST", "/api/v1/evaluate/batch", &[NDJSON], chain().to_string())
        .await;
    assert_eq!(
        answer.text(),
        format!("{{\"line\":1,\"assessment\":{}}}\n", one.text())
    );
}

#[tokio::test]
async fn empty_lines_are_counted_and_left_out() {
    let app = TestApp::new().await;
    let body = format!("\n{0}\r\n\n  \n{0}", chain());
    let numbers: Vec<u64> = batch(&app, body)
        .await
        .iter()
        .map(|line| line["line"].as_u64().unwrap())
        .collect();
    assert_eq!(numbers, [2, 5]);
    assert_eq!(batch(&app, "").await.len(), 0);
}

#[tokio::test]
async fn a_line_that_is_too_long_is_refused_alone() {
    let app = TestApp::new().await;
    let mut body = ten_megabytes();
    body.extend(format!("\n{}\n", chain()).into_bytes());
    let lines = batch(&app, body).await;
    assert_eq!(lines[0]["problem"]["status"], 413);
    assert!(lines[1]["assessment"].is_object());
}

#[tokio::test]
async fn a_batch_has_an_end() {
    let limits = Limits {
        batch_lines: 3,
        ..Limits::default()
    };
    let app = TestApp::with(Shell {
        limits,
        ..Shell::default()
    })
    .await;
    let lines = batch(&app, format!("{}\n", chain()).repeat(9)).await;
    assert_eq!(lines.len(), 4);
    assert_eq!(lines[3]["problem"]["status"], 413);
}

#[tokio::test]
async fn answers_come_while_lines_still_arrive() {
    let app = TestApp::new().await;
    let (sender, receiver) = tokio::sync::mpsc::channel::<Result<String, Infallible>>(1);
    let body = Body::from_stream(ReceiverStream::new(receiver));
    let request = crate::support::test_app::request("POST", "/api/v1/evaluate/batch", &[NDJSON], body);
    let response = tower::ServiceExt::oneshot(app.router.clone(), request)
        .await
        .unwrap();
    let mut answer = response.into_body().into_data_stream();
    for number in 1..=3 {
        sender.send(Ok(format!("{}\n", chain()))).await.unwrap();
        let line = tokio::time::timeout(Duration::from_secs(20), answer.next())
            .await
            .expect("in time");
        let line: Value = serde_json::from_slice(&line.expect("a line").expect("bytes")).expect("JSON");
        assert_eq!(line["line"], number);
    }
    drop(sender);
    assert!(answer.next().await.is_none());
}

#[tokio::test]
async fn a_body_that_stops_arriving_is_told() {
    let limits = Limits {
        body_pause: Duration::from_millis(50),
        ..Limits::default()
    };
    let app = TestApp::with(Shell {
        limits,
        ..Shell::default()
    })
    .await;
    let (sender, receiver) = tokio::sync::mpsc::channel::<Result<String, Infallible>>(1);
    sender.send(Ok(format!("{}\n{{", chain()))).await.unwrap();
    let lines = batch(&app, Body::from_stream(ReceiverStream::new(receiver))).await;
    assert!(lines[0]["assessment"].is_object());
    assert_eq!(
        (lines[1]["line"].as_u64(), lines[1]["problem"]["status"].as_u64()),
        (Some(2), Some(408))
    );
    drop(sender);
}

#[tokio::test]
async fn other_types_and_queries_are_refused() {
    let app = TestApp::new().await;
    let json = [("content-type", "application/json")];
    app.ask("POST", "/api/v1/evaluate/batch", &json, chain().to_string())
        .await
        .refused(415);
    app.ask("POST", "/api/v1/evaluate/batch?x=1", &[NDJSON], "")
        .await
        .refused(400);
    app.ask("POST", "/api/v1/evaluate/batch?rule_set=none", &[NDJSON], "")
        .await
        .refused(400);
}
