//! Making a backup: a copy of the database at one moment, then the files beside it, then the manifest; under its name only
//! when all of it is on the disk.

use super::{
    BackupError, FOLDERS, FORMAT, Held, MANIFEST, Manifest, Temporary, at, measured, parent, sync_folder,
};
use crate::clock::Clock;
use crate::store::{FILE, StoreError, pool, sound};
use sqlx::{ConnectOptions, Connection};
use std::fs::{self, File};
use std::io::Write;
use std::path::Path;
use zip::write::SimpleFileOptions;
use zip::{CompressionMethod, ZipWriter};

/// Backs the data of a folder up into a file that is not there yet. The service may run meanwhile.
///
/// # Errors
/// When there is no data, the file is there already, or something cannot be read, written or is not sound; then nothing
/// stands under the name of the file.
pub async fn back_up(folder: &Path, file: &Path, clock: &Clock) -> Result<Manifest, BackupError> {
    let data = folder.join(FILE);
    if !data.is_file() {
        return Err(BackupError::NoData(folder.to_owned()));
    }
    if file.exists() {
        return Err(BackupError::Exists(file.to_owned()));
    }
    let copy = Temporary::beside(file, "db");
    copy_database(&data, &copy.0).await?;
    let part = Temporary::beside(file, "part");
    let (folder, target, made_at) = (folder.to_owned(), file.to_owned(), clock.now().to_string());
    // Reading and packing takes as long as the data are large: not on a thread that serves others.
    let work = tokio::task::spawn_blocking(move || {
        let manifest = pack(&folder, &copy.0, &part.0, made_at)?;
        name(&part.0, &target)?;
        Ok(manifest)
    });
    work.await.unwrap_or_else(|_| Err(StoreError::Stopped.into()))
}

/// The database as it stands now, in a file of its own, found sound.
async fn copy_database(data: &Path, copy: &Path) -> Result<(), BackupError> {
    let mut connection = pool::for_copy(data).connect().await.map_err(StoreError::from)?;
    let name = copy.to_string_lossy().into_owned();
    let copied = sqlx::query("VACUUM INTO $1")
        .bind(name)
        .execute(&mut connection)
        .await;
    let closed = connection.close().await;
    copied.map_err(StoreError::from)?;
    closed.map_err(StoreError::from)?;
    let mut connection = pool::for_copy(copy).connect().await.map_err(StoreError::from)?;
    let found = sound::unsound(&mut connection).await;
    connection.close().await.map_err(StoreError::from)?;
    match found?.into_iter().next() {
        Some(what) => Err(BackupError::Unsound(what)),
        None => Ok(()),
    }
}

fn pack(folder: &Path, copy: &Path, part: &Path, made_at: String) -> Result<Manifest, BackupError> {
    let file = File::create_new(part).map_err(at("Cannot make", part))?;
    let mut archive = ZipWriter::new(file);
    let mut files = vec![add(&mut archive, part, copy, FILE)?];
    for name in FOLDERS {
        add_folder(&mut archive, part, &folder.join(name), name, &mut files)?;
    }
    let manifest = Manifest {
        format: FORMAT.to_owned(),
        program: crate::app::PROGRAM.to_owned(),
        made_at,
        files,
    };
    let text = serde_json::to_vec_pretty(&manifest).unwrap_or_default();
    let broken = |error: zip::result::ZipError| at("Cannot write", part)(error.into());
    archive.start_file(MANIFEST, options()).map_err(broken)?;
    archive.write_all(&text).map_err(at("Cannot write", part))?;
    let file = archive.finish().map_err(broken)?;
    file.sync_all().map_err(at("Cannot write to disk:", part))?;
    Ok(manifest)
}

fn options() -> SimpleFileOptions {
    SimpleFileOptions::default()
        .compression_method(CompressionMethod::Deflated)
        .large_file(true)
}

/// The files of a folder, in the order of their names; what an upload has not finished yet is left out.
fn add_folder(
    archive: &mut ZipWriter<File>,
    part: &Path,
    folder: &Path,
    name: &str,
    files: &mut Vec<Held>,
) -> Result<(), BackupError> {
    if !folder.is_dir() {
        return Ok(());
    }
    let entries = fs::read_dir(folder).and_then(Iterator::collect::<Result<Vec<_>, _>>);
    let mut entries = entries.map_err(at("Cannot read", folder))?;
    entries.sort_by_key(fs::DirEntry::file_name);
    for entry in entries {
        let path = entry.path();
        let Some(own) = entry.file_name().to_str().map(|own| format!("{name}/{own}")) else {
            continue;
        };
        let kind = entry.file_type().map_err(at("Cannot read", &path))?;
        if kind.is_dir() {
            add_folder(archive, part, &path, &own, files)?;
        } else if kind.is_file() && !own.contains('#') && super::own_path(&own).is_some() {
            files.push(add(archive, part, &path, &own)?);
        }
    }
    Ok(())
}

fn add(archive: &mut ZipWriter<File>, part: &Path, from: &Path, name: &str) -> Result<Held, BackupError> {
    let mut source = File::open(from).map_err(at("Cannot read", from))?;
    archive
        .start_file(name, options())
        .map_err(|error| at("Cannot write", part)(error.into()))?;
    let (bytes, sha256) = measured(&mut source, archive).map_err(at("Cannot write", part))?;
    Ok(Held {
        path: name.to_owned(),
        bytes,
        sha256,
    })
}

/// Gives the finished file its name, unless something has that name by now.
fn name(part: &Path, file: &Path) -> Result<(), BackupError> {
    match fs::hard_link(part, file) {
        Ok(()) => {}
        Err(error) if error.kind() == std::io::ErrorKind::AlreadyExists => {
            return Err(BackupError::Exists(file.to_owned()));
        }
        // A disk without links: the name was free when this began.
        Err(_) => fs::rename(part, file).map_err(at("Cannot make", file))?,
    }
    sync_folder(parent(file))
}
