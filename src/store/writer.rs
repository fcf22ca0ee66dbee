//! The one task that writes. Jobs wait in a bounded queue; the task takes what waits, runs each in a savepoint of one
//! transaction, commits, and only then answers. A write therefore outlives the request that asked for it.

use super::error::primary_code;
use super::idempotency::{Mark, mark_made};
use super::{Connection, StoreError, Work};
use sqlx::SqlitePool;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::task::Poll;
use tokio::sync::{Notify, mpsc, oneshot};

/// At most this many jobs share a transaction.
pub const MOST_TOGETHER: usize = 256;

/// A write that waits, its types hidden.
pub(super) trait Job: Send {
    /// Does the work inside a transaction. True: keep it.
    fn run<'c>(&'c mut self, connection: &'c mut Connection) -> Work<'c, bool>;
    /// Tells whoever asked, once the fate of the transaction is known.
    fn answer(self: Box<Self>, transaction: Result<(), StoreError>);
}

/// A write with what it will say.
pub(super) struct Waiting<T, E, F, A> {
    work: Option<F>,
    outcome: Option<Result<T, E>>,
    after: A,
    claim: Option<Mark>,
    answer: oneshot::Sender<Result<T, E>>,
}

impl<T, E, F, A> Waiting<T, E, F, A> {
    /// A job, for the request that holds this claim if there is one, and where its answer will come.
    pub(super) fn new(work: F, after: A, claim: Option<Mark>) -> (Self, oneshot::Receiver<Result<T, E>>) {
        let (answer, heard) = oneshot::channel();
        (
            Waiting {
                work: Some(work),
                outcome: None,
                after,
                claim,
                answer,
            },
            heard,
        )
    }
}

impl<T, E, F, A> Job for Waiting<T, E, F, A>
where
    T: Send,
    E: From<StoreError> + Send,
    F: for<'c> FnOnce(&'c mut Connection) -> Work<'c, Result<T, E>> + Send,
    A: FnOnce(&T) + Send,
{
    fn run<'c>(&'c mut self, connection: &'c mut Connection) -> Work<'c, bool> {
        Box::pin(async move {
            if let Some(work) = self.work.take() {
                let mut outcome = work(connection).await;
                // In the transaction of the change: a claim that is marked stands for a change that was made.
                if let (Ok(_), Some(claim)) = (&outcome, self.claim)
                    && let Err(error) = mark_made(connection, claim).await
                {
                    outcome = Err(error.into());
                }
                self.outcome = Some(outcome);
            }
            matches!(self.outcome, Some(Ok(_)))
        })
    }

    fn answer(self: Box<Self>, transaction: Result<(), StoreError>) {
        let answer = match (self.outcome, transaction) {
            (Some(Err(own)), _) => Err(own),
            (_, Err(shared)) => Err(E::from(shared)),
            (Some(Ok(value)), Ok(())) => {
                (self.after)(&value);
                Ok(value)
            }
            (None, Ok(())) => Err(E::from(StoreError::Stopped)),
        };
        // Nobody may be listening any more; the write stands all the same.
        let _ = self.answer.send(answer);
    }
}

/// Runs until the queue is closed and empty.
pub(super) async fn run(pool: SqlitePool, mut jobs: mpsc::Receiver<Box<dyn Job>>, stop: Arc<Notify>) {
    let mut batch = Vec::with_capacity(MOST_TOGETHER);
    loop {
        let count = tokio::select! {
            count = jobs.recv_many(&mut batch, MOST_TOGETHER) => count,
            () = stop.notified() => {
                jobs.close();
                continue;
            }
        };
        if count == 0 {
            return;
        }
        let fate = together(&pool, &mut batch).await;
        if let Err(error) = &fate {
            let cause = std::error::Error::source(error).map(ToString::to_string);
            tracing::error!(jobs = count, %error, cause, "a transaction was lost");
        }
        for job in batch.drain(..) {
            job.answer(fate.clone());
        }
    }
}

async fn together(pool: &SqlitePool, batch: &mut [Box<dyn Job>]) -> Result<(), StoreError> {
    let mut connection = pool.acquire().await?;
    let fate = transaction(&mut connection, batch).await;
    if fate.is_err() && undo(&mut connection).await.is_err() {
        // In an unknown state: the next batch opens a fresh one.
        let _ = connection.close().await;
    }
    fate
}

async fn transaction(connection: &mut Connection, batch: &mut [Box<dyn Job>]) -> Result<(), StoreError> {
    // IMMEDIATE: a transaction that reads first and writes later is refused at once when another writes.
    say(connection, "BEGIN IMMEDIATE").await?;
    if let [alone] = batch {
        if kept(alone.as_mut(), connection).await {
            say(connection, "COMMIT").await?;
        } else {
            undo(connection).await?;
        }
        return Ok(());
    }
    for job in batch {
        say(connection, "SAVEPOINT job").await?;
        if !kept(job.as_mut(), connection).await {
            // A full disk may have rolled back everything; then the savepoint is gone, and all must hear of it.
            say(connection, "ROLLBACK TO job")
                .await
                .map_err(|error| StoreError::Lost(Arc::new(error)))?;
        }
        say(connection, "RELEASE job").await?;
    }
    Ok(say(connection, "COMMIT").await?)
}

/// Runs a job. One that panics is a job that failed, no more.
async fn kept(job: &mut dyn Job, connection: &mut Connection) -> bool {
    let mut work = job.run(connection);
    let outcome = std::future::poll_fn(|context| {
        match catch_unwind(AssertUnwindSafe(|| work.as_mut().poll(context))) {
            Ok(poll) => poll.map(Some),
            Err(_) => Poll::Ready(None),
        }
    })
    .await;
    outcome.unwrap_or(false)
}

async fn say(connection: &mut Connection, sql: &'static str) -> Result<(), sqlx::Error> {
    sqlx::query(sql).execute(connection).await.map(drop)
}

/// Leaves no transaction behind.
async fn undo(connection: &mut Connection) -> Result<(), sqlx::Error> {
    match say(connection, "ROLLBACK").await {
        // Plain error: there is no transaction any more, SQLite has rolled it back by itself.
        Err(error) if primary_code(&error) == Some(1) => Ok(()),
        other => other,
    }
}
