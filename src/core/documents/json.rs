//! Bytes to JSON, strictly: duplicate keys, bad syntax, numbers beyond a double and deep nesting are problems.

use super::problem::{Problem, Problems};
use serde::Deserialize;
use serde::de::{DeserializeSeed, Deserializer, Error as _, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Number, Value};
use std::fmt;

/// Reads one JSON value.
///
/// # Errors
/// One problem with line and column; the pointer is empty, for the text as a whole could not be read.
pub fn parse(bytes: &[u8]) -> Result<Value, Problems> {
    match serde_json::from_slice::<Strict>(bytes) {
        Ok(Strict(value)) => Ok(value),
        Err(error) => {
            let text = error.to_string();
            let remedy = if text.contains("recursion limit") {
                "Nest arrays and objects less than 128 deep."
            } else if text.contains("twice") {
                "Keep one of the two."
            } else if text.contains("out of range") {
                "Give a number that a double can hold, below 1.8e308."
            } else {
                "Give one JSON document in UTF-8. NaN and Infinity are not JSON."
            };
            Err(Problem {
                pointer: String::new(),
                detail: format!("This is not JSON: {text}."),
                remedy: remedy.into(),
            }
            .into())
        }
    }
}

struct Strict(Value);

impl<'de> Deserialize<'de> for Strict {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Strict, D::Error> {
        StrictValue.deserialize(deserializer).map(Strict)
    }
}

struct StrictValue;

impl<'de> DeserializeSeed<'de> for StrictValue {
    type Value = Value;
    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<Value, D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for StrictValue {
    type Value = Value;

    fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str("a JSON value")
    }
    fn visit_bool<E>(self, v: bool) -> Result<Value, E> {
        Ok(Value::Bool(v))
    }
    fn visit_i64<E>(self, v: i64) -> Result<Value, E> {
        Ok(Value::Number(v.into()))
    }
    fn visit_u64<E>(self, v: u64) -> Result<Value, E> {
        Ok(Value::Number(v.into()))
    }
    fn visit_f64<E: serde::de::Error>(self, v: f64) -> Result<Value, E> {
        Number::from_f64(v)
            .map(Value::Number)
            .ok_or_else(|| E::custom("number out of range"))
    }
    fn visit_str<E>(self, v: &str) -> Result<Value, E> {
        Ok(Value::String(v.to_owned()))
    }
    fn visit_string<E>(self, v: String) -> Result<Value, E> {
        Ok(Value::String(v))
    }
    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }
    fn visit_seq<A: SeqAccess<'de>>(self, mut seq: A) -> Result<Value, A::Error> {
        let mut list = Vec::new();
        while let Some(value) = seq.next_element_seed(StrictValue)? {
            list.push(value);
        }
        Ok(Value::Array(list))
    }
    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Value, A::Error> {
        let mut object = Map::new();
        while let Some(key) = map.next_key::<String>()? {
            let value = map.next_value_seed(StrictValue)?;
            if object.insert(key.clone(), value).is_some() {
                return Err(A::Error::custom(format!(
                    "the field \"{key}\" stands twice in one object"
                )));
            }
        }
        Ok(Value::Object(object))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn detail(text: &str) -> String {
        parse(text.as_bytes()).expect_err("refused").list()[0]
            .detail
            .clone()
    }

    #[test]
    fn refuses_what_is_not_strict_json() {
        assert!(detail("{\"a\":1,\"a\":2}").contains("stands twice"));
        assert!(detail("{\"a\":NaN}").contains("line 1"));
        assert!(detail("{\"a\":1e999}").contains("out of range"));
        assert!(detail(&"[".repeat(100_000)).contains("recursion limit"));
        assert!(detail("{} {}").contains("trailing"));
        assert!(parse(b"\xff\xfe").is_err());
    }

    #[test]
    fn keeps_every_bit_of_a_double() {
        let value = parse(b"[0.1, 1e-320, 123456789.12345679]").expect("json");
        assert_eq!(
            value[2].as_f64().map(f64::to_bits),
            Some(123_456_789.123_456_79_f64.to_bits())
        );
    }
}
