//! A file on its way in: put down piece by piece in the folder of the data while its hash is worked out. It goes by itself
//! when nobody wants it any more, also where the program is ended in between.

use super::EvidenceError;
use super::files::FilesError;
use crate::app::App;
use crate::core::documents::canonical;
use sha2::{Digest, Sha256};
use std::io::SeekFrom;
use std::path::PathBuf;
use tokio::fs::{File, OpenOptions};
use tokio::io::{AsyncSeekExt, AsyncWriteExt};

/// A file that is arriving.
pub struct Incoming {
    file: File,
    sum: Sha256,
    size: u64,
    left: Left,
}

/// A file that arrived whole and is not kept yet.
pub struct Arrived {
    pub(super) file: File,
    /// `sha256:` and 64 hex digits.
    pub hash: String,
    /// Bytes.
    pub size: u64,
    _left: Left,
}

/// What to take away in the end; nothing where the system does so by itself.
struct Left(Option<PathBuf>);

impl Drop for Left {
    fn drop(&mut self) {
        if let Some(path) = self.0.take() {
            let _ = std::fs::remove_file(path);
        }
    }
}

impl Incoming {
    /// A file of which nothing has arrived.
    ///
    /// # Errors
    /// When the folder of the data cannot be written.
    pub async fn begin(app: &App) -> Result<Incoming, EvidenceError> {
        let path = app.folder.join(format!("incoming-{}", app.clock.id()));
        let file = OpenOptions::new()
            .read(true)
            .write(true)
            .create_new(true)
            .open(&path)
            .await
            .map_err(FilesError::from)?;
        // Without a name it vanishes with its last user; systems that forbid that have it taken away in the end.
        let named = tokio::fs::remove_file(&path).await.is_err();
        Ok(Incoming {
            file,
            sum: Sha256::new(),
            size: 0,
            left: Left(named.then_some(path)),
        })
    }

    /// Puts down the next piece.
    ///
    /// # Errors
    /// When the disk is full or fails.
    pub async fn add(&mut self, piece: &[u8]) -> Result<(), EvidenceError> {
        self.file.write_all(piece).await.map_err(FilesError::from)?;
        self.sum.update(piece);
        self.size = self.size.saturating_add(piece.len() as u64);
        Ok(())
    }

    /// That was all of it.
    ///
    /// # Errors
    /// When the disk is full or fails.
    pub async fn arrived(mut self) -> Result<Arrived, EvidenceError> {
        self.file.flush().await.map_err(FilesError::from)?;
        self.file
            .seek(SeekFrom::Start(0))
            .await
            .map_err(FilesError::from)?;
        Ok(Arrived {
            file: self.file,
            hash: canonical::hash_of(self.sum),
            size: self.size,
            _left: self.left,
        })
    }
}
