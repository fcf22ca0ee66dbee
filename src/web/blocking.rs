//! Work that computes goes to threads of its own, so that the threads that talk to people stay free.

use super::problem::Refusal;
use axum::http::StatusCode;
use tokio::sync::Semaphore;

/// At most this many computations at once: more would only take the processor from each other.
const AT_ONCE: usize = 8;

static PLACES: Semaphore = Semaphore::const_new(AT_ONCE);

/// Runs `work` on a thread that may block.
///
/// # Errors
/// 500 when the work panics: the panic is logged, the service goes on.
pub async fn run<T: Send + 'static>(work: impl FnOnce() -> T + Send + 'static) -> Result<T, Refusal> {
    let place = PLACES
        .acquire()
        .await
        .map_err(|_| Refusal::of(StatusCode::SERVICE_UNAVAILABLE))?;
    let span = tracing::Span::current();
    let done = tokio::task::spawn_blocking(move || span.in_scope(work)).await;
    drop(place);
    done.map_err(|error| {
        tracing::error!(%error, "a computation stopped");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[tokio::test]
    async fn a_panic_is_a_refusal_and_the_next_work_runs() {
        let refusal = run(|| -> u8 { panic!("on purpose") }).await.expect_err("refused");
        assert_eq!(refusal.status(), StatusCode::INTERNAL_SERVER_ERROR);
        assert_eq!(run(|| 1 + 1).await.expect("runs"), 2);
    }
}
