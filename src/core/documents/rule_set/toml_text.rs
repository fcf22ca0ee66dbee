//! TOML as the JSON value of the same document.

use crate::core::documents::problem::{Problem, Problems};
use serde_json::{Map, Number, Value};

/// Reads a text; days become texts, as JSON has them.
///
/// # Errors
/// One problem with the line, for a text that is no TOML.
pub fn value(text: &str) -> Result<Value, Problems> {
    match toml::from_str::<toml::Table>(text) {
        Ok(table) => Ok(json(toml::Value::Table(table))),
        Err(error) => {
            let start = error.span().map_or(0, |span| span.start);
            let line = 1 + text.bytes().take(start).filter(|byte| *byte == b'\n').count();
            Err(Problem {
                pointer: String::new(),
                detail: format!(
                    "Line {line} is no TOML: {}.",
                    error.message().trim_end_matches('.')
                ),
                remedy: "Correct the line, or give the rule set as JSON.".to_owned(),
            }
            .into())
        }
    }
}

fn json(value: toml::Value) -> Value {
    match value {
        toml::Value::String(text) => Value::String(text),
        toml::Value::Integer(whole) => Value::Number(whole.into()),
        // A figure that is not finite becomes a text, which no field for numbers takes.
        toml::Value::Float(figure) => {
            Number::from_f64(figure).map_or_else(|| Value::String(figure.to_string()), Value::Number)
        }
        toml::Value::Boolean(flag) => Value::Bool(flag),
        toml::Value::Datetime(day) => Value::String(day.to_string()),
        toml::Value::Array(items) => Value::Array(items.into_iter().map(json).collect()),
        toml::Value::Table(table) => {
            let fields = table.into_iter().map(|(name, value)| (name, json(value)));
            Value::Object(fields.collect::<Map<_, _>>())
        }
    }
}
