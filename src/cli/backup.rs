//! `backup` and `restore`: everything a data folder holds, as one file and back.

use super::{COULD_NOT, print, say};
use crate::clock::Clock;
use crate::store::backup::{BackupError, Manifest, back_up, restore as bring_back};
use std::path::Path;

/// Makes a backup.
pub(super) fn run(folder: &Path, file: &Path) -> u8 {
    let made = running(async { back_up(folder, file, &Clock::system()).await });
    told(made, |manifest| {
        format!("Backed up into {}: {}.", file.display(), held(manifest))
    })
}

/// Brings a backup back.
pub(super) fn restore(file: &Path, folder: &Path) -> u8 {
    let brought = running(async { bring_back(file, folder).await });
    told(brought, |manifest| {
        format!(
            "Restored into {} what was backed up on {}: {}.",
            folder.display(),
            manifest.made_at,
            held(manifest)
        )
    })
}

fn running(work: impl Future<Output = Result<Manifest, BackupError>>) -> anyhow::Result<Manifest> {
    let mut outcome = None;
    super::serve::running(async {
        outcome = Some(work.await);
        Ok(())
    })?;
    Ok(outcome.ok_or_else(|| anyhow::anyhow!("nothing was done"))??)
}

fn told(outcome: anyhow::Result<Manifest>, words: impl Fn(&Manifest) -> String) -> u8 {
    match outcome {
        Ok(manifest) => print(words(&manifest).as_bytes()),
        Err(error) => {
            say(&format!("wheelwort: {error:#}"));
            COULD_NOT
        }
    }
}

fn held(manifest: &Manifest) -> String {
    let bytes: u64 = manifest.files.iter().map(|file| file.bytes).sum();
    match manifest.files.len() {
        0 | 1 => format!("the database, {bytes} bytes"),
        2 => format!("the database and 1 file of evidence, {bytes} bytes"),
        count => format!("the database and {} files of evidence, {bytes} bytes", count - 1),
    }
}
