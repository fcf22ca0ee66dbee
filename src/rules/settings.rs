//! Settings of the checks: what an organisation tolerates where no source fixes it. New settings are added, old ones stay.

use super::{RuleError, basis, sql};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::checks::settings::Settings;
use crate::core::documents::reader::{Fields, Place, nearest, number_of, shape};
use crate::core::documents::{Problem, Problems, canonical};
use serde_json::{Map, Value};
use std::sync::Arc;

/// More crops than this have no usual harvest.
const MOST_CROPS: usize = 500;

/// Settings in force, with the hash of their document: the entity tag.
#[derive(Clone, Debug)]
pub struct InForce {
    /// The settings.
    pub settings: Arc<Settings>,
    /// Their canonical document.
    pub bytes: Vec<u8>,
    /// Its hash.
    pub hash: String,
}

/// The settings in force.
///
/// # Errors
/// When the database fails.
pub async fn settings(app: &App) -> Result<InForce, RuleError> {
    let basis = basis(app).await?;
    let bytes = canonical::bytes(&*basis.settings).map_err(unwritable)?;
    Ok(InForce {
        settings: basis.settings.clone(),
        hash: canonical::hash(&bytes),
        bytes,
    })
}

/// Puts other settings in force; what the document leaves out is at its standard. `seen` are the hashes of which the present
/// settings must have one; none for any.
///
/// # Errors
/// All problems of the document; `Stale` when somebody changed the settings in between; or when the database fails.
pub async fn put_settings(
    app: &App,
    document: &Value,
    seen: Option<Vec<String>>,
) -> Result<InForce, RuleError> {
    let settings = read(document).map_err(RuleError::Problems)?;
    let bytes = canonical::bytes(&settings).map_err(unwritable)?;
    let hash = canonical::hash(&bytes);
    let text = String::from_utf8(bytes.clone()).map_err(unwritable)?;
    let standard = canonical::bytes(Settings::standard()).map_err(unwritable)?;
    let standard = canonical::hash(&standard);
    let (who, now, memory) = (app.organisation, app.clock.millis(), app.memory.clone());
    let (new, by) = (hash.clone(), app.who.clone());
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let present = sql::settings(c, who).await?.map_or(standard, |row| row.hash);
                if seen.is_some_and(|seen| !seen.contains(&present)) {
                    return Err(RuleError::Stale { hash: present });
                }
                if present != new {
                    sql::add_settings(c, who, &text, &new, now).await?;
                    let what = serde_json::json!({ "before": present, "hash": new });
                    let deed = Deed::new("changed", "check_settings", "", what);
                    audit_trail::add(c, who, &by, now, deed).await?;
                }
                Ok(())
            })
        },
        move |()| memory.forget_basis(who),
    );
    job.await?;
    Ok(InForce {
        settings: Arc::new(settings),
        bytes,
        hash,
    })
}

/// Reads a settings document; what it leaves out is at its standard.
///
/// # Errors
/// Everything that is wrong, each with its pointer.
fn read(document: &Value) -> Result<Settings, Problems> {
    let mut problems = Problems::default();
    let standard = serde_json::to_value(Settings::standard()).unwrap_or_default();
    match (document, &standard) {
        (Value::Object(given), Value::Object(standard)) => fields(given, standard, &mut problems),
        (other, _) => {
            let detail = format!("An object belongs here, not {}.", shape(other));
            problems.add(Place::ROOT, detail, "Give `{ ... }`.");
        }
    }
    if !problems.is_empty() {
        return Err(problems);
    }
    let settings: Settings = serde_json::from_value(document.clone()).map_err(|error| {
        Problems::from(Problem {
            pointer: String::new(),
            detail: format!("The settings cannot be read: {error}."),
            remedy: "Start from the settings in force.".to_owned(),
        })
    })?;
    settings.check()?;
    Ok(settings)
}

/// Holds the fields given to those there are: a number is a number, a range has both ends, crops are free.
fn fields(given: &Map<String, Value>, standard: &Map<String, Value>, problems: &mut Problems) {
    let root = Place::ROOT;
    for (name, value) in given {
        let at = root.field(name);
        match standard.get(name) {
            None => {
                let remedy = match nearest(name, standard.keys().map(String::as_str)) {
                    Some(near) => format!("Take it out, or write \"{near}\" if that was meant."),
                    None => "Take it out; the settings in force show those there are.".to_owned(),
                };
                problems.add(at, format!("There is no setting \"{name}\"."), remedy);
            }
            Some(Value::Object(_)) if name == "usual_yield_t_per_ha" => crops(value, &at, problems),
            Some(Value::Object(_)) => range(value, &at, problems),
            Some(_) => drop(number_of(value, &at, problems)),
        }
    }
}

fn crops(value: &Value, at: &Place, problems: &mut Problems) {
    let Value::Object(crops) = value else {
        let detail = format!("An object belongs here, not {}.", shape(value));
        return problems.add(at, detail, "Give a range for each crop.");
    };
    if crops.len() > MOST_CROPS {
        let detail = format!("{} crops are too many.", crops.len());
        return problems.add(at, detail, format!("Give at most {MOST_CROPS}."));
    }
    for (crop, value) in crops {
        if crop.is_empty() || crop.len() > 100 || crop.chars().any(char::is_control) {
            problems.add(
                at.field(crop),
                "This is no name of a crop.",
                "Give 1 to 100 letters.",
            );
        }
        range(value, &at.field(crop), problems);
    }
}

fn range(value: &Value, at: &Place, problems: &mut Problems) {
    let Some(mut fields) = Fields::open(value, at, problems) else {
        return;
    };
    for end in ["low", "high"] {
        fields.required_number(end, at, problems);
    }
    fields.close(at, problems);
}

/// Settings that were checked hold no figure that JSON cannot; if they did, the document is to blame.
fn unwritable(error: impl std::fmt::Display) -> RuleError {
    let problem = Problem {
        pointer: String::new(),
        detail: format!("The settings cannot be written as JSON: {error}."),
        remedy: "Check the figures.".to_owned(),
    };
    RuleError::Problems(problem.into())
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    fn pointers(document: &Value) -> Vec<String> {
        let problems = read(document).expect_err("refused");
        problems
            .list()
            .iter()
            .map(|problem| problem.pointer.clone())
            .collect()
    }

    #[test]
    fn what_is_left_out_is_at_its_standard() {
        assert_eq!(&read(&json!({})).unwrap(), Settings::standard());
        let whole = serde_json::to_value(Settings::standard()).unwrap();
        assert_eq!(&read(&whole).unwrap(), Settings::standard());
        let other = read(&json!({ "capacity_percent": 105 })).unwrap();
        assert_eq!((other.capacity_percent, other.delivery_percent), (105.0, 105.0));
    }

    #[test]
    fn every_fault_has_its_pointer() {
        assert_eq!(pointers(&json!([])), [""]);
        let wrong = json!({
            "capacity": 1, "typical_low": "0.7", "steam_works_mj_per_l": { "low": 1, "mid": 2 },
            "usual_yield_t_per_ha": { "wheat": { "low": null, "high": 12 } }
        });
        let mut found = pointers(&wrong);
        found.sort();
        assert_eq!(
            found,
            [
                "/capacity",
                "/steam_works_mj_per_l/high",
                "/steam_works_mj_per_l/mid",
                "/typical_low",
                "/usual_yield_t_per_ha/wheat/low"
            ]
        );
        assert_eq!(pointers(&json!({ "capacity_percent": 1 })), ["/capacity_percent"]);
    }
}
