//! What differs between two documents of a pathway. Stages, inputs and co-products are followed by their keys, so a
//! stage that moved is not a stage that changed.

use super::PathwayError;
use crate::core::documents::Pathway;
use crate::core::documents::pointer;
use serde::Serialize;
use serde_json::{Map, Value};
use std::collections::BTreeSet;
use utoipa::ToSchema;

/// What happened to a field.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Kind {
    /// It was not there before.
    Added,
    /// It is not there any more.
    Removed,
    /// It says something else.
    Changed,
    /// Items of a list stand in another order; before and after hold their keys.
    Reordered,
}

/// One difference between two documents.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Change {
    /// JSON pointer into the later document, or into the earlier one for what was removed.
    pub pointer: String,
    /// Key of the stage; null outside stages.
    pub stage: Option<String>,
    /// The field by keys, such as `inputs.gas.amount`; inside a stage it begins there. Empty for a whole stage.
    pub field: String,
    /// What happened to it.
    pub what: Kind,
    /// What stood there before.
    pub before: Option<Value>,
    /// What stands there now.
    pub after: Option<Value>,
}

/// Every difference, in the order of the later document's fields. Without an earlier document everything is added.
///
/// # Errors
/// Only when a document cannot be written as JSON: a defect.
pub fn between(before: Option<&Pathway>, after: &Pathway) -> Result<Vec<Change>, PathwayError> {
    let json = |document: &Pathway| {
        serde_json::to_value(document).map_err(|error| PathwayError::defect("compared two revisions", error))
    };
    let before = before
        .map(json)
        .transpose()?
        .unwrap_or_else(|| Value::Object(Map::new()));
    let mut found = Vec::new();
    compare(&Spot::default(), &before, &json(after)?, &mut found);
    Ok(found)
}

/// A place in both documents.
#[derive(Clone, Default)]
struct Spot {
    before: String,
    after: String,
    stage: Option<String>,
    field: String,
}

impl Spot {
    fn field(&self, name: &str) -> Spot {
        let step = pointer::step(name);
        let field = if self.field.is_empty() {
            name.to_owned()
        } else {
            format!("{}.{name}", self.field)
        };
        Spot {
            before: format!("{}/{step}", self.before),
            after: format!("{}/{step}", self.after),
            stage: self.stage.clone(),
            field,
        }
    }

    /// An item of a list, by its key and its place before and after.
    fn item(&self, key: &str, before: Option<usize>, after: Option<usize>) -> Spot {
        let step = |pointer: &str, index: Option<usize>| {
            index.map_or_else(String::new, |index| format!("{pointer}/{index}"))
        };
        let (before, after) = (step(&self.before, before), step(&self.after, after));
        if self.stage.is_none() && self.field == "stages" {
            return Spot {
                before,
                after,
                stage: Some(key.to_owned()),
                field: String::new(),
            };
        }
        Spot {
            before,
            after,
            stage: self.stage.clone(),
            field: format!("{}.{key}", self.field),
        }
    }

    fn note(&self, what: Kind, before: Option<&Value>, after: Option<&Value>, found: &mut Vec<Change>) {
        let pointer = if what == Kind::Removed {
            &self.before
        } else {
            &self.after
        };
        found.push(Change {
            pointer: pointer.clone(),
            stage: self.stage.clone(),
            field: self.field.clone(),
            what,
            before: before.cloned(),
            after: after.cloned(),
        });
    }
}

fn compare(at: &Spot, before: &Value, after: &Value, found: &mut Vec<Change>) {
    match (before, after) {
        _ if before == after => {}
        (Value::Object(old), Value::Object(new)) => {
            let names: BTreeSet<&String> = old.keys().chain(new.keys()).collect();
            for name in names {
                side_by_side(&at.field(name), old.get(name), new.get(name), found);
            }
        }
        (Value::Array(old), Value::Array(new)) => match (keys(old), keys(new)) {
            (Some(old_keys), Some(new_keys)) => by_key(at, (old, &old_keys), (new, &new_keys), found),
            _ => at.note(Kind::Changed, Some(before), Some(after), found),
        },
        _ => at.note(Kind::Changed, Some(before), Some(after), found),
    }
}

fn side_by_side(at: &Spot, before: Option<&Value>, after: Option<&Value>, found: &mut Vec<Change>) {
    let empty = Value::Array(Vec::new());
    match (before, after) {
        (Some(before), Some(after)) => compare(at, before, after, found),
        // A list that comes or goes is told item by item where its items have keys.
        (None, Some(after)) if keyed(after) => compare(at, &empty, after, found),
        (Some(before), None) if keyed(before) => compare(at, before, &empty, found),
        (None, Some(after)) => at.note(Kind::Added, None, Some(after), found),
        (Some(before), None) => at.note(Kind::Removed, Some(before), None, found),
        (None, None) => {}
    }
}

fn keyed(value: &Value) -> bool {
    value
        .as_array()
        .is_some_and(|items| !items.is_empty() && keys(items).is_some())
}

fn by_key(at: &Spot, old: (&[Value], &[String]), new: (&[Value], &[String]), found: &mut Vec<Change>) {
    let place = |keys: &[String], key: &String| keys.iter().position(|other| other == key);
    for (index, key) in new.1.iter().enumerate() {
        let before = place(old.1, key);
        let spot = at.item(key, before, Some(index));
        side_by_side(
            &spot,
            before.and_then(|index| old.0.get(index)),
            new.0.get(index),
            found,
        );
    }
    for (index, key) in old.1.iter().enumerate() {
        if !new.1.contains(key) {
            at.item(key, Some(index), None)
                .note(Kind::Removed, old.0.get(index), None, found);
        }
    }
    let shared = |mine: &[String], theirs: &[String]| {
        mine.iter()
            .filter(|key| theirs.contains(key))
            .cloned()
            .map(Value::String)
            .collect::<Vec<_>>()
    };
    let (were, are) = (shared(old.1, new.1), shared(new.1, old.1));
    if were != are {
        at.note(
            Kind::Reordered,
            Some(&Value::Array(were)),
            Some(&Value::Array(are)),
            found,
        );
    }
}

/// The keys of a list's items: `key` of stages, inputs and co-products, `id` of materials, source and product of
/// intakes. None when an item has no key or two share one.
fn keys(items: &[Value]) -> Option<Vec<String>> {
    let text = |item: &Value, name: &str| item.get(name).and_then(Value::as_str).map(str::to_owned);
    let key = |item: &Value| {
        text(item, "key").or_else(|| text(item, "id")).or_else(|| {
            let from = text(item, "from")?;
            Some(text(item, "product").map_or_else(|| from.clone(), |product| format!("{from}:{product}")))
        })
    };
    let keys: Vec<String> = items.iter().map(key).collect::<Option<_>>()?;
    (keys.iter().collect::<BTreeSet<_>>().len() == keys.len()).then_some(keys)
}
