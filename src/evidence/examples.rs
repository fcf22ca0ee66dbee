//! Evidence of the demonstration: put in with it, taken out with it.

use super::files::Files;
use super::{EvidenceError, Incoming, KEEPING, Naming, sql};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::store::{Connection, OrganisationId, StoreError};
use serde_json::json;

/// A piece of evidence of the demonstration.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Example {
    /// Id that the documents of the demonstration name.
    pub id: String,
    /// Name of the file.
    pub file_name: String,
    /// What the file holds.
    pub text: String,
    /// What it is.
    pub note: String,
}

/// Stores evidence of the demonstration; an id that is taken already is left as it is. How many came.
///
/// # Errors
/// When the files or the database fail.
pub async fn load_examples(app: &App, examples: Vec<Example>) -> Result<u64, EvidenceError> {
    let there = super::among(app, examples.iter().map(|example| example.id.as_str())).await?;
    let keeping = KEEPING.read().await;
    let files = Files::of(app)?;
    let mut ready = Vec::new();
    for example in examples {
        if there.contains_key(&example.id) {
            continue;
        }
        let mut incoming = Incoming::begin(app).await?;
        incoming.add(example.text.as_bytes()).await?;
        let mut arrived = incoming.arrived().await?;
        files.keep(&mut arrived).await?;
        let naming = Naming {
            id: Some(example.id),
            file_name: example.file_name,
            media_type: "text/plain".into(),
            note: Some(example.note),
        };
        let size = i64::try_from(arrived.size).unwrap_or(i64::MAX);
        ready.push((naming.checked(arrived.size)?, arrived.hash, size));
    }
    if ready.is_empty() {
        return Ok(0);
    }
    let (organisation, who, now) = (app.organisation, app.who.clone(), app.clock.millis());
    app.store
        .write_then(
            move |c| {
                Box::pin(async move {
                    let mut came = 0_u64;
                    for (naming, hash, size) in &ready {
                        let id = naming.id.as_deref().unwrap_or_default();
                        if sql::is_there(c, organisation, id).await? {
                            continue;
                        }
                        let new = sql::New {
                            naming,
                            hash,
                            size: *size,
                            example: true,
                        };
                        sql::add(c, organisation, (id, None), new, &who, now).await?;
                        came += 1;
                    }
                    let deed = Deed::new("attached", "example", "", json!({ "evidence": came }));
                    audit_trail::add(c, organisation, &who, now, deed).await?;
                    Ok::<_, EvidenceError>(came)
                })
            },
            move |_| drop(keeping),
        )
        .await
}

/// Takes evidence of the demonstration out that no revision names any more, inside the transaction that removes its
/// pathways; the hashes to [`forget`] once that is durable.
///
/// # Errors
/// When the database fails.
pub async fn remove_examples(
    c: &mut Connection,
    organisation: OrganisationId,
) -> Result<Vec<String>, StoreError> {
    sql::remove_unused_examples(c, organisation).await
}

/// Takes the files away whose hash no record names. Others are left.
///
/// # Errors
/// When the files or the database fail; then files are left over that nothing names, no more.
pub async fn forget(app: &App, hashes: Vec<String>) -> Result<(), EvidenceError> {
    if hashes.is_empty() {
        return Ok(());
    }
    let _nobody_keeps = KEEPING.write().await;
    let mut reader = app.store.reader().await?;
    let unnamed = sql::named_by_none(&mut reader, &json!(hashes).to_string()).await?;
    drop(reader);
    let files = Files::of(app)?;
    for hash in unnamed {
        files.remove(&hash).await?;
    }
    Ok(())
}
