//! Pages that are kept as they were rendered: the page of a revision is the same bytes until something that it shows
//! changes. What differs from visitor to visitor is filled in afterwards, round the page.

use super::answers;
use crate::app::App;
use crate::core::documents::canonical;
use crate::pathways;
use crate::store::memory::Kept;
use askama::Template;
use axum::body::Bytes;
use axum::response::{Html, IntoResponse, Response};
use std::sync::Arc;
use uuid::Uuid;

/// The page `view` of the current revision of a pathway: as it is kept, or made now.
pub(super) async fn page<T: Template>(
    app: &App,
    id: Uuid,
    view: &str,
    made: impl Future<Output = Result<T, Response>>,
) -> Result<Response, Response> {
    let before = key(app, id, view).await;
    if let Some(kept) = before.as_ref().and_then(|key| app.memory.page(key)) {
        return Ok(Html(Bytes::from_owner(kept.bytes)).into_response());
    }
    let made = made.await?;
    let Ok(html) = made.render() else {
        return answers::page(&made).map_err(IntoResponse::into_response);
    };
    // Whatever changed while the page was made may or may not be on it: then it is shown once and not kept.
    if let Some(key) = before
        && key_is_still(app, id, view, &key).await
    {
        let kept = Kept {
            hash: canonical::hash(html.as_bytes()),
            bytes: Arc::from(html.as_bytes()),
        };
        app.memory.keep_page(&key, kept);
    }
    Ok(Html(html).into_response())
}

async fn key_is_still(app: &App, id: Uuid, view: &str, before: &str) -> bool {
    key(app, id, view).await.is_some_and(|now| now == before)
}

/// None where there is no such pathway: making the page then says so.
async fn key(app: &App, id: Uuid, view: &str) -> Option<String> {
    let face = pathways::face(app, id).await.ok()?;
    Some(format!("{view} {face}"))
}
