//! Pages of what an organisation adds to the published rules: settings of the checks, rule sets of its own in versions.

mod own;
mod settings;
#[cfg(test)]
mod tests;

pub use own::{NewVersion, VersionRow, Versions};
pub use settings::{SettingRow, SettingsPage};

use super::{RuleError, add_version, put_settings, settings as in_force, unpinned, versions};
use crate::app::App;
use crate::app::who::Right;
use crate::core::documents::{json, rule_set};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::answers::{page, see_other, with_status};
use crate::web::extract::{Form as Posted, Path, Query};
use crate::web::links;
use axum::Router;
use axum::http::StatusCode;
use axum::response::Response;
use axum::routing::get;
use serde::Deserialize;
use std::collections::BTreeMap;

/// The routes of this folder. The pages of the rule sets themselves stand with the published data.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/settings", get(show_settings).post(save_settings))
        .route("/rule-sets/{id}/versions", get(show_versions))
        .route("/rule-sets/{id}/next", get(begin_version).post(save_version))
}

/// What was just done.
#[derive(Debug, Default, Deserialize)]
#[serde(default, deny_unknown_fields)]
struct Done {
    saved: Option<String>,
}

async fn show_settings(
    Actor { app, .. }: Actor<CanRead>,
    Query(done): Query<Done>,
) -> Result<Response, Refusal> {
    let now = in_force(&app).await?;
    let mut shown = SettingsPage::of(&now.settings, &now.hash, app.who.may(Right::Write));
    shown.saved = done.saved.is_some();
    page(&shown)
}

async fn save_settings(
    Actor { app, .. }: Actor<CanWrite>,
    Posted(pairs): Posted<Vec<(String, String)>>,
) -> Result<Response, Refusal> {
    let typed: BTreeMap<String, String> = pairs.into_iter().collect();
    let now = in_force(&app).await?;
    let Some(seen) = typed.get("seen").cloned() else {
        return Err(Refusal::bad_request(
            "The form does not say which settings it began from. Open the page again.",
        ));
    };
    let mut shown = SettingsPage::of(&now.settings, &seen, true);
    let document = match shown.take(&typed) {
        Some(document) => document,
        None => return with_status(StatusCode::UNPROCESSABLE_ENTITY, &shown),
    };
    match put_settings(&app, &document, Some(vec![seen])).await {
        Ok(_) => Ok(see_other("/settings?saved=1")),
        Err(RuleError::Problems(problems)) => {
            shown.refuse(problems.list());
            with_status(StatusCode::UNPROCESSABLE_ENTITY, &shown)
        }
        Err(RuleError::Stale { hash }) => {
            // What was typed stands; saving again puts it over what somebody else saved, with both to be seen.
            shown.stale(&now.settings, hash);
            with_status(StatusCode::PRECONDITION_FAILED, &shown)
        }
        Err(error) => Err(error.into()),
    }
}

async fn show_versions(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    Query(done): Query<Done>,
) -> Result<Response, Refusal> {
    let rules = unpinned(&app, &id).await?;
    let all = versions(&app, &rules.id).await?;
    let built_in = app.library.rule_sets.contains_key(&rules.id);
    let may_write = app.who.may(Right::Write);
    page(&Versions::of(&rules, &all, built_in, may_write, done.saved))
}

async fn begin_version(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
) -> Result<Response, Refusal> {
    let rules = unpinned(&app, &id).await?;
    let built_in = app.library.rule_sets.contains_key(&rules.id);
    page(&NewVersion::begin(&rules, built_in))
}

/// A posted text: TOML, or JSON where it begins with a brace.
#[derive(Debug, Deserialize)]
struct Text {
    #[serde(default)]
    text: String,
}

async fn save_version(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Posted(Text { text }): Posted<Text>,
) -> Result<Response, Refusal> {
    let rules = unpinned(&app, &id).await?;
    let refused = |status, faults| with_status(status, &NewVersion::refused(&rules, &text, faults));
    let read = match text.trim_start().starts_with('{') {
        true => json::parse(text.as_bytes()),
        false => rule_set::value_of_toml(&text),
    };
    let document = match read {
        Ok(document) => document,
        Err(problems) => return refused(StatusCode::UNPROCESSABLE_ENTITY, own::faults(&text, &problems)),
    };
    let named = document
        .get("id")
        .and_then(serde_json::Value::as_str)
        .unwrap_or(&rules.id)
        .to_owned();
    match add_version(&app, &named, &document).await {
        Ok(saved) => {
            let list = format!(
                "{}/versions?saved={}",
                links::rule_set(&saved.id),
                links::segment(&saved.version)
            );
            Ok(see_other(&list))
        }
        Err(RuleError::Problems(problems)) => {
            refused(StatusCode::UNPROCESSABLE_ENTITY, own::faults(&text, &problems))
        }
        Err(error @ (RuleError::Taken { .. } | RuleError::TooMany)) => refused(
            StatusCode::CONFLICT,
            vec![own::said("version", &error.to_string())],
        ),
        Err(error) => Err(error.into()),
    }
}
