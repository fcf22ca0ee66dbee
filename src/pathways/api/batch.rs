//! Evaluation of many documents: one a line in, one line each out, in order, while they still arrive. A bad line does not
//! stop the rest.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::evaluate::{RuleSetQuestion, assessed};
use super::stored::known_rule_set;
use crate::app::{App, Basis};
use crate::core::documents::{Assessment, json};
use crate::rules::basis;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{Limits, Query, is_of_type, next_piece};
use crate::web::problem::ProblemDocument;
use crate::web::{Refusal, blocking};
use axum::body::{Body, BodyDataStream, Bytes};
use axum::extract::Request;
use axum::http::StatusCode;
use axum::http::header::CONTENT_TYPE;
use axum::response::{IntoResponse, Response};
use serde::Serialize;
use std::convert::Infallible;
use std::sync::Arc;
use tokio::sync::{OwnedSemaphorePermit, Semaphore, SemaphorePermit, mpsc};
use tokio::task::JoinHandle;
use tokio_stream::wrappers::ReceiverStream;
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// Batches that run at once.
const BATCHES: usize = 4;
/// Lines of a batch that are evaluated at once.
const LINES: usize = 4;
/// KiB of lines that have arrived and wait. A client that sends everything before it reads anything gets no further
/// than this: its answers fill the pipe, and lines wait here until it reads.
const WAITING_KIB: usize = 64 << 10;

const NDJSON: &str = "application/x-ndjson";

static PLACES: Semaphore = Semaphore::const_new(BATCHES);

/// The route of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(evaluate_batch))
}

/// A line of the answer: an assessment or a problem.
#[derive(Clone, Debug, Serialize, ToSchema)]
#[allow(dead_code, reason = "describes the lines, which are written from bytes")]
struct BatchLine {
    /// Number of the line in the request, from 1.
    line: u64,
    /// The assessment, where the document holds.
    assessment: Option<Assessment>,
    /// What is wrong, where it does not.
    problem: Option<ProblemDocument>,
}

/// Evaluate many pathways
///
/// One document a line (NDJSON) in; one line each out, in the same order, while the rest still arrives. Empty lines are
/// counted and left out. Read while you send: beyond 64 MiB of lines that wait, the service reads on only as you do.
/// Stores nothing.
#[utoipa::path(post, path = "/evaluate/batch", tag = "evaluation", params(RuleSetQuestion),
    request_body(content = String, content_type = "application/x-ndjson", description = "A pathway document on each line."),
    responses((status = 200, description = "A `BatchLine` on each line.", body = String, content_type = "application/x-ndjson")))]
async fn evaluate_batch(
    Actor { app, .. }: Actor<CanRead>,
    Query(ask): Query<RuleSetQuestion>,
    request: Request,
) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    known_rule_set(&basis.book, ask.rule_set.as_deref())?;
    let lines = |kind: &str| matches!(kind, NDJSON | "application/ndjson" | "application/jsonl");
    if !is_of_type(request.headers(), lines) {
        return Err(
            Refusal::of(StatusCode::UNSUPPORTED_MEDIA_TYPE).detail(format!("Send the lines as {NDJSON}."))
        );
    }
    let place = PLACES
        .try_acquire()
        .map_err(|_| Refusal::of(StatusCode::SERVICE_UNAVAILABLE))?;
    let limits = Limits::of(request.extensions());
    let (arrived, waiting) = mpsc::unbounded_channel();
    let (started, running) = mpsc::channel(LINES);
    let (made, answer) = mpsc::channel(LINES);
    let body = request.into_body().into_data_stream();
    tokio::spawn(read_lines(body, limits, arrived));
    tokio::spawn(start(app, basis, ask.rule_set, waiting, started));
    tokio::spawn(finish(running, made, place));
    Ok((
        [(CONTENT_TYPE, NDJSON)],
        Body::from_stream(ReceiverStream::new(answer)),
    )
        .into_response())
}

/// A line as it arrived, or why there is none; it keeps its part of the waiting room until it is worked on.
struct Arrived {
    line: u64,
    text: Result<Vec<u8>, Refusal>,
    _room: Option<OwnedSemaphorePermit>,
}

/// Cuts the body into lines and queues them. Ends with the body, or when nobody waits for answers any more.
async fn read_lines(mut body: BodyDataStream, limits: Limits, queue: mpsc::UnboundedSender<Arrived>) {
    let room = Arc::new(Semaphore::new(WAITING_KIB));
    let mut cutter = Cutter {
        line: 0,
        text: Vec::new(),
        too_long: false,
        most: limits.body_bytes,
    };
    loop {
        let piece = tokio::select! {
            piece = next_piece(&mut body, &limits) => piece,
            () = queue.closed() => return,
        };
        let (lines, ended) = match piece {
            Ok(Some(piece)) => (cutter.cut(&piece), false),
            Ok(None) => (cutter.rest(), true),
            Err(refusal) => (vec![(cutter.line + 1, Err(refusal))], true),
        };
        for (line, text) in lines {
            let over = line > limits.batch_lines as u64;
            let text = if over { Err(too_many(&limits)) } else { text };
            let kib = text.as_ref().map_or(0, Vec::len).div_ceil(1_024).min(WAITING_KIB);
            let kib = u32::try_from(kib).unwrap_or(u32::MAX);
            let _room = tokio::select! {
                room = room.clone().acquire_many_owned(kib) => room.ok(),
                () = queue.closed() => return,
            };
            if queue.send(Arrived { line, text, _room }).is_err() || over {
                return;
            }
        }
        if ended {
            return;
        }
    }
}

fn too_many(limits: &Limits) -> Refusal {
    Refusal::of(StatusCode::PAYLOAD_TOO_LARGE).detail(format!(
        "A batch takes {} lines. This one and those after it were left.",
        limits.batch_lines
    ))
}

type Cut = (u64, Result<Vec<u8>, Refusal>);

/// Cuts pieces of a body into numbered lines, none longer than `most`.
struct Cutter {
    /// The last line that is complete.
    line: u64,
    text: Vec<u8>,
    too_long: bool,
    most: usize,
}

impl Cutter {
    fn cut(&mut self, piece: &[u8]) -> Vec<Cut> {
        let mut lines = Vec::new();
        let mut parts = piece.split(|byte| *byte == b'\n').peekable();
        while let Some(part) = parts.next() {
            if self.text.len() + part.len() > self.most {
                self.too_long = true;
                self.text = Vec::new();
            }
            if !self.too_long {
                self.text.extend_from_slice(part);
            }
            if parts.peek().is_some() {
                lines.extend(self.end());
            }
        }
        lines
    }

    /// What stands after the last line end.
    fn rest(&mut self) -> Vec<Cut> {
        if self.text.is_empty() && !self.too_long {
            Vec::new()
        } else {
            self.end().into_iter().collect()
        }
    }

    fn end(&mut self) -> Option<Cut> {
        self.line += 1;
        let text = std::mem::take(&mut self.text);
        if std::mem::take(&mut self.too_long) {
            let detail = format!(
                "The line is longer than the {} bytes this service takes.",
                self.most
            );
            return Some((
                self.line,
                Err(Refusal::of(StatusCode::PAYLOAD_TOO_LARGE).detail(detail)),
            ));
        }
        (!text.trim_ascii().is_empty()).then_some((self.line, Ok(text)))
    }
}

/// Starts the evaluation of each line as places come free.
async fn start(
    app: App,
    basis: Arc<Basis>,
    rule_set: Option<String>,
    mut waiting: mpsc::UnboundedReceiver<Arrived>,
    started: mpsc::Sender<(u64, JoinHandle<Bytes>)>,
) {
    while let Some(Arrived { line, text, _room }) = waiting.recv().await {
        let Ok(place) = started.reserve().await else {
            return;
        };
        let (app, basis, rule_set) = (app.clone(), basis.clone(), rule_set.clone());
        let work = tokio::spawn(async move {
            let work = blocking::run(move || {
                let body = json::parse(&text?).map_err(Refusal::not_json)?;
                assessed(&app, &basis, &body, rule_set.as_deref())
            });
            written(line, work.await.unwrap_or_else(Err))
        });
        place.send((line, work));
    }
}

/// Sends what is made in the order in which it was asked for.
async fn finish(
    mut running: mpsc::Receiver<(u64, JoinHandle<Bytes>)>,
    made: mpsc::Sender<Result<Bytes, Infallible>>,
    _place: SemaphorePermit<'static>,
) {
    while let Some((line, work)) = running.recv().await {
        let bytes = work.await.unwrap_or_else(|error| {
            tracing::error!(%error, "a line of a batch stopped");
            written(line, Err(Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)))
        });
        if made.send(Ok(bytes)).await.is_err() {
            return;
        }
    }
}

/// A line of the answer.
fn written(line: u64, outcome: Result<Vec<u8>, Refusal>) -> Bytes {
    let (name, value) = match outcome {
        Ok(assessment) => ("assessment", assessment),
        Err(refusal) => (
            "problem",
            serde_json::to_vec(&refusal.document(None)).unwrap_or_else(|_| b"null".to_vec()),
        ),
    };
    let mut bytes = format!("{{\"line\":{line},\"{name}\":").into_bytes();
    bytes.extend_from_slice(&value);
    bytes.extend_from_slice(b"}\n");
    bytes.into()
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn cut(pieces: &[&[u8]], most: usize) -> Vec<(u64, Option<Vec<u8>>)> {
        let mut cutter = Cutter {
            line: 0,
            text: Vec::new(),
            too_long: false,
            most,
        };
        let mut lines: Vec<Cut> = pieces.iter().flat_map(|piece| cutter.cut(piece)).collect();
        lines.extend(cutter.rest());
        lines.into_iter().map(|(line, text)| (line, text.ok())).collect()
    }

    #[test]
    fn a_long_line_is_told_and_the_next_is_whole() {
        let lines = cut(&[b"abc", b"def\n", b"gh\n\ni"], 4);
        assert_eq!(
            lines,
            [(1, None), (2, Some(b"gh".to_vec())), (4, Some(b"i".to_vec()))]
        );
    }

    proptest! {
        #[test]
        fn lines_do_not_depend_on_how_the_body_arrives(text in "[ab\n]{0,60}", at in 0_usize..60) {
            let bytes = text.as_bytes();
            let at = at.min(bytes.len());
            let (left, right) = bytes.split_at(at);
            prop_assert_eq!(cut(&[bytes], 1_000), cut(&[left, right], 1_000));
            let expected: Vec<_> = (1..).zip(text.split('\n')).filter(|(_, line)| !line.is_empty())
                .map(|(n, line)| (n, Some(line.as_bytes().to_vec()))).collect();
            prop_assert_eq!(cut(&[bytes], 1_000), expected);
        }
    }
}
