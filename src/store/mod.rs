//! The database itself: two pools, one writer task, migrations and errors. Knows nothing of pathways.

pub mod backup;
mod error;
mod idempotency;
mod lock;
pub(crate) mod memory;
mod organisation;
mod pool;
mod sound;
mod writer;

pub use error::StoreError;
pub use idempotency::{Claim, Claimed, KEPT_HOURS, KeptAnswer, Request};
pub use lock::{FolderLock, LockError};
pub use organisation::OrganisationId;
pub use writer::MOST_TOGETHER;

use sqlx::SqlitePool;
use std::future::Future;
use std::path::Path;
use std::pin::Pin;
use std::sync::{Arc, Mutex, PoisonError};
use std::time::Duration;
use tokio::sync::{Notify, mpsc};
use tokio::task::JoinHandle;

/// The connection that `sql.rs` files speak to.
pub type Connection = sqlx::SqliteConnection;

/// A reading connection out of the pool; it goes back when dropped.
pub type Reader = sqlx::pool::PoolConnection<sqlx::Sqlite>;

/// A reading connection on which the data stand still; it goes back when dropped.
pub type Moment = sqlx::Transaction<'static, sqlx::Sqlite>;

/// The future of a job, bound to its connection.
pub type Work<'c, T> = Pin<Box<dyn Future<Output = T> + Send + 'c>>;

/// Name of the data file in its folder.
pub const FILE: &str = "wheelwort.db";

/// Every SQL text of the store.
pub(crate) fn statements() -> Vec<&'static str> {
    [organisation::STATEMENTS, idempotency::STATEMENTS].concat()
}

/// How a store is opened.
#[derive(Clone, Copy, Debug)]
pub struct Settings {
    /// Reading connections: two for each core.
    pub readers: u32,
    /// Writes that may wait before the store says it is busy.
    pub queue: usize,
    /// How long to wait for a lock that another program holds.
    pub busy_timeout: Duration,
}

impl Default for Settings {
    fn default() -> Settings {
        Settings {
            readers: 4,
            queue: 1_024,
            busy_timeout: Duration::from_secs(5),
        }
    }
}

/// How busy a store is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Load {
    /// Writes in the queue of the one that writes.
    pub writes_waiting: usize,
    /// Reading connections that nobody uses.
    pub readers_idle: usize,
}

/// An open database. Cheap to clone; clones share it.
#[derive(Clone)]
pub struct Store(Arc<Inner>);

struct Inner {
    readers: SqlitePool,
    writer: SqlitePool,
    jobs: mpsc::Sender<Box<dyn writer::Job>>,
    stop: Arc<Notify>,
    task: Mutex<Option<JoinHandle<()>>>,
    claims: idempotency::InFlight,
}

impl Store {
    /// Opens the file, making it where there is none, and brings its tables up to date.
    ///
    /// # Errors
    /// When the file cannot be opened, written or brought up to date.
    pub async fn open(file: &Path) -> Result<Store, StoreError> {
        Store::open_with(file, Settings::default()).await
    }

    /// The same with settings.
    ///
    /// # Errors
    /// When the file cannot be opened, written or brought up to date.
    pub async fn open_with(file: &Path, settings: Settings) -> Result<Store, StoreError> {
        let writer = pool::writer(file, &settings).await?;
        let readers = match pool::readers(file, &settings).await {
            Ok(readers) => readers,
            Err(error) => {
                writer.close().await;
                return Err(error);
            }
        };
        let (jobs, waiting) = mpsc::channel(settings.queue.max(1));
        let stop = Arc::new(Notify::new());
        let task = tokio::spawn(writer::run(writer.clone(), waiting, stop.clone()));
        Ok(Store(Arc::new(Inner {
            readers,
            writer,
            jobs,
            stop,
            task: Mutex::new(Some(task)),
            claims: idempotency::InFlight::default(),
        })))
    }

    /// Opens a file that is there, to read it and nothing else: every write is answered `Closed`. For looking at data that
    /// a running program may hold.
    ///
    /// # Errors
    /// When the file is not there, cannot be opened, or belongs to another version of the program.
    pub async fn open_to_read(file: &Path) -> Result<Store, StoreError> {
        let readers = pool::onlookers(file, &Settings::default()).await?;
        let (jobs, _) = mpsc::channel(1);
        Ok(Store(Arc::new(Inner {
            writer: readers.clone(),
            readers,
            jobs,
            stop: Arc::new(Notify::new()),
            task: Mutex::new(None),
            claims: idempotency::InFlight::default(),
        })))
    }

    /// A connection to read with.
    ///
    /// # Errors
    /// `Busy` when none comes free in five seconds, `Closed` after [`Store::close`].
    pub async fn reader(&self) -> Result<Reader, StoreError> {
        if let Some(reader) = self.0.readers.try_acquire() {
            return Ok(reader);
        }
        metrics::counter!("wheelwort_reader_waits_total").increment(1);
        Ok(self.0.readers.acquire().await?)
    }

    /// How busy it is.
    pub fn load(&self) -> Load {
        Load {
            writes_waiting: self.0.jobs.max_capacity() - self.0.jobs.capacity(),
            readers_idle: self.0.readers.num_idle(),
        }
    }

    /// A connection to read with that sees the data as they are now, whatever is written meanwhile.
    ///
    /// # Errors
    /// As [`Store::reader`].
    pub async fn moment(&self) -> Result<Moment, StoreError> {
        Ok(self.0.readers.begin().await?)
    }

    /// Runs a job in a transaction and answers after it is durable. The job runs to its end even if the caller goes
    /// away. On an error of the job everything it did is undone, and nothing of other jobs.
    ///
    /// # Errors
    /// The job's own error; `Busy` when the queue is full; or why the transaction was lost.
    pub async fn write<T, E, F>(&self, job: F) -> Result<T, E>
    where
        T: Send + 'static,
        E: From<StoreError> + Send + 'static,
        F: for<'c> FnOnce(&'c mut Connection) -> Work<'c, Result<T, E>> + Send + 'static,
    {
        self.write_then(job, |_| ()).await
    }

    /// The same; `after` runs once the job is durable and before anyone hears of it, whether or not the caller is
    /// still there. For keeping memory in step with the file. It must be quick.
    ///
    /// # Errors
    /// As [`Store::write`].
    pub async fn write_then<T, E, F, A>(&self, job: F, after: A) -> Result<T, E>
    where
        T: Send + 'static,
        E: From<StoreError> + Send + 'static,
        F: for<'c> FnOnce(&'c mut Connection) -> Work<'c, Result<T, E>> + Send + 'static,
        A: FnOnce(&T) + Send + 'static,
    {
        let (job, answer) = writer::Waiting::new(job, after, idempotency::claimed_here());
        self.0.jobs.try_send(Box::new(job)).map_err(|error| match error {
            mpsc::error::TrySendError::Full(_) => {
                metrics::counter!("wheelwort_writes_refused_total").increment(1);
                StoreError::Busy
            }
            mpsc::error::TrySendError::Closed(_) => StoreError::Closed,
        })?;
        answer.await.unwrap_or_else(|_| Err(StoreError::Stopped.into()))
    }

    /// Takes no more writes, finishes those that wait, and closes every connection. May be called twice.
    pub async fn close(&self) {
        self.0.stop.notify_one();
        let task = self.0.task.lock().unwrap_or_else(PoisonError::into_inner).take();
        if let Some(task) = task {
            let _ = task.await;
        }
        // The writer goes last: the last connection to go folds the write-ahead log into the file.
        self.0.readers.close().await;
        self.0.writer.close().await;
    }
}
