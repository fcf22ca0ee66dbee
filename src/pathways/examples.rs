//! Demonstration data: put in and taken out whole.

use super::save::{create_prepared, prepare};
use super::{PathwayError, Saved, sql};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::documents::{Pathway, Problem};
use crate::core::engine::assess::hash;
use crate::evidence;
use serde_json::json;

/// Stores demonstration documents; those that are there already are left as they are. All are evaluated before the
/// first is stored.
///
/// # Errors
/// A document that is not marked as an example, or that cannot be evaluated; or when the database fails.
pub async fn load_examples(app: &App, documents: Vec<Pathway>) -> Result<Vec<Saved>, PathwayError> {
    let mut ready = Vec::with_capacity(documents.len());
    for document in documents {
        if !document.example {
            let detail = format!("\"{}\" is not marked as an example.", document.name);
            let problem = Problem {
                pointer: "/example".into(),
                detail,
                remedy: "Set it to true.".into(),
            };
            return Err(PathwayError::Problems(problem.into()));
        }
        ready.push(prepare(app, document).await?);
    }
    let mut saved = Vec::new();
    for made in ready {
        let mut reader = app.store.reader().await?;
        let there = sql::example_by_hash(&mut reader, app.organisation, &made.hash).await?;
        drop(reader);
        if there.is_none() {
            saved.push(create_prepared(app, made, None).await?);
        }
    }
    Ok(saved)
}

/// Removes the pathways that began as one of `documents`, with their revisions and the evidence that nothing else names, in
/// one step; how many pathways went. One that was
/// once saved without the mark is a record and stays, and so does a copy that somebody brought in.
///
/// # Errors
/// When the database fails.
pub async fn remove_examples(app: &App, documents: &[Pathway]) -> Result<u64, PathwayError> {
    let (who, memory) = (app.organisation, app.memory.clone());
    let (by, now) = (app.who.clone(), app.clock.millis());
    let hashes: Vec<String> = documents.iter().map(hash).collect::<Result<_, _>>()?;
    let hashes =
        serde_json::to_string(&hashes).map_err(|e| PathwayError::defect("wrote a list of hashes", e))?;
    let (gone, files) = app
        .store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let gone = sql::remove_examples(c, who, &hashes).await?;
                    let files = evidence::remove_examples(c, who).await?;
                    if gone > 0 {
                        let deed = Deed::new("removed", "example", "", json!({ "pathways": gone }));
                        audit_trail::add(c, who, &by, now, deed).await?;
                    }
                    Ok::<_, PathwayError>((gone, files))
                })
            },
            move |_| memory.forget_heads(),
        )
        .await?;
    if let Err(error) = evidence::forget(app, files).await {
        // The records are gone; a file that none names is told by the check and does no harm.
        tracing::warn!(%error, "files of the demonstration were left behind");
    }
    Ok(gone)
}
