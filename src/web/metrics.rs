//! Measurements for Prometheus. A request is counted under the template of its route, never under its address: an address
//! holds ids, and anybody can make up as many as they like.

use crate::app::App;
use crate::clock::Stopwatch;
use axum::Router;
use axum::extract::{MatchedPath, Request};
use axum::http::Method;
use axum::http::header::CONTENT_TYPE;
use axum::middleware::Next;
use axum::response::{IntoResponse, Response};
use axum::routing::get;
use metrics::{counter, describe_counter, describe_gauge, describe_histogram, gauge, histogram};
use metrics_exporter_prometheus::{BuildError, Matcher, PrometheusBuilder, PrometheusHandle};
use std::time::Duration;

const REQUESTS: &str = "wheelwort_requests_total";
const RUNNING: &str = "wheelwort_requests_running";
const SECONDS: &str = "wheelwort_request_seconds";
const WRITES_WAITING: &str = "wheelwort_writes_waiting";
const READERS_IDLE: &str = "wheelwort_readers_idle";
const SIGN_IN_REFUSALS: &str = "wheelwort_sign_in_refusals_total";

/// Upper bounds of the classes of durations, s.
const CLASSES: [f64; 12] = [
    0.001, 0.0025, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1.0, 5.0, 30.0,
];

/// What is measured, and where it can be read.
#[derive(Clone)]
pub struct Metrics {
    app: App,
    handle: PrometheusHandle,
}

impl Metrics {
    /// Begins to measure; only the first call of a program can. Without it, measuring costs next to nothing.
    ///
    /// # Errors
    /// When measuring has begun already.
    pub fn begin(app: App) -> Result<Metrics, BuildError> {
        let handle = PrometheusBuilder::new()
            .set_buckets_for_metric(Matcher::Full(SECONDS.into()), &CLASSES)?
            .install_recorder()?;
        describe();
        Ok(Metrics { app, handle })
    }

    /// Folds what was measured together now and then: without it the single durations would pile up.
    pub async fn keep_up(self) {
        loop {
            tokio::time::sleep(Duration::from_secs(5)).await;
            self.handle.run_upkeep();
        }
    }

    /// `/metrics` alone.
    pub fn router(self) -> Router {
        let show = move || {
            let metrics = self.clone();
            async move { metrics.show() }
        };
        Router::new().route("/metrics", get(show))
    }

    fn show(&self) -> Response {
        let load = self.app.store.load();
        gauge!(WRITES_WAITING).set(as_float(load.writes_waiting));
        gauge!(READERS_IDLE).set(as_float(load.readers_idle));
        let kind = [(CONTENT_TYPE, "text/plain; version=0.0.4; charset=utf-8")];
        (kind, self.handle.render()).into_response()
    }
}

fn as_float(count: usize) -> f64 {
    u32::try_from(count).map_or(f64::from(u32::MAX), f64::from)
}

fn describe() {
    describe_counter!(REQUESTS, "Requests by route, method and class of the answer.");
    describe_gauge!(RUNNING, "Requests that are worked on.");
    describe_histogram!(SECONDS, "Seconds until an answer begins, by route.");
    describe_gauge!(WRITES_WAITING, "Writes that wait for the one that writes.");
    describe_gauge!(READERS_IDLE, "Reading connections that nobody uses.");
    describe_counter!(
        "wheelwort_writes_refused_total",
        "Writes refused because too many waited."
    );
    describe_counter!(
        "wheelwort_reader_waits_total",
        "Reads that had to wait for a connection."
    );
    describe_counter!("wheelwort_evaluations_total", "Documents evaluated.");
    describe_counter!(SIGN_IN_REFUSALS, "Sign-ins refused.");
    // A counter that is not there cannot be told from one that was never asked for.
    for name in [
        "wheelwort_writes_refused_total",
        "wheelwort_reader_waits_total",
        "wheelwort_evaluations_total",
        SIGN_IN_REFUSALS,
    ] {
        counter!(name).absolute(0);
    }
}

/// Counts a sign-in that was refused.
pub fn sign_in_refused() {
    counter!(SIGN_IN_REFUSALS).increment(1);
}

/// Lowers the count of running requests, also when a client goes away in the middle.
struct Running;

impl Running {
    fn begin() -> Running {
        gauge!(RUNNING).increment(1.0);
        Running
    }
}

impl Drop for Running {
    fn drop(&mut self) {
        gauge!(RUNNING).decrement(1.0);
    }
}

/// The layer that measures requests.
pub async fn measure(request: Request, next: Next) -> Response {
    let route = request
        .extensions()
        .get::<MatchedPath>()
        .map_or_else(|| "nowhere".to_owned(), |path| path.as_str().to_owned());
    let method = method_of(request.method());
    let running = Running::begin();
    let watch = Stopwatch::start();
    let response = next.run(request).await;
    let class = match response.status().as_u16() {
        ..200 => "1xx",
        200..300 => "2xx",
        300..400 => "3xx",
        400..500 => "4xx",
        500.. => "5xx",
    };
    counter!(REQUESTS, "route" => route.clone(), "method" => method, "class" => class).increment(1);
    histogram!(SECONDS, "route" => route).record(watch.seconds());
    drop(running);
    response
}

/// Methods that anybody can make up share one name.
fn method_of(method: &Method) -> &'static str {
    match *method {
        Method::GET => "GET",
        Method::HEAD => "HEAD",
        Method::POST => "POST",
        Method::PUT => "PUT",
        Method::PATCH => "PATCH",
        Method::DELETE => "DELETE",
        Method::OPTIONS => "OPTIONS",
        _ => "other",
    }
}
