//! How connections are opened: one that writes, a few that read, each with every pragma of its own.

use super::{Settings, StoreError};
use sqlx::SqlitePool;
use sqlx::migrate::MigrateError;
use sqlx::sqlite::{SqliteConnectOptions, SqliteJournalMode, SqlitePoolOptions, SqliteSynchronous};
use std::path::Path;
use std::sync::Arc;
use std::time::Duration;

/// The tables of this version of the program.
static MIGRATIONS: sqlx::migrate::Migrator = sqlx::migrate!("./migrations");

/// Pragmas hold for one connection only, so they go through the options of each.
fn options(file: &Path, settings: &Settings) -> SqliteConnectOptions {
    SqliteConnectOptions::new()
        .filename(file)
        .journal_mode(SqliteJournalMode::Wal)
        .synchronous(SqliteSynchronous::Full)
        .foreign_keys(true)
        .busy_timeout(settings.busy_timeout)
        .pragma("cache_size", "-16000")
        .pragma("mmap_size", "268435456")
        .pragma("temp_store", "MEMORY")
        .pragma("journal_size_limit", "67108864")
        .pragma("trusted_schema", "OFF")
        .statement_cache_capacity(256)
        .row_buffer_size(256)
}

/// A pool of exactly `count` connections that live as long as it.
fn pool(count: u32) -> SqlitePoolOptions {
    SqlitePoolOptions::new()
        .min_connections(count)
        .max_connections(count)
        .idle_timeout(None)
        .max_lifetime(None)
        .acquire_timeout(Duration::from_secs(5))
        .test_before_acquire(false)
}

/// Opens the connection that writes, and brings the tables up to date with it. Comes before the readers, which
/// cannot make the file or its `-shm`.
pub(super) async fn writer(file: &Path, settings: &Settings) -> Result<SqlitePool, StoreError> {
    let writer = pool(1)
        .connect_with(options(file, settings).create_if_missing(true))
        .await
        .map_err(|error| match error {
            // Nobody else is here yet: what is waited for at opening is another program's lock.
            sqlx::Error::PoolTimedOut => StoreError::Locked(Arc::new(error)),
            error => error.into(),
        })?;
    if let Err(error) = MIGRATIONS.run(&writer).await {
        writer.close().await;
        return Err(error.into());
    }
    if let Err(error) = can_write(&writer).await {
        writer.close().await;
        return Err(error.into());
    }
    Ok(writer)
}

/// SQLite opens a file that it may not write for reading alone and says so at the first write: better now than when
/// somebody saves. `BEGIN IMMEDIATE` alone passes on such a file, so this writes, and takes it back.
async fn can_write(writer: &SqlitePool) -> Result<(), sqlx::Error> {
    let mut connection = writer.acquire().await?;
    for sql in ["BEGIN IMMEDIATE", "PRAGMA user_version = 1", "ROLLBACK"] {
        sqlx::query(sql).execute(&mut *connection).await?;
    }
    Ok(())
}

/// Opens the connections that read and can do nothing else.
pub(super) async fn readers(file: &Path, settings: &Settings) -> Result<SqlitePool, StoreError> {
    let options = options(file, settings)
        .create_if_missing(false)
        .read_only(true)
        .pragma("query_only", "ON");
    Ok(pool(settings.readers).connect_with(options).await?)
}

/// Opens connections that look at a file without changing it, and holds its tables against this version of the program.
pub(super) async fn onlookers(file: &Path, settings: &Settings) -> Result<SqlitePool, StoreError> {
    let options = SqliteConnectOptions::new()
        .filename(file)
        .create_if_missing(false)
        .busy_timeout(settings.busy_timeout)
        .pragma("query_only", "ON")
        .pragma("trusted_schema", "OFF");
    let pool = pool(2).connect_with(options).await?;
    if let Err(error) = current(&pool).await {
        pool.close().await;
        return Err(error);
    }
    Ok(pool)
}

/// `Newer` or `Older` when the tables are not those of this version.
async fn current(pool: &SqlitePool) -> Result<(), StoreError> {
    const APPLIED: &str = "SELECT version, checksum FROM _sqlx_migrations WHERE success ORDER BY version";
    let applied: Vec<(i64, Vec<u8>)> = sqlx::query_as(APPLIED).fetch_all(pool).await?;
    let known: Vec<(i64, &[u8])> = MIGRATIONS.iter().map(|m| (m.version, &*m.checksum)).collect();
    for (version, checksum) in &applied {
        match known.iter().find(|(known, _)| known == version) {
            None => return Err(MigrateError::VersionMissing(*version).into()),
            Some((_, expected)) if expected != checksum => {
                return Err(MigrateError::VersionMismatch(*version).into());
            }
            Some(_) => {}
        }
    }
    match known
        .iter()
        .find(|(version, _)| !applied.iter().any(|(done, _)| done == version))
    {
        Some(_) => Err(StoreError::Older),
        None => Ok(()),
    }
}

/// A connection for a copy of the whole file: not to write with, though it may make another file.
pub(super) fn for_copy(file: &Path) -> SqliteConnectOptions {
    SqliteConnectOptions::new()
        .filename(file)
        .create_if_missing(false)
        .busy_timeout(Duration::from_secs(5))
        .pragma("trusted_schema", "OFF")
}
