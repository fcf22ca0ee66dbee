//! Over a real socket: large bodies, slow ones, batches that are sent whole before anything is read.

use crate::support::documents::{chain, ten_megabytes};
use crate::support::{TestApp, client};
use std::time::Duration;
use tokio::io::{AsyncReadExt, AsyncWriteExt};
use tokio::net::TcpStream;
use wheelwort::web::Shell;
use wheelwort::web::extract::Limits;

#[tokio::test]
async fn a_sender_of_ten_megabytes_hears_why_they_are_refused() {
    let app = TestApp::new().await;
    let url = format!("http://{}/api/v1/pathways", app.listens().await);
    let client = client();
    let answer = client
        .post(url)
        .header("content-type", "application/json")
        .body(ten_megabytes())
        .send()
        .await
        .unwrap();
    assert_eq!(answer.status(), 413);
    assert_eq!(answer.headers()["content-type"], "application/problem+json");
}

#[tokio::test]
async fn a_sender_that_asks_first_is_told_before_it_sends() {
    let app = TestApp::new().await;
    let mut stream = TcpStream::connect(app.listens().await).await.unwrap();
    let head = "POST /api/v1/pathways HTTP/1.1\r\nhost: here\r\ncontent-type: application/json\r\ncontent-length: 10000000\r\nexpect: 100-continue\r\n\r\n";
    stream.write_all(head.as_bytes()).await.unwrap();
    let mut answer = [0; 12];
    tokio::time::timeout(Duration::from_secs(20), stream.read_exact(&mut answer))
        .await
        .unwrap()
        .unwrap();
    assert_eq!(&answer, b"HTTP/1.1 413");
}

#[tokio::test]
async fn a_body_that_stops_arriving_is_408() {
    let limits = Limits {
        body_pause: Duration::from_millis(100),
        ..Limits::default()
    };
    let app = TestApp::with(Shell {
        limits,
        ..Shell::default()
    })
    .await;
    let mut stream = TcpStream::connect(app.listens().await).await.unwrap();
    let head = "POST /api/v1/evaluate HTTP/1.1\r\nhost: here\r\ncontent-type: application/json\r\ncontent-length: 100\r\n\r\n{";
    stream.write_all(head.as_bytes()).await.unwrap();
    let mut answer = [0; 12];
    tokio::time::timeout(Duration::from_secs(20), stream.read_exact(&mut answer))
        .await
        .unwrap()
        .unwrap();
    assert_eq!(&answer, b"HTTP/1.1 408");
}

#[tokio::test]
async fn a_batch_may_be_sent_whole_before_it_is_read() {
    const LINES: usize = 400;
    let app = TestApp::new().await;
    let body = format!("{}\n", chain()).repeat(LINES);
    let mut stream = TcpStream::connect(app.listens().await).await.unwrap();
    let head = format!(
        "POST /api/v1/evaluate/batch HTTP/1.1\r\nhost: here\r\nconnection: close\r\ncontent-type: application/x-ndjson\r\ncontent-length: {}\r\n\r\n",
        body.len()
    );
    stream.write_all(head.as_bytes()).await.unwrap();
    tokio::time::timeout(Duration::from_secs(60), stream.write_all(body.as_bytes()))
        .await
        .expect("is taken")
        .unwrap();
    let mut answer = Vec::new();
    tokio::time::timeout(Duration::from_secs(120), stream.read_to_end(&mut answer))
        .await
        .expect("in time")
        .unwrap();
    let text = String::from_utf8_lossy(&answer);
    assert_eq!(text.matches("\"assessment\":{").count(), LINES);
    assert!(text.contains(&format!("{{\"line\":{LINES},")));
}
