//! HTTP in common: router, layers, refusals, conditional requests, paging, the API's description, assets, health.

pub mod actor;
pub mod answers;
pub mod api_page;
pub mod assets;
pub mod blocking;
pub mod calculator;
pub mod conditional;
pub mod cookies;
pub mod csv;
pub mod error_page;
pub mod extract;
pub mod filters;
pub mod form_check;
pub mod frame;
pub mod health;
pub mod idempotency;
pub mod layers;
pub mod links;
pub mod metrics;
pub mod multipart;
pub mod openapi;
pub mod paging;
pub mod patience;
pub mod problem;
pub mod router;
#[cfg(test)]
pub mod testing;
pub mod typed;
pub mod visitor;

pub use problem::Refusal;
pub use router::{Shell, router};

/// Serves until `stop` completes, then finishes the requests that run.
///
/// # Errors
/// When the listener fails for good.
pub async fn serve(
    listener: patience::Patient,
    router: axum::Router,
    stop: impl Future<Output = ()> + Send + 'static,
) -> std::io::Result<()> {
    let service = router.into_make_service_with_connect_info::<patience::Peer>();
    axum::serve(listener, service).with_graceful_shutdown(stop).await
}
