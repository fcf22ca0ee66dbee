//! Bringing a backup back: every file is held against the manifest before anything is written, and again while it is; the
//! folder gets its name only when all of it is on the disk and the database is sound.

use super::{
    BackupError, FORMAT, Held, MANIFEST, Manifest, Temporary, at, measured, own_path, parent, sync_folder,
};
use crate::store::{FILE, StoreError, pool, sound};
use sqlx::{ConnectOptions, Connection};
use std::collections::BTreeSet;
use std::fs::{self, File};
use std::io::{Read, Write};
use std::path::{Path, PathBuf};
use zip::ZipArchive;

/// Longest manifest, in bytes.
const LONGEST_MANIFEST: u64 = 256 << 20;

/// Brings a backup back into a folder that is empty or not there yet.
///
/// # Errors
/// When the file is no whole backup, the folder holds something, or something cannot be written; then the folder is as it
/// was.
pub async fn restore(file: &Path, folder: &Path) -> Result<Manifest, BackupError> {
    let (from, to) = (file.to_owned(), folder.to_owned());
    let work = tokio::task::spawn_blocking(move || {
        must_be_empty(&to)?;
        let mut archive = open(&from)?;
        let manifest = manifest(&from, &mut archive)?;
        for held in &manifest.files {
            unpack(
                &from,
                &mut archive,
                held,
                &mut std::io::sink(),
                Path::new(&held.path),
            )?;
        }
        fs::create_dir_all(parent(&to)).map_err(at("Cannot make", parent(&to)))?;
        let whole = Temporary::beside(&to, "restoring");
        fs::create_dir(&whole.0).map_err(at("Cannot make", &whole.0))?;
        for held in &manifest.files {
            write(&from, &mut archive, held, &whole.0)?;
        }
        Ok::<_, BackupError>((manifest, whole))
    });
    let (manifest, whole) = work.await.unwrap_or_else(|_| Err(StoreError::Stopped.into()))?;
    sound_copy(&whole.0.join(FILE)).await?;
    must_be_empty(folder)?;
    sync_all(&whole.0)?;
    // Takes the place of an empty folder; one that has been filled meanwhile refuses.
    fs::rename(&whole.0, folder).map_err(at("Cannot make", folder))?;
    sync_folder(parent(folder))?;
    Ok(manifest)
}

fn must_be_empty(folder: &Path) -> Result<(), BackupError> {
    match fs::read_dir(folder) {
        Err(error) if error.kind() == std::io::ErrorKind::NotFound => Ok(()),
        Err(error) if error.kind() == std::io::ErrorKind::NotADirectory => {
            Err(BackupError::NotEmpty(folder.to_owned()))
        }
        Err(error) => Err(at("Cannot read", folder)(error)),
        Ok(mut entries) => match entries.next() {
            None => Ok(()),
            Some(_) => Err(BackupError::NotEmpty(folder.to_owned())),
        },
    }
}

fn unusable(file: &Path, what: impl Into<String>) -> BackupError {
    BackupError::Unusable {
        file: file.to_owned(),
        what: what.into(),
    }
}

fn open(file: &Path) -> Result<ZipArchive<File>, BackupError> {
    let opened = File::open(file).map_err(at("Cannot read", file))?;
    ZipArchive::new(opened).map_err(|_| unusable(file, "it is no archive, or its end is missing"))
}

fn manifest(file: &Path, archive: &mut ZipArchive<File>) -> Result<Manifest, BackupError> {
    let mut text = Vec::new();
    {
        let entry = archive
            .by_name(MANIFEST)
            .map_err(|_| unusable(file, "it holds no manifest"))?;
        entry
            .take(LONGEST_MANIFEST)
            .read_to_end(&mut text)
            .map_err(|_| unusable(file, "its manifest cannot be read"))?;
    }
    let manifest: Manifest =
        serde_json::from_slice(&text).map_err(|_| unusable(file, "its manifest cannot be read"))?;
    if manifest.format != FORMAT {
        let what = format!(
            "its format is \"{}\", and this program reads \"{FORMAT}\"",
            manifest.format
        );
        return Err(unusable(file, what));
    }
    let mut listed: BTreeSet<&str> = [MANIFEST].into();
    for held in &manifest.files {
        if own_path(&held.path).is_none() || !listed.insert(&held.path) {
            return Err(unusable(file, format!("its manifest names \"{}\"", held.path)));
        }
    }
    if !listed.contains(FILE) {
        return Err(unusable(file, format!("it holds no {FILE}")));
    }
    for name in archive.file_names() {
        let name = name.map_err(|_| unusable(file, "a name in it cannot be read"))?;
        if !listed.contains(name.as_ref()) {
            let what = format!("it holds \"{name}\", which its manifest does not name");
            return Err(unusable(file, what));
        }
    }
    Ok(manifest)
}

/// Reads a file of the archive, and holds it against the manifest. Never writes more than the manifest says there is.
fn unpack(
    file: &Path,
    archive: &mut ZipArchive<File>,
    held: &Held,
    to: &mut impl Write,
    named: &Path,
) -> Result<(), BackupError> {
    let entry = archive
        .by_name(&held.path)
        .map_err(|_| unusable(file, format!("\"{}\" is missing", held.path)))?;
    let mut limited = entry.take(held.bytes.saturating_add(1));
    let mut failing = Failing { to, failed: None };
    let measured = measured(&mut limited, &mut failing);
    if let Some(error) = failing.failed {
        return Err(at("Cannot write", named)(error));
    }
    match measured {
        Ok((bytes, sha256)) if bytes == held.bytes && sha256 == held.sha256 => Ok(()),
        Ok(_) => Err(unusable(
            file,
            format!("\"{}\" is not what its manifest says", held.path),
        )),
        Err(_) => Err(unusable(file, format!("\"{}\" cannot be read", held.path))),
    }
}

/// Remembers that it was the writing that failed, not the reading.
struct Failing<'w, W> {
    to: &'w mut W,
    failed: Option<std::io::Error>,
}

impl<W: Write> Write for Failing<'_, W> {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        self.to.write(bytes).inspect_err(|error| {
            let same = error.raw_os_error().map(std::io::Error::from_raw_os_error);
            self.failed = Some(same.unwrap_or_else(|| error.kind().into()));
        })
    }

    fn flush(&mut self) -> std::io::Result<()> {
        self.to.flush()
    }
}

fn write(file: &Path, archive: &mut ZipArchive<File>, held: &Held, folder: &Path) -> Result<(), BackupError> {
    let path = folder.join(&held.path);
    fs::create_dir_all(parent(&path)).map_err(at("Cannot make", parent(&path)))?;
    let mut to = File::create_new(&path).map_err(at("Cannot make", &path))?;
    unpack(file, archive, held, &mut to, &path)?;
    to.sync_all().map_err(at("Cannot write to disk:", &path))
}

/// Looks at the database once, so that a folder that cannot be served never gets its name.
async fn sound_copy(data: &Path) -> Result<(), BackupError> {
    let mut connection = pool::for_copy(data).connect().await.map_err(StoreError::from)?;
    let found = sound::unsound(&mut connection).await;
    connection.close().await.map_err(StoreError::from)?;
    match found?.into_iter().next() {
        Some(what) => Err(BackupError::Unsound(what)),
        None => Ok(()),
    }
}

/// Makes the names in a folder and below it last.
fn sync_all(folder: &Path) -> Result<(), BackupError> {
    let mut folders: Vec<PathBuf> = vec![folder.to_owned()];
    while let Some(folder) = folders.pop() {
        let entries = fs::read_dir(&folder).and_then(Iterator::collect::<Result<Vec<_>, _>>);
        let below = entries.map_err(at("Cannot read", &folder))?.into_iter();
        folders.extend(below.map(|entry| entry.path()).filter(|path| path.is_dir()));
        sync_folder(&folder)?;
    }
    Ok(())
}
