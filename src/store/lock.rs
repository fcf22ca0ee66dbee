//! One program that serves a folder at a time: an exclusive lock on a file in it, which goes with the process however it
//! ends.

use std::fs::{File, OpenOptions, TryLockError};
use std::path::{Path, PathBuf};
use thiserror::Error;

/// Name of the file that is locked; it holds nothing.
pub const LOCK: &str = "wheelwort.lock";

/// Why a folder could not be taken.
#[derive(Debug, Error)]
pub enum LockError {
    /// Another program serves it.
    #[error(
        "Another wheelwort serves the data in {}. Stop that one first, or give this one a folder of its own with --data.",
        .0.display()
    )]
    Taken(PathBuf),
    /// The file cannot be made or locked.
    #[error("The data in {} cannot be locked: check the rights of the folder, and that its disk knows locks.", .0.display())]
    Unlockable(PathBuf, #[source] std::io::Error),
}

/// A folder that is taken, for as long as this lives.
#[derive(Debug)]
pub struct FolderLock {
    _file: File,
}

impl FolderLock {
    /// Takes a folder.
    ///
    /// # Errors
    /// `Taken` when another program has it.
    pub fn take(folder: &Path) -> Result<FolderLock, LockError> {
        let unlockable = |error| LockError::Unlockable(folder.to_owned(), error);
        let file = OpenOptions::new()
            .write(true)
            .create(true)
            .truncate(false)
            .open(folder.join(LOCK))
            .map_err(unlockable)?;
        match file.try_lock() {
            Ok(()) => Ok(FolderLock { _file: file }),
            Err(TryLockError::WouldBlock) => Err(LockError::Taken(folder.to_owned())),
            Err(TryLockError::Error(error)) => Err(unlockable(error)),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_folder_is_taken_once_and_comes_free() {
        let folder = tempfile::tempdir().expect("a folder");
        let first = FolderLock::take(folder.path()).expect("taken");
        let error = FolderLock::take(folder.path()).expect_err("refused");
        let words = error.to_string();
        assert!(matches!(error, LockError::Taken(_)));
        assert!(words.contains(&folder.path().display().to_string()), "{words}");
        drop(first);
        FolderLock::take(folder.path()).expect("free again");
    }
}
