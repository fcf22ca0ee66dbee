//! Two people met: what one saved and what the other typed, joined field by field, with nothing of either lost.

use crate::core::documents::pointer;
use serde_json::{Map, Value};

/// A field that somebody else changed since, or that both changed.
#[derive(Clone, Debug, PartialEq)]
pub struct Met {
    /// The field in words.
    pub field: String,
    /// As it stood when the form was opened.
    pub base: String,
    /// As saved meanwhile.
    pub theirs: String,
    /// As typed.
    pub mine: String,
    /// True if both changed it, differently: then what was typed stands in the form.
    pub both: bool,
    /// Where it stands in what was joined, as a JSON pointer.
    pub pointer: String,
    /// What stands there now, if anything does.
    pub stands: Option<Value>,
    /// What could stand there instead, if anything can.
    pub other: Option<Value>,
}

impl Met {
    /// True if a form can take either: both are there, and each is one text or figure.
    pub fn can_pick(&self) -> bool {
        let plain = |value: &Option<Value>| matches!(value, Some(Value::String(_) | Value::Number(_)));
        plain(&self.stands) && plain(&self.other)
    }

    /// The other value as the text of a field.
    pub fn other_text(&self) -> String {
        match &self.other {
            Some(Value::String(text)) => text.clone(),
            Some(other) => other.to_string(),
            None => String::new(),
        }
    }

    /// What stands, as JSON; empty for nothing.
    pub fn stands_json(&self) -> String {
        self.stands.as_ref().map_or_else(String::new, Value::to_string)
    }

    /// The other value as JSON; empty for nothing.
    pub fn other_json(&self) -> String {
        self.other.as_ref().map_or_else(String::new, Value::to_string)
    }
}

/// Joins two versions of one stage or of one document. Where only one changed a field, that change stands; where both did, mine.
pub fn join(base: &Value, theirs: &Value, mine: &Value) -> (Value, Vec<Met>) {
    let mut met = Vec::new();
    let mut path = Path::default();
    let joined = one(&mut path, Some(base), Some(theirs), Some(mine), &mut met).unwrap_or(Value::Null);
    (joined, met)
}

type Maybe<'a> = Option<&'a Value>;

/// Where the joining is: in words, and as a pointer into the joined stage.
#[derive(Default)]
struct Path {
    words: Vec<String>,
    pointer: Vec<String>,
}

impl Path {
    fn push(&mut self, words: String, pointer: String) {
        self.words.push(words);
        self.pointer.push(pointer);
    }

    fn pointer(&self) -> String {
        let step = |name: &String| format!("/{}", pointer::step(name));
        self.pointer.iter().map(step).collect()
    }

    fn pop(&mut self) {
        self.words.pop();
        self.pointer.pop();
    }
}

fn one(path: &mut Path, base: Maybe, theirs: Maybe, mine: Maybe, met: &mut Vec<Met>) -> Option<Value> {
    // Nobody else touched it, or both did the same to it.
    if theirs == base || theirs == mine {
        return mine.cloned();
    }
    match (base, theirs, mine) {
        (_, Some(Value::Object(theirs)), Some(Value::Object(mine))) => {
            let empty = Map::new();
            let base = base.and_then(Value::as_object).unwrap_or(&empty);
            let mut out = Map::new();
            for name in union(mine.keys(), theirs.keys()) {
                path.push(name.replace('_', " "), name.clone());
                if let Some(value) = one(path, base.get(&name), theirs.get(&name), mine.get(&name), met) {
                    out.insert(name, value);
                }
                path.pop();
            }
            Some(Value::Object(out))
        }
        (_, Some(Value::Array(theirs)), Some(Value::Array(mine))) if keyed(theirs) && keyed(mine) => {
            let none = Vec::new();
            let base = base.and_then(Value::as_array).unwrap_or(&none);
            let mut out = Vec::new();
            for key in union(
                mine.iter().filter_map(key).collect::<Vec<_>>().iter(),
                theirs.iter().filter_map(key).collect::<Vec<_>>().iter(),
            ) {
                let find = |list: &[Value]| {
                    list.iter()
                        .find(|item| self::key(item).as_ref() == Some(&key))
                        .cloned()
                };
                let (b, t, m) = (find(base), find(theirs), find(mine));
                path.push(
                    m.as_ref()
                        .or(t.as_ref())
                        .map_or_else(|| key.clone(), |item| name_of(item, &key)),
                    out.len().to_string(),
                );
                out.extend(one(path, b.as_ref(), t.as_ref(), m.as_ref(), met));
                path.pop();
            }
            Some(Value::Array(out))
        }
        _ => {
            let both = mine != base && mine != theirs;
            let (stands, other) = if both { (mine, theirs) } else { (theirs, mine) };
            met.push(Met {
                field: path.words.join(", "),
                base: shown(base),
                theirs: shown(theirs),
                mine: shown(mine),
                both,
                pointer: path.pointer(),
                stands: stands.cloned(),
                other: other.cloned(),
            });
            stands.cloned()
        }
    }
}

fn union<'a>(
    mine: impl Iterator<Item = &'a String>,
    theirs: impl Iterator<Item = &'a String>,
) -> Vec<String> {
    let mut out: Vec<String> = mine.cloned().collect();
    for name in theirs {
        if !out.contains(name) {
            out.push(name.clone());
        }
    }
    out
}

fn key(item: &Value) -> Option<String> {
    let text = |name: &str| item.get(name).and_then(Value::as_str).map(str::to_owned);
    text("key").or_else(|| text("id")).or_else(|| {
        Some(format!(
            "{} {}",
            text("from")?,
            text("product").unwrap_or_default()
        ))
    })
}

fn keyed(list: &[Value]) -> bool {
    list.iter().all(|item| key(item).is_some())
}

fn name_of(item: &Value, key: &str) -> String {
    ["label", "name", "from"]
        .iter()
        .find_map(|name| item.get(*name).and_then(Value::as_str))
        .unwrap_or(key)
        .to_owned()
}

fn shown(value: Maybe) -> String {
    match value {
        None | Some(Value::Null) => "nothing".to_owned(),
        Some(Value::String(text)) => text.clone(),
        Some(Value::Number(number)) => number
            .as_f64()
            .map_or_else(|| number.to_string(), crate::core::units::rounding::show_all),
        Some(Value::Object(object)) => match (object.get("value"), object.get("unit"), object.get("key")) {
            (Some(figure), Some(Value::String(unit)), _) => format!("{} {unit}", shown(Some(figure))),
            (_, _, Some(Value::String(key))) => name_of(value.unwrap_or(&Value::Null), key),
            _ => Value::Object(object.clone()).to_string(),
        },
        Some(other) => other.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn both_versions_live_on() {
        let stage = |gas: f64, moist: f64, more: bool| {
            let mut inputs = vec![json!({ "key": "gas", "label": "Gas", "amount": gas, "unit": "TJ" })];
            if more {
                inputs.push(json!({ "key": "power", "amount": 1.0 }));
            }
            json!({ "key": "grains", "inputs": inputs, "co_products": [{ "key": "ddgs", "name": "Grains", "moisture_percent": moist }] })
        };
        let (joined, met) = join(
            &stage(113.2, 10.0, false),
            &stage(104.6, 10.4, false),
            &stage(113.9, 10.0, true),
        );
        assert_eq!(joined, stage(113.9, 10.4, true));
        let rows: Vec<_> = met
            .iter()
            .map(|m| {
                (
                    m.field.as_str(),
                    m.base.as_str(),
                    m.theirs.as_str(),
                    m.mine.as_str(),
                    m.both,
                )
            })
            .collect();
        assert_eq!(
            rows,
            [
                ("co products, Grains, moisture percent", "10", "10.4", "10", false),
                ("inputs, Gas, amount", "113.2", "104.6", "113.9", true),
            ]
        );
        let pointers: Vec<&str> = met.iter().map(|m| m.pointer.as_str()).collect();
        assert_eq!(pointers, ["/co_products/0/moisture_percent", "/inputs/0/amount"]);
        assert!(met.iter().all(Met::can_pick));
        assert_eq!(met[1].other, Some(json!(104.6)));
    }

    #[test]
    fn what_nobody_else_touched_is_as_typed() {
        let (base, mine) = (json!({ "a": 1, "b": [1] }), json!({ "a": 2 }));
        assert_eq!(join(&base, &base, &mine), (mine, Vec::new()));
    }
}
