//! A copy of everything that a data folder holds, as one file: the database as it stands at one moment, the files beside it,
//! and a manifest with the size and hash of each. It is made while the service runs, and brought back into an empty folder.
//!
//! The file is a ZIP archive: `manifest.json`, `wheelwort.db`, `evidence/...`. Files of evidence are named by their hash, are
//! only ever added, and are there before a row names them; copying them after the database therefore misses none.

mod make;
mod restore;

pub use make::back_up;
pub use restore::restore;

use super::{FILE, StoreError};
use crate::core::documents::canonical;
use serde::{Deserialize, Serialize};
use std::io::{Read, Write};
use std::path::{Component, Path, PathBuf};
use thiserror::Error;

/// The format of a manifest.
pub const FORMAT: &str = "wheelwort.backup/1";
/// Name of the manifest in the archive.
const MANIFEST: &str = "manifest.json";
/// Folders beside the database that belong to the data.
const FOLDERS: [&str; 1] = ["evidence"];

/// What a backup holds.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Manifest {
    /// `wheelwort.backup/1`.
    pub format: String,
    /// Version of the program that made it.
    pub program: String,
    /// When it was made, UTC.
    pub made_at: String,
    /// Every other file of the archive.
    pub files: Vec<Held>,
}

/// A file of a backup.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Held {
    /// Its path in the data folder, with `/` between names.
    pub path: String,
    /// Its size.
    pub bytes: u64,
    /// `sha256:` and its hash.
    pub sha256: String,
}

/// Why a backup was not made or not brought back. `Display` is for people.
#[derive(Debug, Error)]
pub enum BackupError {
    /// There is no data file in the folder.
    #[error("There is no data in {}: it holds no {FILE}. Name the folder of the data with --data.", .0.display())]
    NoData(PathBuf),
    /// The file to write is there already.
    #[error("{} is there already and was left alone. Name another file.", .0.display())]
    Exists(PathBuf),
    /// The folder to bring the data back into holds something.
    #[error("{} is not empty and was left alone. Name an empty folder, or one that is not there yet.", .0.display())]
    NotEmpty(PathBuf),
    /// The file is no backup, or not a whole one.
    #[error("{} is no whole backup: {what}. Nothing was brought back.", file.display())]
    Unusable {
        /// The file.
        file: PathBuf,
        /// What is wrong with it.
        what: String,
    },
    /// The copy of the database does not hold.
    #[error("The copy of the data is not sound: {0}. Nothing was written.")]
    Unsound(String),
    /// A file or folder cannot be read or written.
    #[error("{doing} {}", path.display())]
    File {
        /// What was tried, such as `Cannot read`.
        doing: &'static str,
        /// The file or folder.
        path: PathBuf,
        /// The cause.
        #[source]
        source: std::io::Error,
    },
    /// The database.
    #[error(transparent)]
    Store(#[from] StoreError),
}

/// Names a file in an error of the machine.
fn at<'p>(doing: &'static str, path: &'p Path) -> impl Fn(std::io::Error) -> BackupError + use<'p> {
    move |source| BackupError::File {
        doing,
        path: path.to_owned(),
        source,
    }
}

/// A path of a manifest, if it may stand in a backup: the database, or a file below one of our folders.
fn own_path(path: &str) -> Option<PathBuf> {
    if path == FILE {
        return Some(path.into());
    }
    let below = FOLDERS.iter().any(|folder| {
        path.strip_prefix(folder)
            .is_some_and(|rest| rest.starts_with('/') && rest.len() > 1)
    });
    let plain = !path.contains('\\')
        && Path::new(path)
            .components()
            .all(|part| matches!(part, Component::Normal(_)))
        && path.split('/').all(|part| !part.is_empty() && part != ".");
    (below && plain).then(|| path.into())
}

/// Copies and measures: size and hash of what went through.
fn measured(from: &mut impl Read, to: &mut impl Write) -> std::io::Result<(u64, String)> {
    use sha2::Digest;
    let mut hash = sha2::Sha256::new();
    let mut buffer = vec![0; 1 << 16];
    let mut bytes = 0_u64;
    loop {
        let read = from.read(&mut buffer)?;
        let Some(piece) = buffer.get(..read).filter(|piece| !piece.is_empty()) else {
            break;
        };
        hash.update(piece);
        to.write_all(piece)?;
        bytes += read as u64;
    }
    Ok((bytes, canonical::hash_of(hash)))
}

/// Makes what was written in a folder last: names too.
fn sync_folder(folder: &Path) -> Result<(), BackupError> {
    #[cfg(unix)]
    std::fs::File::open(folder)
        .and_then(|folder| folder.sync_all())
        .map_err(at("Cannot write to disk:", folder))?;
    Ok(())
}

/// The folder that a path stands in.
fn parent(path: &Path) -> &Path {
    match path.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent,
        _ => Path::new("."),
    }
}

/// Something under a temporary name that goes again unless it is kept.
struct Temporary(PathBuf);

impl Temporary {
    /// A name beside a path.
    fn beside(path: &Path, ending: &str) -> Temporary {
        let id = crate::clock::Clock::system().id();
        let name = path
            .file_name()
            .map_or_else(String::new, |name| name.to_string_lossy().into_owned());
        Temporary(parent(path).join(format!(".{name}.{id}.{ending}")))
    }
}

impl Drop for Temporary {
    fn drop(&mut self) {
        // It is gone under this name if it was kept.
        let _ = std::fs::remove_file(&self.0);
        let _ = std::fs::remove_dir_all(&self.0);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_our_own_paths_are_taken() {
        for good in ["wheelwort.db", "evidence/ab/abcdef", "evidence/x"] {
            assert!(own_path(good).is_some(), "{good}");
        }
        for bad in [
            "",
            "wheelwort.lock",
            "evidence",
            "evidence/",
            "evidence/../x",
            "evidence//x",
            "/evidence/x",
            "evidence/./x",
            "evidence\\..\\x",
            "../wheelwort.db",
            "evidence2/x",
        ] {
            assert!(own_path(bad).is_none(), "{bad}");
        }
    }
}
