//! What can go wrong with the database, sorted by what a person can do about it. `Display` is for people; the source
//! chain, which may name SQL, is for the log alone.

use sqlx::migrate::MigrateError;
use std::sync::Arc;
use thiserror::Error;

/// Why the database did not do what it was asked. Cheap to clone: one failed commit is told to everyone in it.
#[derive(Clone, Debug, Error)]
pub enum StoreError {
    /// Too many writes wait, or no reader came free. Worth another try.
    #[error("The service is busy. Nothing was saved; try again in a moment.")]
    Busy,
    /// The store is being closed.
    #[error("The service is stopping. Nothing was saved.")]
    Closed,
    /// The disk is full.
    #[error("The disk is full. Nothing was saved; free some space and try again.")]
    Full(#[source] Arc<sqlx::Error>),
    /// The file, its folder or the connection cannot be written.
    #[error("The data can be read but not written. Nothing was saved; check the rights of the data folder.")]
    ReadOnly(#[source] Arc<sqlx::Error>),
    /// Another program holds the file.
    #[error("Another program holds the data. Nothing was saved; try again when it is done.")]
    Locked(#[source] Arc<sqlx::Error>),
    /// The file is not a database, or a broken one.
    #[error("The data file is broken. Stop the service and restore the last backup.")]
    Corrupt(#[source] Arc<sqlx::Error>),
    /// The disk refused to read or write.
    #[error("The disk failed. Nothing was saved; check the disk before you go on.")]
    Disk(#[source] Arc<sqlx::Error>),
    /// The file cannot be opened or made.
    #[error("The data file cannot be opened. Check that its folder exists and may be written.")]
    Unopenable(#[source] Arc<sqlx::Error>),
    /// The file was written by a newer program.
    #[error("The data was written by a newer version of this program. Use that version.")]
    Newer(#[source] Arc<MigrateError>),
    /// The file was written by an older program and has not been brought up to date.
    #[error(
        "The data was written by an older version of this program. Start the service with it once: that brings it up to date."
    )]
    Older,
    /// The tables could not be brought up to date.
    #[error(
        "The data could not be brought up to this version of the program. Restore the last backup or use the old version."
    )]
    Migration(#[source] Arc<MigrateError>),
    /// A write that shared the transaction broke it. Worth another try.
    #[error("A write at the same moment failed and took this one along. Nothing was saved; try again.")]
    Lost(#[source] Arc<sqlx::Error>),
    /// The job stopped half way: a defect of the program.
    #[error("The program made a mistake. Nothing was saved.")]
    Stopped,
    /// The record is not there.
    #[error("There is no such record.")]
    NotFound,
    /// A stored row does not say what it must.
    #[error("A stored record is damaged: {table}.{column} of row {row}. Run the integrity check.")]
    Inconsistent {
        /// The table.
        table: &'static str,
        /// The column.
        column: &'static str,
        /// Its row, by inner id.
        row: i64,
    },
    /// Anything else: a defect of the program.
    #[error("The program made a mistake with its data. Nothing was saved.")]
    Unexpected(#[source] Arc<sqlx::Error>),
}

impl StoreError {
    /// True if the same request may well succeed a moment later.
    pub fn is_passing(&self) -> bool {
        matches!(
            self,
            StoreError::Busy | StoreError::Closed | StoreError::Locked(_) | StoreError::Lost(_)
        )
    }

    /// True if a unique key or another constraint refused a row.
    pub fn is_constraint(&self) -> bool {
        match self {
            StoreError::Unexpected(error) => primary_code(error) == Some(19),
            _ => false,
        }
    }
}

/// The primary result code of SQLite (the low byte of the extended one).
pub(super) fn primary_code(error: &sqlx::Error) -> Option<i32> {
    let sqlx::Error::Database(error) = error else {
        return None;
    };
    error.code()?.parse::<i32>().ok().map(|code| code & 0xff)
}

impl From<sqlx::Error> for StoreError {
    fn from(error: sqlx::Error) -> StoreError {
        match (&error, primary_code(&error)) {
            (sqlx::Error::RowNotFound, _) => StoreError::NotFound,
            (sqlx::Error::PoolTimedOut, _) => StoreError::Busy,
            (sqlx::Error::PoolClosed, _) => StoreError::Closed,
            (_, Some(5 | 6)) => StoreError::Locked(Arc::new(error)),
            (_, Some(8)) => StoreError::ReadOnly(Arc::new(error)),
            (_, Some(10)) => StoreError::Disk(Arc::new(error)),
            (_, Some(11 | 26)) => StoreError::Corrupt(Arc::new(error)),
            (_, Some(13)) => StoreError::Full(Arc::new(error)),
            (_, Some(14)) => StoreError::Unopenable(Arc::new(error)),
            _ => StoreError::Unexpected(Arc::new(error)),
        }
    }
}

impl From<MigrateError> for StoreError {
    fn from(error: MigrateError) -> StoreError {
        match error {
            MigrateError::Execute(error) => error.into(),
            MigrateError::ExecuteMigration(error, version) => match primary_code(&error) {
                Some(1) | None => {
                    StoreError::Migration(Arc::new(MigrateError::ExecuteMigration(error, version)))
                }
                Some(_) => error.into(),
            },
            error @ (MigrateError::VersionMissing(_) | MigrateError::VersionTooNew(..)) => {
                StoreError::Newer(Arc::new(error))
            }
            error => StoreError::Migration(Arc::new(error)),
        }
    }
}
