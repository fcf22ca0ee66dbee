//! The basis of evaluations: published data with the organisation's own rule sets, made once and kept at hand.

use super::sql::{self, RuleSetRow, SettingsRow};
use crate::app::{App, Basis, SharedBook};
use crate::core::checks::settings::Settings;
use crate::core::documents::{Problems, canonical, json, rule_set};
use crate::core::domain::RuleSet;
use crate::store::StoreError;
use std::sync::Arc;

/// What evaluations for the organisation rest on now.
///
/// # Errors
/// When the database fails.
pub async fn basis(app: &App) -> Result<Arc<Basis>, StoreError> {
    let now = app.clock.millis();
    let (older, writes) = match app.memory.basis(app.organisation, now) {
        Ok(basis) => return Ok(basis),
        Err(older) => older,
    };
    let mut reader = app.store.reader().await?;
    let last = sql::last(&mut reader, app.organisation).await?;
    let basis = match older {
        Some(older) if (older.last_rule_set, older.last_settings) == last => older,
        _ => {
            let rows = sql::rule_sets(&mut reader, app.organisation).await?;
            let settings = sql::settings(&mut reader, app.organisation).await?;
            Arc::new(made(app, &rows, settings))
        }
    };
    drop(reader);
    app.memory
        .learn_basis(app.organisation, basis.clone(), now, writes);
    Ok(basis)
}

fn made(app: &App, rows: &[RuleSetRow], saved: Option<SettingsRow>) -> Basis {
    let mut book = SharedBook::Published(app.library);
    let mut parts = Vec::new();
    if !rows.is_empty() {
        let mut own = app.library.clone();
        for row in rows {
            let Some(mut rules) = read(row) else { continue };
            // An assessment names the version, so that it can be made again after the next one.
            rules.id = format!("{}@{}", row.name, row.version);
            own.rule_sets.insert(rules.id.clone(), rules.clone());
            if !app.library.rule_sets.contains_key(&row.name) {
                own.rule_sets.insert(row.name.clone(), rules);
            }
            parts.push(format!("{}@{} {}", row.name, row.version, row.hash));
        }
        book = SharedBook::Own(Arc::new(own));
    }
    let last_settings = saved.as_ref().map_or(0, |row| row.id);
    let (settings, settings_hash) = in_force(saved);
    if !settings_hash.is_empty() {
        parts.push(format!("settings {settings_hash}"));
    }
    let hash = match parts.is_empty() {
        true => String::new(),
        false => canonical::hash(parts.join("\n").as_bytes()),
    };
    Basis {
        book,
        hash: hash.into(),
        settings,
        settings_hash: settings_hash.into(),
        last_rule_set: rows.last().map_or(0, |row| row.id),
        last_settings,
    }
}

/// Settings with their hash; the standard ones have none, so that what was made under them serves for good.
fn in_force(saved: Option<SettingsRow>) -> (Arc<Settings>, String) {
    let standard = || (Arc::new(Settings::standard().clone()), String::new());
    let Some(row) = saved else { return standard() };
    match serde_json::from_str::<Settings>(&row.document) {
        Ok(settings) if settings == *Settings::standard() => standard(),
        Ok(settings) => (Arc::new(settings), row.hash),
        Err(error) => {
            tracing::error!(%error, "stored settings cannot be read: the standard ones stand in");
            standard()
        }
    }
}

/// A stored rule set. One that this version of the program cannot read is left out: pathways that name it are then refused
/// in words, the others go on.
fn read(row: &RuleSetRow) -> Option<RuleSet> {
    let mut problems = Problems::default();
    let found = json::parse(row.document.as_bytes())
        .ok()
        .and_then(|value| rule_set::shape(&value, &mut problems));
    if found.is_none() {
        tracing::error!(
            name = row.name,
            version = row.version,
            "a stored rule set cannot be read"
        );
    }
    found
}
