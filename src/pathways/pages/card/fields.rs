//! From document to text in a field, and back. What a person typed stays as typed; what the form does not show stays
//! as it stands in the document.

use super::form::Form;
use super::spec::{Ground, Shape, Spec};
use crate::core::documents::problem::Problems;
use crate::core::units::rounding::plain;
use serde_json::{Map, Value};

/// The text of a field as the document has it: the figure or words, and the unit where the field has one.
pub fn text_of(spec: &Spec, value: Option<&Value>) -> (String, String) {
    let Some(value) = value.filter(|value| !value.is_null()) else {
        return (String::new(), unit_of(&spec.shape).to_owned());
    };
    let object_unit = value
        .get("unit")
        .and_then(Value::as_str)
        .unwrap_or(unit_of(&spec.shape))
        .to_owned();
    match &spec.shape {
        Shape::Measured(_) | Shape::Amount(_) | Shape::NoneOrAmount(_) => match value.get("value") {
            Some(figure) => (simple(figure), object_unit),
            None => (simple(value), unit_of(&spec.shape).to_owned()),
        },
        Shape::Texts => (joined(value, ", "), String::new()),
        Shape::Factors => (joined(value, " + "), String::new()),
        _ => (simple(value), String::new()),
    }
}

/// The unit a field begins with.
pub fn unit_of(shape: &Shape) -> &'static str {
    match shape {
        Shape::Measured(unit) | Shape::Amount(unit) | Shape::NoneOrAmount(unit) => unit,
        _ => "",
    }
}

fn simple(value: &Value) -> String {
    match value {
        Value::Number(number) => number.as_f64().map_or_else(|| number.to_string(), plain),
        Value::String(text) => text.clone(),
        Value::Bool(true) => "yes".to_owned(),
        Value::Bool(false) => "no".to_owned(),
        Value::Null => String::new(),
        other => other.to_string(),
    }
}

fn joined(value: &Value, between: &str) -> String {
    match value {
        Value::Array(list) => list.iter().map(simple).collect::<Vec<_>>().join(between),
        other => simple(other),
    }
}

/// Writes what was typed into the document at `spec`; a field that the form did not have stays as it is.
pub fn write(spec: &Spec, form: &Form, into: &mut Value, problems: &mut Problems) {
    let Some(typed) = form.get(&spec.pointer) else {
        return;
    };
    let typed = typed.trim();
    let unit_typed = form.get(&format!("{}/unit", spec.pointer)).map(str::trim);
    let stood = into.pointer(&spec.pointer).cloned();
    let (before, before_unit) = text_of(spec, stood.as_ref());
    if typed == before && unit_typed.is_none_or(|unit| unit == before_unit || before.is_empty()) {
        return;
    }
    if typed.is_empty() {
        remove(into, &spec.pointer);
        return;
    }
    if let Some(value) = read(spec, typed, unit_typed, stood, problems) {
        set(into, &spec.pointer, value);
    }
}

fn read(
    spec: &Spec,
    typed: &str,
    unit: Option<&str>,
    stood: Option<Value>,
    problems: &mut Problems,
) -> Option<Value> {
    match &spec.shape {
        Shape::Number => number(typed, &spec.pointer, problems),
        Shape::Measured(own) if unit.is_none_or(|unit| unit == *own || unit.is_empty()) => match stood {
            Some(Value::Object(_)) => amount(number(typed, &spec.pointer, problems)?, own, stood),
            _ => number(typed, &spec.pointer, problems),
        },
        Shape::NoneOrAmount(_) if typed.eq_ignore_ascii_case("none") => {
            Some(Value::String("none".to_owned()))
        }
        Shape::Measured(own) | Shape::Amount(own) | Shape::NoneOrAmount(own) => {
            let unit = unit.filter(|unit| !unit.is_empty()).unwrap_or(own);
            amount(number(typed, &spec.pointer, problems)?, unit, stood)
        }
        Shape::Flag => Some(Value::Bool(typed == "yes")),
        Shape::Texts => Some(list(typed, &[',', ';', '\n'])),
        Shape::Factors => match list(typed, &['+', ',', ' ', '\n']) {
            Value::Array(mut one) if one.len() == 1 => one.pop(),
            Value::Array(none) if none.is_empty() => None,
            many => Some(many),
        },
        Shape::Word(_) | Shape::Text | Shape::Area | Shape::Day | Shape::Factor => {
            Some(Value::String(typed.to_owned()))
        }
    }
}

fn list(typed: &str, between: &[char]) -> Value {
    let parts = typed
        .split(between)
        .map(str::trim)
        .filter(|part| !part.is_empty());
    Value::Array(parts.map(|part| Value::String(part.to_owned())).collect())
}

/// A figure as a person types it; what cannot be read stands at the field.
fn number(typed: &str, pointer: &str, problems: &mut Problems) -> Option<Value> {
    match crate::web::typed::figure(typed) {
        Ok(figure) => serde_json::Number::from_f64(figure).map(Value::Number),
        Err((detail, remedy)) => {
            problems.add(pointer, detail, remedy);
            None
        }
    }
}

fn amount(figure: Value, unit: &str, stood: Option<Value>) -> Option<Value> {
    let mut object = match stood {
        Some(Value::Object(object)) => object,
        _ => Map::new(),
    };
    object.insert("value".to_owned(), figure);
    object.insert("unit".to_owned(), Value::String(unit.to_owned()));
    Some(Value::Object(object))
}

/// Sets a value at a pointer, making objects and the next item of lists on the way.
pub fn set(into: &mut Value, pointer: &str, value: Value) {
    let path: Vec<&str> = pointer.split('/').skip(1).collect();
    set_at(into, &path, value);
}

fn set_at(at: &mut Value, path: &[&str], value: Value) {
    let Some((name, rest)) = path.split_first() else {
        *at = value;
        return;
    };
    if let (Value::Array(list), Ok(index)) = (&mut *at, name.parse::<usize>()) {
        while list.len() <= index {
            list.push(Value::Object(Map::new()));
        }
        if let Some(next) = list.get_mut(index) {
            set_at(next, rest, value);
        }
        return;
    }
    if !at.is_object() {
        *at = Value::Object(Map::new());
    }
    if let Value::Object(object) = at {
        let begin = || {
            if is_list(name) {
                Value::Array(Vec::new())
            } else {
                Value::Null
            }
        };
        set_at(
            object.entry((*name).to_owned()).or_insert_with(begin),
            rest,
            value,
        );
    }
}

fn is_list(name: &str) -> bool {
    matches!(name, "fuels" | "intakes" | "inputs" | "co_products")
}

/// Takes a value out, and the objects that are empty without it (but never an item of a list).
pub fn remove(from: &mut Value, pointer: &str) {
    let Some((parent, name)) = pointer.rsplit_once('/') else {
        return;
    };
    let Some(Value::Object(object)) = from.pointer_mut(parent) else {
        return;
    };
    object.remove(name);
    let in_list = parent
        .rsplit('/')
        .next()
        .is_some_and(|last| last.parse::<usize>().is_ok());
    if object.is_empty() && !parent.is_empty() && !in_list {
        remove(from, parent);
    }
}

/// The text of a field for the page: as typed, else as the document has it.
pub fn shown(spec: &Spec, ground: Ground) -> (String, String) {
    let (text, unit) = text_of(spec, ground.at(&spec.pointer));
    let typed = ground.typed.get(&spec.pointer).map(str::to_owned);
    let typed_unit = ground
        .typed
        .get(&format!("{}/unit", spec.pointer))
        .map(str::to_owned);
    (typed.unwrap_or(text), typed_unit.unwrap_or(unit))
}
