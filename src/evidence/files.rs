//! The bytes of evidence, each file once under its hash: in the folder of the data or in a store that speaks S3. The only
//! file that knows how they are kept.

use super::incoming::Arrived;
use crate::app::{App, EvidenceStore, S3};
use crate::core::documents::canonical;
use object_store::aws::AmazonS3Builder;
use object_store::buffered::BufWriter;
use object_store::local::LocalFileSystem;
use object_store::path::Path;
use object_store::{ObjectStore, ObjectStoreExt, RetryConfig};
use sha2::{Digest, Sha256};
use std::pin::Pin;
use std::sync::{Arc, Mutex, Once, PoisonError};
use std::task::{Context, Poll, ready};
use std::time::Duration;
use thiserror::Error;
use tokio::io::{AsyncReadExt, AsyncWriteExt};
use tokio_stream::{Stream, StreamExt};

/// Bytes that are read and written at once.
const PIECE: usize = 256 << 10;
/// The folder of all files, below the folder of the data or in the bucket.
const FOLDER: &str = "evidence";

/// Why files could not be kept or read. The cause, which may name folders and hosts, is for the log alone.
#[derive(Clone, Debug, Error)]
pub enum FilesError {
    /// The disk or the store elsewhere did not do what it was asked.
    #[error("The store of evidence does not answer as it should. Nothing was saved; try again in a moment.")]
    Store(#[source] Arc<object_store::Error>),
    /// A file on its way in could not be put down.
    #[error(
        "The file could not be put down. Nothing was saved; check the space and the rights of the data folder."
    )]
    Disk(#[source] Arc<std::io::Error>),
    /// The bytes are not those that were attached.
    #[error("The file is not the one that was attached.")]
    Altered,
}

impl From<object_store::Error> for FilesError {
    fn from(error: object_store::Error) -> FilesError {
        FilesError::Store(Arc::new(error))
    }
}

impl From<std::io::Error> for FilesError {
    fn from(error: std::io::Error) -> FilesError {
        FilesError::Disk(Arc::new(error))
    }
}

/// The files of evidence. Cheap to clone.
#[derive(Clone, Debug)]
pub(super) struct Files(Arc<dyn ObjectStore>);

/// What a file is now: its hash, or none where there is no file.
pub(super) type Found = Option<String>;

impl Files {
    /// The files of a program.
    pub(super) fn of(app: &App) -> Result<Files, FilesError> {
        match &*app.evidence_store {
            EvidenceStore::Local => {
                let folder = LocalFileSystem::new_with_prefix(&app.folder)?;
                // A row must never name a file that a power cut took.
                Ok(Files(Arc::new(folder.with_fsync(true))))
            }
            EvidenceStore::S3(store) => elsewhere(store).map(Files),
        }
    }

    /// Keeps what arrived under its hash. The same bytes that lie there already are left alone; others are put right.
    pub(super) async fn keep(&self, arrived: &mut Arrived) -> Result<(), FilesError> {
        if self.hash_of(&arrived.hash).await?.as_deref() == Some(arrived.hash.as_str()) {
            return Ok(());
        }
        let mut writer = BufWriter::new(self.0.clone(), place(&arrived.hash));
        loop {
            let mut piece = vec![0; PIECE];
            let read = arrived.file.read(&mut piece).await?;
            if read == 0 {
                break;
            }
            piece.truncate(read);
            if let Err(error) = writer.put(piece.into()).await {
                // Parts of a half-sent file would lie in the bucket for ever.
                let _ = writer.abort().await;
                return Err(error.into());
            }
        }
        writer.shutdown().await?;
        Ok(())
    }

    /// The hash of the file that lies under a hash: the same one, unless it was altered.
    pub(super) async fn hash_of(&self, hash: &str) -> Result<Found, FilesError> {
        let Some(mut pieces) = self.open(hash).await? else {
            return Ok(None);
        };
        let mut sum = Sha256::new();
        while let Some(piece) = pieces.next().await {
            sum.update(&piece?);
        }
        Ok(Some(canonical::hash_of(sum)))
    }

    /// The bytes under a hash, checked as they are read: the last piece comes only if all of them are those.
    pub(super) async fn read(&self, hash: &str) -> Result<Option<Pieces>, FilesError> {
        let pieces = self.open(hash).await?;
        Ok(pieces.map(|pieces| Pieces {
            pieces,
            sum: Sha256::new(),
            hash: hash.to_owned(),
            held: None,
        }))
    }

    async fn open(&self, hash: &str) -> Result<Option<RawPieces>, FilesError> {
        match self.0.get(&place(hash)).await {
            Ok(found) => Ok(Some(Box::pin(
                found.into_stream().map(|piece| Ok(Vec::from(piece?))),
            ))),
            Err(object_store::Error::NotFound { .. }) => Ok(None),
            Err(error) => Err(error.into()),
        }
    }

    /// The names of all files: those of evidence are hashes, others are none of ours.
    pub(super) async fn names(&self) -> Result<Vec<String>, FilesError> {
        let mut names = Vec::new();
        let mut all = self.0.list(Some(&Path::from(FOLDER)));
        while let Some(found) = all.next().await {
            let location = found?.location;
            let name = location.filename().unwrap_or_default();
            let hash = format!("sha256:{name}");
            names.push(if place(&hash) == location {
                hash
            } else {
                location.to_string()
            });
        }
        names.sort();
        Ok(names)
    }

    /// Takes a file away that no record names.
    pub(super) async fn remove(&self, hash: &str) -> Result<(), FilesError> {
        match self.0.delete(&place(hash)).await {
            Ok(()) | Err(object_store::Error::NotFound { .. }) => Ok(()),
            Err(error) => Err(error.into()),
        }
    }
}

/// Where a file lies: in a folder of the first two signs of its hash, so that none grows too full.
fn place(hash: &str) -> Path {
    let digits = hash.strip_prefix("sha256:").unwrap_or(hash);
    let first = digits.get(..2).unwrap_or("00");
    Path::from_iter([FOLDER, first, digits])
}

/// Clients by the store they speak to.
type Clients = Vec<(S3, Arc<dyn ObjectStore>)>;

/// A client of a store elsewhere. One for each as long as the program runs: it keeps its connections.
fn elsewhere(store: &S3) -> Result<Arc<dyn ObjectStore>, FilesError> {
    static CLIENTS: Mutex<Clients> = Mutex::new(Vec::new());
    static CIPHERS: Once = Once::new();
    let mut clients = CLIENTS.lock().unwrap_or_else(PoisonError::into_inner);
    if let Some((_, client)) = clients.iter().find(|(known, _)| known == store) {
        return Ok(client.clone());
    }
    CIPHERS.call_once(|| {
        // Another part of the program may have chosen the same ones before.
        let _ = rustls::crypto::ring::default_provider().install_default();
    });
    let patience = RetryConfig {
        max_retries: 3,
        retry_timeout: Duration::from_secs(10),
        ..RetryConfig::default()
    };
    let client: Arc<dyn ObjectStore> = Arc::new(
        AmazonS3Builder::new()
            .with_endpoint(&store.endpoint)
            .with_bucket_name(&store.bucket)
            .with_region(&store.region)
            .with_access_key_id(&store.key_id)
            .with_secret_access_key(store.secret.reveal())
            // The settings let `http` through for this machine alone.
            .with_allow_http(store.endpoint.starts_with("http://"))
            .with_retry(patience)
            .build()?,
    );
    clients.push((store.clone(), client.clone()));
    Ok(client)
}

type RawPieces = Pin<Box<dyn Stream<Item = Result<Vec<u8>, FilesError>> + Send>>;

/// The bytes of a file, piece by piece. Its end is an error unless the whole is what was attached: the last piece waits
/// for that.
pub struct Pieces {
    pieces: RawPieces,
    sum: Sha256,
    hash: String,
    held: Option<Vec<u8>>,
}

impl Stream for Pieces {
    type Item = Result<Vec<u8>, FilesError>;

    fn poll_next(mut self: Pin<&mut Self>, context: &mut Context<'_>) -> Poll<Option<Self::Item>> {
        loop {
            match ready!(self.pieces.as_mut().poll_next(context)) {
                Some(Ok(piece)) => {
                    self.sum.update(&piece);
                    if let Some(before) = self.held.replace(piece) {
                        return Poll::Ready(Some(Ok(before)));
                    }
                }
                Some(Err(error)) => return Poll::Ready(Some(Err(error))),
                None => {
                    let Some(last) = self.held.take() else {
                        return Poll::Ready(None);
                    };
                    let sound = canonical::hash_of(std::mem::take(&mut self.sum)) == self.hash;
                    return Poll::Ready(Some(if sound { Ok(last) } else { Err(FilesError::Altered) }));
                }
            }
        }
    }
}
