//! Whether the file itself is sound: SQLite's own checks.

use super::{Connection, Store, StoreError};

/// Findings at most: a broken file has thousands.
const MOST: usize = 100;

impl Store {
    /// What SQLite finds wrong with the file, its indexes and its references, as sentences.
    ///
    /// # Errors
    /// When the file cannot be read at all.
    pub async fn unsound(&self) -> Result<Vec<String>, StoreError> {
        let mut reader = self.reader().await?;
        unsound(&mut reader).await
    }
}

/// The same on a connection.
pub(super) async fn unsound(c: &mut Connection) -> Result<Vec<String>, StoreError> {
    let mut found: Vec<String> = sqlx::query_scalar("PRAGMA integrity_check(100)")
        .fetch_all(&mut *c)
        .await?;
    found.retain(|line| line != "ok");
    type Reference = (String, Option<i64>, String, i64);
    let broken: Vec<Reference> = sqlx::query_as("PRAGMA foreign_key_check").fetch_all(c).await?;
    found.extend(broken.into_iter().map(|(table, row, other, _)| {
        let row = row.map_or_else(|| "a row".to_owned(), |row| format!("row {row}"));
        format!("{row} of {table} names a row of {other} that is not there")
    }));
    found.truncate(MOST);
    Ok(found)
}
