//! `demo`: invented data in a temporary folder, served until it is asked to stop.

use super::say;
use super::serve::{door, open, running, serve};
use crate::config::Config;
use crate::people::pages::gate::{DemoDoor, Door};
use crate::{demo, telemetry};
use anyhow::Context;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// Runs until it is asked to stop.
pub(super) fn run(config: &Config) -> anyhow::Result<()> {
    // The demonstration is for looking around: only what goes wrong is worth a line.
    let log = if config.log == "info" { "warn" } else { &config.log };
    telemetry::begin(log, config.log_format)?;
    running(async {
        let folder = Folder::fresh()?;
        let app = open(folder.path()).await?;
        demo::load(&app)
            .await
            .context("the demonstration cannot be stored")?;
        let people = demo::people(&app)
            .await
            .context("the people of the demonstration cannot be stored")?;
        say(
            "Demonstration: one invented company and invented people; nothing you do here is kept. Stop it with Ctrl+C.",
        );
        say(
            "Whoever opens it on this machine is signed in as its preparer, and can be its approver or administrator at \
             /me. Nobody else comes in, but with a token:",
        );
        say(&format!("a token that reads, for scripts: {}", people.token));
        say("Open:");
        let door = Door {
            demo: Some(Arc::new(DemoDoor::new(people.ids))),
            ..door(config)
        };
        serve(app, config, door).await
    })
}

/// A folder of our own that goes when it is dropped.
struct Folder(PathBuf);

impl Folder {
    fn fresh() -> anyhow::Result<Folder> {
        let id = crate::clock::Clock::system().id();
        let path = std::env::temp_dir().join(format!("wheelwort-demo-{id}"));
        std::fs::create_dir(&path)
            .with_context(|| format!("the folder {} cannot be made", path.display()))?;
        Ok(Folder(path))
    }

    fn path(&self) -> &Path {
        &self.0
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        if let Err(error) = std::fs::remove_dir_all(&self.0) {
            say(&format!(
                "The folder {} could not be removed: {error}.",
                self.0.display()
            ));
        }
    }
}
