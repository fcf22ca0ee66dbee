//! A posted card as a stage: the stage as it was, its lists as the form has them, every shown field as typed.

use super::fields;
use super::form::{Form, LISTS};
use super::spec::{self, Ground, Spec};
use crate::core::documents::problem::Problems;
use serde_json::{Map, Value, json};
use std::collections::{BTreeMap, BTreeSet};

/// The stage with its lists as the form has them: items taken out are gone, new ones are there, still empty. A form
/// that was not posted changes nothing.
pub fn shaped(stage: &Value, form: &Form) -> Value {
    let mut out = stage.clone();
    if form.get("expected").is_none() {
        return out;
    }
    for list in LISTS {
        let stood = stage.pointer(list).and_then(Value::as_array);
        let items: Vec<Value> = (0..form.count(list))
            .map(|index| {
                let was = form.text(&format!("{list}/{index}/was")).parse::<usize>().ok();
                let old = was.and_then(|was| stood.and_then(|stood| stood.get(was)));
                old.cloned()
                    .unwrap_or_else(|| begun(list, form.text(&format!("{list}/{index}/as"))))
            })
            .collect();
        let name = list.trim_start_matches('/');
        if let Value::Object(object) = &mut out {
            if items.is_empty() {
                object.remove(name);
            } else {
                object.insert(name.to_owned(), Value::Array(items));
            }
        }
    }
    out
}

/// A new item, of the kind that was asked for.
fn begun(list: &str, is: &str) -> Value {
    match (list, is) {
        ("/inputs", "own") => json!({ "factor": {} }),
        ("/inputs", "gases") => json!({ "gases": {} }),
        ("/inputs", "factor" | "") => json!({}),
        ("/inputs", kind) => json!({ "model": { "kind": kind } }),
        ("/co_products", _) => json!({ "role": "co_product" }),
        _ => json!({}),
    }
}

/// Every field of a stage, in the order of the card. `sources` are the stages it can take from: key, name, material.
pub fn specs(ground: Ground, sources: &[Source]) -> Vec<Spec> {
    let mut out = spec::stage(ground);
    out.extend(spec::output(ground));
    for (list, count) in LISTS.map(|list| {
        (
            list,
            ground.at(list).and_then(Value::as_array).map_or(0, Vec::len),
        )
    }) {
        for index in 0..count {
            out.extend(item_specs(ground, list, index, sources));
        }
    }
    out
}

/// A stage that another can take from.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// Key.
    pub key: String,
    /// Name as shown.
    pub name: String,
    /// Material of its output.
    pub material: String,
}

/// The fields of one item.
pub fn item_specs(ground: Ground, list: &str, index: usize, sources: &[Source]) -> Vec<Spec> {
    let at = format!("{list}/{index}");
    match list {
        "/intakes" => {
            let from = ground.word(&format!("{at}/from"));
            let material = sources
                .iter()
                .find(|source| source.key == from)
                .map_or("", |source| source.material.as_str());
            let names: Vec<(String, String)> =
                sources.iter().map(|s| (s.key.clone(), s.name.clone())).collect();
            spec::intake(&at, &names, material)
        }
        "/inputs" => {
            let is = ground.at(&at).map_or_else(|| "factor".to_owned(), spec::input_as);
            spec::input(&at, &is, ground)
        }
        _ => spec::co_product(&at, ground),
    }
}

/// The stage as typed, and what could not be read.
pub fn build(stage: &Value, form: &Form, sources: &[Source]) -> (Value, Problems) {
    let shaped = shaped(stage, form);
    let ground = Ground {
        stage: &shaped,
        typed: form,
    };
    let mut out = shaped.clone();
    let mut problems = Problems::default();
    for spec in specs(ground, sources) {
        fields::write(&spec, form, &mut out, &mut problems);
    }
    drop_empty_fuels(&mut out);
    name_keys(&mut out, "/inputs", "label", "input");
    name_keys(&mut out, "/co_products", "name", "co-product");
    (out, problems)
}

/// The blank row that a list of fuels offers leaves nothing behind.
fn drop_empty_fuels(stage: &mut Value) {
    let Some(inputs) = stage.get_mut("inputs").and_then(Value::as_array_mut) else {
        return;
    };
    for fuels in inputs
        .iter_mut()
        .filter_map(|input| input.pointer_mut("/model/fuels"))
    {
        if let Value::Array(list) = fuels {
            list.retain(|fuel| fuel.as_object().is_none_or(|fuel| !fuel.is_empty()));
        }
    }
}

/// New items get a key made of their name.
fn name_keys(stage: &mut Value, list: &str, from: &str, otherwise: &str) {
    let Some(items) = stage.pointer_mut(list).and_then(Value::as_array_mut) else {
        return;
    };
    let key_of = |item: &Value| item.get("key").and_then(Value::as_str).map(str::to_owned);
    let mut keys = Keys {
        taken: items.iter().filter_map(key_of).collect(),
        ..Keys::default()
    };
    for item in items.iter_mut().filter(|item| item.get("key").is_none()) {
        let name = item.get(from).and_then(Value::as_str).unwrap_or_default();
        let key = keys.free(name, otherwise);
        if let Value::Object(object) = item {
            object.insert("key".to_owned(), Value::String(key));
        }
    }
}

/// Keys of one list. Remembers how far each name was counted: thousands of nameless items must not be counted again and again.
#[derive(Default)]
struct Keys {
    taken: BTreeSet<String>,
    next: BTreeMap<String, usize>,
}

impl Keys {
    /// Makes a key of a name and takes it.
    fn free(&mut self, name: &str, otherwise: &str) -> String {
        let plain = plain_key(name, otherwise);
        let next = self.next.entry(plain.clone()).or_insert(1);
        loop {
            let key = if *next == 1 {
                plain.clone()
            } else {
                format!("{plain}-{next}")
            };
            *next += 1;
            if self.taken.insert(key.clone()) {
                return key;
            }
        }
    }
}

/// A key made of a name, not yet taken: `Natural gas, meter 3` is `natural-gas-meter-3`.
pub fn free_key(name: &str, otherwise: &str, taken: &[String]) -> String {
    let mut keys = Keys {
        taken: taken.iter().cloned().collect(),
        ..Keys::default()
    };
    keys.free(name, otherwise)
}

fn plain_key(name: &str, otherwise: &str) -> String {
    let mut key = String::new();
    for c in name.to_lowercase().chars() {
        if c.is_ascii_lowercase() || (c.is_ascii_digit() && !key.is_empty()) {
            key.push(c);
        } else if !key.is_empty() && !key.ends_with('-') {
            key.push('-');
        }
    }
    key.truncate(34);
    let key = key.trim_end_matches('-');
    if key.is_empty() { otherwise } else { key }.to_owned()
}

/// A stage that begins empty, for the card of a new one.
pub fn blank(key: &str, kind: &str, name: &str) -> Value {
    let mut stage = Map::new();
    stage.insert("key".to_owned(), Value::String(key.to_owned()));
    stage.insert("kind".to_owned(), Value::String(kind.to_owned()));
    if !name.is_empty() {
        stage.insert("name".to_owned(), Value::String(name.to_owned()));
    }
    stage.insert("output".to_owned(), json!({}));
    Value::Object(stage)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::core::documents::pathway::Stage;
    use crate::pathways::pages::samples;

    /// A name in a form may say any number; found by the fuzz run as minutes of work for a line of text.
    #[test]
    fn a_number_in_a_name_asks_for_no_more_items_than_a_document_takes() {
        let mut form = Form::default();
        form.set("expected", "1");
        form.set("/inputs/6666/was", "x");
        let (stage, _) = build(&json!({ "key": "field" }), &form, &[]);
        assert_eq!(stage.get("inputs"), None);
        form.set("/inputs/2000/as", "factor");
        let (stage, _) = build(&json!({ "key": "field" }), &form, &[]);
        let inputs = stage["inputs"].as_array().expect("inputs");
        // One more than a document takes: refused there, with the reason.
        assert_eq!(inputs.len(), 2_001);
        assert_eq!(
            (&inputs[0]["key"], &inputs[2_000]["key"]),
            (&json!("input"), &json!("input-2001"))
        );
    }

    fn post(stage: &Value, sources: &[Source]) -> Form {
        let blank = Form::default();
        let ground = Ground { stage, typed: &blank };
        let mut form = Form::default();
        form.set("expected", "14");
        for list in LISTS {
            for index in 0..stage.pointer(list).and_then(Value::as_array).map_or(0, Vec::len) {
                form.set(format!("{list}/{index}/was"), index.to_string());
            }
        }
        for spec in specs(ground, sources) {
            let (text, unit) = fields::text_of(&spec, ground.at(&spec.pointer));
            form.set(spec.pointer.clone(), text);
            if !unit.is_empty() {
                form.set(format!("{}/unit", spec.pointer), unit);
            }
        }
        form
    }

    fn stages() -> Vec<Value> {
        samples::wheat()
            .stages
            .iter()
            .map(|stage| serde_json::to_value(stage).expect("json"))
            .collect()
    }

    #[test]
    fn a_card_sent_back_untouched_changes_nothing() {
        for stage in stages() {
            let form = post(&stage, &[]);
            let (built, problems) = build(&stage, &form, &[]);
            assert!(problems.is_empty(), "{problems:?}");
            assert_eq!(built, stage);
            assert!(Stage::from_value(&built).is_ok());
        }
    }

    #[test]
    fn figures_are_changed_added_and_taken_out() {
        let stage = stages()
            .into_iter()
            .find(|stage| stage["key"] == "grains")
            .expect("there");
        let mut form = post(&stage, &[]);
        form.set("/inputs/0/amount", "1 104.6");
        form.remove("/inputs", 1);
        let index = form.add("/inputs", &[("as", "haul"), ("label", "Truck to store")]);
        form.set(format!("/inputs/{index}/model/distance"), "12");
        form.set(format!("/inputs/{index}/model/distance/unit"), "mi");
        let (built, problems) = build(&stage, &form, &[]);
        assert!(problems.is_empty(), "{problems:?}");
        assert_eq!(built["inputs"][0]["amount"], 1104.6);
        assert_eq!(
            built["inputs"][1],
            json!({ "key": "truck-to-store", "label": "Truck to store", "model": { "kind": "haul", "distance": { "value": 12.0, "unit": "mi" } } })
        );
        assert_eq!(built["co_products"], stage["co_products"]);
    }

    #[test]
    fn a_comma_is_asked_about() {
        let stage = stages().remove(0);
        let mut form = post(&stage, &[]);
        form.set("/output/amount", "8,9");
        let (_, problems) = build(&stage, &form, &[]);
        let [one] = problems.list() else {
            panic!("one problem, not {problems:?}")
        };
        assert_eq!(
            (one.pointer.as_str(), one.remedy.as_str()),
            ("/output/amount", "Write a point, such as 8.9.")
        );
    }

    #[test]
    fn keys_are_made_of_names() {
        assert_eq!(
            free_key("Natural gas, meter 3", "input", &[]),
            "natural-gas-meter-3"
        );
        assert_eq!(free_key("42 \u{fc}", "input", &["input".to_owned()]), "input-2");
    }
}
