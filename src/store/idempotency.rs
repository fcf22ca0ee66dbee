//! Requests that are done once however often they are sent: a claim before the work, a mark in the transaction of the
//! change, the answer after it.
//!
//! The window: the change and its answer are two transactions, so a program that is killed between them leaves a claim that
//! is marked and has no answer. It is answered with words (look, then send again with another key), never done twice. A
//! claim without a mark stands for a change that was not made, and is taken over by the next request of the same key.

use super::{Connection, OrganisationId, Store, StoreError};
use std::collections::BTreeSet;
use std::sync::{Arc, Mutex, PoisonError};

/// How long an answer is kept.
pub const KEPT_HOURS: i64 = 24;

const DROP_OLD: &str = "DELETE FROM idempotency WHERE organisation_id = $1 AND at < $2";
const FIND: &str = "\
    SELECT id, request, made, status, headers, body FROM idempotency \
    WHERE organisation_id = $1 AND person = $2 AND key = $3";
const CLAIM: &str = "\
    INSERT INTO idempotency (organisation_id, person, key, request, at) VALUES ($1, $2, $3, $4, $5) RETURNING id";
const MARK_MADE: &str = "UPDATE idempotency SET made = 1 WHERE organisation_id = $1 AND id = $2";
const ANSWER: &str = "\
    UPDATE idempotency SET status = $3, headers = $4, body = $5 WHERE organisation_id = $1 AND id = $2";
const LET_GO: &str = "DELETE FROM idempotency WHERE organisation_id = $1 AND id = $2 AND made = 0";

/// The statements of this file.
pub(super) const STATEMENTS: &[&str] = &[DROP_OLD, FIND, CLAIM, MARK_MADE, ANSWER, LET_GO];

/// Claims that a running request of this process holds.
pub(super) type InFlight = Arc<Mutex<BTreeSet<i64>>>;

/// Where the claim of a request is marked.
#[derive(Clone, Copy, Debug)]
pub(super) struct Mark {
    organisation: OrganisationId,
    id: i64,
}

tokio::task_local! {
    /// The claim of the request that this task works on.
    static CLAIMED: Mark;
}

/// The claim of the request that this task works on, if it has one.
pub(super) fn claimed_here() -> Option<Mark> {
    CLAIMED.try_with(|mark| *mark).ok()
}

/// A request with a key.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Request {
    /// Whose records it changes.
    pub organisation: OrganisationId,
    /// Public id of the person; empty for the command line.
    pub person: String,
    /// The key.
    pub key: String,
    /// Hash of everything else that makes the request what it is.
    pub request: String,
}

/// An answer that is kept.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct KeptAnswer {
    /// Its status.
    pub status: u16,
    /// The headers that are repeated, as a JSON object.
    pub headers: String,
    /// Its body; none where it was too long to keep.
    pub body: Option<Vec<u8>>,
}

/// What is known of a request.
#[derive(Debug)]
pub enum Claimed {
    /// It is new: do it.
    New(Claim),
    /// It was done; this was the answer.
    Done(KeptAnswer),
    /// Another request carried this key.
    Other,
    /// The same request is being worked on.
    Running,
    /// Its change was made, and its answer was lost.
    AnswerLost,
}

/// A claim that is held until it is answered or let go.
#[derive(Debug)]
pub struct Claim {
    store: Held,
    mark: Mark,
}

/// What a claim needs of the store.
struct Held(Store);

impl std::fmt::Debug for Held {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("store")
    }
}

#[derive(sqlx::FromRow)]
struct Found {
    id: i64,
    request: String,
    made: bool,
    status: Option<i64>,
    headers: Option<String>,
    body: Option<Vec<u8>>,
}

impl Store {
    /// Claims a request, or tells what is known of it.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn claim(&self, request: Request, now: i64) -> Result<Claimed, StoreError> {
        let (running, organisation) = (self.0.claims.clone(), request.organisation);
        let outcome = self
            .write(move |c| Box::pin(async move { claim(c, &request, now, &running).await }))
            .await?;
        Ok(match outcome {
            Ok(id) => Claimed::New(Claim {
                store: Held(self.clone()),
                mark: Mark { organisation, id },
            }),
            Err(known) => known,
        })
    }
}

async fn claim(
    c: &mut Connection,
    request: &Request,
    now: i64,
    running: &InFlight,
) -> Result<Result<i64, Claimed>, StoreError> {
    let old = now.saturating_sub(KEPT_HOURS * 3_600_000);
    sqlx::query(DROP_OLD)
        .bind(request.organisation.0)
        .bind(old)
        .execute(&mut *c)
        .await?;
    let found: Option<Found> = sqlx::query_as(FIND)
        .bind(request.organisation.0)
        .bind(&request.person)
        .bind(&request.key)
        .fetch_optional(&mut *c)
        .await?;
    if let Some(found) = found {
        let held = running
            .lock()
            .unwrap_or_else(PoisonError::into_inner)
            .contains(&found.id);
        if found.request != request.request {
            return Ok(Err(Claimed::Other));
        }
        if let Some(status) = found.status {
            return Ok(Err(Claimed::Done(KeptAnswer {
                status: u16::try_from(status).unwrap_or(500),
                headers: found.headers.unwrap_or_default(),
                body: found.body,
            })));
        }
        if held {
            return Ok(Err(Claimed::Running));
        }
        if found.made {
            return Ok(Err(Claimed::AnswerLost));
        }
        // Left by a program that was killed before it changed anything.
        sqlx::query(LET_GO)
            .bind(request.organisation.0)
            .bind(found.id)
            .execute(&mut *c)
            .await?;
    }
    let id: i64 = sqlx::query_scalar(CLAIM)
        .bind(request.organisation.0)
        .bind(&request.person)
        .bind(&request.key)
        .bind(&request.request)
        .bind(now)
        .fetch_one(c)
        .await?;
    // Before anybody can ask again: all claims are made on the one task that writes.
    running.lock().unwrap_or_else(PoisonError::into_inner).insert(id);
    Ok(Ok(id))
}

/// Notes that the change of a claim is made, in its transaction.
pub(super) async fn mark_made(c: &mut Connection, claim: Mark) -> Result<(), StoreError> {
    sqlx::query(MARK_MADE)
        .bind(claim.organisation.0)
        .bind(claim.id)
        .execute(c)
        .await?;
    Ok(())
}

impl Claim {
    /// Does the work of the request: whatever it writes marks the claim, in the same transaction.
    pub async fn working<T>(&self, work: impl Future<Output = T>) -> T {
        CLAIMED.scope(self.mark, work).await
    }

    /// Keeps the answer.
    ///
    /// # Errors
    /// When the database fails; a repeat is then told that the answer was lost.
    pub async fn answered(self, answer: KeptAnswer) -> Result<(), StoreError> {
        let mark = self.mark;
        let write = self.store.0.write(move |c| {
            Box::pin(async move {
                sqlx::query(ANSWER)
                    .bind(mark.organisation.0)
                    .bind(mark.id)
                    .bind(i64::from(answer.status))
                    .bind(answer.headers)
                    .bind(answer.body)
                    .execute(c)
                    .await?;
                Ok::<_, StoreError>(())
            })
        });
        write.await
    }

    /// Lets go of a request that changed nothing, so that it can be sent again. One that changed something stays.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn let_go(self) -> Result<(), StoreError> {
        let mark = self.mark;
        let write = self.store.0.write(move |c| {
            Box::pin(async move {
                sqlx::query(LET_GO)
                    .bind(mark.organisation.0)
                    .bind(mark.id)
                    .execute(c)
                    .await?;
                Ok::<_, StoreError>(())
            })
        });
        write.await
    }
}

impl Drop for Claim {
    fn drop(&mut self) {
        let claims = &self.store.0.0.claims;
        claims
            .lock()
            .unwrap_or_else(PoisonError::into_inner)
            .remove(&self.mark.id);
    }
}
